package locus

import (
	"errors"
	"math"
	"testing"

	"github.com/polewright/polewright/poly"
)

// fuzzFamily makes a family of low degree out of bytes: small multiples of 1/8, which lean to
// double roots, common factors and exact zeros, or with wide set coefficients of all sizes.
func fuzzFamily(data []byte, wide bool) (Family, bool) {
	if len(data) < 2 || len(data) > 14 {
		return Family{}, false
	}
	split := 1 + int(data[0])%(len(data)-1)
	make := func(bytes []byte) poly.Poly {
		c := []float64{}
		for _, b := range bytes {
			x := float64(int8(b)) / 8
			if wide {
				x = math.Ldexp(x, int(b%32)-16)
			}
			c = append(c, x)
		}
		return poly.New(c...)
	}
	f, err := Parameter(make(data[1:1+split]), make(data[1+split:]))
	return f, err == nil
}

var fuzzSeeds = []struct {
	data []byte
	wide bool
}{
	{[]byte{3, 8, 24, 16, 0, 8}, false},                 // 1/(s(s+1)(s+2))
	{[]byte{5, 8, 24, 56, 32, 8, 0, 24, 40, 32}, false}, // a touch
	{[]byte{2, 8, 0, 0, 8}, false},                      // k/s²: the axis on the locus
	{[]byte{4, 8, 32, 48, 32, 136, 8}, false},           // a quadruple point
	{[]byte{2, 8, 24, 16, 8, 40, 32}, false},            // a common factor
	{[]byte{2, 8, 40, 0, 8, 32, 24}, false},             // a root through infinity
	{[]byte{1, 8, 8, 8, 8, 8}, false},
	{[]byte{3, 200, 3, 77, 41, 9, 250, 13}, true},
}

// FuzzWindows sets the way in float64 against exact arithmetic, and both against the roots.
func FuzzWindows(f *testing.F) {
	for _, s := range fuzzSeeds {
		f.Add(s.data, s.wide, 0.0, 0.5)
	}
	f.Fuzz(func(t *testing.T, data []byte, wide bool, sigma, zeta float64) {
		family, ok := fuzzFamily(data, wide)
		if !ok || !(zeta > 1e-3 && zeta < 0.999) || !(math.Abs(sigma) < 100) || sigma != 0 && math.Abs(sigma) < 1e-3 {
			return
		}
		for _, r := range []Region{LeftOf(sigma), Damped(zeta), Within(1), Within(2 * zeta)} {
			got, claimed := family.windowsFloat(r)
			want, err := family.reduced().windows("", constraintsFor(t, r))
			if err != nil {
				var undecided *UndecidedError
				if errors.As(err, &undecided) {
					return
				}
				t.Fatal(err)
			}
			if claimed {
				same := len(got) == len(want)
				for i := range got {
					same = same && nearEnd(got[i].Lo, want[i].Lo) && nearEnd(got[i].Hi, want[i].Hi)
				}
				if !same {
					t.Errorf("%v + k·%v in %v: float64 says %v, exact arithmetic %v", family.fixed, family.scaled, r, got, want)
				}
			}
			for i, w := range want {
				if !(w.Lo < w.Hi) || i > 0 && !(want[i-1].Hi <= w.Lo) {
					t.Errorf("%v + k·%v in %v: not ascending: %v", family.fixed, family.scaled, r, want)
				}
				k := max(w.Lo, -1e6)/2 + min(w.Hi, 1e6)/2
				if !(w.Lo < k && k < w.Hi) {
					continue
				}
				roots, err := family.PolesAt(k)
				if err != nil {
					continue
				}
				for _, s := range roots {
					for _, on := range constraintsFor(t, r) {
						if on.around(s) < 0 {
							t.Errorf("%v + k·%v in %v: %v, but at %v a root at %v", family.fixed, family.scaled, r, want, k, s)
						}
					}
				}
			}
		}
	})
}

// FuzzBreakPoints checks that each point is a multiple root of the polynomial at its gain, in
// relation to what rounding of both can do, and that conjugates come in pairs.
func FuzzBreakPoints(f *testing.F) {
	for _, s := range fuzzSeeds {
		f.Add(s.data, s.wide)
	}
	f.Fuzz(func(t *testing.T, data []byte, wide bool) {
		family, ok := fuzzFamily(data, wide)
		if !ok {
			return
		}
		points, err := family.BreakPoints()
		if err != nil {
			var undecided *UndecidedError
			var outside *poly.RangeError
			if errors.As(err, &undecided) || errors.As(err, &outside) {
				return
			}
			t.Fatal(err)
		}
		for i, b := range points {
			if b.Order < 2 || b.Gain == 0 || math.IsNaN(b.Gain) || i > 0 && b.Gain < points[i-1].Gain {
				t.Errorf("%v + k·%v: %v", family.fixed, family.scaled, points)
			}
			paired := imag(b.S) == 0
			for _, c := range points {
				paired = paired || c.S == complex(real(b.S), -imag(b.S)) && c.Gain == b.Gain && c.Order == b.Order
			}
			if !paired {
				t.Errorf("%v + k·%v: no conjugate of %v", family.fixed, family.scaled, b)
			}
			// The gain is rounded too, so that the sizes of both polynomials count.
			p, a, c := family.At(b.Gain), family.fixed, family.scaled
			for range b.Order {
				v := p.AtComplex(b.S)
				size := sizeOf(a, b.S) + math.Abs(b.Gain)*sizeOf(c, b.S)
				if residual := math.Hypot(real(v), imag(v)); residual > 1e-12*size {
					t.Errorf("%v + k·%v at %v: residual %g of %g", family.fixed, family.scaled, b, residual, size)
				}
				p, a, c = p.Derivative(), a.Derivative(), c.Derivative()
			}
		}
	})
}

// sizeOf returns Σ|cᵢ||s|ⁱ.
func sizeOf(p poly.Poly, s complex128) (size float64) {
	r := math.Hypot(real(s), imag(s))
	for i := p.Degree(); i >= 0; i-- {
		size = size*r + math.Abs(p.Coefficient(i))
	}
	return size
}
