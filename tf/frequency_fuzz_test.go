package tf_test

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// FuzzFrequencyResponse asks everything of any function: no panic, no hang; the continuous
// phase is an angle of the value; curves ascend and are finite.
func FuzzFrequencyResponse(f *testing.F) {
	f.Add(4.0, 0.0, 0.0, 1.0, 1.0, 0.0, 0.0, 0.0, 1.0)
	f.Add(1.0, 0.0, 1.0, 1.0, 0.0, 4.0, 0.3, 0.0, 2.0)
	f.Add(0.5, 0.0, 0.0, 1.0, -1.0, 0.0, 0.0, 0.01, 314.159)
	f.Add(1.0, 2e-9, 1.0, 1.0, 2e-5, 1.0, 0.0, 0.0, 1.0)
	f.Add(-1e200, 1.0, 1e-200, 1e-5, 1.0, 1e150, 0.0, 0.0, 1e60)
	f.Fuzz(func(t *testing.T, n0, n1, n2, d0, d1, d2, dead, period, w float64) {
		g, err := tf.New(poly.New(n0, n1, n2), poly.New(d0, d1, d2))
		if err != nil {
			return
		}
		if period > 0 {
			g, err = g.WithPeriod(period)
		} else {
			g, err = g.WithDeadTime(dead)
		}
		if err != nil {
			return
		}
		r, err := g.FrequencyResponse()
		if err != nil {
			return
		}
		y, phase := r.At(w), r.Phase(w)
		r.GroupDelay(w)
		if size := cmplx.Abs(y); size > 1e-300 && size < 1e300 && !math.IsNaN(phase) && math.Abs(phase) < 1e6 && math.Abs(w*dead) < 1e6 {
			if off := math.Abs(math.Remainder(phase-cmplx.Phase(y), 2*math.Pi)); off > 1e-7 {
				t.Errorf("phase %v at %v, value %v: off by %v", phase, w, y, off)
			}
		}
		if _, err := g.Resonance(); err == nil {
			if p, _ := g.Resonance(); math.IsNaN(p.Magnitude) || p.Magnitude < 0 {
				t.Errorf("resonance %v", p)
			}
		}
		if w, err := g.Bandwidth(); err == nil && !(w > 0) {
			t.Errorf("bandwidth %v", w)
		}
		curves, err := r.Curve(0, 0)
		if err != nil {
			return
		}
		for _, c := range curves {
			for i, p := range c.Points {
				if i > 0 && !(p.Frequency > c.Points[i-1].Frequency) || cmplx.IsNaN(p.Value) || cmplx.IsInf(p.Value) || math.IsNaN(p.Phase) {
					t.Fatalf("point %v", p)
				}
			}
		}
	})
}
