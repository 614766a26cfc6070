package tf

import (
	"math"
	"math/cmplx"
	"slices"

	"github.com/polewright/polewright/poly"
)

// Section is a factor of second order, (n₀s² + n₁s + n₂)/(d₀s² + d₁s + d₂), or the same in z.
// Leading coefficients are 0 where the factor has fewer roots: a section of first order has
// d₀ = 0 and d₁ = 1.
type Section struct {
	Numerator, Denominator [3]float64 // highest power first
}

// Sections returns the function as gain·∏ sections, whose polynomials are monic: no more
// sections than it takes, real roots in pairs, each pair of poles with the zeros nearest to
// it, the poles nearest to the boundary of stability last. So programs compute filters: the rounding of
// one coefficient moves the roots of its section only, where in one long polynomial it would
// move all of them. Dead time is not in the sections: of a function of z it is, as poles at 0.
// The error is that of [Function.Poles] and [Function.Zeros]; the gain is 0 for the zero function.
func (g Function) Sections() (gain float64, sections []Section, err error) {
	if g.err != nil {
		return math.NaN(), nil, g.err
	}
	g, err = g.atNoDelay()
	if err != nil {
		return math.NaN(), nil, err
	}
	poles, err := factorsOfRoots(g.denominator)
	if err != nil {
		return math.NaN(), nil, err
	}
	var zeros []rootFactor
	if g.numerator.Degree() >= 0 {
		if zeros, err = factorsOfRoots(g.numerator); err != nil {
			return math.NaN(), nil, err
		}
		gain = coefficientRatio(g.numerator, g.numerator.Degree(), g.denominator, g.denominator.Degree())
	}
	// The poles nearest to the boundary choose their zeros first.
	boundary := func(r rootFactor) float64 {
		if g.period > 0 {
			return math.Abs(1 - cmplx.Abs(r.at))
		}
		return math.Abs(real(r.at))
	}
	slices.SortStableFunc(poles, func(a, b rootFactor) int {
		if a.degree != b.degree { // a single pole last of all, where only a single zero may be left
			return b.degree - a.degree
		}
		switch x, y := boundary(a), boundary(b); {
		case x < y:
			return -1
		case x > y:
			return 1
		}
		return 0
	})
	for len(poles) > 0 || len(zeros) > 0 {
		pole := rootFactor{coefficients: [3]float64{0, 0, 1}}
		if len(poles) > 0 {
			pole, poles = poles[0], poles[1:]
		}
		// A pair of zeros that no later pair of poles can take must be taken now.
		pairsOfZeros, pairsOfPoles := pairs(zeros), pairs(poles)
		best := -1
		for i, z := range zeros {
			if pole.degree == 2 && pairsOfZeros > pairsOfPoles && z.degree < 2 {
				continue
			}
			if best < 0 || cmplx.Abs(z.at-pole.at) < cmplx.Abs(zeros[best].at-pole.at) {
				best = i
			}
		}
		zero := rootFactor{coefficients: [3]float64{0, 0, 1}}
		if best >= 0 {
			zero = zeros[best]
			zeros = slices.Delete(zeros, best, best+1)
		}
		sections = append(sections, Section{Numerator: zero.coefficients, Denominator: pole.coefficients})
	}
	slices.Reverse(sections)
	return gain, sections, nil
}

// pairs counts the factors of degree 2.
func pairs(list []rootFactor) int {
	n := 0
	for _, f := range list {
		if f.degree == 2 {
			n++
		}
	}
	return n
}

// rootFactor is a monic factor with one or two roots.
type rootFactor struct {
	coefficients [3]float64
	degree       int
	at           complex128 // one of its roots
}

// factorsOfRoots splits a polynomial into factors of second order, one of first order if
// the degree is odd. Real roots pair up as they are sorted, so that pairs lie together.
func factorsOfRoots(p poly.Poly) ([]rootFactor, error) {
	roots, err := p.Roots()
	if err != nil {
		return nil, err
	}
	var list []rootFactor
	var reals []float64
	for _, r := range roots {
		for range r.Multiplicity {
			re, im := real(r.Value), imag(r.Value)
			switch {
			case im > 0:
				list = append(list, rootFactor{coefficients: [3]float64{1, -2 * re, math.FMA(re, re, float64(im*im))}, degree: 2, at: r.Value})
			case im == 0:
				reals = append(reals, re)
			}
		}
	}
	for ; len(reals) > 1; reals = reals[2:] {
		a, b := reals[0], reals[1]
		list = append(list, rootFactor{coefficients: [3]float64{1, -(a + b), a * b}, degree: 2, at: complex(b, 0)})
	}
	if len(reals) == 1 {
		list = append(list, rootFactor{coefficients: [3]float64{0, 1, -reals[0]}, degree: 1, at: complex(reals[0], 0)})
	}
	return list, nil
}
