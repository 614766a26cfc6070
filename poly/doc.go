// Package poly handles real polynomials: exact arithmetic, evaluation with error bounds, every
// root with a disc that provably holds it, the real roots in an interval, and the number of roots
// in a half-plane, a sector or a disc.
//
// # Conventions
//
// Coefficients are written highest power first, as on paper: New(1, 6, 8) is s² + 6s + 8.
// A given float64 is taken exactly, as the binary fraction that it holds. Sums, differences,
// products, powers, multiples, derivatives and affine maps are exact too: where a coefficient of
// a result is no float64, the polynomial keeps the exact one beside the rounded one. A quotient
// is exact if its coefficients are binary fractions, and [Division] says whether it is.
//
// Nothing here has a unit of its own: if a polynomial is in s and time in seconds, its roots
// are in rad/s.
//
// # What is guaranteed
//
// [Poly.Roots] returns all roots of the exact polynomial. Each [Root] is a disc that holds
// exactly as many roots as it says; the discs are disjoint; multiplicities are exact; a root
// is real, or a part of it zero, only if that is proven. [Poly.RealRoots] proves reality, and
// on which side of an end of the interval a root lies. [Poly.CountLeftOf], [Poly.CountInSector]
// and [Poly.CountInDisc] are exact, roots on the boundary included, and so is the [RouthTable] in
// its singular cases. [Poly.Evaluate] returns a bound with the value. What is written as text or
// JSON is read back as the same polynomial, to the last bit.
//
// Each question is first asked in float64 with bounds on the error, and again in higher
// precision or exact arithmetic where these do not decide. What is proven on one processor is
// proven on all.
//
// # Where it ends
//
// Degrees are limited to [MaxDegree], so that work is bounded; exact arithmetic on polynomials
// of high degree with coefficients of very different sizes takes seconds. Roots beyond the range
// of float64 are a [*RangeError]; different roots that float64 cannot part share one [Root], and
// [Root.Distinct] says so.
//
// The proof is about the polynomial. Coefficients that come from measured data are no more
// certain than the data, and what is concluded about a machine from them deserves the usual
// care: try it with limits, guards and an emergency stop; local codes, functional-safety rules
// and licensed practice prevail.
package poly
