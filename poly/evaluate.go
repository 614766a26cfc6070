package poly

import (
	"math"
	"math/big"
	"math/cmplx"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/internal/rootkernel"
)

// unitRoundoff is half the distance from 1 to the next float64.
const unitRoundoff = 0x1p-53

// minNormal is the smallest normal float64.
const minNormal = 0x1p-1022

// At returns p(x), with an error of at most 2⁻⁵⁰·|p(x)| for finite x: digits lost to
// cancellation cost time, not accuracy. At ±Inf it is the limit. A result beyond the range
// of float64 is ±Inf, one below it loses digits as denormal numbers do. An invalid
// polynomial and a NaN give NaN.
func (p Poly) At(x float64) float64 {
	if p.err != nil || math.IsNaN(x) {
		return math.NaN()
	}
	if len(p.c) == 0 {
		return 0
	}
	if math.IsInf(x, 0) {
		if len(p.c) == 1 {
			return p.c[0]
		}
		sign := p.sign(len(p.c) - 1)
		if x < 0 && len(p.c)%2 == 0 {
			sign = -sign
		}
		return math.Inf(sign)
	}
	if y, _, miss := rootkernel.Value(p.c, p.lo, x, 0); p.evaluable() && math.Abs(y) >= 0x1p51*miss {
		return y
	}
	re, _, e := exactAt(p.integers(), x, 0)
	y, _ := nearest(re, e)
	return y
}

// evaluable tells whether c + lo stands for the polynomial; it does not far beyond the range
// of float64.
func (p Poly) evaluable() bool { return p.exact == nil || p.lo != nil }

// sign returns the sign of an exact coefficient.
func (p Poly) sign(power int) int {
	if p.exact != nil {
		return p.exact.Coefficient(power).Sign()
	}
	switch c := p.c[power]; {
	case c > 0:
		return +1
	case c < 0:
		return -1
	}
	return 0
}

// AtComplex returns p(s), with an error of at most 2⁻⁵⁰·|p(s)| for finite s: digits lost to
// cancellation cost time, not accuracy. A part beyond the range of float64 is ±Inf. An
// invalid polynomial, and an s that is not finite, give NaN.
func (p Poly) AtComplex(s complex128) complex128 {
	a, b := real(s), imag(s)
	if p.err != nil || math.IsNaN(a-a) || math.IsNaN(b-b) {
		return cmplx.NaN()
	}
	if b == 0 || len(p.c) == 0 {
		return complex(p.At(a), 0)
	}
	if re, im, miss := rootkernel.Value(p.c, p.lo, a, b); p.evaluable() && math.Abs(re)+math.Abs(im) >= 0x1p52*miss {
		return complex(re, im)
	}
	x, y, e := exactAt(p.integers(), a, b)
	re, _ := nearest(x, e)
	im, _ := nearest(y, e)
	return complex(re, im)
}

// exactAt returns p(a + jb) = (re + j·im)·2^e exactly, for finite a and b.
func exactAt(p exact.Poly, a, b float64) (re, im *big.Int, e int) {
	integers, exponent := p.Integers()
	re, im = new(big.Int), new(big.Int)
	n := len(integers)
	if n == 0 {
		return re, im, 0
	}
	// s = (u + jv)·2^q
	q := math.MaxInt
	for _, part := range [...]float64{a, b} {
		if part != 0 {
			q = min(q, lastBit(part))
		}
	}
	if q == math.MaxInt {
		return re.Set(integers[0]), im, exponent
	}
	u, v := whole(a, q), whole(b, q)
	if q > 0 {
		u.Lsh(u, uint(q))
		v.Lsh(v, uint(q))
		q = 0
	}
	var t1, t2, c big.Int
	for i := n - 1; i >= 0; i-- {
		t1.Mul(re, u)
		t2.Mul(im, v)
		t1.Sub(&t1, &t2)
		t2.Mul(re, v)
		im.Mul(im, u)
		im.Add(im, &t2)
		re.Add(&t1, c.Lsh(integers[i], uint(-q*(n-1-i))))
	}
	return re, im, exponent + q*(n-1)
}

// whole returns x/2^q, a whole number.
func whole(x float64, q int) *big.Int {
	m, e := integer(x)
	n := big.NewInt(m)
	if m == 0 {
		return n
	}
	if e >= q {
		return n.Lsh(n, uint(e-q))
	}
	return n.Rsh(n, uint(q-e))
}
