package poly

import (
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// A Division is the result of [Poly.Divide]: p = Quotient·q + Remainder, the degree of the
// Remainder below that of q.
type Division struct {
	Quotient, Remainder Poly
	// Exact tells that this holds to the last bit. The coefficients of a quotient are fractions;
	// where one is not a whole number times a power of two, such as 1/3, Exact is false and each
	// coefficient of both is the float64 nearest to the true one.
	Exact bool
}

// Divide divides p by q with remainder. If p is a product with q for a factor, Remainder is zero
// and Quotient the other factor, exactly; if q's leading coefficient is a power of two, the
// division is always exact.
//
// The error is a [*ArgumentError] for an invalid polynomial and if q is zero.
func (p Poly) Divide(q Poly) (Division, error) {
	const call = "poly.Poly.Divide"
	switch {
	case p.err != nil:
		return Division{}, p.err
	case q.err != nil:
		return Division{}, q.err
	case len(q.c) == 0:
		return Division{}, &ArgumentError{Call: call, Argument: "q", Reason: "it is the zero polynomial"}
	case len(p.c) < len(q.c):
		return Division{Remainder: p, Exact: true}, nil
	}
	quotient, remainder, multiplier := p.integers().PseudoDivide(q.integers())
	a, exactA := divideByInteger(quotient, multiplier)
	b, exactB := divideByInteger(remainder, multiplier)
	if !exactA || !exactB {
		a, b = New(a.Coefficients()...), New(b.Coefficients()...)
	}
	return Division{Quotient: a, Remainder: b, Exact: exactA && exactB}, nil
}

// divideByInteger returns p/n, exactly if every coefficient stays a dyadic number, otherwise with
// every coefficient rounded to nearest.
func divideByInteger(p exact.Poly, n *big.Int) (Poly, bool) {
	c, e := p.Integers()
	twos := n.TrailingZeroBits()
	odd := new(big.Int).Rsh(n, twos)
	e -= int(twos)
	whole := make([]*big.Int, len(c))
	var r big.Int
	for i, x := range c {
		whole[i], _ = new(big.Int).QuoRem(x, odd, &r)
		if r.Sign() != 0 {
			return roundedQuotient(c, odd, e), false
		}
	}
	return fromInteger(exact.New(whole, e)), true
}

// roundedQuotient returns Σ c[i]/n·2^e·sⁱ with coefficients rounded to nearest. A coefficient
// beyond the range of float64 makes the polynomial invalid.
func roundedQuotient(c []*big.Int, n *big.Int, e int) Poly {
	f := make([]float64, len(c))
	for i, x := range c {
		f[len(c)-1-i] = nearestQuotient(x, n, e)
	}
	return New(f...)
}

// nearestQuotient returns the float64 nearest to a/b·2^e.
func nearestQuotient(a, b *big.Int, e int) float64 {
	if a.Sign() == 0 {
		return 0
	}
	// So many bits that one more, which tells that there is a remainder, breaks every tie.
	shift := max(0, b.BitLen()-a.BitLen()+70)
	var r big.Int
	q, _ := new(big.Int).QuoRem(new(big.Int).Lsh(a, uint(shift)), b, &r)
	q.Lsh(q, 1)
	if r.Sign() != 0 {
		if a.Sign()*b.Sign() > 0 {
			q.Add(q, bigOne)
		} else {
			q.Sub(q, bigOne)
		}
	}
	x, _ := nearest(q, e-shift-1)
	return x
}

var bigOne = big.NewInt(1)
