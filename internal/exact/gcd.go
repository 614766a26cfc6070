package exact

import "math/big"

// GCD returns the greatest common divisor of p and q: primitive, with a positive leading
// coefficient; the zero polynomial if both are zero.
//
// Method: W. S. Brown, On Euclid's algorithm and the computation of polynomial greatest common
// divisors, J. ACM 18 (1971) 478–504: images modulo primes, put together by the Chinese
// remainder theorem until a candidate divides both. One prime proves that there is no common
// divisor.
func GCD(p, q Poly) Poly {
	if p.IsZero() {
		return positive(q.Primitive())
	}
	if q.IsZero() {
		return positive(p.Primitive())
	}
	if p.Degree() == 0 || q.Degree() == 0 {
		return one()
	}
	a, b := p.Primitive().c, q.Primitive().c
	la, lb := a[len(a)-1], b[len(b)-1]
	lead := new(big.Int).GCD(nil, nil, new(big.Int).Abs(la), new(big.Int).Abs(lb))

	var (
		c       []*big.Int // the candidate times what its leading coefficient lacks, modulo m
		m       = new(big.Int)
		t, half big.Int
	)
	for prime := range primes {
		f := newField(prime)
		if f.residue(la) == 0 || f.residue(lb) == 0 {
			continue
		}
		g := f.gcd(f.elements(a), f.elements(b))
		if len(g) == 1 {
			return one()
		}
		if c != nil && len(g) > len(c) {
			continue // an unlucky prime
		}
		factor := f.mul(f.inverse(g[len(g)-1]), f.element(lead))
		if c == nil || len(g) < len(c) {
			// The first prime, or all before were unlucky.
			c = make([]*big.Int, len(g))
			m.SetUint64(prime)
			half.Rsh(m, 1)
			for i, x := range g {
				c[i] = new(big.Int).SetUint64(f.plain(f.mul(x, factor)))
				if c[i].Cmp(&half) > 0 {
					c[i].Sub(c[i], m)
				}
			}
		} else {
			stable := true
			inverse := f.inverse(f.element(m))
			for i, x := range g {
				d := f.plain(f.mul(f.sub(f.mul(x, factor), f.element(c[i])), inverse))
				if d == 0 {
					continue
				}
				stable = false
				t.SetUint64(d)
				if d > prime/2 {
					t.Sub(&t, new(big.Int).SetUint64(prime))
				}
				c[i].Add(c[i], t.Mul(&t, m))
			}
			m.Mul(m, t.SetUint64(prime))
			if !stable {
				continue
			}
		}
		candidate := Poly{c, 0}.Primitive()
		if _, ok := divideIntegers(a, candidate.c); !ok {
			continue
		}
		if _, ok := divideIntegers(b, candidate.c); !ok {
			continue
		}
		return positive(candidate)
	}
	panic("unreachable: there are infinitely many primes")
}

func one() Poly { return Poly{[]*big.Int{big.NewInt(1)}, 0} }

func positive(p Poly) Poly {
	if p.LeadSign() < 0 {
		return p.Neg()
	}
	return p
}

// Coprime tells whether p and q have no root in common. A zero polynomial shares all roots.
func Coprime(p, q Poly) bool { return GCD(p, q).Degree() == 0 }
