package exact

import "math/big"

// Affine returns p(a·s + b) for finite a and b.
func (p Poly) Affine(a, b Dyadic) Poly {
	if p.IsZero() {
		return p
	}
	am, bm, e := align(a, b)
	if a.m == nil && b.m == nil {
		e = 0
	}
	// p(2^e·(am·s + bm)): stretch by the power of two, shift by an integer, stretch by an
	// integer.
	n := len(p.c) - 1
	c := make([]*big.Int, n+1)
	for i, x := range p.c {
		if e >= 0 {
			c[i] = new(big.Int).Lsh(x, uint(e*i))
		} else {
			c[i] = new(big.Int).Lsh(x, uint(-e*(n-i)))
		}
	}
	exponent := p.e + min(e, 0)*n
	shiftInteger(c, bm)
	if am.Sign() == 0 {
		return New(c[:1], exponent)
	}
	if !isOne(am) {
		power := new(big.Int).Set(am)
		for i := 1; i <= n; i++ {
			c[i].Mul(c[i], power)
			power.Mul(power, am)
		}
	}
	return New(c, exponent)
}

func isOne(x *big.Int) bool { return x.IsInt64() && x.Int64() == 1 }

// Shift returns p(s + b) for a finite b.
func (p Poly) Shift(b Dyadic) Poly { return p.Affine(PowerOfTwo(0), b) }

// Stretch returns p(a·s) for a finite a.
func (p Poly) Stretch(a Dyadic) Poly { return p.Affine(a, Dyadic{}) }

// shiftInteger replaces c by the coefficients of the polynomial at s + b, by repeated Horner
// division (Ruffini), in place: the integers in c are changed.
func shiftInteger(c []*big.Int, b *big.Int) {
	n := len(c) - 1
	var t big.Int
	switch {
	case b.Sign() == 0:
	case isOne(b):
		for k := 0; k < n; k++ {
			for i := n - 1; i >= k; i-- {
				c[i].Add(c[i], c[i+1])
			}
		}
	default:
		for k := 0; k < n; k++ {
			for i := n - 1; i >= k; i-- {
				c[i].Add(c[i], t.Mul(c[i+1], b))
			}
		}
	}
}

// At returns p(x) for a finite x.
func (p Poly) At(x Dyadic) Dyadic {
	if p.IsZero() {
		return Dyadic{}
	}
	n := len(p.c) - 1
	if x.Sign() == 0 {
		return Int(p.c[0], p.e)
	}
	// Horner's rule for x = m·2^e with a negative e keeps integers by giving each further
	// coefficient the next power of 2^-e; a positive e goes into m.
	m, e := x.m, x.e
	if e > 0 {
		m, e = new(big.Int).Lsh(m, uint(e)), 0
	}
	y := new(big.Int).Set(p.c[n])
	var t big.Int
	for i := n - 1; i >= 0; i-- {
		y.Mul(y, m)
		if p.c[i].Sign() != 0 {
			y.Add(y, t.Lsh(p.c[i], uint(-e*(n-i))))
		}
	}
	return Int(y, p.e+e*n)
}

// SignAt returns the sign of p(x); at an infinity the sign that p tends to.
func (p Poly) SignAt(x Dyadic) int {
	switch {
	case x.inf == 0:
		return p.At(x).Sign()
	case x.inf < 0 && p.Degree()%2 != 0:
		return -p.LeadSign()
	}
	return p.LeadSign()
}

// SignAtFloat is SignAt for a float64 other than NaN, infinities included.
func (p Poly) SignAtFloat(x float64) int { return p.SignAt(Float(x)) }

type bigInt = big.Int

var (
	bigOne   = big.NewInt(1)
	minusOne = big.NewInt(-1)
)
