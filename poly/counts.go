package poly

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/internal/exact"
)

// A Count tells how many roots of a polynomial, counted with multiplicity, lie inside a region,
// exactly on its boundary, and outside. The zero value counts none.
type Count struct{ Inside, Boundary, Outside int }

// CountLeftOf counts the roots with Re s < sigma, on the line Re s = sigma and beyond it,
// in general without looking for them; sigma may be infinite. At 0, Inside is the number of roots in the
// open left half-plane, and a polynomial is a Hurwitz polynomial if that is all of them.
//
// The first column of Routh's table answers in float64 with error bounds, where none of its
// entries may be zero; where that does not decide, the discs of all roots do, or the Cauchy index
// in exact arithmetic, in all singular cases too.
//
// The error is a [*ArgumentError] for an invalid polynomial, for the zero polynomial, beyond
// [MaxDegree], and if sigma is NaN.
func (p Poly) CountLeftOf(sigma float64) (Count, error) {
	const call = "poly.Poly.CountLeftOf"
	if err := p.checkRootQuestion(call); err != nil {
		return Count{}, err
	}
	n := p.Degree()
	switch {
	case math.IsNaN(sigma):
		return Count{}, &ArgumentError{Call: call, Argument: "sigma", Reason: "NaN is no place for a line"}
	case math.IsInf(sigma, +1):
		return Count{Inside: n}, nil
	case math.IsInf(sigma, -1):
		return Count{Outside: n}, nil
	}
	if c, ok := exact.FilterLeftOf(p.c, p.inexact(), sigma); ok {
		return Count(c), nil
	}
	if c, ok := p.countByRoots(func(r Root) int { return sideOfLine(r, sigma) }); ok {
		return c, nil
	}
	return Count(exact.LeftOf(p.integers(), exact.Float(sigma))), nil
}

// CountInSector counts the roots with |arg(-s)| < acos zeta, that is of damping ratio greater
// than zeta, on the two rays that bound this sector, and outside; the origin counts as a point
// of the rays. At zeta = 0 the sector is the left half-plane, and at 1 it has shrunk to
// its boundary, the negative real axis with the origin.
//
// The argument principle answers by Routh's method along one ray, in float64 with error bounds;
// where that does not decide, the discs of all roots do, or exact arithmetic along the ray.
//
// The error is a [*ArgumentError] for an invalid polynomial, for the zero polynomial, beyond
// [MaxDegree], and if zeta is not in [0, 1].
func (p Poly) CountInSector(zeta float64) (Count, error) {
	const call = "poly.Poly.CountInSector"
	if err := p.checkRootQuestion(call); err != nil {
		return Count{}, err
	}
	switch {
	case !(zeta >= 0 && zeta <= 1):
		return Count{}, &ArgumentError{Call: call, Argument: "zeta", Reason: fmt.Sprintf("%v is not in [0, 1]", zeta)}
	case zeta == 0:
		return p.CountLeftOf(0)
	case zeta == 1:
		_, on := p.integers().CountReal(exact.Float(math.Inf(-1)), exact.Float(0), exact.OpenClosed)
		return Count{Boundary: on, Outside: p.Degree() - on}, nil
	}
	if c, ok := exact.FilterInSector(p.c, p.inexact(), zeta); ok {
		return Count(c), nil
	}
	if c, ok := p.countByRoots(func(r Root) int { return sideOfRays(r, zeta) }); ok {
		return c, nil
	}
	return Count(exact.InSector(p.integers(), exact.Float(zeta))), nil
}

// CountInDisc counts the roots with |s| < radius, on this circle and beyond it; radius may be
// 0, where only the origin is on the circle, or +Inf.
//
// The Schur–Cohn test answers in float64 with error bounds, where none of its constants may be
// zero; where that does not decide, the discs of all roots do, or the Cauchy index in exact
// arithmetic after the disc was mapped to a half-plane, in all singular cases too.
//
// The error is a [*ArgumentError] for an invalid polynomial, for the zero polynomial, beyond
// [MaxDegree], and if radius is negative or NaN.
func (p Poly) CountInDisc(radius float64) (Count, error) {
	const call = "poly.Poly.CountInDisc"
	if err := p.checkRootQuestion(call); err != nil {
		return Count{}, err
	}
	n := p.Degree()
	switch {
	case !(radius >= 0):
		return Count{}, &ArgumentError{Call: call, Argument: "radius", Reason: fmt.Sprintf("%v is no radius", radius)}
	case math.IsInf(radius, +1):
		return Count{Inside: n}, nil
	case radius == 0:
		_, zeros := p.integers().StripZero()
		return Count{Boundary: zeros, Outside: n - zeros}, nil
	}
	if c, ok := exact.FilterInDisc(p.c, p.inexact(), radius); ok {
		return Count(c), nil
	}
	if c, ok := p.countByRoots(func(r Root) int { return sideOfCircle(r, radius) }); ok {
		return c, nil
	}
	return Count(exact.InDisc(p.integers(), exact.Float(radius))), nil
}
