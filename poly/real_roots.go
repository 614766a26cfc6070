package poly

import (
	"errors"
	"fmt"
	"math"

	"github.com/polewright/polewright/internal/exact"
)

// Open is an option of [Poly.RealRoots]: neither end belongs to the interval.
func Open() Option { return func(s *settings) { s.ends = exact.Open } }

// LeftOpen is an option of [Poly.RealRoots]: lo does not belong to the interval, hi does.
func LeftOpen() Option { return func(s *settings) { s.ends = exact.OpenClosed } }

// RightOpen is an option of [Poly.RealRoots]: lo belongs to the interval, hi does not.
func RightOpen() Option { return func(s *settings) { s.ends = exact.ClosedOpen } }

// RealRoots returns the distinct real roots in [lo, hi], ascending, with their multiplicities.
// The ends may be infinite; [Open], [LeftOpen] and [RightOpen] take ends away. That a root is
// real, and on which side of an end it lies, is proven. If lo > hi, or a constant is asked,
// there are none.
//
// Each root is that of [Poly.Roots], with the same guarantee for its disc. Where float64 cannot
// part a real root from other roots, Distinct and Multiplicity count all roots of the disc,
// which then holds at least one real root in the interval.
//
// The error is a [*ArgumentError] for an invalid polynomial, for the zero polynomial, for an
// end that is NaN and beyond [MaxDegree], and a [*RangeError] for a root in the interval
// that is no float64, being too large or, without being zero, too small.
func (p Poly) RealRoots(lo, hi float64, opt ...Option) ([]Root, error) {
	const call = "poly.Poly.RealRoots"
	if err := p.checkRootQuestion(call); err != nil {
		return nil, err
	}
	for _, end := range [...]struct {
		name string
		x    float64
	}{{"lo", lo}, {"hi", hi}} {
		if math.IsNaN(end.x) {
			return nil, &ArgumentError{Call: call, Argument: end.name, Reason: "NaN is no end of an interval"}
		}
	}
	s := settings{ends: exact.Closed}
	for _, o := range opt {
		o(&s)
	}
	if p.Degree() == 0 || lo > hi || lo == hi && s.ends != exact.Closed {
		return nil, nil
	}
	roots, err := p.Roots(opt...)
	if tooFar := (*RangeError)(nil); errors.As(err, &tooFar) {
		// Some root is no float64; it need not be one that was asked for.
		return p.realRootsExact(call, lo, hi, s.ends)
	}
	if err != nil {
		return nil, err
	}
	var real []Root
	for _, r := range roots {
		if imag(r.Value) == 0 && p.holdsReal(r, lo, hi, s.ends) {
			real = append(real, r)
		}
	}
	return real, nil
}

// checkRootQuestion returns why p has no roots to ask for.
func (p Poly) checkRootQuestion(call string) error {
	switch {
	case p.err != nil:
		return p.err
	case len(p.c) == 0:
		return &ArgumentError{Call: call, Argument: "p", Reason: "every number is a root of the zero polynomial"}
	case p.Degree() > MaxDegree:
		return &ArgumentError{Call: call, Argument: "p", Reason: fmt.Sprintf("degree %d; at most %d", p.Degree(), MaxDegree)}
	}
	return nil
}

// holdsReal tells whether the disc of a root with a real value holds a real root in the
// interval.
func (p Poly) holdsReal(r Root, lo, hi float64, ends exact.Ends) bool {
	v := real(r.Value)
	if r.Radius == 0 {
		switch {
		case v < lo || v > hi:
			return false
		case v == lo && v == hi:
			return ends == exact.Closed
		case v == lo:
			return ends == exact.Closed || ends == exact.ClosedOpen
		case v == hi:
			return ends == exact.Closed || ends == exact.OpenClosed
		}
		return true
	}
	// Everything that follows is scaled by 1/4 for the sake of sums beyond the range.
	reach := up(r.Radius / 4)
	below, above := v/4-lo/4, hi/4-v/4
	slack := up(math.Abs(v) * 0x1p-52)
	switch {
	case below < -reach-slack || above < -reach-slack:
		return false
	case below > reach+slack && above > reach+slack && r.Distinct == 1:
		return true
	}
	// The disc holds the roots that this part of the axis holds, and no others.
	a := exact.Float(v).Sub(exact.Float(r.Radius))
	b := exact.Float(v).Add(exact.Float(r.Radius))
	atA, atB := true, true
	if x := exact.Float(lo); x.Cmp(a) >= 0 {
		a, atA = x, ends == exact.Closed || ends == exact.ClosedOpen
	}
	if x := exact.Float(hi); x.Cmp(b) <= 0 {
		b, atB = x, ends == exact.Closed || ends == exact.OpenClosed
	}
	part := exact.Open
	switch {
	case atA && atB:
		part = exact.Closed
	case atA:
		part = exact.ClosedOpen
	case atB:
		part = exact.OpenClosed
	}
	return len(p.integers().Isolate(a, b, part)) > 0
}

// realRootsExact is the stage that does without [Poly.Roots].
func (p Poly) realRootsExact(call string, lo, hi float64, ends exact.Ends) ([]Root, error) {
	q := p.integers()
	var roots []Root
	for _, r := range q.RealRoots(exact.Float(lo), exact.Float(hi), ends) {
		x, side := r.Nearest()
		switch {
		case math.IsInf(x, 0):
			return nil, &RangeError{Call: call, Reason: "a real root is too large for float64"}
		case x == 0 && side != 0:
			return nil, &RangeError{Call: call, Reason: "a real root is too small for float64 without being zero"}
		}
		root := Root{Value: complex(x+0, 0), Multiplicity: r.Multiplicity, Distinct: 1}
		if side != 0 {
			// Half a place, rounded up.
			next := math.Nextafter(x, math.Inf(side))
			if math.IsInf(next, 0) {
				next = math.Nextafter(x, 0)
			}
			root.HalfRe = max(math.Abs(next-x)/2, math.SmallestNonzeroFloat64)
			root.Radius = root.HalfRe
			disc := q.Shift(exact.Float(x))
			count := exact.InDisc(disc, exact.Float(root.Radius))
			if m := count.Inside + count.Boundary; m > root.Multiplicity {
				count = exact.InDisc(disc.SquareFreePart(), exact.Float(root.Radius))
				root.Multiplicity, root.Distinct, root.HalfIm = m, count.Inside+count.Boundary, root.Radius
			}
		}
		if n := len(roots); n > 0 && meet(roots[n-1], root) {
			// Both discs hold roots of the other, or touch.
			both := merge(roots[n-1], root)
			disc := q.Shift(exact.Float(real(both.Value)))
			count := exact.InDisc(disc, exact.Float(both.Radius))
			both.Multiplicity = count.Inside + count.Boundary
			count = exact.InDisc(disc.SquareFreePart(), exact.Float(both.Radius))
			both.Distinct = count.Inside + count.Boundary
			both.HalfIm = both.Radius
			roots[n-1] = both
			continue
		}
		roots = append(roots, root)
	}
	return roots, nil
}
