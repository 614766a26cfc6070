package locus

import "math"

// A chebyshev holds values of Chebyshev polynomials with bounds on their errors.
type chebyshev struct{ v, e [floatDegree + 2]float64 }

// sines sets v[d] = U_{d-1}(x), the sine of d·φ over that of φ for x = cos φ, d = 0 … n.
func (c *chebyshev) sines(x float64, n int) { c.recur(0, 1, x, n) }

// cosines sets v[d] = T_d(x), the cosine of d·φ.
func (c *chebyshev) cosines(x float64, n int) { c.recur(1, x, x, n) }

// recur computes v[d+1] = 2x·v[d] - v[d-1] with twice the precision of float64, so that a value
// near a zero of the polynomial has good relative accuracy, and one at a zero is 0 without an error as
// long as nothing is rounded.
func (c *chebyshev) recur(v0, v1, x float64, n int) {
	c.v[0], c.v[1] = v0, v1
	twice := 2 * x
	h0, l0, h1, l1 := v0, 0.0, v1, 0.0
	exact := true
	for d := 2; d <= n; d++ {
		p := float64(twice * h1)
		r := math.FMA(twice, h1, -p)
		r = math.FMA(twice, l1, r)
		// (p, r) - (h0, l0)
		s := p - h0
		back := s - p
		t := (p - (s - back)) + (-h0 - back)
		low := t + (r - l0)
		h := s + low
		l := low - (h - s)
		exact = exact && r == 0 && t == 0
		h0, l0, h1, l1 = h1, l1, h, l
		c.v[d] = h
		if !exact {
			// A step rounds by at most 2^-104·(|2x·v[d-1]| + |v[d-2]|) ≤ 2^-102·d, and what is
			// rounded at step i grows by a factor U_{d-i} ≤ d - i+1: less than 2^-102·d³/5 in all.
			c.e[d] = unitRoundoff*(1+0x1p-20)*math.Abs(h) + 0x1p-104*float64(d*d*d)
		}
	}
}
