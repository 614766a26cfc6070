package poly

import (
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
	roots, err := s.find(s.roots[:0], p, "poly.Solver.Roots")
	if err != nil {
		return nil, err
	}
	s.roots = roots
	return roots, nil
}

// find appends the roots of p to dst, which is empty. The stages: float64 with residuals in
// twice the precision; that with a frame for each point; exact factors, and math/big for
// what is left.
func (s *Solver) find(dst []Root, p Poly, call string) ([]Root, error) {
	if err := p.solvable(call); err != nil || len(p.c) < 2 {
		return dst, err
	}
	if len(p.given) > 0 {
		return append(dst, groupGiven(p.given)...), nil
	}
	zeros := 0
	for p.sign(zeros) == 0 {
		zeros++
	}
	var lo []float64
	if p.lo != nil {
		lo = p.lo[zeros:]
	}
	n := p.Degree() - zeros
	var room [32]rootkernel.Disc
	discs := room[:0]
	if n >= len(room) {
		if cap(s.discs) < n+1 {
			s.discs = make([]rootkernel.Disc, 0, n+1)
		}
		discs = s.discs[:0]
	}
	if c := p.c[zeros:]; p.evaluable() && c[0] != 0 && c[n] != 0 { // not below the range of float64
		k := &s.kernel
		k.Set(c, lo)
		var failure rootkernel.Failure
		if discs, failure = approach(k, discs, zeros > 0); failure == rootkernel.None {
			if need := n + min(zeros, 1); cap(dst) < need {
				dst = make([]Root, 0, need)
			}
			return appendDiscs(dst, discs, zeros), nil
		}
	}
	roots, err := s.exactly(p, zeros, call)
	return append(dst, roots...), err
}

// sweeps is how long a stage tries; it seldom needs half of it.
const sweeps = 40

// approach runs the fast stage on the polynomial that k was set to, and the careful one
// where that is not enough. It appends to discs, which is empty.
func approach(k *rootkernel.Kernel, discs []rootkernel.Disc, origin bool) ([]rootkernel.Disc, rootkernel.Failure) {
	failure := rootkernel.Imprecise
	k.Start(0)
	if k.Iterate(sweeps) {
		if discs, failure = k.Certify(discs, origin); failure <= rootkernel.OnAxis {
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
