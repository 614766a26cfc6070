package tf

import (
	"fmt"

	"github.com/polewright/polewright/poly"
)

// Stability tells whether every signal inside a loop stays bounded.
type Stability struct {
	Stable poly.Verdict // every pole of the loop and of the prefilter inside the region of stability, before any cancellation
	Hidden []HiddenMode // what no response shows although it does not decay, in no particular order
}

// A HiddenMode is a pole of one block, not inside the region of stability, that a zero of a
// block cancels exactly: a path through both does not show it, but it grows inside, or stays.
type HiddenMode struct {
	Pole         complex128 // rad/s in the s plane
	Multiplicity int
	PoleOf       string // "prefilter", "controller", "plant", "sensor", or "plant and sensor", sampled as one
	ZeroOf       string // likewise
}

// String names the mode.
func (m HiddenMode) String() string {
	times := ""
	if m.Multiplicity > 1 {
		times = fmt.Sprintf(" (%d times)", m.Multiplicity)
	}
	return fmt.Sprintf("pole of the %s at %.6g%s hidden by a zero of the %s", m.PoleOf, m.Pole, times, m.ZeroOf)
}

// String says the verdict and names what is hidden.
func (s Stability) String() string {
	text := map[poly.Verdict]string{poly.Holds: "stable", poly.Fails: "not stable"}[s.Stable]
	if text == "" {
		text = "undecided"
	}
	for _, m := range s.Hidden {
		text += "; " + m.String()
	}
	return text
}

// InternalStability tells whether the loop is stable inside, dead time included, and names
// every mode that is unstable, or on the boundary, and hidden by an exact cancellation within a
// block or between two. A cancellation that is only nearly one is none: its pole is a pole of
// the loop that the verdict counts. The error is that of [Loop.Open].
func (l Loop) InternalStability() (Stability, error) {
	const call = "tf.Loop.InternalStability"
	p, err := l.plan(call)
	if err != nil {
		return Stability{}, err
	}
	var s Stability
	open, err := l.Open()
	if err != nil {
		return s, err
	}
	axis, err := open.axis(call)
	if err != nil {
		return s, err
	}
	s.Stable = axis.stable()
	if outside, err := notInside(p.prefilter.denominator, p.period); err != nil {
		return s, err
	} else if outside {
		s.Stable = poly.Fails
	}
	blocks := []struct {
		name string
		g    Function
	}{{"prefilter", p.prefilter}, {"controller", p.controller}, {"plant", p.forward}, {"sensor", p.sensor}}
	if p.joint {
		blocks[2].name, blocks[2].g = "plant and sensor", p.around
		blocks = blocks[:3]
	}
	for _, pole := range blocks {
		for _, zero := range blocks {
			if zero.g.numerator.Degree() < 1 || pole.g.denominator.Degree() < 1 {
				continue
			}
			common, err := zero.g.numerator.CommonFactor(pole.g.denominator, 0)
			if err != nil {
				return s, err
			}
			if outside, err := notInside(common, p.period); err != nil {
				return s, err
			} else if !outside {
				continue
			}
			roots, err := unstableRoots(common, p.period)
			if err != nil {
				return s, err
			}
			for _, r := range roots {
				s.Hidden = append(s.Hidden, HiddenMode{Pole: r.Value, Multiplicity: r.Multiplicity, PoleOf: pole.name, ZeroOf: zero.name})
			}
		}
	}
	return s, nil
}

// notInside tells, proven, whether a polynomial other than zero has roots that are not inside
// the region of stability.
func notInside(p poly.Poly, period float64) (bool, error) {
	if p.Degree() <= 0 {
		return false, nil
	}
	var c poly.Count
	var err error
	if period == 0 {
		c, err = p.CountLeftOf(0)
	} else {
		c, err = p.CountInDisc(1)
	}
	return c.Inside < p.Degree(), err
}

// unstableRoots returns the roots of p that are not inside the region of stability.
func unstableRoots(p poly.Poly, period float64) ([]poly.Root, error) {
	var list []poly.Root
	for _, f := range p.SquareFree() {
		outside, err := notInside(f.Poly, period)
		if err != nil {
			return nil, err
		}
		if !outside {
			continue
		}
		roots, err := f.Poly.Roots()
		if err != nil {
			return nil, err
		}
		for _, r := range roots {
			if !provenInside(r, period) {
				r.Multiplicity *= f.Multiplicity
				list = append(list, r)
			}
		}
	}
	return list, nil
}

// provenInside tells whether the disc of a root lies inside the region of stability.
func provenInside(r poly.Root, period float64) bool {
	if period == 0 {
		return real(r.Value)+r.HalfRe < 0
	}
	size := NaturalFrequency(r.Value)
	return size+r.Radius+4*0x1p-53*size < 1
}

// NotStableError says that an answer exists only of a stable loop.
type NotStableError struct {
	Call      string
	Stability Stability
}

func (e *NotStableError) Error() string {
	return fmt.Sprintf("%s: the loop is %s", e.Call, e.Stability)
}

// requireStable returns a [*NotStableError] unless the loop is proven stable inside.
func (l Loop) requireStable(call string) error {
	s, err := l.InternalStability()
	if err == nil && s.Stable != poly.Holds {
		err = &NotStableError{Call: call, Stability: s}
	}
	return err
}
