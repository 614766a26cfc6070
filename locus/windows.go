package locus

import (
	"math/big"
	"slices"

	"github.com/polewright/polewright/internal/exact"
)

// Windows returns all real gains with every root strictly inside r, fixed roots included, as
// open intervals, disjoint and ascending. Ends are rounded to nearest; a window that holds no
// float64 between its rounded ends is dropped. A gain at which a root touches the boundary
// from inside, or at which the leading coefficient vanishes, splits a window in two. A family
// without roots has them inside everywhere.
//
// What is returned is proven for the polynomials as given. It is a statement about the model:
// before a gain from it drives a machine, try it with limits, guards and an emergency stop.
//
// The error is a [*poly.ArgumentError] for an invalid region, and an [*UndecidedError] where
// arithmetic cannot tell.
func (f Family) Windows(r Region) ([]Window, error) {
	const call = "locus.Family.Windows"
	if err := f.valid(call); err != nil {
		return nil, err
	}
	parts, err := simpleRegions(call, r)
	if err != nil {
		return nil, err
	}
	// In float64 first, each region by itself; what is not proven there is left to exact
	// arithmetic.
	answer, first := []Window(nil), true
	var left []constraint
	for _, one := range parts {
		some, ok := f.windowsFloat(one)
		switch {
		case !ok:
			constraints, err := constraintsOf(call, one)
			if err != nil {
				return nil, err
			}
			left = append(left, constraints...)
			continue
		case first:
			answer, first = some, false
		default:
			answer = intersect(answer, some)
		}
		if len(answer) == 0 {
			return nil, nil
		}
	}
	if len(left) == 0 && !first {
		return answer, nil
	}
	exactly, err := f.reduced().windows(call, left)
	if err != nil || first {
		return exactly, err
	}
	return intersect(answer, exactly), nil
}

func (r reduced) windows(call string, parts []constraint) ([]Window, error) {
	answer := []Window{everything}
	for _, on := range parts {
		if c, err := on.count(call, r.common); err != nil {
			return nil, err
		} else if c.Inside < r.common.Degree() {
			return nil, nil
		}
		some, err := r.windowsOf(call, on)
		if err != nil {
			return nil, err
		}
		if answer = intersect(answer, some); len(answer) == 0 {
			return nil, nil
		}
	}
	return answer, nil
}

func (r reduced) windowsOf(call string, on constraint) ([]Window, error) {
	gains, err := r.critical(call, on)
	if err != nil {
		return nil, err
	}
	var windows []Window
	for i := 0; i <= len(gains); i++ {
		w, lo, hi := gap(gains, i)
		if w.Lo >= w.Hi {
			continue
		}
		p := r.at(between(lo, hi))
		c, err := on.count(call, p)
		if err != nil {
			return nil, err
		}
		if c.Inside == p.Degree() {
			windows = append(windows, w)
		}
	}
	return windows, nil
}

// gap returns the interval below the i-th of ascending gains, with its ends, nil if infinite.
func gap(gains []*big.Float, i int) (w Window, lo, hi *big.Float) {
	w = everything
	if i > 0 {
		lo = gains[i-1]
		w.Lo = toFloat(lo)
	}
	if i < len(gains) {
		hi = gains[i]
		w.Hi = toFloat(hi)
	}
	return w, lo, hi
}

// between returns a short number well inside (lo, hi); nil is infinity.
func between(lo, hi *big.Float) exact.Dyadic {
	switch {
	case lo == nil && hi == nil:
		return one
	case lo == nil && hi.Sign() > 0, hi == nil && lo.Sign() < 0:
		return zero
	case lo == nil:
		return beyond(hi).Neg()
	case hi == nil:
		return beyond(lo)
	}
	middle := newFloat(256).Add(lo, hi)
	middle.Quo(middle, newFloat(2).SetInt64(2))
	quarter := newFloat(64).Sub(hi, lo)
	quarter.Quo(quarter, newFloat(3).SetInt64(4))
	for bits := uint(1); ; bits++ {
		x := newFloat(bits).Set(middle)
		d := newFloat(256).Sub(x, middle)
		if d.Abs(d).Cmp(quarter) <= 0 {
			return dyadic(x)
		}
	}
}

// beyond returns a power of two at least twice as large as |x|, 1 for 0.
func beyond(x *big.Float) exact.Dyadic {
	if x.Sign() == 0 {
		return one
	}
	return exact.PowerOfTwo(exponent(x) + 1)
}

// critical returns the gains at which the number of moving roots strictly inside can change,
// ascending and different.
func (r reduced) critical(call string, on constraint) ([]*big.Float, error) {
	list, _, err := on.contacts(call, r)
	if err != nil {
		return nil, err
	}
	var gains []*big.Float
	for _, c := range list {
		gains = append(gains, c.gain)
	}
	if k, ok := r.drop(); ok {
		gains = append(gains, k)
	}
	return mergeGains(gains, []constraint{on}), nil
}

// mergeGains sorts gains and drops repeated ones.
func mergeGains(gains []*big.Float, parts []constraint) []*big.Float {
	same := func(a, b *big.Float) bool { return a.Cmp(b) == 0 }
	for _, on := range parts {
		if _, ok := on.(userRegion); ok {
			same = sameGain
		}
	}
	slices.SortFunc(gains, (*big.Float).Cmp)
	return slices.CompactFunc(gains, same)
}

// sameGain tells whether two gains at points of curves that are rounded to float64 may be the
// same, such as those of a conjugate pair.
func sameGain(a, b *big.Float) bool {
	d := newFloat(128).Sub(a, b)
	return exponent(d) < max(exponent(a), exponent(b))-42
}

// drop returns the finite gain at which a root passes through infinity.
func (r reduced) drop() (*big.Float, bool) {
	n, m := r.a.Degree(), r.b.Degree()
	switch {
	case m > n:
		return newFloat(64), true
	case m < n:
		return nil, false
	}
	k := newFloat(128).Quo(round(r.a.Coefficient(n), 192), round(r.b.Coefficient(m), 192))
	return k.Neg(k), true
}
