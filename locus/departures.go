package locus

import (
	"slices"

	"github.com/polewright/polewright/internal/exact"
)

// A Departure tells in which directions branches leave a pole, or reach a zero.
type Departure struct {
	From         complex128 // the pole, or the zero
	Multiplicity int        // of From as a root of the reduced pair: as many branches
	Angles       []float64  // rad in (-π, π], ascending, of the vectors from From to the branches near it
}

// Departures returns for each finite pole, at k = 0, the angles at which the branches for small
// gains of the given sign leave it; repeated poles have several. Factors common to both
// polynomials take no part.
func (f Family) Departures(sign Sign) ([]Departure, error) {
	const call = "locus.Family.Departures"
	if err := f.valid(call); err != nil {
		return nil, err
	}
	r := f.reduced()
	return departures(call, r.a, r.b, sign)
}

// Arrivals returns the same for the finite zeros, which the branches reach as the gain of the
// given sign grows without bound: the angles of the vectors from the zero to the branches near
// it.
func (f Family) Arrivals(sign Sign) ([]Departure, error) {
	const call = "locus.Family.Arrivals"
	if err := f.valid(call); err != nil {
		return nil, err
	}
	r := f.reduced()
	return departures(call, r.b, r.a, sign)
}

// departures returns the directions in which the roots of p + ε·q leave those of p, for small ε
// of the given sign: near a root s of multiplicity m, (s + d)ᵐ·p⁽ᵐ⁾(s)/m! = -ε·q(s).
func departures(call string, p, q exact.Poly, sign Sign) ([]Departure, error) {
	var list []Departure
	if q.IsZero() {
		return nil, nil
	}
	if sign < 0 {
		q = q.Neg()
	}
	for _, factor := range p.SquareFree() {
		m := factor.Multiplicity
		leading := dividedDerivative(p, m)
		roots, err := upperRoots(call, factor.Poly)
		if err != nil {
			return nil, err
		}
		for _, root := range roots {
			s, top, err := root.value(call, q, 70)
			if err != nil {
				return nil, err
			}
			_, bottom, err := root.value(call, leading, 70)
			if err != nil {
				return nil, err
			}
			d := Departure{From: number(s), Multiplicity: m}
			if root.real {
				d.Angles = realRootAngles(top.re.Sign() == bottom.re.Sign(), m)
				list = append(list, d)
				continue
			}
			v := quotientBig(top, bottom, 128)
			v.re.Neg(v.re)
			v.im.Neg(v.im)
			d.Angles = rootAngles(angle(v), m)
			conjugate := Departure{From: complex(real(d.From), -imag(d.From)), Multiplicity: m}
			for _, a := range slices.Backward(d.Angles) {
				conjugate.Angles = append(conjugate.Angles, mirror(a))
			}
			slices.Sort(conjugate.Angles)
			list = append(list, conjugate, d)
		}
	}
	slices.SortStableFunc(list, func(a, b Departure) int {
		return compareCrossings(Crossing{S: a.From}, Crossing{S: b.From})
	})
	return list, nil
}
