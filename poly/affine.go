package poly

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/internal/exact"
)

// Affine returns p(a·s + b), exactly: stretched and shifted. Given roots stay where those of the
// result are float64s. The result is invalid, with a [*ArgumentError], if a or b is not finite.
func (p Poly) Affine(a, b float64) Poly {
	const call = "poly.Poly.Affine"
	if p.err != nil {
		return invalid(p.err)
	}
	for _, x := range [...]struct {
		name  string
		value float64
	}{{"a", a}, {"b", b}} {
		if math.IsNaN(x.value) || math.IsInf(x.value, 0) {
			return invalid(&ArgumentError{Call: call, Argument: x.name, Reason: fmt.Sprintf("%v is not a finite number", x.value)})
		}
	}
	q := fromInteger(p.integers().Affine(exact.Float(a), exact.Float(b)))
	if a != 0 {
		q.given = movedRoots(p.given, a, b)
	}
	return q
}

// Shift returns p(s + b), exactly: the roots move by -b. See [Poly.Affine].
func (p Poly) Shift(b float64) Poly { return p.Affine(1, b) }

// Stretch returns p(a·s), exactly: the roots are divided by a. See [Poly.Affine].
func (p Poly) Stretch(a float64) Poly { return p.Affine(a, 0) }

// movedRoots returns (s - b)/a for all given roots s, or nil if one of them has to be rounded.
func movedRoots(given []complex128, a, b float64) []complex128 {
	if len(given) == 0 {
		return nil
	}
	moved := make([]complex128, len(given))
	for i, s := range given {
		re, lost := twoSum(real(s), -b)
		x, okX := divided(re, a)
		y, okY := divided(imag(s), a)
		if lost != 0 || !okX || !okY {
			return nil
		}
		moved[i] = complex(x, y)
	}
	return moved
}

// divided returns x/a and whether that is exact.
func divided(x, a float64) (float64, bool) {
	if x == 0 {
		return 0, true
	}
	q := x / a
	if q == 0 || math.IsInf(q, 0) {
		return 0, false
	}
	product, lost := twoProduct(q, a)
	return q, product == x && lost == 0
}

// Reverse returns sⁿ·p(1/s), n the degree: the coefficients in the opposite order. Roots at 0 are
// lost, those elsewhere become their inverses.
func (p Poly) Reverse() Poly {
	if p.err != nil {
		return invalid(p.err)
	}
	return fromInteger(p.integers().Reverse())
}
