package poly

import (
	"math"

	"github.com/polewright/polewright/internal/rootkernel"
)

// A Solver finds roots with working storage that it keeps from call to call: for loops that
// solve many polynomials. On the fast path, with roots that are well apart, it allocates
// nothing. The zero value is ready for use. One goroutine at a time may use a Solver.
type Solver struct {
	kernel rootkernel.Kernel
	discs  []rootkernel.Disc
	roots  []Root
}

// Roots returns all roots of p, exactly as [Poly.Roots] does. The slice is the solver's own
// and holds until its next call.
func (s *Solver) Roots(p Poly, opt ...Option) ([]Root, error) {
	return s.keep(s.find(s.roots[:0], p, nil, "poly.Solver.Roots", opt))
}

// Near returns all roots of p, with the guarantees of [Poly.Roots], and starts the search at
// the known roots of a polynomial nearby: the last answer, say, before a coefficient changed a
// little. It is the faster the nearer they are; roots from anywhere else cost time, not truth,
// and the discs may differ within their bounds from those of Roots. The slice is the solver's
// own and holds until its next call; known may be that of its last one.
func (s *Solver) Near(p Poly, known []Root, opt ...Option) ([]Root, error) {
	return s.keep(s.find(s.roots[:0], p, known, "poly.Solver.Near", opt))
}

func (s *Solver) keep(roots []Root, err error) ([]Root, error) {
	if err != nil {
		return nil, err
	}
	s.roots = roots
	return roots, nil
}

// find appends the roots of p to dst, which is empty. The stages: float64 with residuals in
// twice the precision; that with a frame for each point; exact factors, and math/big for
// what is left.
func (s *Solver) find(dst []Root, p Poly, known []Root, call string, opt []Option) ([]Root, error) {
	if err := p.solvable(call); err != nil || len(p.c) < 2 {
		return dst, err
	}
	if len(p.given) > 0 {
		return append(dst, groupGiven(p.given)...), nil
	}
	relative := 0.0
	if len(opt) > 0 {
		var chosen settings
		for _, o := range opt {
			o(&chosen)
		}
		relative = chosen.relativeRadius
	}
	zeros := 0
	for p.sign(zeros) == 0 {
		zeros++
	}
	n := p.Degree() - zeros
	if c := p.c[zeros:]; p.evaluable() && c[0] != 0 && c[n] != 0 { // not below the range of float64
		var lo []float64
		if p.lo != nil {
			lo = p.lo[zeros:]
		}
		k := &s.kernel
		k.Set(c, lo)
		var room [32]rootkernel.Disc
		discs := room[:0]
		if n >= len(room) {
			if cap(s.discs) < n+1 {
				s.discs = make([]rootkernel.Disc, 0, n+1)
			}
			discs = s.discs[:0]
		}
		discs, ok := search(k, discs, zeros > 0, known, relative)
		if ok {
			if need := n + min(zeros, 1); cap(dst) < need {
				dst = make([]Root, 0, need)
			}
			return appendDiscs(dst, discs, zeros), nil
		}
	}
	roots, err := s.exactly(p, zeros, call)
	return append(dst, roots...), err
}

// search runs the stages in float64 and double-double on the polynomial that k was set to.
func search(k *rootkernel.Kernel, discs []rootkernel.Disc, origin bool, known []Root, relative float64) ([]rootkernel.Disc, bool) {
	if len(known) > 0 && startAt(k, known) && k.Iterate(warmSweeps) {
		var failure rootkernel.Failure
		if discs, failure = certify(k, discs, origin, relative); failure == rootkernel.None {
			return discs, true
		}
	}
	discs, failure := approach(k, discs[:0], origin, relative)
	return discs, failure == rootkernel.None
}

// certify proves discs about settled points: wide ones, if they will do.
func certify(k *rootkernel.Kernel, discs []rootkernel.Disc, origin bool, relative float64) ([]rootkernel.Disc, rootkernel.Failure) {
	if relative > sharpRadius {
		var ok bool
		if discs, ok = k.CertifyQuick(discs, origin, relative); ok {
			return discs, rootkernel.None
		}
	}
	return k.Certify(discs[:0], origin)
}

// startAt places the points at known roots and reports whether these are as many as there are
// to find. Those of one root that is several are put on a small circle, so that they can part.
func startAt(k *rootkernel.Kernel, known []Root) bool {
	k.Begin()
	for _, r := range known {
		x, y := real(r.Value), imag(r.Value)
		if y < 0 || r.Value == 0 {
			continue
		}
		if r.Multiplicity == 1 {
			if !k.Place(x, y) {
				return false
			}
			continue
		}
		spread := 0x1p-12 * math.Hypot(x, y)
		left := r.Multiplicity
		for l := 0; left > 0; l++ {
			sin, cos := math.Sincos(1 + 2.4*float64(l)) // the golden angle
			switch {
			case y > 0:
				if !k.Place(x+spread*cos, y+spread*sin) {
					return false
				}
				left--
			case left >= 2:
				if !k.Place(x+spread*cos, spread*math.Abs(sin)) {
					return false
				}
				left -= 2
			default:
				if !k.Place(x+spread*cos, 0) {
					return false
				}
				left--
			}
		}
	}
	return k.Complete()
}

// warmSweeps is how long a warm start may take before a cold one is the better try.
const warmSweeps = 8

// sweeps is how long a stage tries; it seldom needs half of it.
const sweeps = 40

// approach runs the fast stage on the polynomial that k was set to, and the careful one
// where that is not enough. It appends to discs, which is empty.
func approach(k *rootkernel.Kernel, discs []rootkernel.Disc, origin bool, relative float64) ([]rootkernel.Disc, rootkernel.Failure) {
	failure := rootkernel.Imprecise
	k.Start(0)
	if k.Iterate(sweeps) {
		if discs, failure = certify(k, discs, origin, relative); failure <= rootkernel.OnAxis {
			return discs, failure
		}
	}
	return approachCarefully(k, discs[:0], origin)
}

// approachCarefully goes on from the points of k in careful mode.
func approachCarefully(k *rootkernel.Kernel, discs []rootkernel.Disc, origin bool) ([]rootkernel.Disc, rootkernel.Failure) {
	failure := rootkernel.Imprecise
	for attempt := 1; attempt <= 2; attempt++ {
		k.Careful()
		settled := k.Iterate(sweeps)
		discs, failure = k.Certify(discs[:0], origin)
		if settled || failure <= rootkernel.OnAxis {
			break
		}
		k.Start(attempt)
	}
	return discs, failure
}

// appendDiscs turns sorted discs into roots, conjugates included. The disc at 0 with radius
// 0 stands for so many roots there.
func appendDiscs(dst []Root, discs []rootkernel.Disc, zeros int) []Root {
	for i := 0; i < len(discs); {
		// Those with the same real part: conjugates first, downwards, then upwards.
		j := i
		for j < len(discs) && discs[j].X == discs[i].X {
			j++
		}
		for l := j - 1; l >= i; l-- {
			if d := &discs[l]; d.Y > 0 {
				dst = append(dst, Root{complex(d.X, -d.Y), d.Radius, d.HalfX, d.HalfY, 1, 1})
			}
		}
		for ; i < j; i++ {
			d := &discs[i]
			m := 1
			if d.Radius == 0 && d.X == 0 && d.Y == 0 {
				m = zeros
			}
			dst = append(dst, Root{complex(d.X, d.Y), d.Radius, d.HalfX, d.HalfY, m, 1})
		}
	}
	return dst
}
