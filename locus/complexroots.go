package locus

import (
	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// A preciseRoot is a simple root of a square-free polynomial, in the closed upper half-plane.
type preciseRoot struct {
	poly  exact.Poly
	slope exact.Poly
	real  bool
	near  exact.Isolated // of a real one
	start complex128     // of one that is not real
	reach float64        // start is no further from the root
}

// upperRoots returns the roots of a square-free polynomial in the closed upper half-plane: the
// real ones in ascending order, then the others.
func upperRoots(call string, p exact.Poly) ([]preciseRoot, error) {
	if p.Degree() < 1 {
		return nil, nil
	}
	var roots []preciseRoot
	slope := p.Derivative()
	for _, r := range p.Isolate(minusInfinity, plusInfinity, exact.Open) {
		roots = append(roots, preciseRoot{poly: p, slope: slope, real: true, near: r})
	}
	if len(roots) == p.Degree() {
		return roots, nil
	}
	all, err := poly.FromIntegers(p.Integers()).Roots()
	if err != nil {
		return nil, err
	}
	for _, r := range all {
		if r.Distinct > 1 && imag(r.Value) >= 0 {
			return nil, &UndecidedError{Call: call, What: "different points closer together than float64 can part"}
		}
		if imag(r.Value) > 0 {
			roots = append(roots, preciseRoot{poly: p, slope: slope, start: r.Value, reach: r.Radius})
		}
	}
	return roots, nil
}

// at returns the root with a relative error of at most 2^-bits.
func (r preciseRoot) at(call string, bits uint) (bigComplex, error) {
	if r.real {
		return bigComplex{refine(r.poly, r.near, bits), newFloat(bits)}, nil
	}
	work := bits + 64
	s := bigComplex{newFloat(work).SetFloat64(real(r.start)), newFloat(work).SetFloat64(imag(r.start))}
	// The disc about s with radius n·|p/p′| holds a root; Newton's method doubles the digits.
	for range 40 {
		y, _ := evaluateComplex(r.poly, s, work)
		d, _ := evaluateComplex(r.slope, s, work)
		if d.re.Sign() == 0 && d.im.Sign() == 0 {
			break
		}
		step := quotientBig(y, d, work)
		s = bigComplex{newFloat(work).Sub(s.re, step.re), newFloat(work).Sub(s.im, step.im)}
		size := max(exponent(s.re), exponent(s.im))
		if max(exponent(step.re), exponent(step.im)) < size-int(bits+20) {
			return s, nil
		}
	}
	return bigComplex{}, &UndecidedError{Call: call, What: "a point that is too ill-conditioned to refine"}
}

// number returns the float64 nearest to the root; a real one has imaginary part 0.
func number(s bigComplex) complex128 { return complex(toFloat(s.re), toFloat(s.im)) }

// value returns p at the root with at least the given number of correct bits in relation to its
// modulus; p has no root there.
func (r preciseRoot) value(call string, p exact.Poly, correct int) (s, v bigComplex, err error) {
	for bits := uint(192); bits <= maxBits; bits *= 2 {
		if s, err = r.at(call, bits); err != nil {
			return s, v, err
		}
		var e int
		if r.real {
			v.im = newFloat(bits)
			v.re, e = evaluate(p, s.re, bits)
		} else {
			v, e = evaluateComplex(p, s, bits)
		}
		larger := v.re
		if exponent(v.im) > exponent(v.re) {
			larger = v.im
		}
		if relativeBits(larger, e, p.Degree(), bits) > correct {
			return s, v, nil
		}
	}
	return s, v, &UndecidedError{Call: call, What: "a value too small in relation to the coefficients"}
}
