package spec

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"strconv"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// bruteCase is one random loop and sheet with gains judged by brute force.
type bruteCase struct {
	Numerator, Denominator []refdata.Decimal // of the open loop, in the plant
	ControllerNumerator    []refdata.Decimal `json:"controller_numerator"`
	ControllerDenominator  []refdata.Decimal `json:"controller_denominator"`
	Sheet                  map[string]refdata.Decimal
	Gains                  []struct {
		K   refdata.Decimal
		Met bool
	}
}

// Source: testdata/brute.json, by internal/refgen/spec_brute.py: random loops of order up to
// 8, each closed loop simulated from its poles in 50 digits with mpmath and scanned densely,
// figures refined. Membership in a window has to equal the verdict there; gains within 1e-9
// of an end are not in the file. POLEWRIGHT_BRUTE names a larger file made the same way.
func TestWindowsAgreeWithBruteForce(t *testing.T) {
	path := "testdata/brute.json"
	if p := os.Getenv("POLEWRIGHT_BRUTE"); p != "" {
		path = p
	}
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Cases []bruteCase }
	if err := json.Unmarshal(data, &file); err != nil {
		t.Fatal(err)
	}
	triples, widest := 0, 0.0
	for i, c := range file.Cases {
		loop := tf.Loop{
			Plant:      mustFunction(t, refdata.Floats(t, c.Numerator), refdata.Floats(t, c.Denominator)),
			Controller: mustFunction(t, refdata.Floats(t, c.ControllerNumerator), refdata.Floats(t, c.ControllerDenominator)),
		}
		var sheet Sheet
		for _, name := range []string{"overshoot_max", "undershoot_max", "rise_10_90_max", "peak_time_max", "settling_2_percent_max", "settling_5_percent_max", "step_error_max", "effort_max", "gain_margin_min_db", "phase_margin_min_deg", "sensitivity_peak_max"} {
			if limit, ok := c.Sheet[name]; ok {
				sheet = append(sheet, referenceRequirement(t, name, limit))
			}
		}
		g, err := sheet.Windows(t.Context(), []tf.Loop{loop})
		if err != nil {
			t.Errorf("case %d: %v", i, err)
			continue
		}
		widest = math.Max(widest, g.MissedBelow)
		for _, x := range c.Gains {
			k := x.K.Float(t)
			triples++
			if g.Contains(k) == x.Met {
				continue
			}
			near := ""
			for _, w := range g.Windows {
				for _, e := range []float64{w.Lo.Gain, w.Hi.Gain} {
					if d := math.Abs(k-e) / k; d < 1e-3 {
						near = fmt.Sprintf(", %.2g from the end %.15g", d, e)
					}
				}
			}
			r, err := sheet.Check(t.Context(), loop.WithGain(k))
			t.Errorf("case %d: k = %.17g is met: %v, windows say %v%s\nsheet:\n%s%sL = %v/%v\n%s %v", i, k, x.Met, !x.Met, near, sheet, g, loop.Controller, loop.Plant, r, err)
		}
	}
	t.Logf("%d triples on %d loops; MissedBelow at most %.2g", triples, len(file.Cases), widest)
	if widest > 1e-4 {
		t.Errorf("MissedBelow %g", widest)
	}
}

// FuzzWindows(spec): random third-order loops and sheets; every window is checked in its
// middle and just inside its ends, and just outside them.
func FuzzWindows(f *testing.F) {
	f.Add(1.0, 2.0, 3.0, 0.5, 0.2, 5.0, 0.02, 1.0)
	f.Add(0.0, 4.0, 1e2, 0.0, 0.2, 2.0, 0.02, 1.0)
	f.Add(0.1, 0.1, 0.1, 2.0, 0.05, 40.0, 0.05, 12.0)
	f.Add(-0.5, 3.0, 20.0, 1.0, 0.3, 6.0, 0.05, 3.0)
	f.Fuzz(func(t *testing.T, a, b, c, zero, overshoot, settling, band, rise float64) {
		for _, x := range []float64{a, b, c, zero, overshoot, settling, band, rise} {
			if math.IsNaN(x) || math.Abs(x) > 1e4 || x != 0 && math.Abs(x) < 1e-4 {
				t.Skip()
			}
		}
		// Settling times of thousands of time constants take seconds, and show nothing new.
		if fastest := math.Max(math.Abs(a), math.Max(math.Abs(b), math.Abs(c))); band > 0.9 || fastest*math.Max(settling, rise) > 300 || fastest > 1e2 {
			t.Skip()
		}
		den := poly.New(1, a).Mul(poly.New(1, b)).Mul(poly.New(1, c))
		g, err := tf.New(poly.New(zero, 1), den)
		if err != nil {
			t.Skip()
		}
		loop := tf.Loop{Plant: g}
		sheet := Sheet{OvershootAtMost(overshoot), SettlesWithin(settling, band), RisesWithin(rise)}
		gains, err := sheet.Windows(t.Context(), []tf.Loop{loop}, Evaluations(800))
		if sheet.Validate() != nil {
			if err == nil {
				t.Fatal("an invalid sheet has windows")
			}
			return
		}
		if err != nil {
			t.Fatalf("%v on %v", err, g)
		}
		last := math.Inf(-1)
		for _, w := range gains.Windows {
			lo, hi := w.Lo.Gain, w.Hi.Gain
			if !(lo <= hi) || lo < last {
				t.Fatalf("windows out of order: %s", gains)
			}
			last = hi
			if math.IsInf(hi, 1) {
				hi = math.Max(lo, 1) * 2
			}
			if lo == 0 {
				lo = hi / 2
			}
			if hi-lo < 1e-6*hi {
				continue
			}
			for _, k := range []float64{lo + (hi-lo)/2, lo + 1e-7*(hi-lo), hi - 1e-7*(hi-lo)} {
				r, err := sheet.Check(t.Context(), loop.WithGain(k))
				if err != nil {
					t.Fatalf("k = %s: %v", strconv.FormatFloat(k, 'g', -1, 64), err)
				}
				for _, x := range r.Findings {
					if x.Verdict == poly.Fails && !(x.Slack > -1e-6) {
						t.Fatalf("k = %.17g lies in a window of %s and fails on %v:\n%s", k, gains, g, r)
					}
				}
			}
		}
	})
}
