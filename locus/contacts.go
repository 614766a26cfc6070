package locus

import (
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// A contact is a point of a boundary through which a moving root passes, or which it touches,
// at a finite gain.
type contact struct {
	s    bigComplex // the point; meaningless if the gain is 0
	gain *big.Float // known to 64 bits at least
	pair bool       // it stands for a conjugate pair
	even bool       // the condition for a real gain does not change its sign: a touch
}

// contactsWith returns the contacts of the moving roots with a curve, in no order. whole tells
// that the curve belongs to the locus; then the contacts are those with extreme gains.
func (r reduced) contactsWith(call string, on form) (list []contact, whole bool, err error) {
	if r.degree() < 1 {
		return nil, false, nil
	}
	reA, imA, reB, imB := on.split(r.a, r.b)
	lo, hi := on.interval()
	h := on.under()
	value := ratio{
		num: reA.Mul(reB).Add(h.Mul(imA).Mul(imB)).Neg(),
		den: reB.Mul(reB).Add(h.Mul(imB).Mul(imB)),
	}
	for _, x := range on.real() {
		switch a, b := reA.At(x), reB.At(x); {
		case b.Sign() == 0: // the gain is infinite
		case a.Sign() == 0:
			list = append(list, contact{gain: newFloat(64)})
		default:
			k := newFloat(128).Quo(round(a, 192), round(b, 192))
			s := on.point(round(x, 192), 192)
			list = append(list, contact{s: bigComplex{s.re, newFloat(192)}, gain: k.Neg(k)})
		}
	}
	ends := exact.Closed
	if on.mirrored() {
		ends = exact.Open // real ends are done, others infinite
	}
	w := imA.Mul(reB).Sub(reA.Mul(imB))
	if whole = w.IsZero(); whole {
		// The gain along the curve is the rational function value; its range ends at the
		// stationary values.
		g := exact.GCD(value.num, value.den)
		value = ratio{over(value.num, g), over(value.den, g)}
		w = value.num.Derivative().Mul(value.den).Sub(value.num.Mul(value.den.Derivative()))
	}
	if whole {
		for _, x := range [...]exact.Dyadic{lo, hi} {
			if x.Inf() != 0 || len(on.real()) > 0 {
				continue
			}
			if b := value.den.At(x); b.Sign() != 0 {
				list = append(list, contact{s: on.point(round(x, 192), 192), gain: newFloat(128).Quo(round(value.num.At(x), 192), round(b, 192))})
			}
		}
	}
	// Roots of A on the curve have gain 0, roots of B infinite gain. Both are found exactly
	// and taken out, so that what is left has finite gains other than 0.
	zeroA, zeroB := exact.GCD(reA, imA), exact.GCD(reB, imB)
	if whole {
		zeroA, zeroB = value.num, value.den
	}
	if zeroA.Degree() > 0 {
		if n, _ := zeroA.CountReal(lo, hi, ends); n > 0 {
			list = append(list, contact{gain: newFloat(64)})
		}
	}
	for _, factor := range w.SquareFree() {
		f := without(without(factor.Poly, zeroA), zeroB)
		for _, root := range f.Isolate(lo, hi, ends) {
			c := contact{even: factor.Multiplicity%2 == 0, pair: on.mirrored()}
			var x *big.Float
			if x, c.gain, err = value.atRoot(call, f, root); err != nil {
				return nil, whole, err
			}
			c.s = on.point(x, 192)
			list = append(list, c)
		}
	}
	return list, whole, nil
}

// without returns the factor of the square-free p that has no root in common with q.
func without(p, q exact.Poly) exact.Poly {
	if g := exact.GCD(p, q); g.Degree() > 0 {
		return over(p, g)
	}
	return p
}

// A ratio is the rational function num/den.
type ratio struct{ num, den exact.Poly }

// atRoot returns the isolated root of f and the value there, which is neither 0 nor infinite,
// to 64 bits at least.
func (q ratio) atRoot(call string, f exact.Poly, root exact.Isolated) (x, value *big.Float, err error) {
	for bits := uint(192); bits <= maxBits; bits *= 2 {
		x = refine(f, root, bits)
		num, en := evaluate(q.num, x, bits)
		den, ed := evaluate(q.den, x, bits)
		if relativeBits(num, en, q.num.Degree(), bits) > 66 && relativeBits(den, ed, q.den.Degree(), bits) > 66 {
			return x, newFloat(128).Quo(num, den), nil
		}
	}
	return nil, nil, &UndecidedError{Call: call, What: "a gain too small or too large in relation to the coefficients"}
}
