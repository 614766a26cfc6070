package locus

import (
	"math/big"
	"slices"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// An UndecidedError says that a question could not be settled within the bounds on work.
type UndecidedError struct {
	Call string // the method
	What string // what is undecided
}

func (e *UndecidedError) Error() string { return e.Call + ": undecided: " + e.What }

// A contact is a point of a boundary through which a moving root passes, or which it touches,
// at a finite gain.
type contact struct {
	x    *big.Float // the parameter of the curve; nil if the gain is 0
	gain *big.Float // known to 64 bits at least
	real bool       // the point is on the real axis, otherwise it stands for a conjugate pair
	even bool       // the condition for a real gain does not change its sign: a touch
}

// contacts returns the contacts of the moving roots with a boundary, in no order. whole tells
// that the boundary belongs to the locus; then the contacts are those with extreme gains.
func (r reduced) contacts(call string, on boundary) (list []contact, whole bool, err error) {
	if r.degree() < 1 {
		return nil, false, nil
	}
	reA, imA := on.split(r.a)
	reB, imB := on.split(r.b)
	lo, hi := on.interval()
	h := on.under()
	value := ratio{
		num: reA.Mul(reB).Add(h.Mul(imA).Mul(imB)).Neg(),
		den: reB.Mul(reB).Add(h.Mul(imB).Mul(imB)),
	}
	for _, x := range on.real() {
		switch a, b := reA.At(x), reB.At(x); {
		case b.Sign() == 0: // the gain is infinite
		case a.Sign() == 0:
			list = append(list, contact{gain: newFloat(64), real: true})
		default:
			k := newFloat(128).Quo(round(a, 192), round(b, 192))
			list = append(list, contact{x: round(x, 192), gain: k.Neg(k), real: true})
		}
	}
	w := imA.Mul(reB).Sub(reA.Mul(imB))
	if whole = w.IsZero(); whole {
		// The gain along the curve is the rational function value; its range ends at the
		// stationary values.
		g := exact.GCD(value.num, value.den)
		value = ratio{over(value.num, g), over(value.den, g)}
		w = value.num.Derivative().Mul(value.den).Sub(value.num.Mul(value.den.Derivative()))
	}
	// Roots of A on the curve have gain 0, roots of B infinite gain. Both are found exactly
	// and taken out, so that what is left has finite gains other than 0.
	zeroA, zeroB := exact.GCD(reA, imA), exact.GCD(reB, imB)
	if whole {
		zeroA, zeroB = value.num, value.den
	}
	if zeroA.Degree() > 0 {
		if n, _ := zeroA.CountReal(lo, hi, exact.Open); n > 0 {
			list = append(list, contact{gain: newFloat(64)})
		}
	}
	for _, factor := range w.SquareFree() {
		f := without(without(factor.Poly, zeroA), zeroB)
		for _, root := range f.Isolate(lo, hi, exact.Open) {
			c := contact{even: factor.Multiplicity%2 == 0}
			if c.x, c.gain, err = value.atRoot(call, f, root); err != nil {
				return nil, whole, err
			}
			list = append(list, c)
		}
	}
	return list, whole, nil
}

// without returns the factor of the square-free p that has no root in common with q.
func without(p, q exact.Poly) exact.Poly {
	if g := exact.GCD(p, q); g.Degree() > 0 {
		return over(p, g)
	}
	return p
}

// A ratio is the rational function num/den.
type ratio struct{ num, den exact.Poly }

// atRoot returns the isolated root of f and the value there, which is neither 0 nor infinite,
// to 64 bits at least.
func (q ratio) atRoot(call string, f exact.Poly, root exact.Isolated) (x, value *big.Float, err error) {
	for bits := uint(192); bits <= maxBits; bits *= 2 {
		x = refine(f, root, bits)
		num, en := evaluate(q.num, x, bits)
		den, ed := evaluate(q.den, x, bits)
		if relativeBits(num, en, q.num.Degree(), bits) > 66 && relativeBits(den, ed, q.den.Degree(), bits) > 66 {
			return x, newFloat(128).Quo(num, den), nil
		}
	}
	return nil, nil, &UndecidedError{Call: call, What: "a gain too small or too large in relation to the coefficients"}
}

// critical returns the gains at which the number of moving roots strictly inside can change,
// ascending and different.
func (r reduced) critical(call string, on boundary) ([]*big.Float, error) {
	list, _, err := r.contacts(call, on)
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
	slices.SortFunc(gains, (*big.Float).Cmp)
	return slices.CompactFunc(gains, func(a, b *big.Float) bool { return a.Cmp(b) == 0 }), nil
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
	parts, err := partsOf(call, r)
	if err != nil {
		return nil, err
	}
	return f.reduced().windows(call, parts)
}

func (r reduced) windows(call string, parts []boundary) ([]Window, error) {
	answer := []Window{everything}
	for _, on := range parts {
		if !on.holds(r.common) {
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

func (r reduced) windowsOf(call string, on boundary) ([]Window, error) {
	gains, err := r.critical(call, on)
	if err != nil {
		return nil, err
	}
	var windows []Window
	for i := 0; i <= len(gains); i++ {
		w := everything
		var lo, hi *big.Float
		if i > 0 {
			lo = gains[i-1]
			w.Lo = toFloat(lo)
		}
		if i < len(gains) {
			hi = gains[i]
			w.Hi = toFloat(hi)
		}
		if w.Lo < w.Hi && on.holds(r.at(between(lo, hi))) {
			windows = append(windows, w)
		}
	}
	return windows, nil
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
	parts, err := partsOf(call, r)
	if err != nil {
		return nil, err
	}
	moving := f.reduced()
	var crossings []Crossing
	for i, on := range parts {
		list, whole, err := moving.contacts(call, on)
		if err != nil {
			return nil, err
		}
		if whole {
			return nil, &BoundaryOnLocusError{Region: r}
		}
		for _, c := range list {
			if c.gain.Sign() == 0 {
				continue
			}
			s := on.point(c.x, 192)
			inside := true
			for j, other := range parts {
				inside = inside && (i == j || other.side(s) >= 0)
			}
			if !inside {
				continue
			}
			k, at, touch := toFloat(c.gain), complex(toFloat(s.re), toFloat(s.im)), poly.Fails
			if c.even {
				touch = poly.Holds
			}
			if c.real {
				at = complex(real(at), 0)
			} else {
				crossings = append(crossings, Crossing{complex(real(at), -imag(at)), k, touch})
			}
			crossings = append(crossings, Crossing{at, k, touch})
		}
	}
	slices.SortFunc(crossings, compareCrossings)
	// A corner of an intersection lies on two pieces.
	return slices.CompactFunc(crossings, func(a, b Crossing) bool { return a.S == b.S && a.Gain == b.Gain }), nil
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
