// Package poly handles real polynomials: exact arithmetic, evaluation, and every root with
// a disc that provably holds it.
//
// # Conventions
//
// Coefficients are written highest power first, as on paper: New(1, 6, 8) is s² + 6s + 8.
// A given float64 is taken exactly, as the binary fraction that it holds. Sums, differences,
// products, multiples and derivatives are exact too: where a coefficient of a result is no
// float64, the polynomial keeps the exact one beside the rounded one.
//
// # What is guaranteed
//
// [Poly.Roots] returns all roots of the exact polynomial. Each [Root] is a disc that holds
// exactly as many roots as it says; the discs are disjoint; multiplicities are exact; a root
// is real, or a part of it zero, only if that is proven. What is proven on one processor is
// proven on all.
//
// The proof is about the polynomial. Coefficients that come from measured data are no more
// certain than the data, and what is concluded about a machine from them deserves the usual
// care: try it with limits, guards and an emergency stop.
package poly
