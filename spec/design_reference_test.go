package spec

import (
	"fmt"
	"math"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

type ratioFile struct {
	Numerator, Denominator []refdata.Decimal
	Delay                  refdata.Decimal
}

func (r ratioFile) function(t testing.TB) tf.Function {
	t.Helper()
	g, err := tf.New(poly.New(refdata.Floats(t, r.Numerator)...), poly.New(refdata.Floats(t, r.Denominator)...))
	if err != nil {
		t.Fatal(err)
	}
	if r.Delay != "" && r.Delay != "0" {
		if g, err = g.WithDeadTime(r.Delay.Float(t)); err != nil {
			t.Fatal(err)
		}
	}
	return g
}

type designCase struct {
	ID                string
	Controller, Plant ratioFile
	Sensor            *ratioFile
	Sheet             map[string]refdata.Decimal
	StableSet         [][2]refdata.Decimal `json:"stable_set"`
	Set               [][2]refdata.Decimal
	Sets              map[string][][2]refdata.Decimal
	Ends              map[string][][3]refdata.Decimal
	Feasible          bool
	Rule              *struct {
		ZetaMin refdata.Decimal `json:"zeta_min"`
		Verdict string
		Set     [][2]refdata.Decimal
	} `json:"rule_of_thumb"`
	Examples []struct {
		K       refdata.Decimal
		Figures map[string]refdata.Decimal
	}
}

func (c designCase) loop(t testing.TB) tf.Loop {
	l := tf.Loop{Controller: c.Controller.function(t), Plant: c.Plant.function(t)}
	if c.Sensor != nil {
		l.Sensor = c.Sensor.function(t)
	}
	return l
}

func (c designCase) delayed() bool { return c.Plant.Delay != "" && c.Plant.Delay != "0" }

func referenceRequirement(t testing.TB, name string, limit refdata.Decimal) Requirement {
	t.Helper()
	x := limit.Float(t)
	switch name {
	case "overshoot_max":
		return OvershootAtMost(x)
	case "undershoot_max":
		return UndershootAtMost(x)
	case "rise_10_90_max":
		return RisesWithin(x)
	case "peak_time_max":
		return PeaksWithin(x)
	case "settling_2_percent_max":
		return SettlesWithin(x, 0.02)
	case "settling_5_percent_max":
		return SettlesWithin(x, 0.05)
	case "step_error_max":
		return StepErrorAtMost(x)
	case "ramp_error_max":
		return RampErrorAtMost(x)
	case "effort_max":
		return EffortAtMost(x)
	case "gain_margin_min_db":
		return GainMarginAtLeast(math.Pow(10, x/20))
	case "gain_reduction_margin_min_db":
		return GainReductionMarginAtLeast(math.Pow(10, x/20))
	case "phase_margin_min_deg":
		return PhaseMarginAtLeast(x * math.Pi / 180)
	case "sensitivity_peak_max":
		return SensitivityPeakAtMost(x)
	}
	t.Fatalf("unknown requirement %q", name)
	return nil
}

// compareWindows holds windows against reference intervals, ends to 1e-10 relative.
func compareWindows(got []GainWindow, want [][2]refdata.Decimal, t testing.TB) error {
	if len(got) != len(want) {
		return fmt.Errorf("%d windows %v, want %v", len(got), plainWindows(got), want)
	}
	for i, w := range want {
		for side, e := range [2]End{got[i].Lo, got[i].Hi} {
			d := w[side]
			switch {
			case d == "" && !math.IsInf(e.Gain, 1):
				return fmt.Errorf("window %d is bounded by %.17g, want unbounded", i, e.Gain)
			case d != "" && refdata.Off(t, e.Gain, d) > 1e-10:
				return fmt.Errorf("window %d, side %d: %.17g, want %s, off by %.2g", i, side, e.Gain, d, refdata.Off(t, e.Gain, d))
			}
		}
	}
	return nil
}

func plainWindows(w []GainWindow) string {
	s := ""
	for _, x := range w {
		s += fmt.Sprintf("[%.12g, %.12g] ", x.Lo.Gain, x.Hi.Gain)
	}
	return s
}

func readDesign(t testing.TB) []designCase {
	var file struct{ Cases []designCase }
	refdata.Read(t, "testdata/design.json", &file)
	return file.Cases
}

// Source: testdata/design.json.
func TestWindowsReference(t *testing.T) {
	for _, c := range readDesign(t) {
		t.Run(c.ID, func(t *testing.T) {
			loop := c.loop(t)
			var sheet Sheet
			var names []string
			for name, limit := range c.Sheet {
				sheet = append(sheet, referenceRequirement(t, name, limit))
				names = append(names, name)
			}
			ctx := t.Context()
			g, err := Sheet{}.Windows(ctx, []tf.Loop{loop})
			if err == nil {
				err = compareWindows(g.Windows, c.StableSet, t)
			}
			if err != nil {
				t.Errorf("stability: %v", err)
			}
			for i, r := range sheet {
				g, err := Sheet{r}.Windows(ctx, []tf.Loop{loop})
				if err == nil {
					err = compareWindows(g.Windows, c.Sets[names[i]], t)
				}
				if err != nil {
					t.Errorf("%s: %v", names[i], err)
					continue
				}
				t.Logf("%s: %d evaluations, missed below %.2g", names[i], g.Evaluations, g.MissedBelow)
				if g.MissedBelow > 1e-4 {
					t.Errorf("%s: MissedBelow %g", names[i], g.MissedBelow)
				}
				compareKinds(t, names[i], g.Windows, c.Ends[names[i]])
			}
			g, err = sheet.Windows(ctx, []tf.Loop{loop})
			if err == nil {
				err = compareWindows(g.Windows, c.Set, t)
			}
			if err != nil {
				t.Errorf("sheet: %v", err)
			}
			t.Logf("sheet: %d evaluations, missed below %.2g", g.Evaluations, g.MissedBelow)
			if g.MissedBelow > 1e-4 {
				t.Errorf("sheet: MissedBelow %g", g.MissedBelow)
			}
		})
	}
}

func compareKinds(t *testing.T, name string, windows []GainWindow, ends [][3]refdata.Decimal) {
	i := 0
	for _, w := range windows {
		for side, e := range [2]End{w.Lo, w.Hi} {
			if i >= len(ends) {
				t.Errorf("%s: more ends than the %d of the reference", name, len(ends))
				return
			}
			want := string(ends[i][2])
			i++
			switch want {
			case "to zero gain", "unbounded":
				if len(e.By) != 0 || e.Gain != 0 && !math.IsInf(e.Gain, 1) {
					t.Errorf("%s: end %d is %+v, want %s", name, i-1, e, want)
				}
			default:
				if len(e.By) == 0 || e.By[0].Kind.String() != want {
					t.Errorf("%s: end %d (side %d) is %+v, want %s", name, i-1, side, e, want)
				}
			}
		}
	}
}
