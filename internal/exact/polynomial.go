package exact

import "math/big"

// A Poly is the polynomial 2^e·Σ c[i]·s^i. The zero value is the zero polynomial.
type Poly struct {
	c []*big.Int // by power, lowest first; the last is not zero, and none is ever changed
	e int
}

// New returns 2^exponent·Σ coefficients[i]·s^i. It keeps the slice and the integers; leading
// zeros are dropped.
func New(coefficients []*big.Int, exponent int) Poly {
	n := len(coefficients)
	for n > 0 && coefficients[n-1].Sign() == 0 {
		n--
	}
	if n == 0 {
		return Poly{}
	}
	return Poly{coefficients[:n:n], exponent}
}

// FromFloats returns Σ coefficients[i]·s^i without rounding. It panics on NaN and infinity.
func FromFloats(coefficients ...float64) Poly {
	ds := make([]Dyadic, len(coefficients))
	for i, x := range coefficients {
		ds[i] = Float(x)
	}
	return FromDyadics(ds...)
}

// FromDyadics returns Σ coefficients[i]·s^i, all finite.
func FromDyadics(coefficients ...Dyadic) Poly {
	e, found := 0, false
	for _, d := range coefficients {
		if d.m != nil && (!found || d.e < e) {
			e, found = d.e, true
		}
	}
	c := make([]*big.Int, len(coefficients))
	for i, d := range coefficients {
		c[i] = new(big.Int)
		if d.m != nil {
			c[i].Lsh(d.m, uint(d.e-e))
		}
	}
	return New(c, e)
}

// Integers returns the coefficients, lowest power first, and the exponent of their common
// power of two. The caller must not change them.
func (p Poly) Integers() (coefficients []*big.Int, exponent int) { return p.c, p.e }

// Degree returns the degree, -1 for the zero polynomial.
func (p Poly) Degree() int { return len(p.c) - 1 }

// IsZero tells whether p is the zero polynomial.
func (p Poly) IsZero() bool { return len(p.c) == 0 }

// Coefficient returns the coefficient of s^power.
func (p Poly) Coefficient(power int) Dyadic {
	if power < 0 || power >= len(p.c) {
		return Dyadic{}
	}
	return Int(p.c[power], p.e)
}

// LeadSign returns the sign of the leading coefficient, 0 for the zero polynomial.
func (p Poly) LeadSign() int {
	if p.IsZero() {
		return 0
	}
	return p.c[len(p.c)-1].Sign()
}

// Equal tells whether p and q are the same polynomial.
func (p Poly) Equal(q Poly) bool {
	if len(p.c) != len(q.c) {
		return false
	}
	for i := range p.c {
		if p.Coefficient(i).Cmp(q.Coefficient(i)) != 0 {
			return false
		}
	}
	return true
}

// Neg returns -p.
func (p Poly) Neg() Poly {
	c := make([]*big.Int, len(p.c))
	for i, x := range p.c {
		c[i] = new(big.Int).Neg(x)
	}
	return Poly{c, p.e}
}

// Add returns p + q.
func (p Poly) Add(q Poly) Poly {
	switch {
	case p.IsZero():
		return q
	case q.IsZero():
		return p
	case p.e < q.e:
		p, q = q, p
	}
	// Now q has the lower exponent, so that p is the one to be shifted.
	shift := uint(p.e - q.e)
	c := make([]*big.Int, max(len(p.c), len(q.c)))
	for i := range c {
		c[i] = new(big.Int)
		if i < len(p.c) {
			c[i].Lsh(p.c[i], shift)
		}
		if i < len(q.c) {
			c[i].Add(c[i], q.c[i])
		}
	}
	return New(c, q.e)
}

// Sub returns p - q.
func (p Poly) Sub(q Poly) Poly { return p.Add(q.Neg()) }

// Mul returns p·q.
func (p Poly) Mul(q Poly) Poly {
	if p.IsZero() || q.IsZero() {
		return Poly{}
	}
	c := make([]*big.Int, len(p.c)+len(q.c)-1)
	for i := range c {
		c[i] = new(big.Int)
	}
	var t big.Int
	for i, a := range p.c {
		if a.Sign() == 0 {
			continue
		}
		for j, b := range q.c {
			c[i+j].Add(c[i+j], t.Mul(a, b))
		}
	}
	return New(c, p.e+q.e)
}

// Scale returns x·p for a finite x.
func (p Poly) Scale(x Dyadic) Poly {
	if x.Sign() == 0 || p.IsZero() {
		return Poly{}
	}
	c := make([]*big.Int, len(p.c))
	for i, a := range p.c {
		c[i] = new(big.Int).Mul(a, x.m)
	}
	return Poly{c, p.e + x.e}
}

// Power returns pⁿ for n ≥ 0.
func (p Poly) Power(n int) Poly {
	result := New([]*big.Int{big.NewInt(1)}, 0)
	for ; n > 0; n >>= 1 {
		if n&1 != 0 {
			result = result.Mul(p)
		}
		if n > 1 {
			p = p.Mul(p)
		}
	}
	return result
}

// Derivative returns dp/ds.
func (p Poly) Derivative() Poly {
	if len(p.c) < 2 {
		return Poly{}
	}
	c := make([]*big.Int, len(p.c)-1)
	for i := range c {
		c[i] = new(big.Int).Mul(p.c[i+1], big.NewInt(int64(i+1)))
	}
	return New(c, p.e)
}

// Primitive returns p divided by the greatest positive number that leaves integers: the
// coefficients have no common divisor and the exponent is 0. Roots and signs are kept.
func (p Poly) Primitive() Poly {
	if p.IsZero() {
		return p
	}
	// The power of two goes first: it is cheap to find, and most of what float64
	// coefficients have in common.
	twos := -1
	for _, x := range p.c {
		if x.Sign() != 0 {
			if t := int(x.TrailingZeroBits()); twos < 0 || t < twos {
				twos = t
			}
		}
	}
	c := p.c
	if twos > 0 {
		c = make([]*big.Int, len(p.c))
		for i, x := range p.c {
			c[i] = new(big.Int).Rsh(x, uint(twos))
		}
	}
	content := new(big.Int)
	for i := len(c) - 1; i >= 0; i-- {
		if c[i].Sign() == 0 {
			continue
		}
		content.GCD(nil, nil, content, new(big.Int).Abs(c[i]))
		if content.IsInt64() && content.Int64() == 1 {
			return Poly{c, 0}
		}
	}
	q := make([]*big.Int, len(c))
	for i, x := range c {
		q[i] = new(big.Int).Quo(x, content)
	}
	return Poly{q, 0}
}

// Reverse returns s^n·p(1/s), n the degree: the coefficients in the opposite order. Roots at
// 0 are lost, those elsewhere are inverted.
func (p Poly) Reverse() Poly {
	c := make([]*big.Int, len(p.c))
	for i, x := range p.c {
		c[len(c)-1-i] = x
	}
	return New(c, p.e)
}

// StripZero returns p/s^k with the largest possible k, and k: the multiplicity of the root 0.
func (p Poly) StripZero() (Poly, int) {
	k := 0
	for k < len(p.c) && p.c[k].Sign() == 0 {
		k++
	}
	return Poly{p.c[k:], p.e}, k
}
