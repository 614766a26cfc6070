package poly

import (
	"fmt"
	"math"
)

// Each operation works on sums of three float64 that take every rounding error in. Only where
// that is not enough does it start again on integers.

// A triple is the exact sum of three numbers, as long as whole holds.
type triple struct {
	a, b, c float64
	broken  bool
}

// add adds x.
func (t *triple) add(x float64) {
	var lost float64
	t.a, lost = twoSum(t.a, x)
	if lost == 0 {
		return
	}
	t.b, lost = twoSum(t.b, lost)
	if lost == 0 {
		return
	}
	t.c, lost = twoSum(t.c, lost)
	t.broken = t.broken || lost != 0 // also for NaN, after an overflow
}

// addProduct adds x·y.
func (t *triple) addProduct(x, y float64) {
	if x == 0 || y == 0 {
		return
	}
	product, lost := twoProduct(x, y)
	t.add(product)
	if lost != 0 {
		t.add(lost) // NaN breaks it
	}
}

// settle makes a the float64 nearest to the sum and b the one nearest to the rest.
func (t *triple) settle() {
	if t.b == 0 && t.c == 0 {
		return
	}
	t.b, t.c = twoSum(t.b, t.c)
	t.a, t.b = twoSum(t.a, t.b)
	t.b, t.c = twoSum(t.b, t.c)
	// Beside a tie the smallest part decides.
	if t.a+t.b*(1+0x1p-40) != t.a {
		t.broken = true
	}
}

// fromTriples makes a polynomial of exact sums by power; it is not ok if one is broken.
func fromTriples(sums []triple) (Poly, bool) {
	n := 0
	layers := 0
	for i := range sums {
		t := &sums[i]
		t.settle()
		switch {
		case t.broken || t.a-t.a != 0:
			return Poly{}, false
		case t.a != 0:
			n = i + 1
		}
		if t.c != 0 {
			layers = 2
		} else if t.b != 0 {
			layers = max(layers, 1)
		}
	}
	if n == 0 {
		return Poly{}, true
	}
	all := make([]float64, n*(1+layers))
	p := Poly{c: all[:n:n]}
	if layers > 0 {
		p.rest = all[n:]
		p.lo = p.rest[:n:n] // products below 2⁻⁹⁰⁰ do not get here: nothing underflows
	}
	for i := range sums[:n] {
		t := &sums[i]
		p.c[i] = t.a
		if layers > 0 {
			p.rest[i] = t.b
		}
		if layers > 1 {
			p.rest[n+i] = t.c
		}
	}
	return p, true
}

// smallSums is room for the sums of most operations on the stack.
const smallSums = 25

// Add returns p + q, exactly.
func (p Poly) Add(q Poly) Poly { return p.combine(q, 1) }

// Sub returns p - q, exactly.
func (p Poly) Sub(q Poly) Poly { return p.combine(q, -1) }

func (p Poly) combine(q Poly, sign float64) Poly {
	if p.err != nil {
		return invalid(p.err)
	}
	if q.err != nil {
		return invalid(q.err)
	}
	if p.exact == nil && q.exact == nil {
		var room [smallSums]triple
		sums := room[:]
		if n := max(len(p.c), len(q.c)); n <= len(room) {
			sums = sums[:n]
		} else {
			sums = make([]triple, n)
		}
		for i, x := range p.c {
			sums[i].a = x
		}
		for i, x := range p.rest {
			sums[i%len(p.c)].add(x)
		}
		for i, x := range q.c {
			sums[i].add(sign * x)
		}
		for i, x := range q.rest {
			sums[i%len(q.c)].add(sign * x)
		}
		if r, ok := fromTriples(sums); ok {
			return r
		}
	}
	x, y := p.integers(), q.integers()
	if sign < 0 {
		return fromInteger(x.Sub(y))
	}
	return fromInteger(x.Add(y))
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
	if p.exact == nil && q.exact == nil && (p.rest == nil || q.rest == nil) {
		var room [smallSums]triple
		sums := room[:]
		if n := len(p.c) + len(q.c) - 1; n <= len(room) {
			sums = sums[:n]
		} else {
			sums = make([]triple, n)
		}
		for i, x := range p.c {
			for j, y := range q.c {
				sums[i+j].addProduct(x, y)
			}
		}
		for i, x := range p.rest {
			for j, y := range q.c {
				sums[i%len(p.c)+j].addProduct(x, y)
			}
		}
		for j, y := range q.rest {
			for i, x := range p.c {
				sums[i+j%len(q.c)].addProduct(x, y)
			}
		}
		if r, ok := fromTriples(sums); ok {
			return r
		}
	}
	return fromInteger(p.integers().Mul(q.integers()))
}

// Scale returns c·p, exactly. Given roots stay.
func (p Poly) Scale(c float64) Poly {
	if p.err != nil {
		return invalid(p.err)
	}
	if math.IsNaN(c) || math.IsInf(c, 0) {
		return invalid(&ArgumentError{Call: "poly.Poly.Scale", Argument: "c", Reason: fmt.Sprintf("%v is not a finite number", c)})
	}
	if c == 0 || len(p.c) == 0 {
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
		n := len(p.c)
		sums := make([]triple, n-1)
		for i, x := range p.c[1:] {
			sums[i].addProduct(float64(i+1), x)
		}
		for i, x := range p.rest {
			if i %= n; i > 0 {
				sums[i-1].addProduct(float64(i), x)
			}
		}
		if r, ok := fromTriples(sums); ok {
			return r
		}
	}
	return fromInteger(p.integers().Derivative())
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
