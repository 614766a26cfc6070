package exact

import "math/big"

// A Chain is a sequence of polynomials f₀, f₁, …, each the negative remainder of the two before
// it up to a positive factor, as Sturm's theorem wants it. The last is the greatest common
// divisor of the first two, up to a factor.
type Chain []Poly

// SturmChain returns the chain that begins with p and its derivative.
func SturmChain(p Poly) Chain { return NewChain(p, p.Derivative()) }

// NewChain returns the chain that begins with p and q; p is not zero.
//
// Remainders are subresultants, whose coefficients grow least without a search for their
// content; the signs that these lack are tracked beside them.
// Source: G. E. Collins, Subresultants and reduced polynomial remainder sequences, J. ACM 14
// (1967) 128–142; H. Cohen, A Course in Computational Algebraic Number Theory, Springer 1993,
// Algorithm 3.3.1.
func NewChain(p, q Poly) Chain {
	p, q = p.Primitive(), q.Primitive()
	chain := Chain{p}
	if q.IsZero() {
		return chain
	}
	chain = append(chain, q)
	a, b := p, q
	sa, sb := 1, 1 // what a and b lack to be the chain's own polynomials
	if a.Degree() < b.Degree() {
		a, b, sa, sb = b, a, 1, -1
		chain = append(chain, p.Neg())
	}
	g, h := big.NewInt(1), big.NewInt(1)
	var t big.Int
	for b.Degree() > 0 {
		delta := a.Degree() - b.Degree()
		_, r, _ := pseudoDivide(a.c, b.c)
		if len(r) == 0 {
			break
		}
		divisor := new(big.Int).Exp(h, t.SetInt64(int64(delta)), nil)
		divisor.Mul(divisor, g)
		for i := range r {
			r[i].Quo(r[i], divisor)
		}
		// f_{k+1} = -rem(f_{k-1}, f_k); the pseudo-remainder is lead(b)^(delta+1) times the
		// remainder, and divided by the divisor.
		s := -sa * divisor.Sign()
		if delta%2 == 0 {
			s *= b.LeadSign()
		}
		a, b, sa, sb = b, Poly{r, 0}, sb, s
		if sb < 0 {
			chain = append(chain, b.Neg())
		} else {
			chain = append(chain, b)
		}
		g = a.c[len(a.c)-1]
		// h = g^delta·h^(1-delta), an integer.
		switch {
		case delta == 1:
			h = g
		case delta > 1:
			n := new(big.Int).Exp(g, t.SetInt64(int64(delta)), nil)
			h = n.Quo(n, new(big.Int).Exp(h, t.SetInt64(int64(delta-1)), nil))
		}
	}
	return chain
}

// variations counts the sign changes along the chain just above x (side +1), just below it
// (side -1); an infinity has but one side.
func (c Chain) variations(x Dyadic, side int) int {
	count, last := 0, 0
	for _, p := range c {
		s := p.signBeside(x, side)
		if s*last < 0 {
			count++
		}
		if s != 0 {
			last = s
		}
	}
	return count
}

// signBeside returns the sign of p just above (side +1) or just below (side -1) x: not zero,
// unless p is.
func (p Poly) signBeside(x Dyadic, side int) int {
	if x.inf != 0 || p.IsZero() {
		return p.SignAt(x)
	}
	for turn := 1; ; turn *= side {
		if s := p.SignAt(x); s != 0 {
			return s * turn
		}
		p = p.Derivative()
	}
}

// Count returns the number of distinct real roots of p in the open interval (lo, hi), if the
// chain is p's own; in general the Cauchy index of f₁/f₀ there.
func (c Chain) Count(lo, hi Dyadic) int {
	return c.variations(lo, +1) - c.variations(hi, -1)
}
