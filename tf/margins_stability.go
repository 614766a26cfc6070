package tf

import (
	"cmp"
	"math"
	"slices"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// A halfPlaneCount tells where the roots of a polynomial in s or w lie.
type halfPlaneCount struct {
	right int // Re > 0; of a formal degree, missing leading coefficients count as roots at infinity on the boundary
	axis  int // Re = 0, and at infinity
}

// countRight counts the roots of N + D in the right half-plane and on the axis.
func (a *axisForm) countRight() halfPlaneCount {
	if a.ok {
		if right, ok := routh(a.whole, a.memory); ok {
			return halfPlaneCount{right: right}
		}
	}
	f := exactPoly(a.numerator).Add(exactPoly(a.denominator))
	c := exact.LeftOf(f, exact.Dyadic{})
	return halfPlaneCount{right: c.Outside, axis: c.Boundary + a.degree - f.Degree()}
}

// routh counts the roots with positive real part by the signs of the first column of Routh's
// table, and is ok only if every one of them is proven. The degree is that of the slice: a
// leading coefficient that may be zero is not ok.
//
// Source: F. R. Gantmacher, The Theory of Matrices, vol. 2, Chelsea 1959, chapter XV, § 3;
// bounds on the errors are carried along.
func routh(p intervalPoly, memory slab) (right int, ok bool) {
	n := len(p.c) - 1
	if n < 0 {
		return 0, false
	}
	size := n/2 + 1
	work := memory.takeZero(2 * size)
	upper := intervalPoly{work.c[:size], work.e[:size]}
	lower := intervalPoly{work.c[size:], work.e[size:]}
	for i := range size {
		if k := n - 2*i; k >= 0 {
			upper.c[i], upper.e[i] = p.c[k], p.e[k]
		}
		if k := n - 2*i - 1; k >= 0 {
			lower.c[i], lower.e[i] = p.c[k], p.e[k]
		}
	}
	last := sign(upper.c[0], upper.e[0])
	if last == 0 {
		return 0, false
	}
	for row := 1; row <= n; row++ {
		s := sign(lower.c[0], lower.e[0])
		if s == 0 {
			return 0, false
		}
		if s != last {
			right++
		}
		last = s
		if row == n {
			break
		}
		// upper := lower, lower := upper shifted - q·lower shifted.
		q := upper.c[0] / lower.c[0]
		eq := (upper.e[0] + math.Abs(q)*lower.e[0]) / (math.Abs(lower.c[0]) - lower.e[0])
		eq = (eq + unitRoundoff*math.Abs(q)) * (1 + 8*unitRoundoff)
		for i := 0; i+1 < size; i++ {
			l, el := lower.c[i+1], lower.e[i+1]
			t := float64(q * l)
			y := upper.c[i+1] - t
			e := upper.e[i+1] + eq*(math.Abs(l)+el) + math.Abs(q)*el + unitRoundoff*(math.Abs(t)+math.Abs(y))
			upper.c[i], upper.e[i] = y, e*(1+8*unitRoundoff)
		}
		upper.c[size-1], upper.e[size-1] = 0, 0
		upper, lower = lower, upper
	}
	return right, true
}

// stable tells whether all roots of N·e^(-s·deadTime) + D lie inside the region of
// stability, at a distance from its boundary.
func (a *axisForm) stable() poly.Verdict {
	if a.onBoundary > 0 {
		return poly.Fails
	}
	c := a.countRight()
	if a.deadTime == 0 {
		if c.right > 0 || c.axis > 0 {
			return poly.Fails
		}
		return poly.Holds
	}
	return a.stableWithDeadTime(c)
}

// countBoundary returns how many roots of p lie on the imaginary axis.
func countBoundary(p exact.Poly) int { return exact.LeftOf(p, exact.Dyadic{}).Boundary }

// sortBy sorts by an ascending key.
func sortBy[T any](list []T, key func(T) float64) {
	slices.SortFunc(list, func(x, y T) int { return cmp.Compare(key(x), key(y)) })
}
