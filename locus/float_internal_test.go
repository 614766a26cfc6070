package locus

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/poly"
)

// typicalFamily returns a family as they occur: stable or nearly so, with fewer zeros than poles.
func typicalFamily(rng *rand.Rand, n, m int) Family {
	factor := func(degree int) poly.Poly {
		p := poly.New(1)
		for p.Degree() < degree {
			w := math.Exp(rng.Float64()*4 - 2)
			if rng.IntN(2) == 0 && p.Degree()+2 <= degree {
				p = roundedPoly(p.Mul(poly.New(1, 2*(0.05+rng.Float64())*w, w*w)))
			} else {
				p = roundedPoly(p.Mul(poly.New(1, w)))
			}
		}
		return p
	}
	f, err := Parameter(factor(n), factor(m))
	if err != nil {
		panic(err)
	}
	return f
}

func roundedPoly(p poly.Poly) poly.Poly { return poly.New(p.Coefficients()...) }

// The two ways must agree wherever the one in float64 claims an answer.
func TestFloatAgainstExact(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	parts := []Region{LeftOf(0), LeftOf(-0.125), Damped(0.5), Damped(math.Sqrt2 / 2), Damped(0.3)}
	tried, answered := map[[2]int]int{}, map[[2]int]int{}
	for range 150 {
		n := []int{4, 8, 12}[rng.IntN(3)]
		f := typicalFamily(rng, n, rng.IntN(n))
		if rng.IntN(3) == 0 {
			// Coefficients that are no float64.
			var err error
			if f, err = Parameter(f.fixed.Mul(poly.New(1, 0.1)), f.scaled.Mul(poly.New(0.3))); err != nil {
				t.Fatal(err)
			}
		}
		for i, on := range parts {
			tried[[2]int{n, i}]++
			got, ok := f.windowsFloat(on)
			if !ok {
				continue
			}
			answered[[2]int{n, i}]++
			want, err := f.reduced().windows("", constraintsFor(t, on))
			if err != nil {
				t.Fatal(err)
			}
			same := len(got) == len(want)
			for j := range got {
				same = same && nearEnd(got[j].Lo, want[j].Lo) && nearEnd(got[j].Hi, want[j].Hi)
			}
			if !same {
				t.Errorf("%v + k·%v, %v: %v, exactly %v", f.fixed, f.scaled, on, got, want)
			}
		}
	}
	for _, n := range []int{4, 8, 12} {
		for i := range parts {
			t.Logf("degree %d, constraint %d: %d of %d", n, i, answered[[2]int{n, i}], tried[[2]int{n, i}])
		}
	}
}

// Sampled plants: poles inside the circle and at 1, zeros at -1 among others.
func TestFloatDiscs(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 14))
	tried, answered := 0, 0
	for range 150 {
		factor := func(degree int, special float64) poly.Poly {
			p := poly.New(1)
			for p.Degree() < degree {
				switch x := rng.Float64()*1.9 - 0.95; {
				case rng.IntN(3) == 0:
					p = roundedPoly(p.Mul(poly.New(1, -special)))
				case rng.IntN(2) == 0 && p.Degree()+2 <= degree:
					p = roundedPoly(p.Mul(poly.New(1, -x, x*x*0.9)))
				default:
					p = roundedPoly(p.Mul(poly.New(1, -x)))
				}
			}
			return p
		}
		n := 2 + rng.IntN(7)
		f, err := Parameter(factor(n, 1), factor(rng.IntN(n+1), -1))
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range []Region{Within(1), Within(0.9), Within(2)} {
			tried++
			got, ok := f.windowsFloat(r)
			if !ok {
				continue
			}
			answered++
			want, err := f.reduced().windows("", constraintsFor(t, r))
			if err != nil {
				t.Fatal(err)
			}
			same := len(got) == len(want)
			for j := range got {
				same = same && nearEnd(got[j].Lo, want[j].Lo) && nearEnd(got[j].Hi, want[j].Hi)
			}
			if !same {
				t.Errorf("%v + k·%v, %v: %v, exactly %v", f.fixed, f.scaled, r, got, want)
			}
		}
	}
	t.Logf("%d of %d", answered, tried)
}

func constraintsFor(t testing.TB, r Region) []constraint {
	t.Helper()
	list, err := constraintsOf("", r)
	if err != nil {
		t.Fatal(err)
	}
	return list
}

func nearEnd(got, want float64) bool {
	return got == want || math.Abs(got-want) <= endError*math.Abs(want)
}
