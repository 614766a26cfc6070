package spec

import (
	"errors"
	"math"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// Windows without an upper end that are known without search: a gain is recommended all the same.
func TestDesignUnboundedExactWindows(t *testing.T) {
	lag := tf.MustParse("1 / (s + 1)")
	servo := tf.MustParse("1 / (s (s + 1))")
	for _, c := range []struct {
		sheet Sheet
		plant tf.Function
		lo    float64 // of the only window
	}{
		{Sheet{}, lag, 0},
		{Sheet{}, servo, 0},
		{Sheet{StepErrorAtMost(0.05)}, lag, 19},    // 1/(1 + k) ≤ 0.05
		{Sheet{RampErrorAtMost(0.1)}, servo, 10},   // 1/k ≤ 0.1
		{Sheet{PolesLeftOf(-0.4)}, servo, 0.24},    // s = -0.4: k = 0.4·0.6
		{Sheet{GainMarginAtLeast(2)}, servo, 0},    // no gain destabilises it
		{Sheet{DampingAtLeast(0.5)}, lag, 0},       // the pole stays real
		{Sheet{StepErrorAtMost(0.05)}, servo, 0},   // an integrator
		{Sheet{PhaseMarginAtLeast(0.5)}, lag, 0},   // at least π/2
		{Sheet{DelayMarginAtLeast(0.001)}, lag, 0}, // bounded, see below
	} {
		d, err := c.sheet.Design(t.Context(), []tf.Loop{{Plant: c.plant}})
		if err != nil {
			t.Errorf("%v: %v", c.sheet, err)
			continue
		}
		if !d.Feasible || math.IsInf(d.Gain, 0) || !(d.Gain >= c.lo*(1-1e-12)) || d.Gain == 0 || !d.Reports[0].Met() {
			t.Errorf("%v: gain %v, want one from %v on", c.sheet, d.Gain, c.lo)
		}
	}
}

// Of gains with equal slack the largest is recommended: up to k = 1/4 the response of
// k/(s(s + 1)) has no overshoot at all, and the loop with the largest gain is the fastest.
func TestDesignOfEqualSlackTakesTheLargest(t *testing.T) {
	d, err := Sheet{OvershootAtMost(0.1)}.Design(t.Context(), []tf.Loop{{Plant: tf.MustParse("1 / (s (s + 1))")}})
	if err != nil {
		t.Fatal(err)
	}
	if d.Slack != 1 || !(d.Gain > 0.1 && d.Gain < 0.3) {
		t.Errorf("gain %v, slack %v", d.Gain, d.Slack)
	}
}

func TestDesignRefusesGainsThatAreNoNumbers(t *testing.T) {
	loops := []tf.Loop{{Plant: tf.MustParse("1 / (s + 1)")}}
	for _, o := range []Option{InUse(math.NaN()), InUse(math.Inf(1)), NearestTo(math.NaN()), NearestTo(math.Inf(-1))} {
		_, err := Sheet{}.Design(t.Context(), loops, o)
		var bad *poly.ArgumentError
		if !errors.As(err, &bad) || bad.Call != "spec.Sheet.Design" || (bad.Argument != "InUse" && bad.Argument != "NearestTo") {
			t.Errorf("%v", err)
		}
	}
}
