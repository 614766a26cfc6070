package tf

import (
	"math"
	"math/cmplx"
	"slices"

	"github.com/polewright/polewright/poly"
)

// A Cancellation is a zero and a pole that were, or would be, taken out against each other.
type Cancellation struct {
	Zero, Pole   complex128 // equal in an exact cancellation
	Multiplicity int        // how often
}

// Cancel returns the function without the factors that numerator and denominator have in
// common, and what went: exactly common factors, proven, however close other roots are. Roots
// that were given stay given.
func (g Function) Cancel() (Function, []Cancellation, error) {
	if g.err != nil {
		return g, nil, g.err
	}
	g = g.filled()
	if g.numerator.Degree() < 0 {
		return g.cancelZero()
	}
	common, err := g.numerator.CommonFactor(g.denominator, 0)
	if err != nil {
		f, err := invalid(err)
		return f, nil, err
	}
	if common.Degree() <= 0 {
		return g, nil, nil
	}
	roots, err := common.Roots()
	if err != nil {
		f, err := invalid(err)
		return f, nil, err
	}
	removed := make([]Cancellation, len(roots))
	for i, r := range roots {
		removed[i] = Cancellation{Zero: r.Value, Pole: r.Value, Multiplicity: r.Multiplicity}
	}
	if zeros, poles, ok := g.givenRoots(); ok {
		zeros, poles = withoutCommon(zeros, poles)
		return g.withRoots(zeros, poles, removed)
	}
	for _, p := range []*poly.Poly{&g.numerator, &g.denominator} {
		d, err := p.Divide(common)
		if err == nil && !d.Exact {
			// The factor times a whole number may be what divides; scale by the lead once more.
			lead, e := common.Integers()
			scaled := *p
			if c := poly.FromIntegers(lead[len(lead)-1:], e); c.Degree() == 0 {
				scaled = p.Mul(c.Power(p.Degree() - common.Degree() + 1))
			}
			d, err = scaled.Divide(common)
		}
		if err != nil {
			f, err := invalid(err)
			return f, nil, err
		}
		*p = d.Quotient
	}
	return g, removed, nil
}

// cancelZero takes all poles from the zero function.
func (g Function) cancelZero() (Function, []Cancellation, error) {
	roots, err := g.denominator.Roots()
	if err != nil {
		f, err := invalid(err)
		return f, nil, err
	}
	var removed []Cancellation
	for _, r := range roots {
		removed = append(removed, Cancellation{Zero: r.Value, Pole: r.Value, Multiplicity: r.Multiplicity})
	}
	g.denominator = one
	return g, removed, nil
}

// CancelWithin returns the function without zeros and poles that lie within a distance of
// tolerance·max(|zero|, |pole|) of each other, nearest pairs first, and what went. Conjugates
// go together. Roots at exactly the same place go too. The result is made of float64 roots;
// its gain far above all roots is that of g. What was removed is part of the machine still:
// look at the list before using the result. The error is a [*poly.ArgumentError] if tolerance
// is not in [0, 1), or that of [poly.Poly.Roots].
func (g Function) CancelWithin(tolerance float64) (Function, []Cancellation, error) {
	const call = "tf.Function.CancelWithin"
	if g.err != nil {
		return g, nil, g.err
	}
	fail := func(err error) (Function, []Cancellation, error) {
		f, err := invalid(err)
		return f, nil, err
	}
	if !(tolerance >= 0 && tolerance < 1) {
		return fail(badArgument(call, "tolerance", "%v is not in [0, 1)", tolerance))
	}
	g = g.filled()
	if g.numerator.Degree() < 0 {
		return g.cancelZero()
	}
	zeros, err := g.numerator.Roots()
	if err != nil {
		return fail(err)
	}
	poles, err := g.denominator.Roots()
	if err != nil {
		return fail(err)
	}
	type pair struct {
		i, j     int
		distance float64
	}
	var pairs []pair
	for i, z := range zeros {
		for j, p := range poles {
			// A real root goes with a real one, an upper one with an upper one.
			if imag(z.Value) < 0 || imag(p.Value) < 0 || (imag(z.Value) == 0) != (imag(p.Value) == 0) {
				continue
			}
			size := math.Max(cmplx.Abs(z.Value), cmplx.Abs(p.Value))
			if d := cmplx.Abs(z.Value - p.Value); d <= tolerance*size {
				pairs = append(pairs, pair{i, j, d})
			}
		}
	}
	slices.SortStableFunc(pairs, func(a, b pair) int {
		switch {
		case a.distance < b.distance:
			return -1
		case a.distance > b.distance:
			return 1
		}
		return 0
	})
	left := func(roots []poly.Root) []int {
		n := make([]int, len(roots))
		for i, r := range roots {
			n[i] = r.Multiplicity
		}
		return n
	}
	zerosLeft, polesLeft := left(zeros), left(poles)
	var removed []Cancellation
	for _, q := range pairs {
		n := min(zerosLeft[q.i], polesLeft[q.j])
		if n == 0 {
			continue
		}
		zerosLeft[q.i] -= n
		polesLeft[q.j] -= n
		z, p := zeros[q.i].Value, poles[q.j].Value
		removed = append(removed, Cancellation{z, p, n})
		if imag(z) != 0 {
			removed = append(removed, Cancellation{cmplx.Conj(z), cmplx.Conj(p), n})
		}
	}
	if len(removed) == 0 {
		return g, nil, nil
	}
	return g.withRoots(expand(zeros, zerosLeft), expand(poles, polesLeft), removed)
}

// expand lists the roots that are left, with their conjugates.
func expand(roots []poly.Root, left []int) []complex128 {
	var list []complex128
	for i, r := range roots {
		if imag(r.Value) < 0 {
			continue
		}
		for range left[i] {
			list = append(list, r.Value)
			if imag(r.Value) != 0 {
				list = append(list, cmplx.Conj(r.Value))
			}
		}
	}
	return list
}

// givenRoots returns the zeros and poles if all were given.
func (g Function) givenRoots() (zeros, poles []complex128, ok bool) {
	zeros, okZeros := g.numerator.GivenRoots()
	poles, okPoles := g.denominator.GivenRoots()
	return zeros, poles, okZeros && okPoles
}

// withoutCommon takes equal numbers out of both lists.
func withoutCommon(a, b []complex128) (restA, restB []complex128) {
	count := map[complex128]int{}
	for _, x := range b {
		count[x]++
	}
	common := map[complex128]int{}
	for _, x := range a {
		if count[x] > 0 {
			count[x]--
			common[x]++
		} else {
			restA = append(restA, x)
		}
	}
	for _, x := range b {
		if common[x] > 0 {
			common[x]--
		} else {
			restB = append(restB, x)
		}
	}
	return restA, restB
}

// withRoots returns g with other roots and the leading coefficients that it has.
func (g Function) withRoots(zeros, poles []complex128, removed []Cancellation) (Function, []Cancellation, error) {
	for _, side := range []struct {
		p     *poly.Poly
		roots []complex128
	}{{&g.numerator, zeros}, {&g.denominator, poles}} {
		c, e := side.p.Integers()
		p, err := poly.FromRoots(1, side.roots...)
		if err != nil {
			f, err := invalid(err)
			return f, nil, err
		}
		*side.p = p.Mul(poly.FromIntegers(c[len(c)-1:], e))
	}
	return g, removed, nil
}
