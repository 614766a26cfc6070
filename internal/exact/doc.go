// Package exact answers questions about real polynomials without rounding: greatest common
// divisors, square-free factors, signs, numbers of real roots and isolated real roots.
//
// A [Poly] has big.Int coefficients, lowest power first, times a common power of two, so
// that every polynomial with float64 coefficients, and every sum, product and affine
// substitution of such, is one. A point is a [Dyadic].
//
// Values never change once made; callers may share them between goroutines. Nothing here is
// approximate, and every call ends: the only loops without a counter, those of root
// isolation, end because distinct roots of a square-free polynomial lie apart.
package exact
