// Package quotient computes with polynomials modulo a polynomial, to any precision.
//
// Modulo a characteristic polynomial A, multiplication by x has the roots of A as its
// eigenvalues. So exp(x·t) mod A carries every mode of a linear system with these poles,
// repeated and nearly repeated ones included, without one root being computed: the sum of
// the residues of B·exp(x·t)/A is the leading coefficient of (B·exp(x·t) mod A), for monic A.
//
// Numbers are big.Float. What a result lost to cancellation shows when the same is computed
// once more with more bits: the caller does so.
package quotient
