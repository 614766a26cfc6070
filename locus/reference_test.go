package locus_test

import (
	"math"
	"slices"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

type decimal = refdata.Decimal

type referenceRegion struct {
	Kind                string
	Sigma, Zeta, Radius decimal
	Of                  []referenceRegion
}

func (r referenceRegion) region(t testing.TB) locus.Region {
	switch r.Kind {
	case "half_plane":
		return locus.LeftOf(r.Sigma.Float(t))
	case "sector":
		return locus.Damped(r.Zeta.Float(t))
	case "disc":
		return locus.Within(r.Radius.Float(t))
	case "and":
		var of []locus.Region
		for _, one := range r.Of {
			of = append(of, one.region(t))
		}
		return locus.All(of...)
	}
	t.Fatalf("region %q", r.Kind)
	return nil
}

type referenceAngles struct {
	PoleRe decimal `json:"pole_re"`
	PoleIm decimal `json:"pole_im"`
	ZeroRe decimal `json:"zero_re"`
	ZeroIm decimal `json:"zero_im"`
	Mult   int
	Angles []decimal
}

type reference struct {
	Name                   string
	Plane                  string
	Numerator, Denominator []decimal
	Centroid               decimal
	AsymptotePos           []decimal `json:"asymptote_angles_deg"`
	AsymptoteNeg           []decimal `json:"asymptote_angles_neg_deg"`
	BreakPoints            []struct {
		Re, Im, K decimal
		Order     int
	}
	AxisOnLocus   bool `json:"axis_on_locus"`
	AxisCrossings []struct {
		W, K  decimal
		Touch bool
	} `json:"axis_crossings"`
	CircleCrossings []struct {
		Re, Im, K decimal
		Touch     bool
	} `json:"circle_crossings"`
	Departures  []referenceAngles `json:"departure_deg"`
	Arrivals    []referenceAngles `json:"arrival_deg"`
	SegmentsPos [][2]decimal      `json:"real_segments_pos"`
	SegmentsNeg [][2]decimal      `json:"real_segments_neg"`
	StableK     [][2]decimal      `json:"stable_k"`
	RegionK     []struct {
		Region referenceRegion
		K      [][2]decimal
	} `json:"region_k"`
	PolesAt []struct {
		K     decimal
		Roots []struct {
			Re, Im decimal
			Mult   int
		}
	} `json:"poles_at"`
}

func (r reference) family(t testing.TB) locus.Family {
	t.Helper()
	f, err := locus.Parameter(poly.New(refdata.Floats(t, r.Denominator)...), poly.New(refdata.Floats(t, r.Numerator)...))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func references(t testing.TB) []reference {
	t.Helper()
	var cases []reference
	refdata.Read(t, "testdata/locus.json", &cases)
	return cases
}

const (
	relative = 1e-12 // facts and window ends
	angular  = 1e-12 // rad
)

func near(t testing.TB, what string, got float64, want decimal) {
	t.Helper()
	if off := refdata.Off(t, got, want); !(off <= relative) {
		t.Errorf("%s = %v, want %s: off by %.2g", what, got, want, off)
	}
}

// nearPoint compares in relation to the modulus, and demands exact zeros.
func nearPoint(t testing.TB, what string, got complex128, re, im decimal) {
	t.Helper()
	size := math.Hypot(re.Float(t), im.Float(t))
	miss := math.Hypot(refdata.Miss(t, real(got), re), refdata.Miss(t, imag(got), im))
	if !(miss <= relative*size) || im == "0" && imag(got) != 0 {
		t.Errorf("%s = %v, want %s + j%s", what, got, re, im)
	}
}

func nearAngles(t testing.TB, what string, got []float64, want []decimal) {
	t.Helper()
	if len(got) != len(want) {
		t.Errorf("%s = %v, want %v degrees", what, got, want)
		return
	}
	degrees := refdata.Floats(t, want)
	slices.Sort(degrees)
	for i, d := range degrees {
		if !(math.Abs(got[i]-d*(math.Pi/180)) <= angular) {
			t.Errorf("%s = %v, want %v degrees", what, got, want)
		}
	}
}

func nearWindows(t testing.TB, what string, got []locus.Window, want [][2]decimal) {
	t.Helper()
	if len(got) != len(want) {
		t.Errorf("%s = %v, want %v", what, got, want)
		return
	}
	for i, w := range want {
		near(t, what+": lower end", got[i].Lo, w[0])
		near(t, what+": upper end", got[i].Hi, w[1])
	}
}

func TestReferenceAsymptotes(t *testing.T) {
	for _, c := range references(t) {
		f := c.family(t)
		pos, neg := f.Asymptotes(locus.Positive), f.Asymptotes(locus.Negative)
		if c.Centroid == "" {
			if !math.IsNaN(pos.Centroid) {
				t.Errorf("%s: centroid %v, want none", c.Name, pos.Centroid)
			}
		} else {
			near(t, c.Name+": centroid", pos.Centroid, c.Centroid)
			near(t, c.Name+": centroid", neg.Centroid, c.Centroid)
		}
		nearAngles(t, c.Name+": asymptotes", pos.Angles, c.AsymptotePos)
		nearAngles(t, c.Name+": asymptotes of negative gains", neg.Angles, c.AsymptoteNeg)
	}
}

func TestReferenceBreakPoints(t *testing.T) {
	for _, c := range references(t) {
		got, err := c.family(t).BreakPoints()
		if err != nil {
			t.Errorf("%s: %v", c.Name, err)
			continue
		}
		if len(got) != len(c.BreakPoints) {
			t.Errorf("%s: %v, want %v", c.Name, got, c.BreakPoints)
			continue
		}
		for _, w := range c.BreakPoints {
			i := closest(len(got), func(i int) float64 {
				return math.Hypot(refdata.Miss(t, real(got[i].S), w.Re), refdata.Miss(t, imag(got[i].S), w.Im))
			})
			b := got[i]
			got = slices.Delete(got, i, i+1)
			nearPoint(t, c.Name+": break point", b.S, w.Re, w.Im)
			near(t, c.Name+": gain of a break point", b.Gain, w.K)
			if b.Order != w.Order {
				t.Errorf("%s: order %d, want %d", c.Name, b.Order, w.Order)
			}
		}
	}
}

func closest(n int, miss func(int) float64) int {
	best, at := math.Inf(1), 0
	for i := range n {
		if m := miss(i); m < best {
			best, at = m, i
		}
	}
	return at
}

func TestReferenceCrossings(t *testing.T) {
	for _, c := range references(t) {
		type crossing struct {
			re, im, k decimal
			touch     bool
		}
		check := func(what string, r locus.Region, want []crossing) {
			t.Helper()
			got, err := c.family(t).Crossings(r)
			if err != nil {
				t.Errorf("%s: %v", what, err)
				return
			}
			if !slices.IsSortedFunc(got, func(a, b locus.Crossing) int { return int(math.Copysign(1, a.Gain-b.Gain)) }) {
				t.Errorf("%s: not ascending: %v", what, got)
			}
			n := 0
			for _, w := range want {
				n += 2
				if w.im == "0" {
					n--
				}
			}
			if len(got) != n {
				t.Errorf("%s: %d crossings, want %d: %v", what, len(got), n, got)
				return
			}
			for _, w := range want {
				for _, sign := range []float64{1, -1} {
					if sign < 0 && w.im == "0" {
						continue
					}
					i := closest(len(got), func(i int) float64 {
						return math.Hypot(refdata.Miss(t, real(got[i].S), w.re), refdata.Miss(t, sign*imag(got[i].S), w.im))
					})
					g := got[i]
					nearPoint(t, what, complex(real(g.S), sign*imag(g.S)), w.re, w.im)
					near(t, what+": gain", g.Gain, w.k)
					touch := poly.Fails
					if w.touch {
						touch = poly.Holds
					}
					if g.Touch != touch {
						t.Errorf("%s: touch %v, want %v", what, g.Touch, touch)
					}
				}
			}
		}
		var axis, circle []crossing
		for _, w := range c.AxisCrossings {
			axis = append(axis, crossing{"0", w.W, w.K, w.Touch})
		}
		for _, w := range c.CircleCrossings {
			circle = append(circle, crossing{w.Re, w.Im, w.K, w.Touch})
		}
		if !c.AxisOnLocus {
			check(c.Name+": axis", locus.LeftOf(0), axis)
		}
		if c.Plane == "z" {
			check(c.Name+": circle", locus.Within(1), circle)
		}
	}
}

func TestReferenceAngles(t *testing.T) {
	for _, c := range references(t) {
		check := func(what string, got []locus.Departure, err error, want []referenceAngles) {
			t.Helper()
			if err != nil || len(got) != len(want) {
				t.Errorf("%s: %v, %v; want %v", what, got, err, want)
				return
			}
			for _, w := range want {
				re, im := w.PoleRe, w.PoleIm
				if re == "" {
					re, im = w.ZeroRe, w.ZeroIm
				}
				i := closest(len(got), func(i int) float64 {
					return math.Hypot(refdata.Miss(t, real(got[i].From), re), refdata.Miss(t, imag(got[i].From), im))
				})
				nearPoint(t, what, got[i].From, re, im)
				nearAngles(t, what, got[i].Angles, w.Angles)
				if got[i].Multiplicity != w.Mult {
					t.Errorf("%s: multiplicity %d, want %d", what, got[i].Multiplicity, w.Mult)
				}
			}
		}
		f := c.family(t)
		got, err := f.Departures(locus.Positive)
		check(c.Name+": departures", got, err, c.Departures)
		got, err = f.Arrivals(locus.Positive)
		check(c.Name+": arrivals", got, err, c.Arrivals)
	}
}

func TestReferenceSegments(t *testing.T) {
	for _, c := range references(t) {
		for sign, want := range map[locus.Sign][][2]decimal{locus.Positive: c.SegmentsPos, locus.Negative: c.SegmentsNeg} {
			segments, err := c.family(t).RealSegments(sign)
			if err != nil {
				t.Errorf("%s: %v", c.Name, err)
			}
			var got []locus.Window
			for _, s := range segments {
				got = append(got, locus.Window(s))
			}
			nearWindows(t, c.Name+": segments", got, want)
		}
	}
}

func TestReferenceWindows(t *testing.T) {
	for _, c := range references(t) {
		f := c.family(t)
		got, err := f.Windows(locus.LeftOf(0))
		if err != nil {
			t.Errorf("%s: %v", c.Name, err)
		}
		nearWindows(t, c.Name+": stable", got, c.StableK)
		for _, r := range c.RegionK {
			got, err := f.Windows(r.Region.region(t))
			if err != nil {
				t.Errorf("%s: %v", c.Name, err)
			}
			nearWindows(t, c.Name+": "+r.Region.Kind, got, r.K)
		}
	}
}

func TestReferencePoles(t *testing.T) {
	for _, c := range references(t) {
		f := c.family(t)
		for _, at := range c.PolesAt {
			got, err := f.PolesAt(at.K.Float(t))
			if err != nil || len(got) != len(at.Roots) {
				t.Errorf("%s: at %s: %v, %v", c.Name, at.K, got, err)
				continue
			}
			for _, w := range at.Roots {
				i := closest(len(got), func(i int) float64 {
					return math.Hypot(refdata.Miss(t, real(got[i].Value), w.Re), refdata.Miss(t, imag(got[i].Value), w.Im))
				})
				nearPoint(t, c.Name+": pole at "+string(at.K), got[i].Value, w.Re, w.Im)
				if got[i].Multiplicity != w.Mult {
					t.Errorf("%s: at %s: multiplicity %d, want %d", c.Name, at.K, got[i].Multiplicity, w.Mult)
				}
			}
		}
	}
}
