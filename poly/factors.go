package poly

import (
	"fmt"
	"math"
	"sort"

	"github.com/polewright/polewright/internal/exact"
)

// A Factor is a polynomial without repeated roots, and how often it divides another one.
type Factor struct {
	Poly         Poly // the leading coefficient is in [1, 2)
	Multiplicity int
}

// SquareFree returns p taken apart by the multiplicity of its roots: p is a constant times the
// product of the factors, each to the power of its multiplicity, exactly; no factor has
// a repeated root, and no two have a root in common. They stand in ascending multiplicity. A
// constant, the zero polynomial and an invalid one have none.
//
// Source: D. Y. Y. Yun, On square-free decomposition algorithms, SYMSAC 1976, 26–35.
func (p Poly) SquareFree() []Factor {
	if p.err != nil {
		return nil
	}
	var factors []Factor
	for _, f := range p.integers().SquareFree() {
		factors = append(factors, Factor{normalised(f.Poly), f.Multiplicity})
	}
	return factors
}

// SquareFreePart returns the polynomial that has the distinct roots of p, each once, and
// a leading coefficient in [1, 2): the product of the factors of [Poly.SquareFree]. Of a constant
// other than zero it is 1, of the zero polynomial the zero polynomial.
func (p Poly) SquareFreePart() Poly {
	switch {
	case p.err != nil:
		return invalid(p.err)
	case len(p.c) == 0:
		return Poly{}
	case len(p.c) == 1:
		return New(1)
	}
	q := normalised(p.integers().SquareFreePart())
	if given, ok := p.GivenRoots(); ok {
		q.given = nil
		for _, r := range groupGiven(given) {
			q.given = append(q.given, r.Value)
		}
	}
	return q
}

// normalised returns p times the power of two, and the sign, that bring its leading coefficient
// into [1, 2); if that is 1 but for an integer factor of all coefficients, the factor goes too.
func normalised(p exact.Poly) Poly {
	if p.LeadSign() < 0 {
		p = p.Neg()
	}
	c, _ := p.Primitive().Integers()
	return fromInteger(exact.New(c, 1-c[len(c)-1].BitLen()))
}

// CommonFactor returns the greatest common factor of p and q, as far as their roots agree to
// within the tolerance: a root of p and one of q are taken for the same if their distance is
// at most tolerance times the greater modulus. Each root is paired once for each time that it
// counts, nearest pairs first; real roots go with real ones, and pairs of conjugates stay together.
//
// With tolerance 0 only what is proven to agree does, in exact arithmetic, however close other
// roots are; the leading coefficient of the factor is in [1, 2). Otherwise the factor is that
// of p's roots, rounded to float64, with leading coefficient 1; the true distance of a pair
// that is counted exceeds the tolerance by less than the two radii. Without common roots the
// factor is 1. Common factors of measured data say no more than the data does: the tolerance is
// the caller's.
//
// The error is a [*ArgumentError] for an invalid polynomial, if both are zero, and for
// a tolerance outside [0, 1), and with a tolerance above 0 it can be that of [Poly.Roots]. If one
// of the two is zero, the factor is the other one.
func (p Poly) CommonFactor(q Poly, tolerance float64) (Poly, error) {
	const call = "poly.Poly.CommonFactor"
	fail := func(err error) (Poly, error) { return invalid(err), err }
	switch {
	case p.err != nil:
		return fail(p.err)
	case q.err != nil:
		return fail(q.err)
	case !(tolerance >= 0 && tolerance < 1):
		return fail(&ArgumentError{Call: call, Argument: "tolerance", Reason: fmt.Sprintf("%v is not in [0, 1)", tolerance)})
	case len(p.c) == 0 && len(q.c) == 0:
		return fail(&ArgumentError{Call: call, Argument: "p and q", Reason: "everything divides two zero polynomials"})
	case len(p.c) == 0:
		return q, nil
	case len(q.c) == 0:
		return p, nil
	case tolerance == 0:
		return normalised(exact.GCD(p.integers(), q.integers())), nil
	}
	a, err := p.Roots()
	if err != nil {
		return fail(err)
	}
	b, err := q.Roots()
	if err != nil {
		return fail(err)
	}
	f, err := FromRoots(1, pairRoots(a, b, tolerance)...)
	if err != nil {
		return fail(err)
	}
	return f, nil
}

// pairRoots returns the roots of a that have a partner in b, as often as they have.
func pairRoots(a, b []Root, tolerance float64) []complex128 {
	type pair struct {
		i, j     int
		distance float64 // relative
	}
	var pairs []pair
	for i, r := range a {
		if imag(r.Value) < 0 {
			continue // follows its conjugate
		}
		for j, s := range b {
			// A real root goes with a real one only: a pair of complex ones has no half.
			if imag(s.Value) < 0 || (imag(r.Value) == 0) != (imag(s.Value) == 0) {
				continue
			}
			if d := relativeDistance(r.Value, s.Value); d <= tolerance {
				pairs = append(pairs, pair{i, j, d})
			}
		}
	}
	sort.SliceStable(pairs, func(k, l int) bool { return pairs[k].distance < pairs[l].distance })
	leftA, leftB := make([]int, len(a)), make([]int, len(b))
	for i, r := range a {
		leftA[i] = r.Multiplicity
	}
	for j, s := range b {
		leftB[j] = s.Multiplicity
	}
	var common []complex128
	for _, x := range pairs {
		n := min(leftA[x.i], leftB[x.j])
		leftA[x.i] -= n
		leftB[x.j] -= n
		for range n {
			s := a[x.i].Value
			common = append(common, s)
			if imag(s) != 0 {
				common = append(common, complex(real(s), -imag(s)))
			}
		}
	}
	return common
}

// relativeDistance returns |r - s| relative to the greater modulus; 0 if both are 0.
func relativeDistance(r, s complex128) float64 {
	if r == s {
		return 0
	}
	// Halves, so that no modulus is beyond the range.
	h := math.Max(math.Hypot(real(r)/2, imag(r)/2), math.Hypot(real(s)/2, imag(s)/2))
	return math.Hypot(real(r)/2-real(s)/2, imag(r)/2-imag(s)/2) / h
}
