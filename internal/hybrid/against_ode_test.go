package hybrid

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/internal/ode"
)

// steps is a staircase: levels[i] from times[i] on, 0 before the first.
type steps struct{ times, levels []float64 }

func (s steps) Taylor(t float64, into []float64) {
	clear(into)
	for i, at := range s.times {
		if t >= at {
			into[0] = s.levels[i]
		}
	}
}

func (s steps) Next(t float64) float64 {
	for _, at := range s.times {
		if at > t {
			return at
		}
	}
	return math.Inf(1)
}

func (s steps) at(t float64) float64 {
	var v [1]float64
	s.Taylor(t, v[:])
	return v[0]
}

// TestAgainstODE simulates loops of a PI controller with back-calculation, a clipped
// actuator, two lags and a sensor lag, with steps in all inputs, by the equations written
// out and the ODE engine, restarted at every kink.
func TestAgainstODE(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	uniform := func(lo, hi float64) float64 { return lo + (hi-lo)*random.Float64() }
	for trial := 0; trial < 40; trial++ {
		kp, ki, tt := uniform(0.5, 8), uniform(0.1, 4), uniform(0.2, 2)
		limit, a, b, s := uniform(0.3, 1.5), uniform(0.2, 3), uniform(0.2, 3), uniform(0.05, 0.5)
		in := Inputs{
			Reference:   steps{[]float64{0, 4}, []float64{1, uniform(-1, 1)}},
			Load:        steps{[]float64{2}, []float64{uniform(-0.3, 0.3)}},
			Disturbance: steps{[]float64{3}, []float64{uniform(-0.3, 0.3)}},
			Noise:       steps{[]float64{5}, []float64{uniform(-0.1, 0.1)}},
		}
		const until = 9.0
		loop := Loop{Prefilter: Wire, Amplitude: limit, Tracking: tt,
			Controller: Block{Numerator: []float64{kp, ki}, Denominator: []float64{1, 0}},
			Plant:      Block{Numerator: []float64{1}, Denominator: []float64{a * b, a + b, 1}},
			Sensor:     Block{Numerator: []float64{1}, Denominator: []float64{s, 1}},
		}
		got, err := Simulate(context.Background(), loop, in, until, nil)
		if err != nil {
			t.Fatal(err)
		}
		reader := got.Reader()

		at := func(source Source, t float64) float64 { return source.(steps).at(t) }
		var region float64 // middle of the time for which inputs are constant
		derivative := func(_ float64, x, dx []float64) {
			e := at(in.Reference, region) - x[3] - at(in.Noise, region)
			v := kp*e + x[0]
			u := math.Max(-limit, math.Min(limit, v))
			dx[0] = ki*e + (u-v)/tt
			dx[1] = (u + at(in.Load, region) - x[1]) / a
			dx[2] = (x[1] - x[2]) / b
			dx[3] = (x[2] + at(in.Disturbance, region) - x[3]) / s
		}
		region = 0.5
		g, err := ode.New(derivative, 0, make([]float64, 4), ode.Options{RelTol: 1e-12, AbsTol: 1e-13})
		if err != nil {
			t.Fatal(err)
		}
		switches := append([]Switch(nil), got.Switches...)
		for _, stop := range []float64{2, 3, 4, 5, until} {
			// The kinks at the switching instants of ours are only used as places to restart.
			for len(switches) > 0 && switches[0].Time < stop {
				if err := g.To(switches[0].Time); err != nil {
					t.Fatal(err)
				}
				if err := g.Restart(g.Time(), g.State()); err != nil {
					t.Fatal(err)
				}
				switches = switches[1:]
			}
			if err := g.To(stop); err != nil {
				t.Fatal(err)
			}
			if have, want := reader.At(Output, math.Nextafter(stop, 0)), g.State()[2]+at(in.Disturbance, region); math.Abs(have-want) > 1e-10 {
				t.Errorf("trial %d, t = %g: output %.14g, by the ODE engine %.14g", trial, stop, have, want)
			}
			region = stop + 0.5
			if err := g.Restart(stop, g.State()); err != nil {
				t.Fatal(err)
			}
		}
	}
}

func TestSimulateRefuses(t *testing.T) {
	good := Loop{Prefilter: Wire, Controller: Wire, Sensor: Wire, Plant: Block{Numerator: []float64{1}, Denominator: []float64{1, 1}}}
	for name, spoil := range map[string]func(*Loop){
		"improper controller": func(l *Loop) { l.Controller = Block{Numerator: []float64{1, 0}, Denominator: []float64{1}} },
		"zero denominator":    func(l *Loop) { l.Plant.Denominator = []float64{0, 0} },
		"coefficient NaN":     func(l *Loop) { l.Sensor.Numerator = []float64{math.NaN()} },
		"negative dead time":  func(l *Loop) { l.Plant.DeadTime = -1 },
		"algebraic loop": func(l *Loop) {
			l.Plant = Wire
			l.Controller = Block{Numerator: []float64{-1}, Denominator: []float64{1}}
		},
	} {
		loop := good
		spoil(&loop)
		if _, err := Simulate(context.Background(), loop, Inputs{Reference: unitStep{}}, 1, nil); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	cancelled, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Simulate(cancelled, good, Inputs{Reference: unitStep{}}, 1, nil); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: got %v", err)
	}
	good.Plant = Block{Numerator: []float64{1}, Denominator: []float64{1e-9, 1}}
	if _, err := Simulate(context.Background(), good, Inputs{Reference: unitStep{}}, 1e3, nil); !errors.Is(err, ErrTooLong) {
		t.Errorf("a billion time constants: got %v", err)
	}
}
