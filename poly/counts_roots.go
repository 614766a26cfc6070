package poly

import "github.com/polewright/polewright/internal/exact"

// countByRoots counts by the discs of all roots, and is ok only if each is certainly on one side
// of the boundary: side returns -1 for inside, +1 for outside, 0 if that is not certain and the
// root is not exactly on the boundary, for which it returns onBoundary.
func (p Poly) countByRoots(side func(Root) int) (c Count, ok bool) {
	if p.Degree() <= exactDegree {
		return Count{}, false
	}
	roots, err := p.Roots()
	if err != nil {
		return Count{}, false
	}
	for _, r := range roots {
		switch side(r) {
		case -1:
			c.Inside += r.Multiplicity
		case +1:
			c.Outside += r.Multiplicity
		case onBoundary:
			c.Boundary += r.Multiplicity
		default:
			return Count{}, false
		}
	}
	return c, true
}

const onBoundary = 2

// exactDegree is the degree up to which exact arithmetic takes well below a millisecond, whatever
// the coefficients; roots that are hard to find take longer.
const exactDegree = 8

func sideOfLine(r Root, sigma float64) int {
	if real(r.Value) == sigma && r.HalfRe == 0 {
		return onBoundary
	}
	return exact.SideOfLine(real(r.Value), r.HalfRe, sigma)
}

func sideOfRays(r Root, zeta float64) int {
	if r.Value == 0 && r.Radius == 0 {
		return onBoundary
	}
	return exact.SideOfRays(real(r.Value), r.HalfRe, imag(r.Value), r.HalfIm, zeta)
}

func sideOfCircle(r Root, radius float64) int {
	return exact.SideOfCircle(real(r.Value), r.HalfRe, imag(r.Value), r.HalfIm, radius)
}
