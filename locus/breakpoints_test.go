package locus_test

import (
	"math"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

func family(t testing.TB, fixed, scaled poly.Poly) locus.Family {
	t.Helper()
	f, err := locus.Parameter(fixed, scaled)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// Each row can be checked by hand. The families with the points off the axis are built as
// f(g(s)), with break points wherever g′ = 0 or g(s) is a break point of f.
func TestBreakPointsByHand(t *testing.T) {
	root6 := math.Sqrt(6)
	tests := []struct {
		name          string
		fixed, scaled poly.Poly
		want          []locus.BreakPoint
	}{
		{"k/(s(s+1)(s+2)): 3s²+6s+2 = 0", poly.New(1, 3, 2, 0), poly.New(1), []locus.BreakPoint{
			{complex(-1-1/math.Sqrt(3), 0), -2 * math.Sqrt(3) / 9, 2},
			{complex(-1+1/math.Sqrt(3), 0), 2 * math.Sqrt(3) / 9, 2}}},
		{"k/(s(s+4)(s²+4s+20))", poly.New(1, 8, 36, 80, 0), poly.New(1), []locus.BreakPoint{
			{-2, 64, 2}, {complex(-2, -root6), 100, 2}, {complex(-2, root6), 100, 2}}},
		{"quadruple point: (s+1)⁴-16+k", poly.New(1, 4, 6, 4, -15), poly.New(1), []locus.BreakPoint{{-1, 16, 4}}},
		{"triple point: s³+3s²+3s+k", poly.New(1, 3, 3, 0), poly.New(1), []locus.BreakPoint{{-1, 1, 3}}},
		{"two complex triple points: (s²+1)³+1-1·k", poly.New(1, 0, 3, 0, 3, 0, 2), poly.New(-1), []locus.BreakPoint{
			{complex(0, -1), 1, 3}, {complex(0, 1), 1, 3}, {0, 2, 2}}},
		{"multiple poles and zeros are none", poly.New(1, 2, 1), poly.New(1, 4, 4), nil},
		{"B = 0", poly.New(1, 2, 1), poly.Poly{}, nil},
		{"A = 0", poly.Poly{}, poly.New(1, 2, 1), nil},
		{"constant A: 1 + k(s²+2s)", poly.New(1), poly.New(1, 2, 0), []locus.BreakPoint{{-1, 1, 2}}},
		{"proportional", poly.New(1, 2, 1), poly.New(3, 6, 3), nil},
		{"a branch through a double fixed root: (s+1)²(s+k)", poly.New(1, 2, 1).Mul(poly.New(1, 0)), poly.New(1, 2, 1), []locus.BreakPoint{{-1, 1, 3}}},
	}
	for _, c := range tests {
		got, err := family(t, c.fixed, c.scaled).BreakPoints()
		if err != nil || len(got) != len(c.want) {
			t.Errorf("%s: %v, %v; want %v", c.name, got, err, c.want)
			continue
		}
		for i, w := range c.want {
			g := got[i]
			if !(distance(g.S, w.S) <= relative) || !(math.Abs(g.Gain-w.Gain) <= relative*math.Abs(w.Gain)) || g.Order != w.Order {
				t.Errorf("%s: %v, want %v", c.name, g, w)
			}
		}
	}
}

func distance(a, b complex128) float64 { return math.Hypot(real(a-b), imag(a-b)) }

// A complex break point whose gain misses the real axis by a last bit of a coefficient is none.
func TestBreakPointsInvented(t *testing.T) {
	for _, off := range []float64{1e-3, 1e-9, 0x1p-50} {
		// ((s+2)²+1)((s+2)²+16) with the s¹ coefficient off: no longer symmetric about -2.
		got, err := family(t, poly.New(1, 8, 41, 100*(1+off), 100), poly.New(1)).BreakPoints()
		if err != nil {
			t.Fatal(err)
		}
		for _, b := range got {
			if imag(b.S) != 0 {
				t.Errorf("off by %g: %v, want no complex point", off, got)
			}
		}
	}
}
