package hybrid

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"
)

// TestRateByHand: an integrator under P control k with |du/dt| ≤ R. The effort rises as Rt
// until it meets its demand k(1 - Rt²/2), which is then followed as long as |w′| = ku ≤ R:
// from there y goes to 1 with exp(-kt). (Worked out by hand.)
func TestRateByHand(t *testing.T) {
	const k, rate = 0.5, 0.4
	loop := Loop{Prefilter: Wire, Sensor: Wire, Rate: rate,
		Controller: Block{Numerator: []float64{k}, Denominator: []float64{1}},
		Plant:      Block{Numerator: []float64{1}, Denominator: []float64{1, 0}}}
	r, err := Simulate(context.Background(), loop, Inputs{Reference: unitStep{}}, 10, nil)
	if err != nil {
		t.Fatal(err)
	}
	// k - kR t²/2 = R t
	meets := (-rate + math.Sqrt(rate*rate+2*k*k*rate)) / (k * rate)
	if len(r.Switches) != 1 || math.Abs(r.Switches[0].Time-meets) > 1e-14 || r.Switches[0].From != Rising || r.Switches[0].To != Linear {
		t.Fatalf("switches %v, want one at %.15g from rising to linear", r.Switches, meets)
	}
	d := r.Reader()
	for at := 0.1; at < 10; at += 0.1 {
		want := rate * at * at / 2
		if at > meets {
			want = 1 - (1-rate*meets*meets/2)*math.Exp(-k*(at-meets))
		}
		if got := d.At(Output, at); math.Abs(got-want) > 1e-14 {
			t.Errorf("output at %g is %.16g, want %.16g", at, got, want)
		}
	}
}

// TestRateBySmallSteps holds loops with both limits, continuous and sampled, against the
// plainest simulation there is: Euler steps, so the agreement is that of its step.
func TestRateBySmallSteps(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	uniform := func(lo, hi float64) float64 { return lo + (hi-lo)*random.Float64() }
	for trial := 0; trial < 12; trial++ {
		k, a, b := uniform(1, 6), uniform(0.3, 2), uniform(0.3, 2)
		amplitude, rate, period := uniform(0.3, 1.2), uniform(0.5, 3), 0.0
		if trial%2 == 1 {
			period = 0.25
		}
		loop := Loop{Prefilter: Wire, Sensor: Wire, Amplitude: amplitude, Rate: rate, Period: period,
			Controller: Block{Numerator: []float64{k}, Denominator: []float64{1}},
			Plant:      Block{Numerator: []float64{1}, Denominator: []float64{a * b, a + b, 1}}}
		const until, dt = 6.0, 2e-5
		r, err := Simulate(context.Background(), loop, Inputs{Reference: steps{[]float64{0, 3}, []float64{1, -0.5}}}, until, nil)
		if err != nil {
			t.Fatal(err)
		}
		d := r.Reader()
		var x1, x2, u, held float64
		nextSample := 0
		for i := 0; i < int(until/dt); i++ {
			now := float64(i) * dt
			reference := 1.0
			if now >= 3 {
				reference = -0.5
			}
			w := k * (reference - x2)
			if period > 0 {
				if now >= float64(nextSample)*period-dt/2 {
					held = w
					nextSample++
				}
				w = held
			}
			target := math.Max(-amplitude, math.Min(amplitude, w))
			u += math.Max(-rate*dt, math.Min(rate*dt, target-u))
			x1, x2 = x1+dt*(u-x1)/a, x2+dt*(x1-x2)/b
			if i%5000 == 0 && i > 0 {
				if got := d.At(Output, now+dt); math.Abs(got-x2) > 5e-4 {
					t.Errorf("trial %d: output at %.3g is %.6g, by small steps %.6g", trial, now, got, x2)
				}
				if got := d.At(Effort, now+dt); math.Abs(got-u) > 5e-3 {
					t.Errorf("trial %d: effort at %.3g is %.6g, by small steps %.6g", trial, now, got, u)
				}
			}
		}
	}
}
