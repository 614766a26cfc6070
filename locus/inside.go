package locus

import (
	"math/big"
	"strconv"

	"github.com/polewright/polewright/poly"
)

// WindowsOf returns all real gains with exactly n roots strictly inside r and none on its
// boundary, fixed roots included: with [LeftOf] and one less than the degree, the gains that
// leave one unstable root. Otherwise as [Family.Windows]. Roots that have gone to infinity
// are not inside. n is not negative.
func (f Family) WindowsOf(n int, r Region) ([]Window, error) {
	const call = "locus.Family.WindowsOf"
	if err := f.valid(call); err != nil {
		return nil, err
	}
	if n < 0 {
		return nil, &poly.ArgumentError{Call: call, Argument: "n", Reason: strconv.Itoa(n) + " roots; a number of at least 0 is wanted"}
	}
	parts, err := constraintsOf(call, r)
	if err != nil {
		return nil, err
	}
	moving := f.reduced()
	// The roots inside an intersection are not to be had from those inside its parts; so all
	// gains at which any count changes are taken together, and the roots are asked.
	var gains []*big.Float
	for _, on := range parts {
		more, err := moving.critical(call, on)
		if err != nil {
			return nil, err
		}
		gains = append(gains, more...)
	}
	gains = mergeGains(gains, parts)
	var windows []Window
	for i := 0; i <= len(gains); i++ {
		w, lo, hi := gap(gains, i)
		if w.Lo >= w.Hi {
			continue
		}
		inside, err := countInside(call, parts, moving, lo, hi)
		if err != nil {
			return nil, err
		}
		if inside == n {
			windows = append(windows, w)
		}
	}
	return windows, nil
}

// countInside returns how many roots are strictly inside all parts between two critical gains, -1
// if some are on a boundary all the time.
func countInside(call string, parts []constraint, r reduced, lo, hi *big.Float) (int, error) {
	p := r.at(between(lo, hi)).Mul(r.common)
	if len(parts) == 1 {
		c, err := parts[0].count(call, p)
		if c.Boundary > 0 {
			return -1, err
		}
		return c.Inside, err
	}
	boundary := false
	c, err := countRoots(call, p, func(root poly.Root) int {
		side := +1
		for _, part := range parts {
			at := part.around(root)
			if at < 0 {
				return -1
			}
			side = min(side, at)
		}
		if side == 0 && root.Radius == 0 {
			boundary = true
			return -1
		}
		return side
	})
	if boundary {
		return -1, err
	}
	return c.Inside, err
}

// WindowsOfAll returns the gains with every root of every family strictly inside r: one gain for
// all variants of a plant. Without families that is every gain.
func WindowsOfAll(families []Family, r Region) ([]Window, error) {
	answer := []Window{everything}
	for _, f := range families {
		some, err := f.Windows(r)
		if err != nil {
			return nil, err
		}
		if answer = intersect(answer, some); len(answer) == 0 {
			return nil, nil
		}
	}
	return answer, nil
}

// On returns the points of the locus on a curve at finite gains other than 0, by ascending gain:
// on a damping ray ([Ray] from 0), a vertical line, a circle, or any other [Curve]. The points
// of the conjugate curve are not among them. Touch tells whether the branch only touches the
// curve. If the whole curve belongs to the locus the error is a [*BoundaryOnLocusError].
func (f Family) On(c Curve) ([]Crossing, error) {
	const call = "locus.Family.On"
	if err := f.valid(call); err != nil {
		return nil, err
	}
	list, whole, err := c.contacts(call, f.reduced())
	if err != nil {
		return nil, err
	}
	if whole {
		return nil, &BoundaryOnLocusError{}
	}
	return sortedCrossings(snapReal(list)), nil
}
