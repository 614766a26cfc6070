package tf

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// stableWithDeadTime decides stability by walking along the axis of dead time from 0 to the
// value that the loop has. c counts the roots without dead time.
//
// Method: a root reaches the imaginary axis only at a gain crossover of the rational part,
// at the dead times (θ + 2πk)/ω with θ = arg(-L) in [0, 2π) there; at each a pair enters the
// right half-plane where |L| falls with ω and leaves it where |L| rises (K. Walton and J. E.
// Marshall, Direct method for TDS stability analysis, IEE Proc. D 134 (1987) 101–107). For
// |L(j∞)| ≥ 1 an infinite chain of roots lies right of the axis, or tends to it.
func (a *axisForm) stableWithDeadTime(c halfPlaneCount) poly.Verdict {
	if a.gainAtInfinityReaches1() {
		return poly.Fails
	}
	if a.characteristicVanishesAtZero() {
		return poly.Fails
	}
	rational := *a
	rational.deadTime = 0
	crossings, ok := rational.directedCrossings()
	if !ok {
		return poly.Undecided
	}
	right := c.right
	if c.right+c.axis > 0 && c.axis > 0 {
		// Pairs on the axis without dead time leave it at once; each is a crossing with θ = 0,
		// counted below.
		n := 0
		for _, x := range crossings {
			if x.margin == 0 {
				n += 2
			}
		}
		if n != c.axis {
			return poly.Undecided // a multiple pair
		}
	}
	for _, x := range crossings {
		theta := x.margin
		if theta < 0 {
			theta += 2 * math.Pi
		}
		turn := x.frequency * a.deadTime
		// Passed dead times: θ + 2πk < turn, k ≥ 0; θ = 0 is passed with k = 0.
		k := (turn - theta) / (2 * math.Pi)
		doubt := 1e-10 * (1 + turn) // more than the errors of θ and turn
		if nearest := math.Round(k); math.Abs(k-nearest)*2*math.Pi < doubt && nearest >= 0 && !(nearest == 0 && x.margin == 0) {
			return poly.Undecided // a root on the axis, as far as can be seen
		}
		if k < 0 {
			continue
		}
		passed := int(math.Floor(k)) + 1
		if x.touches {
			continue
		}
		if x.falling {
			right += 2 * passed
		} else {
			if x.margin == 0 {
				passed-- // it left for the left half-plane and was never counted
			}
			right -= 2 * passed
		}
	}
	switch {
	case right > 0:
		return poly.Fails
	case right == 0:
		return poly.Holds
	}
	return poly.Undecided
}

// gainAtInfinityReaches1 tells whether |g(j∞)| ≥ 1, exactly.
func (a *axisForm) gainAtInfinityReaches1() bool {
	n, d := a.numerator.Degree(), a.denominator.Degree()
	if n != d {
		return n > d
	}
	x, y := math.Abs(a.numerator.Coefficient(n)), math.Abs(a.denominator.Coefficient(d))
	if math.Abs(x-y) > 0x1p-50*y {
		return x > y
	}
	p, q := exactPoly(a.numerator), exactPoly(a.denominator)
	return p.Coefficient(n).Sub(q.Coefficient(d)).Sign()*p.LeadSign() >= 0 && p.LeadSign() == q.LeadSign() ||
		p.LeadSign() != q.LeadSign() && p.Coefficient(n).Add(q.Coefficient(d)).Sign()*p.LeadSign() >= 0
}

// characteristicVanishesAtZero tells whether N(0) + D(0) = 0: then 0 is a closed-loop pole
// whatever the dead time.
func (a *axisForm) characteristicVanishesAtZero() bool {
	x, y := a.numerator.Coefficient(0), a.denominator.Coefficient(0)
	if math.Abs(x+y) > 0x1p-50*math.Abs(x) {
		return false
	}
	return exactPoly(a.numerator).Coefficient(0).Add(exactPoly(a.denominator).Coefficient(0)).Sign() == 0
}

// commonOnAxis tells whether N and D share a root on the axis.
func (e *exactAxis) commonOnAxis() bool {
	return e.common.Degree() > 0 && countBoundary(e.common) > 0
}

// A directedCrossing is a gain crossover with the direction of |g|.
type directedCrossing struct {
	frequency, margin float64
	falling, touches  bool
}

// directedCrossings returns the gain crossovers with the direction of |g| at each.
func (a *axisForm) directedCrossings() ([]directedCrossing, bool) {
	list, ok := a.gainCrossoversFast()
	var found []directedCrossing
	if ok {
		// All roots of |N|² - |D|² are simple: directions alternate, and after the last |g| is
		// below 1, since |g(∞)| < 1.
		for i, c := range list {
			found = append(found, directedCrossing{c.Frequency, c.Margin, (len(list)-i)&1 == 1, false})
		}
		return found, true
	}
	e := a.exactly()
	g := e.nn.Sub(e.dd)
	if g.IsZero() {
		return nil, false
	}
	g, _ = g.StripZero()
	for _, f := range g.SquareFree() {
		for _, x := range positiveRoots(f.Poly) {
			p := e.at(x)
			re, im := p.minusProduct()
			m := math.Atan2(im, re)
			if m <= -math.Pi {
				m = math.Pi
			}
			found = append(found, directedCrossing{e.a.frequencyOf(p.v), m, false, f.Multiplicity&1 == 0})
		}
	}
	sortBy(found, func(c directedCrossing) float64 { return c.frequency })
	falling := true
	for i := len(found) - 1; i >= 0; i-- {
		if !found[i].touches {
			found[i].falling = falling
			falling = !falling
		}
	}
	return found, true
}
