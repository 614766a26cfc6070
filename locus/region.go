package locus

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// A Region is an open set of the complex plane, symmetric about the real axis: where the roots
// of a loop are wanted. [LeftOf], [Damped], [Within], [Beyond], [Strip], [All] and [OnSamples]
// make the usual ones; a type of the caller's own can be one too.
type Region interface {
	// Contains tells whether s lies strictly inside.
	Contains(s complex128) bool
	// Boundary returns curves that together contain the whole boundary. They may reach
	// beyond it.
	Boundary() []Curve
}

// A known region is an intersection of sides of boundaries.
type known interface {
	Region
	// constraints returns them, or what is wrong with the arguments.
	constraints(call string) ([]constraint, error)
}

func constraintsOf(call string, r Region) ([]constraint, error) {
	switch r := r.(type) {
	case nil:
		return nil, &poly.ArgumentError{Call: call, Argument: "r", Reason: "no region"}
	case known:
		return r.constraints(call)
	}
	return []constraint{userRegion{r}}, nil
}

// simpleRegions returns the regions that r is the intersection of; their arguments are valid.
func simpleRegions(call string, r Region) ([]Region, error) {
	switch s := r.(type) {
	case leftOf:
		if finite(s.sigma) {
			return []Region{r}, nil
		}
	case damped:
		if s.zeta > 0 && s.zeta < 1 {
			return []Region{r}, nil
		}
	case within:
		if s.radius > 0 && finite(s.radius) {
			return []Region{r}, nil
		}
	case all:
		var list []Region
		for _, one := range s {
			more, err := simpleRegions(call, one)
			if err != nil {
				return nil, err
			}
			list = append(list, more...)
		}
		return list, nil
	case onSamples:
		if inner, ok := s.r.(all); ok {
			var list []Region
			for _, one := range inner {
				more, err := simpleRegions(call, onSamples{one, s.period})
				if err != nil {
					return nil, err
				}
				list = append(list, more...)
			}
			return list, nil
		}
	}
	if _, err := constraintsOf(call, r); err != nil {
		return nil, err
	}
	return []Region{r}, nil
}

func invalidRegion(call, constructor, argument string, value float64, wanted string) error {
	return &poly.ArgumentError{Call: call, Argument: "r", Reason: fmt.Sprintf("locus.%s: %s is %v; %s", constructor, argument, value, wanted)}
}

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

func finitePoint(s complex128) bool { return finite(real(s)) && finite(imag(s)) }

// LeftOf returns the half-plane Re s < sigma, sigma in rad/s: roots whose motion decays at
// least like e^(sigma·t). A sigma that is not finite is reported by the calls that use it.
func LeftOf(sigma float64) Region { return leftOf{sigma} }

type leftOf struct{ sigma float64 }

func (r leftOf) Contains(s complex128) bool { return real(s) < r.sigma }
func (r leftOf) Boundary() []Curve {
	return []Curve{StraightLine(complex(r.sigma, 0), 1i)}
}
func (r leftOf) constraints(call string) ([]constraint, error) {
	if !finite(r.sigma) {
		return nil, invalidRegion(call, "LeftOf", "sigma", r.sigma, "a finite number is wanted")
	}
	return []constraint{halfPlane{exact.Float(r.sigma)}}, nil
}

// Damped returns the sector |arg(-s)| < acos zeta, 0 < zeta < 1: roots with a damping ratio
// above zeta. The origin is outside. Any other zeta is reported by the calls that use the
// region.
func Damped(zeta float64) Region { return damped{zeta} }

type damped struct{ zeta float64 }

func (r damped) Contains(s complex128) bool {
	return real(s) < 0 && finitePoint(s) && r.zeta > 0 && r.zeta < 1 && sector{exact.Float(r.zeta)}.side(exactly(s)) > 0
}
func (r damped) Boundary() []Curve {
	root := math.Sqrt((1 - r.zeta) * (1 + r.zeta))
	return []Curve{Ray(0, complex(-r.zeta, root)), Ray(0, complex(-r.zeta, -root))}
}
func (r damped) constraints(call string) ([]constraint, error) {
	if !(r.zeta > 0 && r.zeta < 1) {
		return nil, invalidRegion(call, "Damped", "zeta", r.zeta, "a number between 0 and 1 is wanted")
	}
	return []constraint{sector{exact.Float(r.zeta)}}, nil
}

// Within returns the disc |s| < radius, radius > 0 in rad/s: roots with a natural frequency
// below radius; in z, where the unit disc means stability, radius is a ratio. Any other radius
// is reported by the calls that use the region.
func Within(radius float64) Region { return within{radius, false} }

// Beyond returns the exterior |s| > radius of a disc; as [Within] otherwise.
func Beyond(radius float64) Region { return within{radius, true} }

type within struct {
	radius  float64
	outside bool
}

func (r within) Contains(s complex128) bool {
	return finitePoint(s) && r.radius > 0 && finite(r.radius) && disc{exact.Float(r.radius), r.outside}.side(exactly(s)) > 0
}
func (r within) Boundary() []Curve { return []Curve{Circle(0, r.radius)} }
func (r within) constraints(call string) ([]constraint, error) {
	if !(r.radius > 0 && finite(r.radius)) {
		name := "Within"
		if r.outside {
			name = "Beyond"
		}
		return nil, invalidRegion(call, name, "radius", r.radius, "a finite number above 0 is wanted")
	}
	return []constraint{disc{exact.Float(r.radius), r.outside}}, nil
}

// Strip returns the strip |Im s| < omega, omega > 0 in rad/s: roots whose oscillation is slower
// than omega. Any other omega is reported by the calls that use the region.
func Strip(omega float64) Region { return slower{omega} }

type slower struct{ omega float64 }

func (r slower) Contains(s complex128) bool { return math.Abs(imag(s)) < r.omega }
func (r slower) Boundary() []Curve {
	return []Curve{StraightLine(complex(0, r.omega), 1), StraightLine(complex(0, -r.omega), 1)}
}
func (r slower) constraints(call string) ([]constraint, error) {
	if !(r.omega > 0 && finite(r.omega)) {
		return nil, invalidRegion(call, "Strip", "omega", r.omega, "a finite number above 0 is wanted")
	}
	return []constraint{strip{exact.Float(r.omega)}}, nil
}

// All returns the intersection of regions; of none, the whole plane.
func All(r ...Region) Region { return all(append([]Region(nil), r...)) }

type all []Region

func (r all) Contains(s complex128) bool {
	for _, one := range r {
		if one == nil || !one.Contains(s) {
			return false
		}
	}
	return true
}

func (r all) Boundary() []Curve {
	var curves []Curve
	for _, one := range r {
		if one != nil {
			curves = append(curves, one.Boundary()...)
		}
	}
	return curves
}

func (r all) constraints(call string) ([]constraint, error) {
	var parts []constraint
	for _, one := range r {
		more, err := constraintsOf(call, one)
		if err != nil {
			return nil, err
		}
		parts = append(parts, more...)
	}
	return parts, nil
}
