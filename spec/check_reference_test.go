package spec

import (
	"encoding/json"
	"math"
	"strings"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

var figureOf = map[string]func() Requirement{
	"overshoot":          func() Requirement { return OvershootAtMost(1) },
	"undershoot":         func() Requirement { return UndershootAtMost(1) },
	"rise_10_90":         func() Requirement { return RisesWithin(1) },
	"settling_2_percent": func() Requirement { return SettlesWithin(1, 0.02) },
	"settling_5_percent": func() Requirement { return SettlesWithin(1, 0.05) },
	"steady_error":       func() Requirement { return StepErrorAtMost(1) },
	"actuator_limit":     func() Requirement { return EffortAtMost(1) },
	"sensitivity_peak":   func() Requirement { return SensitivityPeakAtMost(1) },
}

// The figures that Check reports at the example gains. Source: testdata/design.json.
func TestCheckReference(t *testing.T) {
	for _, c := range readDesign(t) {
		if c.delayed() {
			continue
		}
		for _, x := range c.Examples {
			for name, want := range x.Figures {
				make, ok := figureOf[name]
				if !ok {
					t.Fatalf("%s: unknown figure %q", c.ID, name)
				}
				r, err := Sheet{make()}.Check(t.Context(), c.loop(t).WithGain(x.K.Float(t)))
				if err != nil {
					t.Errorf("%s: %s: %v", c.ID, name, err)
					continue
				}
				if off := refdata.Off(t, r.Findings[0].Reached, want); off > 1e-12 {
					t.Errorf("%s: k = %s: %s = %.17g, want %s: off by %.2g", c.ID, x.K, name, r.Findings[0].Reached, want, off)
				}
			}
		}
	}
}

// Check agrees with the windows on both sides of every end, 1e-9 away from it: two
// computations, one by bounds and root-finding on margins, one by figures.
func TestCheckAgreesWithWindows(t *testing.T) {
	for _, c := range readDesign(t) {
		if c.delayed() {
			continue
		}
		var sheet Sheet
		for name, limit := range c.Sheet {
			sheet = append(sheet, referenceRequirement(t, name, limit))
		}
		for i := range sheet {
			one := sheet[i : i+1]
			for _, w := range c.Sets[sortedName(c, t, sheet[i])] {
				for side, d := range w {
					if d == "" || d == "0" {
						continue
					}
					inward := []float64{1e-9, -1e-9}[side]
					for _, sign := range []float64{1, -1} {
						k := d.Float(t) * (1 + sign*inward)
						r, err := one.Check(t.Context(), c.loop(t).WithGain(k))
						if err != nil {
							t.Errorf("%s: %v", c.ID, err)
							continue
						}
						if r.Met() != (sign > 0) {
							t.Errorf("%s: k = %.17g, %g inside the end %s: met is %v:\n%s", c.ID, k, sign*1e-9, d, r.Met(), r)
						}
					}
				}
			}
		}
	}
}

func sortedName(c designCase, t *testing.T, r Requirement) string {
	for name, limit := range c.Sheet {
		if describe(referenceRequirement(t, name, limit)) == describe(r) {
			return name
		}
	}
	t.Fatalf("no name for %s", describe(r))
	return ""
}

// Design on the reference sheets: feasible where the reference says so, the recommended gain
// inside and met, the second-order map told off where it fails.
func TestDesignReference(t *testing.T) {
	for _, c := range readDesign(t) {
		if c.delayed() {
			continue
		}
		t.Run(c.ID, func(t *testing.T) {
			var sheet Sheet
			for name, limit := range c.Sheet {
				sheet = append(sheet, referenceRequirement(t, name, limit))
			}
			d, err := sheet.Design(t.Context(), []tf.Loop{c.loop(t)}, InUse(1))
			if err != nil {
				t.Fatal(err)
			}
			if d.Feasible != c.Feasible {
				t.Fatalf("feasible %v, want %v: %s", d.Feasible, c.Feasible, d)
			}
			if d.Feasible {
				if !d.Gains.Contains(d.Gain) || !d.Reports[0].Met() || !(d.Slack >= 0) {
					t.Errorf("gain %g, slack %g:\n%s", d.Gain, d.Slack, d)
				}
			} else if len(d.Conflict) != 2 || d.Nearest == nil || !(d.Nearest.Slack < 0) {
				t.Errorf("conflict %v, nearest %+v", d.Conflict, d.Nearest)
			}
			if c.Rule != nil {
				fails := strings.Contains(c.Rule.Verdict, "fails") || strings.Contains(c.Rule.Verdict, "wrongly")
				t.Logf("%s | reference: %s", d.Rule.Sentence, c.Rule.Verdict)
				if fails && d.Rule.Holds == poly.Holds {
					t.Errorf("the second-order rule fails (%s), the report does not say so: %s", c.Rule.Verdict, d.Rule.Sentence)
				}
			}
			text, err := json.Marshal(d)
			if err != nil {
				t.Errorf("JSON: %v", err)
			}
			var back any
			if err := json.Unmarshal(text, &back); err != nil {
				t.Errorf("JSON: %v in %s", err, text)
			}
			if math.IsNaN(d.Gain) == d.Feasible {
				t.Errorf("gain %g of a design that is feasible: %v", d.Gain, d.Feasible)
			}
			t.Log(d)
		})
	}
}
