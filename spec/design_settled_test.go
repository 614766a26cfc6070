package spec

import (
	"context"
	"math"
	"testing"

	"github.com/polewright/polewright/tf"
)

// TestSettledRequirementStandsAside: integral action meets a step error of 0 at every gain.
// With that requirement in the sheet the recommended gain is the one without it.
func TestSettledRequirementStandsAside(t *testing.T) {
	loop := tf.Loop{Controller: tf.MustParse("(140 s + 1) / (140 s)"), Plant: tf.MustParse("1.8 / ((160 s + 1) (12 s + 1))")}
	sheet := Sheet{OvershootAtMost(0.08), SettlesWithin(180, 0.02)}
	without, err := sheet.Design(context.Background(), []tf.Loop{loop})
	if err != nil {
		t.Fatal(err)
	}
	with, err := append(Sheet{StepErrorAtMost(0)}, sheet...).Design(context.Background(), []tf.Loop{loop})
	if err != nil {
		t.Fatal(err)
	}
	if !without.Feasible || math.Abs(with.Gain/without.Gain-1) > 1e-9 || math.Abs(with.Slack-without.Slack) > 1e-9 {
		t.Errorf("gain %g with slack %g, want %g and %g as without the step error", with.Gain, with.Slack, without.Gain, without.Slack)
	}
	if with.By.Requirement == 0 || with.Reports[0].Binding == 0 {
		t.Errorf("the step error counts as the nearest limit: %+v, binding %d", with.By, with.Reports[0].Binding)
	}
}
