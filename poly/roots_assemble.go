package poly

import (
	"math"

	"github.com/polewright/polewright/internal/rootkernel"
)

// A located root is a disc with what it holds: the upper one of conjugates, or, with Y = 0,
// one that is its own mirror image.
type located struct {
	rootkernel.Disc
	multiplicity, distinct int
}

func (l located) root() Root {
	return Root{complex(l.X, l.Y), l.Radius, l.HalfX, l.HalfY, l.multiplicity, l.distinct}
}

// assemble merges what float64 cannot part, and adds the conjugates.
func assemble(all []located) []Root {
	for i := range all {
		if l := &all[i]; l.Y != 0 && l.Y <= l.Radius {
			// It meets its own conjugate.
			*l = located{rootkernel.Disc{
				X: l.X, Radius: hypotUp(l.HalfX, up(l.Y+l.HalfY)), HalfX: l.HalfX, HalfY: up(l.Y + l.HalfY),
			}, 2 * l.multiplicity, 2 * l.distinct}
		}
	}
	for merged := true; merged; {
		merged = false
		for i := 0; i < len(all); i++ {
			for j := 0; j < i; j++ {
				if all[i].meets(all[j]) {
					all[j] = all[j].merge(all[i])
					all = append(all[:i], all[i+1:]...)
					merged = true
					i--
					break
				}
			}
		}
	}
	roots := make([]Root, 0, 2*len(all))
	for _, l := range all {
		r := l.root()
		roots = append(roots, r)
		if l.Y != 0 {
			r.Value = complex(l.X, -l.Y)
			roots = append(roots, r)
		}
	}
	sortRoots(roots)
	return roots
}

// meets reports whether two discs may have a common point.
func (l located) meets(m located) bool {
	// By quarters, against overflow.
	gap := math.Hypot(l.X/4-m.X/4, l.Y/4-m.Y/4)
	reach := l.Radius/4 + m.Radius/4
	return gap-gap*0x1p-50 <= reach+4*math.SmallestNonzeroFloat64
}

// merge returns one disc that covers two. The centre is that of the larger number of roots;
// on the real axis, if one of them is.
func (l located) merge(m located) located {
	if l.Y != 0 && (m.Y == 0 || m.multiplicity > l.multiplicity) {
		l, m = m, l
	}
	both := located{rootkernel.Disc{X: l.X, Y: l.Y}, l.multiplicity + m.multiplicity, l.distinct + m.distinct}
	if l.Y == 0 && m.Y != 0 {
		both.multiplicity += m.multiplicity // and its conjugate
		both.distinct += m.distinct
	}
	dx, dy := math.Abs(l.X-m.X), math.Abs(l.Y-m.Y)
	both.HalfX = max(l.HalfX, up(dx+m.HalfX))
	both.HalfY = max(l.HalfY, up(dy+m.HalfY))
	both.Radius = max(l.Radius, up(hypotUp(dx, dy)+m.Radius))
	return both
}

// meet and merge do the same with real roots.
func meet(a, b Root) bool { return a.located().meets(b.located()) }

func merge(a, b Root) Root { return a.located().merge(b.located()).root() }

func (r Root) located() located {
	return located{rootkernel.Disc{X: real(r.Value), Radius: r.Radius, HalfX: r.HalfRe, HalfY: r.HalfIm}, r.Multiplicity, r.Distinct}
}
