package locus

import (
	"slices"

	"github.com/polewright/polewright/poly"
)

// A Crossing is a point at which a branch meets the boundary of a region.
type Crossing struct {
	S     complex128
	Gain  float64
	Touch poly.Verdict // Holds: tangent, on the same side before and after; Fails: it crosses
}

// Crossings returns the points at which branches meet the boundary of r at a finite gain other
// than 0, by ascending gain, both of a conjugate pair. A branch crosses, or it touches: then as
// many roots are inside just after as just before. Roots on the boundary at k = 0, and fixed
// roots, are no crossings.
//
// If a whole piece of the boundary belongs to the locus the error is a [*BoundaryOnLocusError].
func (f Family) Crossings(r Region) ([]Crossing, error) {
	const call = "locus.Family.Crossings"
	if err := f.valid(call); err != nil {
		return nil, err
	}
	parts, err := constraintsOf(call, r)
	if err != nil {
		return nil, err
	}
	moving := f.reduced()
	var kept []contact
	for i, on := range parts {
		list, whole, err := on.contacts(call, moving)
		if err != nil {
			return nil, err
		}
		if whole {
			return nil, &BoundaryOnLocusError{Region: r}
		}
		for _, c := range list {
			inside := true
			for j, other := range parts {
				inside = inside && (i == j || c.gain.Sign() == 0 || other.side(c.s) >= 0)
			}
			if inside {
				kept = append(kept, c)
			}
		}
	}
	return sortedCrossings(kept), nil
}

// sortedCrossings returns the crossings at gains other than 0 that contacts stand for.
func sortedCrossings(list []contact) []Crossing {
	var crossings []Crossing
	for _, c := range list {
		if c.gain.Sign() == 0 {
			continue
		}
		k, at, touch := toFloat(c.gain), number(c.s), poly.Fails
		if c.even {
			touch = poly.Holds
		}
		if c.pair {
			crossings = append(crossings, Crossing{complex(real(at), -imag(at)), k, touch})
		}
		crossings = append(crossings, Crossing{at, k, touch})
	}
	slices.SortFunc(crossings, compareCrossings)
	// A corner of an intersection lies on two pieces.
	return slices.CompactFunc(crossings, func(a, b Crossing) bool { return a.S == b.S && a.Gain == b.Gain })
}

func compareCrossings(a, b Crossing) int {
	for _, d := range [...][2]float64{{a.Gain, b.Gain}, {real(a.S), real(b.S)}, {imag(a.S), imag(b.S)}} {
		if d[0] < d[1] {
			return -1
		} else if d[0] > d[1] {
			return +1
		}
	}
	return 0
}
