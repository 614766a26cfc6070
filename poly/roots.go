package poly

import (
	"fmt"
	"sort"

	"github.com/polewright/polewright/internal/exact"
)

// MaxDegree is the highest degree that [Poly.Roots] and [FromRoots] accept.
const MaxDegree = 256

// Option adjusts a call of this package; the zero number of options is the tested default.
type Option func(*settings)

type settings struct {
	ends           exact.Ends // of the interval of RealRoots
	relativeRadius float64    // wide enough for the caller of Roots
}

// sharpRadius is the largest Radius of a root beside its modulus.
const sharpRadius = 0x1p-50

// RelativeRadius tells [Poly.Roots] and [Solver] that discs of this radius, relative to the
// modulus of the root, are sharp enough, for answers that are needed fast. The discs stay
// proven and disjoint, real roots real and conjugates conjugate; only Radius, HalfRe and HalfIm
// may be larger than usual. A value of 2⁻⁵⁰ or less changes nothing; 1e-9 suits most pictures.
func RelativeRadius(relative float64) Option {
	return func(s *settings) { s.relativeRadius = relative }
}

// A Root is one distinct root of a polynomial, located to within a disc.
//
// Guarantee: the closed disc |s - Value| ≤ Radius holds this root and no other, and no two
// discs of one answer meet; Multiplicity is exact. The root is real if imag(Value) == 0 and
// HalfIm == 0, and proved not to be otherwise. This holds for the exact polynomial.
//
// Roots that lie closer together than float64 can part share one Root: then Distinct tells
// how many different ones the disc holds, and Multiplicity counts them all.
//
// Not promised: the same bits in the next release. Compare discs.
type Root struct {
	Value          complex128 // in rad/s, if the polynomial is in s and time in seconds
	Radius         float64    // the closed disc about Value holds exactly Multiplicity roots, counted so; discs are disjoint
	HalfRe, HalfIm float64    // bounds on the error of the real and of the imaginary part; 0 if the part is exact
	Multiplicity   int        // at least 1
	Distinct       int        // 1, unless different roots are closer than float64 can part: then how many, and Multiplicity counts them all
}

// Roots returns all roots, sorted by real part, then imaginary part. Roots that were given
// to [FromRoots] are returned as given. A constant has none.
//
// Radius is at most 2⁻⁵⁰·|Value|, and HalfRe and HalfIm at most 2⁻⁴⁶ of their part (or below
// the smallest normal number). A part is exactly zero only if that is proven; conjugate
// pairs are exactly conjugate.
//
// The error is a [*ArgumentError] for an invalid polynomial, for the zero polynomial (every
// number is a root), beyond [MaxDegree], and where the bound on work is met before the roots are
// parted (no polynomial is known to need that much), and a [*RangeError] for a root that is no
// float64, being too large or, without being zero, too small.
func (p Poly) Roots(opt ...Option) ([]Root, error) {
	var s Solver
	roots, err := s.find(nil, p, nil, "poly.Poly.Roots", opt)
	if err != nil {
		return nil, err
	}
	return roots, nil
}

// solvable returns the error of a polynomial whose roots cannot be had.
func (p Poly) solvable(call string) error {
	switch {
	case p.err != nil:
		return p.err
	case len(p.c) == 0:
		return &ArgumentError{Call: call, Argument: "p", Reason: "every number is a root of the zero polynomial"}
	case p.Degree() > MaxDegree && len(p.given) == 0:
		return &ArgumentError{Call: call, Argument: "p", Reason: fmt.Sprintf("degree %d; at most %d", p.Degree(), MaxDegree)}
	}
	return nil
}

// groupGiven makes the answer out of roots that are known exactly.
func groupGiven(given []complex128) []Root {
	count := map[complex128]int{}
	for _, s := range given {
		count[s]++
	}
	roots := make([]Root, 0, len(count))
	for s, m := range count {
		roots = append(roots, Root{Value: s, Multiplicity: m, Distinct: 1})
	}
	sortRoots(roots)
	return roots
}

func sortRoots(roots []Root) {
	sort.Slice(roots, func(i, j int) bool {
		a, b := roots[i].Value, roots[j].Value
		if real(a) != real(b) {
			return real(a) < real(b)
		}
		return imag(a) < imag(b)
	})
}
