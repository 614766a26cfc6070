package locus

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// A Sensitivity tells how one root moves with the gain.
type Sensitivity struct {
	Root     poly.Root
	Velocity complex128 // ds/dk, in rad/s per unit of gain; 0 for a fixed root, NaN at a multiple root, where it is infinite
	Relative complex128 // (ds/s)/(dk/k) = (k/s)·ds/dk, a ratio; NaN for a root at 0 too, unless it is fixed
}

// Sensitivities returns the roots at a finite gain k, as [Family.PolesAt] does, with their
// sensitivities ds/dk = -B/(A′ + k·B′), which are accurate to about 1e-12 for roots that are not
// nearly multiple.
func (f Family) Sensitivities(k float64) ([]Sensitivity, error) {
	roots, err := f.PolesAt(k)
	if err != nil {
		return nil, err
	}
	p := f.At(k)
	slope := p.Derivative()
	list := make([]Sensitivity, len(roots))
	nan := complex(math.NaN(), math.NaN())
	for i, r := range roots {
		list[i] = Sensitivity{Root: r, Velocity: nan, Relative: nan}
		b := f.scaled.AtComplex(r.Value)
		switch d := slope.AtComplex(r.Value); {
		case f.fixedRoot(r):
			list[i].Velocity, list[i].Relative = 0, 0
		case r.Multiplicity > 1 || d == 0:
		default:
			v := -quotient(b, d)
			list[i].Velocity = v
			switch {
			case k == 0 && r.Value != 0:
				list[i].Relative = 0
			case r.Value != 0:
				list[i].Relative = complex(k, 0) * quotient(v, r.Value)
			}
		}
	}
	return list, nil
}

// fixedRoot tells whether a root belongs to every gain, all of its multiplicity.
func (f Family) fixedRoot(r poly.Root) bool {
	if f.scaled.Degree() < 0 {
		return true
	}
	// A root of both: far from one another they cannot have any.
	if size := f.scaled.AtComplex(r.Value); size != 0 && r.Radius == 0 {
		return false
	}
	g := f.reduced().common
	if g.Degree() < 1 {
		return false
	}
	fixed, err := poly.FromIntegers(g.Integers()).Roots()
	if err != nil {
		return false
	}
	for _, x := range fixed {
		d := x.Value - r.Value
		if math.Hypot(real(d), imag(d)) <= x.Radius+r.Radius && x.Multiplicity == r.Multiplicity {
			return true
		}
	}
	return false
}
