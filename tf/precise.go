package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// Numbers of any precision, and polynomials made of them.

func bigNumber(precision uint) *big.Float { return new(big.Float).SetPrec(precision) }

func bigRat(precision uint, r *big.Rat) *big.Float { return bigNumber(precision).SetRat(r) }

// bigCoefficients returns the coefficients, by power, rounded to the precision.
func bigCoefficients(p poly.Poly, precision uint) []*big.Float {
	c, e := p.Integers()
	list := make([]*big.Float, len(c))
	for i, n := range c {
		x := bigNumber(precision).SetInt(n)
		list[i] = x.SetMantExp(x, e)
	}
	return list
}

// integerOf returns x as m·2^e, exactly.
func integerOf(x *big.Float) (m *big.Int, e int) {
	if x.Sign() == 0 {
		return new(big.Int), 0
	}
	mantissa := new(big.Float)
	e = x.MantExp(mantissa)
	bits := int(x.MinPrec())
	m, _ = mantissa.SetMantExp(mantissa, bits).Int(nil)
	return m, e - bits
}

// polyOf returns the polynomial with these coefficients, by power, exactly.
func polyOf(c []*big.Float) poly.Poly {
	integers, exponents := make([]*big.Int, len(c)), make([]int, len(c))
	common := math.MaxInt
	for i, x := range c {
		integers[i], exponents[i] = integerOf(x)
		if x.Sign() != 0 {
			common = min(common, exponents[i])
		}
	}
	for i, x := range c {
		if x.Sign() != 0 {
			integers[i].Lsh(integers[i], uint(exponents[i]-common))
		}
	}
	if common == math.MaxInt {
		return poly.Poly{}
	}
	return poly.FromIntegers(integers, common)
}

// roundAt returns x rounded to a multiple of 2^e.
func roundAt(x *big.Float, e int) *big.Float {
	bits := x.MantExp(nil) - e
	if x.Sign() == 0 || bits < 0 {
		return new(big.Float)
	}
	return new(big.Float).SetPrec(uint(bits + 1)).Set(x)
}

// leadExponent returns the exponent of the leading bit of x ≠ 0: 2^(e-1) ≤ |x| < 2^e.
func leadExponent(x *big.Float) int { return x.MantExp(nil) }

// shiftByOne returns the coefficients, by power, of p(x-1), or of p(x+1) where up is set.
func shiftByOne(c []*big.Float, up bool, precision uint) []*big.Float {
	shifted := make([]*big.Float, len(c))
	for i, x := range c {
		shifted[i] = bigNumber(precision).Set(x)
	}
	for i := range shifted {
		for j := len(shifted) - 2; j >= i; j-- {
			if up {
				shifted[j].Add(shifted[j], shifted[j+1])
			} else {
				shifted[j].Sub(shifted[j], shifted[j+1])
			}
		}
	}
	return shifted
}

// rootExponent returns e so that no root of p exceeds 2^e in magnitude, by Fujiwara's bound
// 2·max |cₙ₋ᵢ/cₙ|^(1/i).
func rootExponent(p poly.Poly) int {
	c, _ := p.Integers()
	n := len(c) - 1
	e := math.MinInt
	for i := 1; i <= n; i++ {
		if c[n-i].Sign() != 0 {
			bits := c[n-i].BitLen() - c[n].BitLen() + 1
			e = max(e, int(math.Ceil(float64(bits)/float64(i)))+1)
		}
	}
	if e == math.MinInt {
		return 0
	}
	return e
}

// preciseRoot is a root with more digits than a float64 holds. Of a pair it is the upper one.
type preciseRoot struct {
	re, im       *big.Float // im is nil of a real root
	multiplicity int
}

func (r preciseRoot) isReal() bool { return r.im == nil }

func (r preciseRoot) isZero() bool { return r.im == nil && r.re.Sign() == 0 }

// preciseRoots returns the roots of p to the given precision, one of each pair. It is not ok
// where roots lie closer together than float64 can part.
func preciseRoots(p poly.Poly, precision uint) (roots []preciseRoot, ok bool, err error) {
	found, err := p.Roots()
	if err != nil {
		return nil, false, err
	}
	_, given := p.GivenRoots()
	derivatives := map[int]poly.Poly{1: p}
	for _, r := range found {
		if imag(r.Value) < 0 {
			continue
		}
		if r.Distinct != 1 {
			return nil, false, nil
		}
		root := preciseRoot{re: bigNumber(precision).SetFloat64(real(r.Value)), multiplicity: r.Multiplicity}
		if imag(r.Value) != 0 {
			root.im = bigNumber(precision).SetFloat64(imag(r.Value))
		}
		if !given && r.Radius > 0 {
			// A root of multiplicity m is a simple root of the derivative of order m-1.
			for m := 2; m <= r.Multiplicity; m++ {
				if _, done := derivatives[m]; !done {
					derivatives[m] = derivatives[m-1].Derivative()
				}
			}
			if root, ok = root.refined(derivatives[r.Multiplicity], r, precision); !ok {
				return nil, false, nil
			}
		}
		roots = append(roots, root)
	}
	return roots, true, nil
}

// refined improves a simple root of p by Newton's method.
func (r preciseRoot) refined(p poly.Poly, disc poly.Root, precision uint) (preciseRoot, bool) {
	for work := precision + 192; work <= 1<<14; work *= 2 {
		c := bigCoefficients(p, work)
		x := bigComplex{bigNumber(work).Set(r.re), bigNumber(work)}
		if r.im != nil {
			x.im.Set(r.im)
		}
		start := x
		converged := false
		for range 60 {
			value, slope := x.horner(c, work)
			step, ok := value.over(slope, work)
			if !ok {
				break
			}
			x = bigComplex{bigNumber(work).Sub(x.re, step.re), bigNumber(work).Sub(x.im, step.im)}
			if step.exponent() < x.exponent()-int(precision) || step.isZero() {
				converged = true
				break
			}
		}
		if !converged {
			continue
		}
		moved, _ := new(big.Float).Add(squareOf(bigNumber(64).Sub(x.re, start.re)), squareOf(bigNumber(64).Sub(x.im, start.im))).Float64()
		if !(math.Sqrt(moved) <= disc.Radius*1.01) {
			return r, false
		}
		r.re = x.re
		if r.im != nil {
			r.im = x.im
		}
		return r, true
	}
	return r, false
}

func squareOf(x *big.Float) *big.Float { return new(big.Float).Mul(x, x) }

type bigComplex struct{ re, im *big.Float }

func (x bigComplex) isZero() bool { return x.re.Sign() == 0 && x.im.Sign() == 0 }

func (x bigComplex) exponent() int {
	e := -1 << 30
	if x.re.Sign() != 0 {
		e = leadExponent(x.re)
	}
	if x.im.Sign() != 0 {
		e = max(e, leadExponent(x.im))
	}
	return e
}

func (x bigComplex) times(y bigComplex, work uint) bigComplex {
	a, b := bigNumber(work).Mul(x.re, y.re), bigNumber(work).Mul(x.im, y.im)
	c, d := bigNumber(work).Mul(x.re, y.im), bigNumber(work).Mul(x.im, y.re)
	return bigComplex{a.Sub(a, b), c.Add(c, d)}
}

func (x bigComplex) over(y bigComplex, work uint) (bigComplex, bool) {
	if y.isZero() {
		return x, false
	}
	size := bigNumber(work).Add(bigNumber(work).Mul(y.re, y.re), bigNumber(work).Mul(y.im, y.im))
	q := x.times(bigComplex{y.re, bigNumber(work).Neg(y.im)}, work)
	q.re.Quo(q.re, size)
	q.im.Quo(q.im, size)
	return q, true
}

// horner returns the value at x of the polynomial with coefficients c, by power, and of its
// derivative.
func (x bigComplex) horner(c []*big.Float, work uint) (value, slope bigComplex) {
	value, slope = bigComplex{bigNumber(work), bigNumber(work)}, bigComplex{bigNumber(work), bigNumber(work)}
	for i := len(c) - 1; i >= 0; i-- {
		slope = slope.times(x, work)
		slope.re.Add(slope.re, value.re)
		slope.im.Add(slope.im, value.im)
		value = value.times(x, work)
		value.re.Add(value.re, c[i])
	}
	return value, slope
}
