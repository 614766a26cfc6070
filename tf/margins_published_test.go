package tf_test

import (
	"math"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A loop whose margins a textbook reads off a chart, to a few degrees and decibels; the gain
// margin is also 30/K by Routh's criterion.
func TestPublishedMargins(t *testing.T) {
	// Ogata, Modern Control Engineering, 5th ed., example 7-20, from memory.
	for _, test := range []struct {
		gain, degrees, decibels float64 // as printed
		stable                  poly.Verdict
	}{{10, 21, 8, poly.Holds}, {100, -30, -12, poly.Fails}} {
		m, err := (tf.Loop{Plant: tf.MustParse("1 / (s (s + 1) (s + 5))")}).WithGain(test.gain).Margins()
		if err != nil {
			t.Fatal(err)
		}
		if got := m.PhaseMargin * 180 / math.Pi; math.Abs(got-test.degrees) > 7 {
			t.Errorf("K = %v: phase margin %v°, the chart says %v°", test.gain, got, test.degrees)
		}
		got := m.PhaseCrossovers[0].Margin
		if math.Abs(20*math.Log10(got)-test.decibels) > 2 {
			t.Errorf("K = %v: gain margin %v dB, the chart says %v dB", test.gain, 20*math.Log10(got), test.decibels)
		}
		if want := 30 / test.gain; math.Abs(got-want) > 1e-13*want {
			t.Errorf("K = %v: gain margin %v, want %v", test.gain, got, want)
		}
		if m.Stable != test.stable {
			t.Errorf("K = %v: stable %v", test.gain, m.Stable)
		}
	}
}

// The phase margin of ω²/(s(s + 2ζω)) is atan(2ζ/√(√(1+4ζ⁴) - 2ζ²)) (Ogata, Modern Control
// Engineering, 5th ed., section 7-7; also derived in one line: |L| = 1 at (ω_c/ω)² = √(1+4ζ⁴) - 2ζ²).
func TestPhaseMarginOfSecondOrder(t *testing.T) {
	for _, zeta := range []float64{1e-8, 1e-4, 0.05, 0.2, 0.5, 0.7071, 1, 2, 30} {
		for _, w := range []float64{1e-6, 1, 3e7} {
			g, err := tf.New(poly.New(w*w), poly.New(1, 2*zeta*w, 0))
			if err != nil {
				t.Fatal(err)
			}
			m, err := (tf.Loop{Plant: g}).Margins()
			if err != nil || len(m.GainCrossovers) != 1 {
				t.Fatalf("ζ = %v, ω = %v: %v, %v", zeta, w, m.GainCrossovers, err)
			}
			z := zeta * zeta
			x := math.Sqrt(1 / (math.Sqrt(1+4*z*z) + 2*z)) // = √(√(1+4ζ⁴) - 2ζ²) without cancellation
			want := math.Atan2(2*zeta, x)
			if c := m.GainCrossovers[0]; math.Abs(c.Margin-want) > 1e-11*want || math.Abs(c.Frequency-x*w) > 1e-11*x*w {
				t.Errorf("ζ = %v, ω = %v: %v, want phase margin %v at %v", zeta, w, c, want, x*w)
			}
			if math.Abs(m.Delay-want/(x*w)) > 1e-11*want/(x*w) {
				t.Errorf("ζ = %v, ω = %v: delay margin %v, want %v", zeta, w, m.Delay, want/(x*w))
			}
		}
	}
}
