package tf

import "math"

// A root is a positive root x of a polynomial, with a bound on its relative error.
type axisRoot struct{ x, err float64 }

// The curves whose roots are looked for.
type curve int

const (
	gainCurve          curve = iota // |N|² - |D|²
	phaseCurve                      // Im N·conj D / v
	sensitivityCurve                // numerator of the derivative of |F|²/|D|²
	complementaryCurve              // of |F|²/|N|²
	resonanceCurve                  // of |N|²/|D|²
)

// acceptRoot is the relative error of x up to which the float64 stage is believed.
const acceptRoot = 4e-12

// value returns the curve at x, with a bound, from the halves of N and D: where |D|² nearly
// vanishes beside a light resonance this loses half as many digits as the coefficients of |D|² do.
// The slopes of the last three are left out.
func (c curve) value(p axisPoint) halfValue {
	switch c {
	case gainCurve:
		n, d := p.nn(), p.dd()
		if w := p.a.weight; w > 0 {
			n.v, n.e, n.slope = n.v*w, n.e*w, n.slope*w
		}
		g := n.v - d.v
		return halfValue{valueBound{g, (n.e + d.e + unitRoundoff*math.Abs(g)) * (1 + 4*unitRoundoff)}, n.slope - d.slope}
	case phaseCurve:
		return p.im()
	}
	m, d := p.nn(), p.dd()
	if c != resonanceCurve {
		// |F|² = |N|² + 2·Re N·conj D + |D|², and what |F|² and the denominator have in common
		// drops out of the derivative.
		r := p.re()
		if c == complementaryCurve {
			m, d = d, m
		}
		e := m.e + 2*r.e + 2*unitRoundoff*(m.v+2*math.Abs(r.v))
		m = halfValue{valueBound{m.v + 2*r.v, e * (1 + 4*unitRoundoff)}, m.slope + 2*r.slope}
	}
	// The slopes carry errors of the same relative size as the values, which the factor
	// pays for; what it decides is checked by the change of sign.
	y := m.slope*d.v - m.v*d.slope
	e := (math.Abs(m.slope)*d.e + m.e*math.Abs(d.slope) + m.e*math.Abs(d.v)/p.x + math.Abs(m.v)*d.e/p.x) * 4
	e += 16 * unitRoundoff * (math.Abs(m.slope*d.v) + math.Abs(m.v*d.slope))
	return halfValue{valueBound: valueBound{y, e}}
}

// refine returns the root in the bracket; it is not ok if float64 does not suffice, and x is
// then only near.
//
// Method: Newton's iteration, kept inside the bracket by the sign of each proven value, so
// that what it ends on is the root that was isolated.
func (a *axisForm) refine(b bracket, c curve, expanded intervalPoly) (axisRoot, bool) {
	lo, hi, x := b.lo, b.hi, b.guess
	if !(lo < x && x < hi) {
		x = between(lo, hi)
	}
	for range 100 {
		g := c.value(a.at(x))
		if c >= sensitivityCurve {
			g.slope = expanded.evaluate(x).slope
		}
		if math.IsNaN(g.v) || math.IsNaN(g.e) {
			return axisRoot{x: x}, false
		}
		step := g.v / g.slope
		switch sign(g.v, g.e) {
		case 0:
			e := (math.Abs(g.v) + g.e) / math.Abs(g.slope) / x
			if g.v == 0 && g.e == 0 && g.slope != 0 {
				e = 0
			}
			next := x - step
			if !(e <= acceptRoot) || !(next > 0) {
				return axisRoot{x: x}, false
			}
			return axisRoot{next, 2*e + 2*unitRoundoff}, true
		case b.below:
			lo = x
		default:
			hi = x
		}
		next := x - step
		if next == x || hi-lo <= 2*unitRoundoff*lo {
			e := (math.Abs(g.v) + g.e) / math.Abs(g.slope) / x
			return axisRoot{x, 2*e + 4*unitRoundoff}, e <= acceptRoot
		}
		if !(lo < next && next < hi) {
			next = between(lo, hi)
		}
		x = next
	}
	return axisRoot{x: x}, false
}

// between returns a point well inside (lo, hi), 0 ≤ lo < hi ≤ +Inf.
func between(lo, hi float64) float64 {
	switch {
	case lo == 0 && math.IsInf(hi, 1):
		return 1
	case lo == 0:
		return hi / 16
	case math.IsInf(hi, 1):
		return lo * 16
	case hi > 4*lo:
		return math.Sqrt(lo) * math.Sqrt(hi)
	}
	return lo + (hi-lo)/2
}
