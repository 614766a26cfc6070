package tf

import (
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
)

type sampledPeriodCase struct {
	Title        string
	Gain, Period refdata.Decimal
	Zeros, Poles [][2]refdata.Decimal
	PoleOffsets  [][2]refdata.Decimal `json:"pole_offsets"`
	ZeroOffsets  [][2]refdata.Decimal `json:"zero_offsets"`
	StaticGain   refdata.Decimal      `json:"static_gain"`
}

func complexes(t testing.TB, list [][2]refdata.Decimal) []complex128 {
	t.Helper()
	var c []complex128
	for _, p := range list {
		c = append(c, complex(p[0].Float(t), p[1].Float(t)))
	}
	return c
}

// Every root of the sampled function as an offset from z = 1, to 1e-12 relative, and the
// static gain to 1e-13, at periods from 1e-9 to 1e3 of the time constants, order up to 12. The references
// come from internal/refgen/sampled_periods.py.
func TestSampledAtAnyPeriod(t *testing.T) {
	var file struct{ Cases []sampledPeriodCase }
	refdata.Read(t, "testdata/sampled_periods.json", &file)
	worst := 0.0
	for _, c := range file.Cases {
		given, err := FromRoots(c.Gain.Float(t), complexes(t, c.Zeros), complexes(t, c.Poles))
		if err != nil {
			t.Fatal(err)
		}
		multiplied, err := New(poly.New(given.Numerator().Coefficients()...), given.Denominator())
		if err != nil {
			t.Fatal(err)
		}
		for form, g := range map[string]Function{"roots": given, "coefficients": multiplied} {
			if form == "coefficients" && !g.Numerator().Equal(given.Numerator()) {
				continue // rounded: another function
			}
			h, err := g.Sample(c.Period.Float(t), ZeroOrderHold)
			if err != nil {
				t.Errorf("%s, period %s: %v", c.Title, c.Period, err)
				continue
			}
			for what, check := range map[string]struct {
				call func() ([]poly.Root, error)
				want []complex128
			}{
				"pole": {h.PoleOffsets, complexes(t, c.PoleOffsets)},
				"zero": {h.ZeroOffsets, complexes(t, c.ZeroOffsets)},
			} {
				roots, err := check.call()
				if err != nil {
					t.Errorf("%s, period %s: %s offsets: %v", c.Title, c.Period, what, err)
					continue
				}
				off := matchRoots(roots, check.want)
				worst = max(worst, off)
				if off > 1e-12 {
					t.Errorf("%s, period %s: %s offsets %v, want %v: off by %.3g", c.Title, c.Period, what, roots, check.want, off)
				}
			}
			if c.StaticGain != "" {
				off := refdata.Off(t, real(h.At(1)), c.StaticGain)
				if off > 1e-13 {
					t.Errorf("%s, period %s: static gain %v, want %v: off by %.3g", c.Title, c.Period, real(h.At(1)), c.StaticGain, off)
				}
			}
		}
	}
	t.Logf("largest relative error of an offset: %.3g", worst)
}

// matchRoots returns the largest relative distance from a wanted root to the one of the list that is
// nearest, each used as often as it counts; 1 if the numbers differ.
func matchRoots(roots []poly.Root, want []complex128) float64 {
	left := make([]int, len(roots))
	total := 0
	for i, r := range roots {
		left[i] = r.Multiplicity
		total += r.Multiplicity
	}
	if total != len(want) {
		return 1
	}
	worst := 0.0
	for _, w := range want {
		best := -1
		for i, r := range roots {
			if left[i] > 0 && (best < 0 || cmplx.Abs(r.Value-w) < cmplx.Abs(roots[best].Value-w)) {
				best = i
			}
		}
		left[best]--
		if d := cmplx.Abs(roots[best].Value - w); d > 0 {
			worst = max(worst, d/cmplx.Abs(w))
		}
	}
	return worst
}
