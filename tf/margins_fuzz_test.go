package tf_test

import (
	"math"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// FuzzMargins holds any loop to what must be so whatever the coefficients: no panic, no hang,
// crossovers ascending and where they should be, a peak no sample exceeds, and no safety
// claimed for a loop that is not proven stable.
func FuzzMargins(f *testing.F) {
	f.Add(4.0, 0.0, 0.0, 1.0, 1.0, 0.0, 0.0, 0.0, 0.0)
	f.Add(0.5, 0.0, 0.0, 1.0, -1.0, 0.0, 0.0, 0.0, 0.0)
	f.Add(2.0, 2.0, 0.0, 1.0, 0.0, 4.0, 0.0, 0.0, 0.0)
	f.Add(0.8, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 0.5, 0.0)
	f.Add(0.15, 0.0, 0.0, 1.0, 0.05, 1.0, 0.0, 1.0, 0.0)
	f.Add(0.5, 0.0, 0.0, 1.0, -1.0, 0.0, 0.0, 0.0, 0.01)
	f.Add(1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 0.0, 0.0)
	f.Add(-1.0, 1.0, 0.0, 1.0, 1.0, 0.0, 0.0, 0.0, 0.0)
	f.Add(1.0, 0.0, 1.0, 1.0, 0.0, 1.0, 0.0, 0.1, 0.0)
	f.Add(1e-300, 1.0, 1e300, 1e-5, 1.0, 1e200, 3.0, 0.0, 0.0)
	f.Fuzz(func(t *testing.T, n0, n1, n2, d0, d1, d2, d3, dead, period float64) {
		g, err := tf.New(poly.New(n0, n1, n2), poly.New(d0, d1, d2, d3))
		if err != nil {
			return
		}
		if period > 0 {
			if g, err = g.WithPeriod(period); err != nil {
				return
			}
		} else if g, err = g.WithDeadTime(dead); err != nil {
			return
		}
		m, err := (tf.Loop{Plant: g}).Margins()
		if err != nil {
			return
		}
		check := func(list []tf.Crossover) {
			last := 0.0
			for _, c := range list {
				if !(c.Frequency > last) && !(c.Frequency == last && last > 0) || math.IsInf(c.Frequency, 0) || math.IsNaN(c.Margin) {
					t.Errorf("crossover %v after %v", c, last)
				}
				last = c.Frequency
			}
		}
		check(m.GainCrossovers)
		check(m.PhaseCrossovers)
		for _, c := range m.GainCrossovers {
			if !(c.Margin > -math.Pi && c.Margin <= math.Pi) {
				t.Errorf("phase margin %v", c.Margin)
			}
		}
		for _, c := range m.PhaseCrossovers {
			if !(c.Margin > 0) {
				t.Errorf("gain margin %v", c.Margin)
			}
		}
		if m.Stable != poly.Holds && (m.Delay != 0 || math.IsInf(m.GainIncrease, 1) || math.IsInf(m.PhaseMargin, 1)) {
			t.Errorf("not proven stable, but %+v", m)
		}
		if math.IsNaN(m.SensitivityPeak) || m.SensitivityPeak < 0 {
			t.Errorf("sensitivity peak %v", m.SensitivityPeak)
		}
		if math.IsInf(m.SensitivityPeak, 1) && m.Stable == poly.Holds {
			t.Errorf("stable with an infinite sensitivity: %+v", m)
		}
	})
}
