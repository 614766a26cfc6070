package locus

import (
	"slices"

	"github.com/polewright/polewright/internal/exact"
)

// A BreakPoint is a multiple root at one finite gain other than 0: branches meet there.
type BreakPoint struct {
	S     complex128 // real if imag(S) == 0
	Gain  float64    // real, proved to be so
	Order int        // how many roots coincide there, fixed ones included
}

// BreakPoints returns every multiple root at a finite real gain k ≠ 0, real and complex, of any
// order and for both signs of k, by ascending gain, both of a conjugate pair. A branch that
// runs through a fixed root meets it there. Poles and zeros that are multiple, at k = 0 and
// k = ±∞, are not among them, nor a fixed root that is multiple at every gain.
//
// A point that is no multiple root at any real gain is not returned, however close it comes:
// where bounds cannot tell, the gain is proved real by an exact resultant.
//
// Source: the multiple roots are those of A′B - AB′ (W. R. Evans, Control system synthesis by
// root locus method, Trans. AIEE 69 (1950) 66–69).
func (f Family) BreakPoints() ([]BreakPoint, error) {
	const call = "locus.Family.BreakPoints"
	if err := f.valid(call); err != nil {
		return nil, err
	}
	return f.reduced().breakPoints(call)
}

func (r reduced) breakPoints(call string) ([]BreakPoint, error) {
	if r.degree() < 1 {
		return nil, nil
	}
	d := r.a.Derivative().Mul(r.b).Sub(r.a.Mul(r.b.Derivative()))
	moving := d.SquareFree()
	fixed := r.common.SquareFree()
	var points []BreakPoint
	find := func(p exact.Poly, order int) error {
		more, err := r.realGains(call, p, order)
		points = append(points, more...)
		return err
	}
	for _, m := range moving {
		rest := without(without(m.Poly, r.a), r.b)
		for _, fix := range fixed {
			both := exact.GCD(rest, fix.Poly)
			if both.Degree() > 0 {
				if err := find(both, m.Multiplicity+1+fix.Multiplicity); err != nil {
					return nil, err
				}
				rest = over(rest, both)
			}
		}
		if err := find(rest, m.Multiplicity+1); err != nil {
			return nil, err
		}
	}
	for _, fix := range fixed {
		alone := without(without(without(fix.Poly, r.a), r.b), d)
		if err := find(alone, fix.Multiplicity+1); err != nil {
			return nil, err
		}
	}
	slices.SortFunc(points, func(a, b BreakPoint) int {
		return compareCrossings(Crossing{S: a.S, Gain: a.Gain}, Crossing{S: b.S, Gain: b.Gain})
	})
	return points, nil
}

// gainBits is how many bits of the gain of a candidate are computed before exact arithmetic
// decides whether it is real.
const gainBits = 120

// realGains returns the roots of the square-free p, which are none of A or B, at which the gain
// is real.
func (r reduced) realGains(call string, p exact.Poly, order int) ([]BreakPoint, error) {
	roots, err := upperRoots(call, p)
	if err != nil {
		return nil, err
	}
	points, gains := make([]complex128, len(roots)), make([]bigComplex, len(roots))
	for i, root := range roots {
		s, a, err := root.value(call, r.a, gainBits+10)
		if err != nil {
			return nil, err
		}
		_, b, err := root.value(call, r.b, gainBits+10)
		if err != nil {
			return nil, err
		}
		k := quotientBig(a, b, 192)
		k.re.Neg(k.re)
		k.im.Neg(k.im)
		points[i], gains[i] = number(s), k
	}
	var (
		found []BreakPoint
		exist exact.Poly // its roots are the gains, computed when it is needed
	)
	for i, root := range roots {
		point := BreakPoint{points[i], toFloat(gains[i].re), order}
		if root.real {
			found = append(found, point)
			continue
		}
		if exponent(gains[i].im) > exponent(gains[i].re)-gainBits {
			continue
		}
		if exist.IsZero() {
			exist = exact.GainPolynomial(p, r.a, r.b)
		}
		if !provenReal(exist, roots, gains, i) {
			continue
		}
		found = append(found, BreakPoint{complex(real(point.S), -imag(point.S)), point.Gain, order}, point)
	}
	return found, nil
}

// provenReal decides whether the gain of roots[i], which is real to gainBits, is real: all of the
// gains within a small disc about a real number are so if and only if their polynomial has as
// many real roots there.
func provenReal(exist exact.Poly, roots []preciseRoot, gains []bigComplex, i int) bool {
	center := gains[i].re
	reach := exponent(center) - gainBits + 8
	within := 0
	for j, k := range gains {
		d := newFloat(192).Sub(k.re, center)
		if exponent(d) < reach && exponent(k.im) < reach {
			within++
			if !roots[j].real {
				within++ // the conjugate
			}
		}
	}
	at, radius := dyadic(center), exact.PowerOfTwo(reach)
	_, real := exist.CountReal(at.Sub(radius), at.Add(radius), exact.Open)
	return real == within
}
