package poly

import "math/big"

// A power is a square-free factor and how often it divides.
type power struct {
	factor       []*big.Int // by power, of degree at least 1
	multiplicity int
}

// squareFree splits a polynomial with integer coefficients (by power, the last not zero)
// into square-free factors without common roots: D. Y. Y. Yun, On square-free decomposition
// algorithms, SYMSAC 1976, 26–35.
func squareFree(a []*big.Int) []power {
	var powers []power
	a = primitive(a)
	d := derivative(a)
	g := gcd(a, d)
	if len(g) == 1 {
		return []power{{a, 1}}
	}
	b, c := quotient(a, g), quotient(d, g)
	for m := 1; len(b) > 1; m++ {
		c = subtract(c, derivative(b))
		f := b
		if len(c) > 0 {
			f = gcd(b, c)
		}
		if len(f) > 1 {
			powers = append(powers, power{f, m})
		}
		b = quotient(b, f)
		if len(c) > 0 {
			c = quotient(c, f)
		}
	}
	return powers
}

func trim(a []*big.Int) []*big.Int {
	for len(a) > 0 && a[len(a)-1].Sign() == 0 {
		a = a[:len(a)-1]
	}
	return a
}

func derivative(a []*big.Int) []*big.Int {
	d := make([]*big.Int, len(a)-1)
	for i := range d {
		d[i] = new(big.Int).Mul(a[i+1], big.NewInt(int64(i+1)))
	}
	return d
}

func subtract(a, b []*big.Int) []*big.Int {
	r := make([]*big.Int, max(len(a), len(b)))
	for i := range r {
		r[i] = new(big.Int)
		if i < len(a) {
			r[i].Set(a[i])
		}
		if i < len(b) {
			r[i].Sub(r[i], b[i])
		}
	}
	return trim(r)
}

// primitive divides the content out.
func primitive(a []*big.Int) []*big.Int {
	a = trim(a)
	content := new(big.Int)
	for _, n := range a {
		content.GCD(nil, nil, content, new(big.Int).Abs(n))
	}
	r := make([]*big.Int, len(a))
	for i, n := range a {
		r[i] = new(big.Int).Quo(n, content)
	}
	return r
}

// remainder returns a multiple of a modulo b.
func remainder(a, b []*big.Int) []*big.Int {
	r := make([]*big.Int, len(a))
	for i, n := range a {
		r[i] = new(big.Int).Set(n)
	}
	lead := b[len(b)-1]
	t := new(big.Int)
	for len(r) >= len(b) {
		top := r[len(r)-1]
		shift := len(r) - len(b)
		for i := range r[:len(r)-1] {
			r[i].Mul(r[i], lead)
			if i >= shift {
				r[i].Sub(r[i], t.Mul(top, b[i-shift]))
			}
		}
		r = trim(r[:len(r)-1])
	}
	return r
}

func gcd(a, b []*big.Int) []*big.Int {
	a, b = primitive(a), primitive(b)
	for len(b) > 0 {
		a, b = b, remainder(a, b)
		if len(b) > 0 {
			b = primitive(b)
		}
	}
	return a
}

// quotient returns a/b, where b divides a up to a rational factor, as integers.
func quotient(a, b []*big.Int) []*big.Int {
	r := make([]*big.Int, len(a))
	for i, n := range a {
		r[i] = new(big.Int).Set(n)
	}
	q := make([]*big.Int, len(a)-len(b)+1)
	lead := b[len(b)-1]
	t := new(big.Int)
	for k := len(q) - 1; k >= 0; k-- {
		q[k] = new(big.Int).Quo(r[k+len(b)-1], lead)
		for i := range b {
			r[k+i].Sub(r[k+i], t.Mul(q[k], b[i]))
		}
	}
	return q
}
