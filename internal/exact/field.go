package exact

import (
	"math/big"
	"math/bits"
)

// A field is the integers modulo an odd prime below 2^62. Elements are kept in Montgomery's
// form x·2^64 mod p, in [0, p).
//
// Source: P. L. Montgomery, Modular multiplication without trial division, Math. Comp. 44
// (1985) 519–521.
type field struct {
	p     uint64
	inv   uint64 // -1/p mod 2^64
	one   uint64 // 2^64 mod p
	radix uint64 // 2^128 mod p
}

func newField(p uint64) field {
	inv := p // correct to 3 bits; each Newton step doubles them
	for range 5 {
		inv *= 2 - p*inv
	}
	f := field{p: p, inv: -inv}
	_, f.one = bits.Div64(1%p, 0, p)
	_, f.radix = bits.Div64(f.one, 0, p)
	return f
}

func (f *field) mul(x, y uint64) uint64 {
	hi, lo := bits.Mul64(x, y)
	h, l := bits.Mul64(lo*f.inv, f.p)
	_, carry := bits.Add64(lo, l, 0)
	r := hi + h + carry
	if r >= f.p {
		r -= f.p
	}
	return r
}

func (f *field) sub(x, y uint64) uint64 {
	if x >= y {
		return x - y
	}
	return x + f.p - y
}

func (f *field) inverse(x uint64) uint64 {
	y := f.one
	for e := f.p - 2; e > 0; e >>= 1 {
		if e&1 != 0 {
			y = f.mul(y, x)
		}
		x = f.mul(x, x)
	}
	return y
}

// element returns x in Montgomery's form.
func (f *field) element(x *big.Int) uint64 {
	r := f.residue(x)
	return f.mul(r, f.radix)
}

// residue returns x mod p in [0, p).
func (f *field) residue(x *big.Int) uint64 {
	var r uint64
	words := x.Bits()
	for i := len(words) - 1; i >= 0; i-- {
		if bits.UintSize == 64 {
			_, r = bits.Div64(r, uint64(words[i]), f.p)
		} else {
			// p has 62 bits, so r·2^32 needs two words.
			_, r = bits.Div64(r>>32, r<<32|uint64(words[i]), f.p)
		}
	}
	if x.Sign() < 0 && r != 0 {
		r = f.p - r
	}
	return r
}

// plain returns the residue in [0, p) of an element.
func (f *field) plain(x uint64) uint64 { return f.mul(x, 1) }

// elements returns the polynomial modulo p.
func (f *field) elements(c []*big.Int) []uint64 {
	u := make([]uint64, len(c))
	for i, x := range c {
		u[i] = f.element(x)
	}
	return u
}

// gcd returns a greatest common divisor of the polynomials a and b, not monic; both are
// overwritten. Their leading coefficients are not zero.
func (f *field) gcd(a, b []uint64) []uint64 {
	for len(b) > 0 {
		if len(a) < len(b) {
			a, b = b, a
			continue
		}
		lb := b[len(b)-1]
		for len(a) >= len(b) {
			la, shift := a[len(a)-1], len(a)-len(b)
			for i := 0; i < shift; i++ {
				a[i] = f.mul(a[i], lb)
			}
			for i, x := range b[:len(b)-1] {
				a[shift+i] = f.sub(f.mul(a[shift+i], lb), f.mul(la, x))
			}
			n := len(a) - 1
			for n > 0 && a[n-1] == 0 {
				n--
			}
			a = a[:n]
		}
		a, b = b, a
	}
	return a
}

// primes yields primes below 2^62, in descending order: those of the table, then further ones.
func primes(yield func(uint64) bool) {
	for _, p := range primeTable {
		if !yield(p) {
			return
		}
	}
	var b big.Int
	for p := primeTable[len(primeTable)-1] - 2; ; p -= 2 {
		// ProbablyPrime is no guess below 2^64.
		if b.SetUint64(p).ProbablyPrime(0) && !yield(p) {
			return
		}
	}
}
