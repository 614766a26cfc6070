package spec

import (
	"context"
	"strings"
	"testing"

	"github.com/polewright/polewright/tf"
)

// TestLowGainWarning: a sheet that asks for calm alone is met best by hardly any gain. The
// design has to say that such a loop does not follow its reference.
func TestLowGainWarning(t *testing.T) {
	loops := []tf.Loop{{Plant: tf.MustParse("1 / ((s + 0.5) (s^2 + 0.4 s + 25))")}}
	calm := Sheet{OvershootAtMost(0.3), DampingAtLeast(0.02)}
	d, err := calm.Design(context.Background(), loops)
	if err != nil {
		t.Fatal(err)
	}
	if text := strings.Join(d.Warnings, " "); !d.Feasible || !strings.Contains(text, "low gains") {
		t.Errorf("gain %g, warnings %q; want one of low gains", d.Gain, text)
	}
	loops[0].Controller = tf.MustParse("(s + 0.5) / s")
	if d, err = calm.Design(context.Background(), loops); err != nil {
		t.Fatal(err)
	}
	if text := strings.Join(d.Warnings, " "); strings.Contains(text, "low gains") {
		t.Errorf("with integral action: warnings %q; want none of low gains", text)
	}
}
