package locus

import (
	"math"
	"slices"

	"github.com/polewright/polewright/internal/exact"
)

// A RealSegment is a part of the real axis, from Lo to Hi; ends may be infinite.
type RealSegment struct{ Lo, Hi float64 }

// RealSegments returns the parts of the real axis that belong to the locus of gains of the given
// sign, ascending. They end at poles and zeros of odd multiplicity; those of even multiplicity
// may lie inside. Factors common to both polynomials take no part.
func (f Family) RealSegments(sign Sign) ([]RealSegment, error) {
	const call = "locus.Family.RealSegments"
	if err := f.valid(call); err != nil {
		return nil, err
	}
	r := f.reduced()
	if r.degree() < 1 {
		return nil, nil
	}
	product := r.a.Mul(r.b)
	var ends []float64
	for _, factor := range product.SquareFree() {
		if factor.Multiplicity%2 != 0 {
			for _, root := range factor.Poly.Isolate(minusInfinity, plusInfinity, exact.Open) {
				x, _ := root.Nearest()
				ends = append(ends, x+0)
			}
		}
	}
	slices.Sort(ends)
	// k = -A/B has the opposite sign of the product; far left first.
	wanted := -1
	if sign < 0 {
		wanted = 1
	}
	at := product.SignAt(minusInfinity)
	lo := math.Inf(-1)
	var segments []RealSegment
	for _, x := range append(ends, math.Inf(1)) {
		if at == wanted && lo < x {
			segments = append(segments, RealSegment{lo, x})
		}
		lo, at = x, -at
	}
	return segments, nil
}
