package poly

import "fmt"

// Power returns pⁿ, exactly; p⁰ is 1. Given roots stay. The result is invalid, with
// a [*ArgumentError], for a negative n, and for an n or a degree of the result beyond
// [MaxDegree].
func (p Poly) Power(n int) Poly {
	const call = "poly.Poly.Power"
	switch {
	case p.err != nil:
		return invalid(p.err)
	case n < 0:
		return invalid(&ArgumentError{Call: call, Argument: "n", Reason: fmt.Sprintf("%d is negative", n)})
	case n > MaxDegree || n*p.Degree() > MaxDegree:
		return invalid(&ArgumentError{Call: call, Argument: "n", Reason: fmt.Sprintf("power %d of a polynomial of degree %d; both the power and the degree of the result are at most %d", n, p.Degree(), MaxDegree)})
	}
	result := New(1)
	for ; n > 0; n >>= 1 {
		if n&1 != 0 {
			result = result.Mul(p)
		}
		if n > 1 {
			p = p.Mul(p)
		}
	}
	return result
}
