package exact

import "math/big"

// GainPolynomial returns, up to a positive factor, the polynomial
//
//	H(k) = lead(d)ⁿ·∏ (a(s) + k·b(s)) over the roots s of d,   n = max(deg a, deg b),
//
// the resultant in s of d and a + k·b: its roots are the numbers -a(s)/b(s). d has degree at
// least 1 and no root in common with b.
//
// Method: G. E. Collins, The calculation of multivariate polynomial resultants, J. ACM 18
// (1971) 515–532: resultants modulo primes at deg d + 1 values of k, interpolated and put
// together by the Chinese remainder theorem up to Hadamard's bound.
func GainPolynomial(d, a, b Poly) Poly {
	d = d.Primitive()
	ci, cj := a.c, b.c
	// A common exponent for a and b; d's own matters only as a positive factor.
	switch {
	case a.IsZero() || b.IsZero():
	case a.e > b.e:
		ci = shifted(a.c, uint(a.e-b.e))
	case b.e > a.e:
		cj = shifted(b.c, uint(b.e-a.e))
	}
	size := d.Degree()
	n := max(len(ci), len(cj)) - 1
	bound := lengthBits(d.c)*n + (max(lengthBits(ci), lengthBits(cj))+1)*size + 2

	var (
		h       = make([]*big.Int, size+1)
		m       = big.NewInt(1)
		t, half big.Int
	)
	for i := range h {
		h[i] = new(big.Int)
	}
	for prime := range primes {
		f := newField(prime)
		if f.residue(d.c[size]) == 0 {
			continue
		}
		image := f.gainPolynomial(f.elements(d.c), f.elements(ci), f.elements(cj))
		inverse := f.inverse(f.element(m))
		for i, x := range image {
			step := f.plain(f.mul(f.sub(x, f.element(h[i])), inverse))
			h[i].Add(h[i], t.Mul(t.SetUint64(step), m))
		}
		m.Mul(m, t.SetUint64(prime))
		if m.BitLen() > bound+1 {
			break
		}
	}
	half.Rsh(m, 1)
	for _, x := range h {
		if x.Cmp(&half) > 0 {
			x.Sub(x, m)
		}
	}
	return New(h, 0).Primitive()
}

func shifted(c []*big.Int, by uint) []*big.Int {
	r := make([]*big.Int, len(c))
	for i, x := range c {
		r[i] = new(big.Int).Lsh(x, by)
	}
	return r
}

// lengthBits returns an upper bound of the binary logarithm of the sum of absolute values.
func lengthBits(c []*big.Int) int {
	sum, t := new(big.Int), new(big.Int)
	for _, x := range c {
		sum.Add(sum, t.Abs(x))
	}
	return sum.BitLen()
}

// gainPolynomial is GainPolynomial modulo p, by power.
func (f *field) gainPolynomial(d, a, b []uint64) []uint64 {
	n, size := max(len(a), len(b))-1, len(d)-1
	// Newton's interpolation at k = 0, 1, …, size.
	points, values := make([]uint64, size+1), make([]uint64, size+1)
	g := make([]uint64, n+1)
	for i := range points {
		if i > 0 {
			points[i] = f.add(points[i-1], f.one)
		}
		for j := range g {
			g[j] = 0
			if j < len(a) {
				g[j] = a[j]
			}
			if j < len(b) {
				g[j] = f.add(g[j], f.mul(points[i], b[j]))
			}
		}
		values[i] = f.resultant(d, g)
	}
	for j := 1; j <= size; j++ {
		inverse := f.inverse(points[j]) // points differ by j
		for i := size; i >= j; i-- {
			values[i] = f.mul(f.sub(values[i], values[i-1]), inverse)
		}
	}
	h := make([]uint64, size+1)
	for i := size; i >= 0; i-- {
		// h = h·(k - points[i]) + values[i]
		for j := size; j > 0; j-- {
			h[j] = f.sub(h[j-1], f.mul(points[i], h[j]))
		}
		h[0] = f.sub(values[i], f.mul(points[i], h[0]))
	}
	return h
}

// resultant returns lead(d)ⁿ·∏ g(s) over the roots s of d, where n = len(g)-1 is the formal degree
// of g; the leading coefficient of d is not zero.
func (f *field) resultant(d, g []uint64) uint64 {
	x, y := append([]uint64(nil), d...), append([]uint64(nil), g...)
	r := f.one
	for {
		// Now r·lead(x)^(len(y)-1)·∏ y over the roots of x.
		lead := x[len(x)-1]
		inverse := f.inverse(lead)
		n := len(y)
		for len(y) >= len(x) {
			q := f.mul(y[len(y)-1], inverse)
			shift := len(y) - len(x)
			for i, c := range x[:len(x)-1] {
				y[shift+i] = f.sub(y[shift+i], f.mul(q, c))
			}
			y = y[:len(y)-1]
		}
		for len(y) > 0 && y[len(y)-1] == 0 {
			y = y[:len(y)-1]
		}
		if len(y) == 0 {
			if len(x) == 1 {
				return r // no roots: an empty product, and lead⁰
			}
			return 0
		}
		r = f.mul(r, f.power(lead, n-len(y)))
		if len(y) == 1 {
			return f.mul(r, f.power(y[0], len(x)-1))
		}
		if (len(x)-1)&(len(y)-1)&1 != 0 {
			r = f.sub(0, r)
		}
		x, y = y, x
	}
}

func (f *field) add(x, y uint64) uint64 {
	if x += y; x >= f.p {
		x -= f.p
	}
	return x
}

func (f *field) power(x uint64, n int) uint64 {
	y := f.one
	for ; n > 0; n >>= 1 {
		if n&1 != 0 {
			y = f.mul(y, x)
		}
		x = f.mul(x, x)
	}
	return y
}
