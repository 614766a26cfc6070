package hybrid

import (
	"context"
	"errors"
	"math"
	"sort"

	"github.com/polewright/polewright/internal/ode"
)

// Characteristics are static blocks: of the actuator, behind its limit, and in front of the
// sensor. nil is a wire.
type Characteristics struct{ Actuator, Sensor func(float64) float64 }

// ErrCharacteristic reports what static blocks cannot be combined with.
var ErrCharacteristic = errors.New("hybrid: static blocks go with continuous controllers without dead time, an actuator of unlimited rate, and a loop that is not direct all round")

// An Integrated is a loop followed by the ODE engine.
type Integrated struct {
	m        *machine
	blocks   Characteristics
	segments []ode.Segment
}

// Integrate follows a loop with static blocks from rest at t = 0 to until, numerically. Its
// error is an estimate: about 1e-10 of a signal's size for each step.
func Integrate(ctx context.Context, l Loop, in Inputs, blocks Characteristics, until float64, progress func(t float64)) (*Integrated, error) {
	m, err := newMachine(l, in)
	if err != nil {
		return nil, err
	}
	if l.Period > 0 || l.Rate > 0 || m.delays != [lines]float64{} || m.direct != 0 {
		return nil, ErrCharacteristic
	}
	r := &Integrated{m: m, blocks: blocks}
	n := m.at[4]
	if n == 0 {
		n = 1 // the engine wants a state; this one stays 0
	}
	slope := func(t float64, x, dx []float64) {
		if m.at[4] == 0 {
			dx[0] = 0
			return
		}
		r.slope(t, x, dx)
	}
	state := make([]float64, n)
	g, err := ode.New(slope, 0, state, ode.Options{RelTol: 1e-10, AbsTol: 1e-13, MaxSteps: mostSegments})
	if err != nil {
		return nil, err
	}
	var events []ode.Event
	if l.Amplitude > 0 {
		events = []ode.Event{
			func(t float64, x []float64) float64 { return r.signals(t, x)[Demand] - l.Amplitude },
			func(t float64, x []float64) float64 { return r.signals(t, x)[Demand] + l.Amplitude },
		}
	}
	for steps := 0; g.Time() < until; steps++ {
		if steps%256 == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			if progress != nil {
				progress(g.Time())
			}
		}
		stop := until
		for _, source := range m.in {
			if source != nil {
				stop = math.Min(stop, source.Next(g.Time()))
			}
		}
		if err := g.Step(stop); err != nil {
			if errors.Is(err, ode.ErrTooManySteps) {
				return nil, ErrTooLong
			}
			return nil, err
		}
		kink := g.Time() == stop
		for _, event := range events {
			found, err := g.Locate(event)
			if err != nil {
				return nil, err
			}
			kink = kink || found
		}
		r.segments = append(r.segments, g.Last())
		if kink {
			if err := g.Restart(g.Time(), g.State()); err != nil {
				return nil, err
			}
		}
	}
	return r, nil
}

// input returns an outside signal at time t.
func (m *machine) input(i int, t float64) float64 {
	if m.in[i] == nil {
		return 0
	}
	var s series
	m.in[i].Taylor(t, s[:])
	return s[0]
}

// signals returns every signal for state x. With a direct part missing somewhere round the
// loop, two rounds from zero effort reach the values whatever the place of the gap.
func (r *Integrated) signals(t float64, x []float64) (v [signals]float64) {
	m := r.m
	part := func(i int) []float64 { return x[m.at[i]:m.at[i+1]] }
	v[Reference], v[Load] = m.input(inReference, t), m.input(inLoad, t)
	v[Disturbance], v[Noise] = m.input(inDisturbance, t), m.input(inNoise, t)
	filtered := m.prefilter.output(part(0), v[Reference])
	for range 2 {
		v[Output] = m.plant.output(part(2), r.actuated(v[Effort])+v[Load]) + v[Disturbance]
		v[Measured] = m.sensor.output(part(3), r.sensed(v[Output])) + v[Noise]
		v[Error] = filtered - v[Measured]
		v[Demand] = m.controller.output(part(1), v[Error])
		v[Effort] = clip(v[Demand], m.loop.Amplitude)
	}
	// The effort is known; what follows it directly is read once more.
	v[Output] = m.plant.output(part(2), r.actuated(v[Effort])+v[Load]) + v[Disturbance]
	v[Measured] = m.sensor.output(part(3), r.sensed(v[Output])) + v[Noise]
	v[Error] = filtered - v[Measured]
	return v
}

func (r *Integrated) actuated(u float64) float64 {
	if r.blocks.Actuator == nil {
		return u
	}
	return r.blocks.Actuator(u)
}

func (r *Integrated) sensed(y float64) float64 {
	if r.blocks.Sensor == nil {
		return y
	}
	return r.blocks.Sensor(y)
}

func (r *Integrated) slope(t float64, x, dx []float64) {
	m := r.m
	v := r.signals(t, x)
	part := func(i int, of []float64) []float64 { return of[m.at[i]:m.at[i+1]] }
	track := 0.0
	if m.loop.Tracking > 0 {
		track = (v[Effort] - v[Demand]) / m.loop.Tracking
	}
	m.prefilter.slope(part(0, x), v[Reference], 0, part(0, dx))
	m.controller.slope(part(1, x), v[Error], track, part(1, dx))
	m.plant.slope(part(2, x), r.actuated(v[Effort])+v[Load], 0, part(2, dx))
	m.sensor.slope(part(3, x), r.sensed(v[Output]), 0, part(3, dx))
}

// Segments returns how many steps were made.
func (r *Integrated) Segments() int { return len(r.segments) }

// Span returns where step i begins and ends.
func (r *Integrated) Span(i int) (from, to float64) { return r.segments[i].From, r.segments[i].To }

// At returns a signal at time t; at a jump the value just after it.
func (r *Integrated) At(signal Signal, t float64) float64 {
	i := sort.Search(len(r.segments), func(i int) bool { return r.segments[i].From > t })
	x := make([]float64, max(1, r.m.at[4]))
	r.segments[max(0, i-1)].At(t, x)
	return r.signals(t, x)[signal]
}
