package poly

import (
	"fmt"
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// FromRoots returns lead·∏(s - root), exactly, and remembers the roots: [Poly.Roots] returns
// them as given, grouped, with radius 0, also of multiples and of products of such
// polynomials. The error is a [*ArgumentError] if lead is zero, a number is not finite, or
// the roots are not closed under conjugation: as many of each non-real one as of its
// conjugate, in any order.
func FromRoots(lead float64, roots ...complex128) (Poly, error) {
	const call = "poly.FromRoots"
	if lead == 0 || math.IsNaN(lead) || math.IsInf(lead, 0) {
		err := &ArgumentError{Call: call, Argument: "lead", Reason: fmt.Sprintf("%v is not a finite number other than zero", lead)}
		return invalid(err), err
	}
	if len(roots) > MaxDegree {
		err := &ArgumentError{Call: call, Argument: "roots", Reason: fmt.Sprintf("%d roots; at most %d", len(roots), MaxDegree)}
		return invalid(err), err
	}
	given := make([]complex128, len(roots))
	surplus := map[complex128]int{} // of the upper one of each pair
	for i, s := range roots {
		re, im := real(s)+0, imag(s)+0 // no negative zeros
		if math.IsNaN(re-re) || math.IsNaN(im-im) {
			err := &ArgumentError{Call: call, Argument: fmt.Sprintf("roots[%d]", i), Reason: fmt.Sprintf("%v is not finite", s)}
			return invalid(err), err
		}
		given[i] = complex(re, im)
		switch {
		case im > 0:
			surplus[given[i]]++
		case im < 0:
			surplus[complex(re, -im)]--
		}
	}
	for i, s := range given {
		if surplus[complex(real(s), math.Abs(imag(s)))] != 0 {
			err := &ArgumentError{Call: call, Argument: fmt.Sprintf("roots[%d]", i), Reason: fmt.Sprintf("%v and its conjugate do not come equally often", s)}
			return invalid(err), err
		}
	}
	p := fromInteger(productOfRoots(lead, given))
	if len(given) > 0 {
		p.given = given
	}
	return p, nil
}

// productOfRoots multiplies lead·∏(s - root) out in integers, by halves, so that the long
// factors meet only at the end.
func productOfRoots(lead float64, roots []complex128) exact.Poly {
	var factors []exact.Poly
	for _, s := range roots {
		if imag(s) == 0 {
			factors = append(factors, New(1, -real(s)).integers())
		} else if imag(s) > 0 {
			re, im := New(real(s)), New(imag(s))
			linear := re.Scale(-2)
			square := re.Mul(re).Add(im.Mul(im))
			quadratic := New(1, 0, 0).Add(linear.Mul(New(1, 0))).Add(square)
			factors = append(factors, quadratic.integers())
		}
	}
	m, e := integer(lead)
	factors = append(factors, exact.New([]*big.Int{big.NewInt(m)}, e))
	for len(factors) > 1 {
		half := factors[:0]
		for i := 0; i < len(factors); i += 2 {
			if i+1 < len(factors) {
				half = append(half, factors[i].Mul(factors[i+1]))
			} else {
				half = append(half, factors[i])
			}
		}
		factors = half
	}
	return factors[0]
}

// GivenRoots returns the roots that the polynomial was made from, each as often as it was
// given. It is ok only for a polynomial made by [FromRoots], and for multiples and products
// of such polynomials and constants.
func (p Poly) GivenRoots() (roots []complex128, ok bool) {
	if p.err != nil || len(p.c) == 0 {
		return nil, false
	}
	return append([]complex128(nil), p.given...), len(p.given) == len(p.c)-1
}
