package locus

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// Evaluation of exact polynomials in software floating point, with as many bits as an answer
// turns out to need.

// maxBits ends the search for enough bits. Values of polynomials with float64 coefficients that
// are not zero at a root of another one are told from zero long before, except at degrees and
// exponents that no double-precision problem has.
const maxBits = 1 << 15

// A bigComplex is a point of the s-plane; values never change.
type bigComplex struct{ re, im *big.Float }

func newFloat(bits uint) *big.Float { return new(big.Float).SetPrec(bits) }

// round returns d with the given number of bits.
func round(d exact.Dyadic, bits uint) *big.Float {
	p := exact.FromDyadics(d)
	if p.IsZero() {
		return newFloat(bits)
	}
	c, e := p.Integers()
	x := newFloat(bits).SetInt(c[0])
	return x.SetMantExp(x, e)
}

// dyadic returns x exactly; x is finite.
func dyadic(x *big.Float) exact.Dyadic {
	if x.Sign() == 0 {
		return exact.Dyadic{}
	}
	mantissa := new(big.Float)
	e := x.MantExp(mantissa)
	bits := int(x.MinPrec())
	mantissa.SetMantExp(mantissa, bits)
	m, _ := mantissa.Int(nil)
	return exact.Int(m, e-bits)
}

// exponent returns e with |x| < 2^e, and the least int32 for 0.
func exponent(x *big.Float) int {
	if x.Sign() == 0 {
		return math.MinInt32
	}
	return x.MantExp(nil)
}

// coefficients returns those of p as floats, lowest power first.
func coefficients(p exact.Poly, bits uint) []*big.Float {
	c, e := p.Integers()
	r := make([]*big.Float, len(c))
	for i, n := range c {
		r[i] = newFloat(bits).SetInt(n)
		r[i].SetMantExp(r[i], e)
	}
	return r
}

// evaluate returns p(x) and an exponent e such that the error is below n·2^(e-bits), n the
// degree plus 2, even if x is off by a relative 2^-bits itself.
func evaluate(p exact.Poly, x *big.Float, bits uint) (*big.Float, int) {
	y, m := newFloat(bits), newFloat(64)
	ax := newFloat(64).Abs(x)
	t := newFloat(64)
	c := coefficients(p, bits)
	for i := len(c) - 1; i >= 0; i-- {
		y.Mul(y, x)
		y.Add(y, c[i])
		m.Mul(m, ax)
		m.Add(m, t.Abs(c[i]))
	}
	// Horner rounds twice a step, and a change of x by u relative changes the value by
	// n·u·m: together less than 3n·u·m, u = 2^-bits.
	return y, exponent(m) + 3
}

// evaluateComplex is evaluate at a point of the plane; the bound is on the modulus.
func evaluateComplex(p exact.Poly, s bigComplex, bits uint) (bigComplex, int) {
	re, im, m := newFloat(bits), newFloat(bits), newFloat(64)
	size := newFloat(64).Add(newFloat(64).Abs(s.re), newFloat(64).Abs(s.im))
	t, u, v := newFloat(bits), newFloat(bits), newFloat(64)
	c := coefficients(p, bits)
	for i := len(c) - 1; i >= 0; i-- {
		t.Mul(re, s.re)
		u.Mul(im, s.im)
		u.Sub(t, u)
		t.Mul(re, s.im)
		im.Mul(im, s.re)
		im.Add(im, t)
		re.Add(u, c[i])
		m.Mul(m, size)
		m.Add(m, v.Abs(c[i]))
	}
	return bigComplex{re, im}, exponent(m) + 5
}

// relativeBits returns to how many bits a value is known whose error is below n·2^(e-bits).
func relativeBits(value *big.Float, e, n int, bits uint) int {
	if value.Sign() == 0 {
		return math.MinInt32
	}
	return exponent(value) - 1 - (e - int(bits)) - exponent(newFloat(64).SetInt64(int64(n+2)))
}

// refine returns the isolated root r of the square-free p with a relative error below 2^-bits.
func refine(p exact.Poly, r exact.Isolated, bits uint) *big.Float {
	if r.Exact() {
		return round(r.Lo, uint(bits)+64)
	}
	d := p.Derivative()
	start, _ := r.Nearest()
	if start != 0 && !math.IsInf(start, 0) {
		work := bits + 64
		x := newFloat(work).SetFloat64(start)
		for have := 40; have < int(bits)+20; have *= 2 {
			y, _ := evaluate(p, x, work)
			slope, _ := evaluate(d, x, work)
			if slope.Sign() == 0 {
				break
			}
			x = newFloat(work).Sub(x, y.Quo(y, slope))
		}
		if x.Sign() != 0 && !x.IsInf() {
			at := dyadic(x)
			reach := at.Mul(exact.PowerOfTwo(-int(bits)))
			if reach.Sign() < 0 {
				reach = reach.Neg()
			}
			lo, hi := at.Sub(reach), at.Add(reach)
			if lo.Cmp(r.Lo) < 0 {
				lo = r.Lo
			}
			if hi.Cmp(r.Hi) > 0 {
				hi = r.Hi
			}
			if lo.Cmp(hi) < 0 {
				if s, t := p.SignAt(lo), p.SignAt(hi); s*t < 0 {
					return x
				} else if s == 0 && lo.Cmp(r.Lo) > 0 {
					return round(lo, work)
				} else if t == 0 && hi.Cmp(r.Hi) < 0 {
					return round(hi, work)
				}
			}
		}
	}
	// Newton's method failed, from a start beside a second root or outside float64.
	for !r.Exact() {
		width := round(r.Hi.Sub(r.Lo), 64)
		size := min(exponent(round(r.Lo, 64)), exponent(round(r.Hi, 64)))
		if r.Lo.Sign() != 0 && r.Hi.Sign() != 0 && exponent(width) < size-1-int(bits) {
			break
		}
		r = r.Bisect()
	}
	return round(exact.Midpoint(r.Lo, r.Hi), bits+64)
}

// toFloat returns the float64 nearest to x.
func toFloat(x *big.Float) float64 {
	f, _ := x.Float64()
	return f + 0
}

// angle returns the argument of z ≠ 0 in (-π, π].
func angle(z bigComplex) float64 {
	shift := max(exponent(z.re), exponent(z.im))
	re := toFloat(newFloat(64).SetMantExp(z.re, -shift))
	im := toFloat(newFloat(64).SetMantExp(z.im, -shift))
	return math.Atan2(im, re)
}

// quotientBig returns a/b; b is not zero.
func quotientBig(a, b bigComplex, bits uint) bigComplex {
	d, t := newFloat(bits), newFloat(bits)
	d.Add(d.Mul(b.re, b.re), t.Mul(b.im, b.im))
	re, im, u := newFloat(bits), newFloat(bits), newFloat(bits)
	re.Add(re.Mul(a.re, b.re), u.Mul(a.im, b.im))
	im.Sub(im.Mul(a.im, b.re), t.Mul(a.re, b.im))
	return bigComplex{re.Quo(re, d), im.Quo(im, d)}
}
