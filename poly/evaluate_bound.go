package poly

import (
	"math"
	"math/big"
)

// Evaluate returns p(x), as [Poly.At] does, and a bound on its error: the exact value lies in
// [value - bound, value + bound]. The bound is at most 2⁻⁴⁹·|value|, or a few of the smallest
// float64s; a bound of 0 says that value is exact, and a value of 0 comes with it only if x is
// a root. Where the exact value is beyond the range of float64, x is not finite or the
// polynomial is invalid, the bound is +Inf.
func (p Poly) Evaluate(x float64) (value, bound float64) {
	value = p.At(x)
	switch {
	case p.err != nil || math.IsNaN(x-x) || math.IsInf(value, 0):
		return value, math.Inf(1)
	case math.Abs(value) < evaluateByAt:
		re, _, e := exactAt(p.integers(), x, 0)
		return roundedWithBound(re, e)
	}
	return value, boundOfAt(math.Abs(value))
}

// EvaluateComplex returns p(s), as [Poly.AtComplex] does, and a bound on its error: the exact
// value lies in the disc of that radius about value. The bound is like that of [Poly.Evaluate].
func (p Poly) EvaluateComplex(s complex128) (value complex128, bound float64) {
	value = p.AtComplex(s)
	modulus := math.Hypot(real(value), imag(value))
	switch {
	case math.IsNaN(modulus) || math.IsInf(modulus, 0):
		return value, math.Inf(1)
	case modulus < evaluateByAt:
		re, im, e := exactAt(p.integers(), real(s), imag(s))
		x, boundX := roundedWithBound(re, e)
		y, boundY := roundedWithBound(im, e)
		return complex(x, y), hypotUp(boundX, boundY)
	}
	return value, boundOfAt(modulus)
}

// evaluateByAt is the smallest modulus for which the relative bound of At is taken: below, a
// value may have lost digits to underflow.
const evaluateByAt = 0x1p-900

// boundOfAt turns At's bound of 2⁻⁵⁰ times the exact modulus into one by the computed modulus.
func boundOfAt(modulus float64) float64 { return modulus * (0x1p-50 * (1 + 0x1p-40)) }

// roundedWithBound returns the float64 nearest to n·2^e and a bound on its distance.
func roundedWithBound(n *big.Int, e int) (value, bound float64) {
	value, ok := nearest(n, e)
	switch {
	case ok:
		return value, 0
	case math.IsInf(value, 0):
		return value, math.Inf(1)
	}
	return value, math.Max(unitRoundoff*math.Abs(value), math.SmallestNonzeroFloat64)
}
