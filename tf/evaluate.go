package tf

import (
	"math"
	"math/big"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// At returns the value at s (for a function of z: at z), dead time included, to about
// 1e-15 of its magnitude. Where numerator and denominator vanish together it is the limit.
// At a pole, and where the value is beyond the range of float64, it is cmplx.Inf. At an
// infinite s it is the limit if there is one for every direction, otherwise NaN. The value
// of an invalid function is NaN.
func (g Function) At(s complex128) complex128 {
	if g.err != nil || cmplx.IsNaN(s) {
		return cmplx.NaN()
	}
	if !g.made {
		return 1
	}
	if cmplx.IsInf(s) {
		return g.atInfinity()
	}
	y := ratio(g.numerator, g.denominator, s)
	switch {
	case y == 0:
		return 0
	case g.periods > 0:
		if s == 0 {
			return g.limitAtZero()
		}
		return timesPower(y, s, -g.periods)
	case g.delay.zero():
		return y
	}
	return finiteOrInf(y * g.delay.factor(s))
}

// atInfinity returns the limit at infinity.
func (g Function) atInfinity() complex128 {
	drop := g.denominator.Degree() + g.periods - g.numerator.Degree()
	switch {
	case g.numerator.Degree() < 0:
		return 0
	case !g.delay.zero():
		return cmplx.NaN()
	case drop > 0:
		return 0
	case drop < 0:
		return cmplx.Inf()
	}
	return complex(coefficientRatio(g.numerator, g.numerator.Degree(), g.denominator, g.denominator.Degree()), 0)
}

// limitAtZero returns the value at z = 0 of a function of z with dead time.
func (g Function) limitAtZero() complex128 {
	r, err := g.Rational()
	if err != nil {
		return cmplx.NaN()
	}
	return ratio(r.numerator, r.denominator, 0)
}

// ratio returns p(s)/q(s) for finite s, the limit where both are zero.
func ratio(p, q poly.Poly, s complex128) complex128 {
	if p.Degree() < 0 {
		return 0
	}
	a, b := p.AtComplex(s), q.AtComplex(s)
	for a == 0 && b == 0 && isRoot(p, s) && isRoot(q, s) {
		p, q = p.Derivative(), q.Derivative()
		a, b = p.AtComplex(s), q.AtComplex(s)
	}
	if inRange(a) && inRange(b) {
		if b == 0 {
			return cmplx.Inf()
		}
		return a / b
	}
	return ratioScaled(p, q, s)
}

// inRange tells whether v and a quotient with it keep their digits.
func inRange(v complex128) bool {
	m := math.Max(math.Abs(real(v)), math.Abs(imag(v)))
	return m > 0x1p-450 && m < 0x1p450
}

// isRoot tells whether p(s) is exactly zero, for finite s: a value of zero may also come
// from underflow.
func isRoot(p poly.Poly, s complex128) bool {
	if s == 0 {
		return p.Coefficient(0) == 0 && isZeroAtOrigin(p)
	}
	scaled, _ := substituteScaled(p, s)
	_, e := math.Frexp(math.Max(math.Abs(real(s)), math.Abs(imag(s))))
	return scaled.AtComplex(complex(math.Ldexp(real(s), -e), math.Ldexp(imag(s), -e))) == 0
}

func isZeroAtOrigin(p poly.Poly) bool {
	c, _ := p.Integers()
	return len(c) == 0 || c[0].Sign() == 0
}

// ratioScaled is ratio for polynomials whose values leave the range of float64. It scales
// the variable, and then the polynomials, by powers of two, which rounds nothing.
func ratioScaled(p, q poly.Poly, s complex128) complex128 {
	_, e := math.Frexp(math.Max(math.Abs(real(s)), math.Abs(imag(s))))
	t := complex(math.Ldexp(real(s), -e), math.Ldexp(imag(s), -e))
	p, ep := substituteScaled(p, s)
	q, eq := substituteScaled(q, s)
	a, b := p.AtComplex(t), q.AtComplex(t)
	if b == 0 {
		return cmplx.Inf()
	}
	// Bring both near one, so that the quotient is safe, and put the powers back last.
	a, ea := nearOne(a)
	b, eb := nearOne(b)
	y := a / b
	return finiteOrInf(ldexp(y, clamp(ep+ea-eq-eb)))
}

// substituteScaled returns P with p(s) = 2^exponent·P(s/2^e), where 2^e is about |s| and the
// largest coefficient of P about 1.
func substituteScaled(p poly.Poly, s complex128) (scaled poly.Poly, exponent int) {
	_, e := math.Frexp(math.Max(math.Abs(real(s)), math.Abs(imag(s))))
	c, common := p.Integers()
	if len(c) == 0 {
		return p, 0
	}
	lowest := 0
	if e < 0 {
		lowest = e * (len(c) - 1)
	}
	top := 0
	for i, n := range c {
		n.Lsh(n, uint(e*i-lowest))
		top = max(top, n.BitLen())
	}
	return poly.FromIntegers(c, -top), common + lowest + top
}

func nearOne(v complex128) (complex128, int) {
	m := math.Max(math.Abs(real(v)), math.Abs(imag(v)))
	if m == 0 {
		return v, 0
	}
	_, e := math.Frexp(m)
	return ldexp(v, -e), e
}

func ldexp(v complex128, e int) complex128 {
	return complex(math.Ldexp(real(v), e), math.Ldexp(imag(v), e))
}

// clamp keeps an exponent within what math.Ldexp takes without wrapping.
func clamp(e int) int { return min(max(e, -1<<20), 1<<20) }

// finiteOrInf returns v, or cmplx.Inf if a part overflowed.
func finiteOrInf(v complex128) complex128 {
	if cmplx.IsInf(v) {
		return cmplx.Inf()
	}
	return v
}

// timesPower returns y·sⁿ for s ≠ 0, without an overflow on the way.
func timesPower(y, s complex128, n int) complex128 {
	y, e := nearOne(y)
	s, es := nearOne(s)
	if n < 0 {
		s = 1 / s
		n, es = -n, -es
	}
	e += n * es
	for ; n > 0; n >>= 1 {
		if n&1 != 0 {
			var d int
			y, d = nearOne(y * s)
			e += d
		}
		var d int
		s, d = nearOne(s * s)
		e += d * (n >> 1)
	}
	return finiteOrInf(ldexp(y, clamp(e)))
}

// coefficientRatio returns p_i/q_j, two coefficients, rounded to nearest: ±Inf beyond the range.
func coefficientRatio(p poly.Poly, i int, q poly.Poly, j int) float64 {
	a, ea := p.Integers()
	b, eb := q.Integers()
	if i < 0 || i >= len(a) || a[i].Sign() == 0 {
		return 0
	}
	r := new(big.Rat).SetFrac(a[i], b[j])
	shift := ea - eb
	if shift >= 0 {
		r.Num().Lsh(r.Num(), uint(min(shift, 1<<20)))
	} else {
		r.Denom().Lsh(r.Denom(), uint(min(-shift, 1<<20)))
	}
	x, _ := new(big.Rat).SetFrac(r.Num(), r.Denom()).Float64()
	return x
}
