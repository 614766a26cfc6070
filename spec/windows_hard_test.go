package spec

import (
	"math"
	"testing"

	"github.com/polewright/polewright/tf"
)

// Windows that are easily invented, missed or mislabelled. Each limit is the figure at one
// end, computed with mpmath in 50 digits, so that the end is that gain.
func TestHardWindows(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct {
		name, controller, plant string
		r                       Requirement
		lo, hi                  float64 // NaN: not compared
		loKind, hiKind          string  // "" where nothing ends the window
	}{
		{"a rise slower than the fast mode lasts, at small gains", "1", "(s^2+0.05s+1)/(s(s+1)(s^2+0.08s+4))",
			RisesWithin(15.233284435664960), 0.5, inf, "crossing", ""},
		{"a rise that hardly depends on small gains", "1", "1/((s+1)(0.5s+1)(0.25s+1)(0.125s+1))",
			RisesWithin(2.4039143553711232), 0.0785494, 6.75, "crossing", "stability"},
		{"slow overshoot behind a resonance", "1", "1/(s(s+0.1)(s^2+0.02s+25))",
			OvershootAtMost(0.2), 0, 0.300387861066068, "", "crossing"},
		{"the first peak", "1", "1/(s(s+4))", // at π/√(k - 4)
			PeaksWithin(math.Pi / 2), 8, inf, "crossing", ""},
		{"the first peak, days", "1", "1e-5/(s(3600s+1))", // 7200π/√(4·3600·1e-5·k - 1)
			PeaksWithin(7200 * math.Pi / math.Sqrt(0.144*44.7-1)), 44.7, inf, "crossing", ""},
		{"the effort behind dead time", "1", "2exp(-1.5s)/(6s+1)", // k at the step, more only near the limit of stability
			EffortAtMost(1), 0, 1, "", "crossing"},
		{"a sensitivity that no small gain lowers: a pole on the axis", "(s+2)/(0.02s+1)", "1/(s^2+1)",
			SensitivityPeakAtMost(1.4588), math.NaN(), math.NaN(), "crossing", "crossing"},
		{"a loop of magnitude one or more at infinity stands no delay, falling", "1", "(s+3)/(s+1)",
			DelayMarginAtLeast(0.5), 0, 0.89718397562384512, "", "crossing"},
		{"a loop of magnitude one or more at infinity stands no delay, rising", "1", "(3s+1)/(s+1)",
			DelayMarginAtLeast(0.5), 0, 1.0 / 3, "", "jump"},
		{"no window beside the lower end of stability", "(s+1)^2", "100/(s^3(s+20)(s+25))",
			DelayMarginAtLeast(0.14814266177692785), math.NaN(), 25, "crossing", "crossing"},
	} {
		t.Run(c.name, func(t *testing.T) {
			l := tf.Loop{Controller: tf.MustParse(c.controller), Plant: tf.MustParse(c.plant)}
			g, err := Sheet{c.r}.Windows(t.Context(), []tf.Loop{l})
			if err != nil {
				t.Fatal(err)
			}
			if len(g.Windows) != 1 {
				t.Fatalf("%d windows %s, want one", len(g.Windows), plainWindows(g.Windows))
			}
			if g.MissedBelow > 1e-4 {
				t.Errorf("MissedBelow %g", g.MissedBelow)
			}
			check := func(e End, want float64, kind string) {
				if math.Abs(e.Gain-want) > 1e-10*want && e.Gain != want { // NaN passes
					t.Errorf("an end at %.17g, want %.17g", e.Gain, want)
				}
				switch {
				case kind == "" && len(e.By) > 0, kind != "" && (len(e.By) == 0 || e.By[0].Kind.String() != kind):
					t.Errorf("the end %+v, want kind %q", e, kind)
				}
			}
			check(g.Windows[0].Lo, c.lo, c.loKind)
			check(g.Windows[0].Hi, c.hi, c.hiKind)
		})
	}
}
