package locus_test

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

var inf = math.Inf(1)

// Each row can be checked by hand with Routh's or Jury's conditions.
func TestWindowsByHand(t *testing.T) {
	s := poly.New(1, 0)
	tests := []struct {
		name          string
		fixed, scaled poly.Poly
		region        locus.Region
		want          []locus.Window
	}{
		{"k/(s(s+1)(s+2))", poly.New(1, 3, 2, 0), poly.New(1), locus.LeftOf(0), []locus.Window{{0, 6}}},
		{"k/(s(s+4)(s²+4s+20))", poly.New(1, 8, 36, 80, 0), poly.New(1), locus.LeftOf(0), []locus.Window{{0, 260}}},
		{"the whole axis on the locus: k/s²", poly.New(1, 0, 0), poly.New(1), locus.LeftOf(0), nil},
		{"k/s², right of it", poly.New(1, 0, 0), poly.New(1), locus.LeftOf(1), []locus.Window{{-1, inf}}},
		{"the whole axis: (s²+4)/(s²+1)", poly.New(1, 0, 1), poly.New(1, 0, 4), locus.LeftOf(0), nil},
		{"the whole circle: (z²+1)/z", poly.New(1, 0, 1), poly.New(1, 0), locus.Within(1), nil},
		{"B = 0, inside", poly.New(1, 3, 2), poly.Poly{}, locus.LeftOf(0), []locus.Window{{-inf, inf}}},
		{"B = 0, outside", poly.New(1, -3, 2), poly.Poly{}, locus.LeftOf(0), nil},
		{"A = 0: no polynomial at k = 0", poly.Poly{}, poly.New(1, 3, 2), locus.LeftOf(0), []locus.Window{{-inf, 0}, {0, inf}}},
		{"constant A: 1 + k(s+1)", poly.New(1), poly.New(1, 1), locus.LeftOf(0), []locus.Window{{-inf, -1}, {0, inf}}},
		{"deg B > deg A: s+1 + k(s²+s+1)", poly.New(1, 1), poly.New(1, 1, 1), locus.LeftOf(0), []locus.Window{{-inf, -1}, {0, inf}}},
		{"both constant", poly.New(1), poly.New(2), locus.LeftOf(0), []locus.Window{{-inf, -0.5}, {-0.5, inf}}},
		{"degree drop inside: (s+1)² + k(s+2)²... beyond 1", poly.New(1, 6, 9), poly.New(1, 8, 16), locus.Beyond(1), []locus.Window{{-inf, -1}, {-1, -16. / 25}, {-4. / 9, inf}}},
		{"fixed root inside", poly.New(1, 3, 2, 0).Mul(poly.New(1, 5)), poly.New(1, 5), locus.LeftOf(0), []locus.Window{{0, 6}}},
		{"fixed root outside", poly.New(1, 3, 2, 0).Mul(poly.New(1, -5)), poly.New(1, -5), locus.LeftOf(0), nil},
		{"fixed root on the boundary", poly.New(1, 3, 2, 0).Mul(s), s, locus.LeftOf(0), nil},
		{"proportional, inside", poly.New(1, 1), poly.New(2, 2), locus.LeftOf(0), []locus.Window{{-inf, -0.5}, {-0.5, inf}}},
		{"a touch splits: a pair at ±j for k = 1", poly.New(1, 3, 7, 4, 1, 0), poly.New(3, 5, 4), locus.LeftOf(0), []locus.Window{{0, 1}, {1, 59. / 45}}},
		{"sector at ζ = 0.5, where sin 3φ = 0: k/(s(s+1)(s+2))", poly.New(1, 3, 2, 0), poly.New(1), locus.Damped(0.5), []locus.Window{{0, 28. / 27}}},
		{"the sector's ray on the locus: k/s³ at ζ = 0.5", poly.New(1, 0, 0, 0), poly.New(1), locus.Damped(0.5), nil},
		{"strip: (s+1)² + k, |Im s| < 2", poly.New(1, 2, 1), poly.New(1), locus.Strip(2), []locus.Window{{-inf, 4}}},
		{"ring: 1 < |s| < 2 of s + k", poly.New(1, 0), poly.New(1), locus.All(locus.Beyond(1), locus.Within(2)), []locus.Window{{-2, -1}, {1, 2}}},
		{"All of nothing is the plane", poly.New(1, 0), poly.New(1), locus.All(), []locus.Window{{-inf, inf}}},
	}
	for _, c := range tests {
		got, err := family(t, c.fixed, c.scaled).Windows(c.region)
		if err != nil || !sameWindows(got, c.want) {
			t.Errorf("%s: %v, %v; want %v", c.name, got, err, c.want)
		}
	}
}

func sameWindows(got, want []locus.Window) bool {
	if len(got) != len(want) {
		return false
	}
	for i := range got {
		if !closeTo(got[i].Lo, want[i].Lo) || !closeTo(got[i].Hi, want[i].Hi) {
			return false
		}
	}
	return true
}

func closeTo(got, want float64) bool {
	return got == want || math.Abs(got-want) <= relative*math.Abs(want)
}

func TestCrossingsByHand(t *testing.T) {
	third := poly.New(1, 3, 2, 0)
	got, err := family(t, third, poly.New(1)).Crossings(locus.LeftOf(0))
	want := []locus.Crossing{{S: complex(0, -math.Sqrt2), Gain: 6, Touch: poly.Fails}, {S: complex(0, math.Sqrt2), Gain: 6, Touch: poly.Fails}}
	if err != nil || len(got) != 2 || distance(got[0].S, want[0].S) > relative || distance(got[1].S, want[1].S) > relative || got[0].Gain != 6 || got[1].Gain != 6 || got[0].Touch != poly.Fails {
		t.Errorf("%v, %v; want %v", got, err, want)
	}
	// Only the crossing of the ray that bounds the intersection, not of the line above it.
	got, err = family(t, third, poly.New(1)).Crossings(locus.All(locus.LeftOf(0), locus.Damped(0.5)))
	if err != nil || len(got) != 2 || !closeTo(got[0].Gain, 28./27) {
		t.Errorf("intersection: %v, %v", got, err)
	}
	for name, c := range map[string]struct {
		f locus.Family
		r locus.Region
	}{
		"k/s², the axis":       {family(t, poly.New(1, 0, 0), poly.New(1)), locus.LeftOf(0)},
		"k/s³, rays at ±120°":  {family(t, poly.New(1, 0, 0, 0), poly.New(1)), locus.Damped(0.5)},
		"(z²+1)/z, the circle": {family(t, poly.New(1, 0, 1), poly.New(1, 0)), locus.Within(1)},
		"in an intersection":   {family(t, poly.New(1, 0, 0), poly.New(1)), locus.All(locus.Within(3), locus.LeftOf(0))},
	} {
		_, err := c.f.Crossings(c.r)
		var whole *locus.BoundaryOnLocusError
		if !errors.As(err, &whole) {
			t.Errorf("%s: error %v, want a BoundaryOnLocusError", name, err)
		}
	}
	// Without moving roots nothing crosses, even if a fixed root lies on the boundary.
	for _, f := range []locus.Family{family(t, poly.New(1, 0), poly.Poly{}), family(t, poly.Poly{}, poly.New(1, 0)), family(t, poly.New(2, 0), poly.New(1, 0))} {
		if got, err := f.Crossings(locus.LeftOf(0)); err != nil || len(got) != 0 {
			t.Errorf("no moving root: %v, %v", got, err)
		}
	}
}

func TestInvalidRegions(t *testing.T) {
	f := family(t, poly.New(1, 3, 2, 0), poly.New(1))
	for _, r := range []locus.Region{nil, locus.LeftOf(math.NaN()), locus.LeftOf(inf), locus.Damped(0), locus.Damped(1), locus.Damped(math.NaN()),
		locus.Within(0), locus.Within(-1), locus.Within(inf), locus.Beyond(math.NaN()), locus.Strip(0), locus.All(locus.LeftOf(0), locus.Damped(2))} {
		var bad *poly.ArgumentError
		if _, err := f.Windows(r); !errors.As(err, &bad) {
			t.Errorf("Windows(%v): error %v", r, err)
		}
		if _, err := f.Crossings(r); !errors.As(err, &bad) {
			t.Errorf("Crossings(%v): error %v", r, err)
		}
	}
	if _, err := (locus.Family{}).Windows(locus.LeftOf(0)); err == nil {
		t.Error("the zero Family has windows")
	}
}

// inside tells whether every root at gain k lies in r, by the certified roots, and whether that
// is clear: no disc comes near the boundary.
func inside(t testing.TB, f locus.Family, r locus.Region, k float64) (in, clear bool) {
	t.Helper()
	roots, err := f.PolesAt(k)
	if err != nil {
		return false, false
	}
	in = true
	for _, root := range roots {
		h := 1e-9 * (distance(root.Value, 0) + 1e-6)
		at := r.Contains(root.Value)
		for _, d := range []complex128{complex(h, 0), complex(-h, 0), complex(0, h), complex(0, -h)} {
			if r.Contains(root.Value+d) != at {
				return false, false
			}
		}
		in = in && at
	}
	return in, true
}

// Windows against the roots themselves at gains inside, outside and beside the ends.
func TestWindowsAgainstPoles(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 7))
	regions := []locus.Region{locus.LeftOf(0), locus.LeftOf(-0.25), locus.LeftOf(0.3), locus.Damped(0.5), locus.Damped(math.Sqrt2 / 2), locus.Damped(0.2),
		locus.Within(1), locus.Within(3), locus.Beyond(0.5), locus.Strip(2), locus.All(locus.LeftOf(-0.1), locus.Damped(0.3), locus.Within(10))}
	for range 60 {
		fixed, scaled := randomPoly(rng, 1+rng.IntN(6)), randomPoly(rng, rng.IntN(5))
		f := family(t, fixed, scaled)
		for _, r := range regions {
			windows, err := f.Windows(r)
			if err != nil {
				t.Fatalf("%v %v: %v", fixed, scaled, err)
			}
			var gains []float64
			for _, w := range windows {
				for _, end := range []float64{w.Lo, w.Hi} {
					if !math.IsInf(end, 0) {
						h := 1e-6 * (math.Abs(end) + 1e-6)
						gains = append(gains, end-h, end+h)
					}
				}
			}
			for range 10 {
				gains = append(gains, math.Ldexp(rng.Float64()*2-1, rng.IntN(20)-8))
			}
			for _, k := range gains {
				want, clear := inside(t, f, r, k)
				if !clear {
					continue
				}
				got := false
				for _, w := range windows {
					got = got || w.Lo < k && k < w.Hi
				}
				if got != want {
					t.Errorf("%v + k·%v in %#v: k = %v in windows %v: %v, roots say %v", fixed, scaled, r, k, windows, got, want)
				}
			}
		}
	}
}

// randomPoly returns a polynomial with roots at small multiples of 1/4, some of them repeated,
// or with random coefficients.
func randomPoly(rng *rand.Rand, degree int) poly.Poly {
	if rng.IntN(2) == 0 {
		c := make([]float64, degree+1)
		for i := range c {
			c[i] = math.Round(rng.NormFloat64()*8) / 4
		}
		c[0] = 1
		return poly.New(c...)
	}
	p := poly.New(math.Exp(rng.NormFloat64()))
	for p.Degree() < degree {
		re := float64(rng.IntN(10)-7) / 4
		if im := float64(rng.IntN(4)) / 4; im != 0 && p.Degree()+2 <= degree {
			p = p.Mul(poly.New(1, -2*re, re*re+im*im))
		} else {
			p = p.Mul(poly.New(1, -re))
		}
	}
	return p
}
