package poly

import (
	"fmt"
	"math"
	"math/big"
)

// Each operation first works in float64 and watches for the first rounding. Only if there
// was one does it start again on integers.

// Add returns p + q, exactly.
func (p Poly) Add(q Poly) Poly { return p.combine(q, false) }

// Sub returns p - q, exactly.
func (p Poly) Sub(q Poly) Poly { return p.combine(q, true) }

func (p Poly) combine(q Poly, subtract bool) Poly {
	if p.err != nil {
		return invalid(p.err)
	}
	if q.err != nil {
		return invalid(q.err)
	}
	if p.exact == nil && q.exact == nil {
		c := make([]float64, max(len(p.c), len(q.c)))
		exact := true
		for i := range c {
			a, b := p.Coefficient(i), q.Coefficient(i)
			if subtract {
				b = -b
			}
			var lost float64
			c[i], lost = twoSum(a, b)
			exact = exact && lost == 0 // also false for NaN, after an overflow
		}
		if exact {
			return fromExact(c)
		}
	}
	x, y := p.scaled(), q.scaled()
	e := min(x.exponent, y.exponent)
	if len(x.integers) == 0 {
		e = y.exponent
	} else if len(y.integers) == 0 {
		e = x.exponent
	}
	sum := make([]*big.Int, max(len(x.integers), len(y.integers)))
	for i := range sum {
		sum[i] = new(big.Int)
		if i < len(x.integers) {
			sum[i].Lsh(x.integers[i], uint(x.exponent-e))
		}
		if i < len(y.integers) {
			t := new(big.Int).Lsh(y.integers[i], uint(y.exponent-e))
			if subtract {
				sum[i].Sub(sum[i], t)
			} else {
				sum[i].Add(sum[i], t)
			}
		}
	}
	return fromScaled(scaled{sum, e})
}

// fromExact makes a polynomial of c by power, which it keeps.
func fromExact(c []float64) Poly {
	for len(c) > 0 && c[len(c)-1] == 0 {
		c = c[:len(c)-1]
	}
	if len(c) == 0 {
		return Poly{}
	}
	return Poly{c: c}
}

// Mul returns p·q, exactly. If the roots of both were given, they are those of the product.
func (p Poly) Mul(q Poly) Poly {
	if p.err != nil {
		return invalid(p.err)
	}
	if q.err != nil {
		return invalid(q.err)
	}
	if len(p.c) == 0 || len(q.c) == 0 {
		return Poly{}
	}
	r := p.product(q)
	a, okA := p.GivenRoots()
	b, okB := q.GivenRoots()
	if okA && okB && len(a)+len(b) > 0 {
		r.given = append(a, b...)
	}
	return r
}

func (p Poly) product(q Poly) Poly {
	if p.exact == nil && q.exact == nil {
		c := make([]float64, len(p.c)+len(q.c)-1)
		exact := true
		for i, a := range p.c {
			for j, b := range q.c {
				if a == 0 || b == 0 {
					continue
				}
				y, lostY := twoProduct(a, b)
				z, lostZ := twoSum(c[i+j], y)
				exact = exact && lostY == 0 && lostZ == 0
				c[i+j] = z
			}
			if !exact {
				break
			}
		}
		if exact {
			return fromExact(c)
		}
	}
	return fromScaled(p.scaled().mul(q.scaled()))
}

// Scale returns c·p, exactly. Given roots stay.
func (p Poly) Scale(c float64) Poly {
	if p.err != nil {
		return invalid(p.err)
	}
	if math.IsNaN(c) || math.IsInf(c, 0) {
		return invalid(&ArgumentError{Call: "poly.Poly.Scale", Argument: "c", Reason: fmt.Sprintf("%v is not a finite number", c)})
	}
	if c == 0 {
		return Poly{}
	}
	r := p.product(Poly{c: []float64{c}})
	r.given = p.given
	return r
}

// Derivative returns dp/ds, exactly.
func (p Poly) Derivative() Poly {
	if p.err != nil {
		return invalid(p.err)
	}
	if len(p.c) < 2 {
		return Poly{}
	}
	if p.exact == nil {
		c := make([]float64, len(p.c)-1)
		exact := true
		for i := range c {
			if p.c[i+1] != 0 {
				var lost float64
				c[i], lost = twoProduct(float64(i+1), p.c[i+1])
				exact = exact && lost == 0
			}
		}
		if exact {
			return fromExact(c)
		}
	}
	x := p.scaled()
	d := make([]*big.Int, len(x.integers)-1)
	for i := range d {
		d[i] = new(big.Int).Mul(x.integers[i+1], big.NewInt(int64(i+1)))
	}
	return fromScaled(scaled{d, x.exponent})
}

// twoSum returns a + b rounded and what the rounding lost, exactly (Knuth, The Art of
// Computer Programming, vol. 2, 3rd ed., 4.2.2, Theorem B); after an overflow the loss is
// NaN. Only additions: nothing can be fused.
func twoSum(a, b float64) (sum, lost float64) {
	sum = a + b
	t := sum - a
	return sum, (a - (sum - t)) + (b - t)
}

// exactProduct is far enough above the smallest number for the loss of a product to be
// a float64 itself: 2⁻¹⁰²²⁺¹⁰⁶ and some room.
const exactProduct = 0x1p-900

// twoProduct returns a·b rounded and what the rounding lost, for factors other than 0; the
// loss is NaN where the product overflows or is so small that the loss could be no float64.
func twoProduct(a, b float64) (product, lost float64) {
	product = a * b
	if math.Abs(product) < exactProduct {
		return product, math.NaN()
	}
	return product, math.FMA(a, b, -product)
}
