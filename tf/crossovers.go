package tf

import "math"

// A Crossover is a frequency at which an open loop crosses the unit circle (a gain
// crossover) or the negative real axis (a phase crossover).
type Crossover struct {
	Frequency float64 // rad/s
	Margin    float64 // at a gain crossover arg(-L) in (-π, π], rad; at a phase crossover -1/L, a ratio
}

// acceptMargin is the relative error of a margin up to which the float64 stage is believed.
const acceptMargin = 2e-11

// gainCrossovers returns every v > 0 with |g| = 1.
func (a *axisForm) gainCrossovers() ([]Crossover, error) {
	if found, ok := a.gainCrossoversFast(); ok {
		return found, nil
	}
	return a.exactly().gainCrossovers()
}

func (a *axisForm) gainCurve(memory *slab) intervalPoly {
	g := memory.takeZero(len(a.nn.c))
	g.add(max(a.weight, 1), a.nn)
	g.add(-1, a.dd)
	return g
}

func (a *axisForm) gainCrossoversFast() (found []Crossover, ok bool) {
	if !a.ok {
		return nil, false
	}
	memory := a.memory // a copy: what this question takes is free again after it
	g := a.gainCurve(&memory)
	if a.period != 0 && sign(g.c[a.degree], g.e[a.degree]) == 0 {
		return nil, false // |g| may be 1 at half the sampling frequency
	}
	brackets, ok := g.positiveRoots(memory)
	if !ok {
		return nil, false
	}
	for _, b := range brackets {
		r, ok := a.refine(b, gainCurve, g)
		if ok {
			if m, ok := a.phaseMargin(r); ok {
				found = append(found, Crossover{a.frequency(r.x), m})
				continue
			}
		}
		q, ok := a.precisely().refine(b, r.x, gainCurve)
		if !ok || magnitude(q.dd()) < magnitude(q.dd0())-preciseBits/2 {
			return nil, false // not simple, or a common root on the axis
		}
		m := a.turnBack(q.point())
		if m == 0 || math.Abs(m) == math.Pi {
			return nil, false
		}
		found = append(found, Crossover{a.frequencyOf(q.point().v), m})
	}
	return found, true
}

// phaseMargin returns arg(-g) at a root where |g| = 1, dead time included.
func (a *axisForm) phaseMargin(r axisRoot) (float64, bool) {
	p := a.at(r.x)
	n, d, re, im := p.nn(), p.dd(), p.re(), p.im()
	v := math.Sqrt(r.x)
	size := math.Sqrt(n.v) * math.Sqrt(d.v)
	if !(d.e < 0x1p-20*d.v) || !(n.e < 0x1p-20*n.v) { // a common root on the axis, perhaps
		return 0, false
	}
	m := math.Atan2(-v*im.v, -re.v)
	// d arg/dx; the factor pays for the change of slope within the error of the root.
	slope := 2 * math.Abs((re.v/size)*((v*im.slope+im.v/(2*v))/size)-(v*im.v/size)*(re.slope/size))
	e := (re.e+v*im.e)/size + slope*r.x*r.err + 4*unitRoundoff*math.Abs(m)
	if math.Pi-math.Abs(m) <= e {
		if a.deadTime == 0 {
			return 0, false
		}
	}
	if a.deadTime > 0 {
		turn := v * a.unit * a.deadTime
		m = wrap(m - turn)
		e += turn * (r.err + 4*unitRoundoff)
		if turn > 100 {
			return 0, false // the reduction of a large angle wants more digits
		}
	}
	return m, e <= acceptMargin*math.Abs(m)
}

// gainMargin returns -1/g at a root where g is real, or its negative where g is positive.
func (a *axisForm) gainMargin(r axisRoot) (float64, bool) {
	p := a.at(r.x)
	n, d, re := p.nn(), p.dd(), p.re()
	moved := math.Abs(re.slope) * r.x * r.err
	if sign(re.v, 4*(re.e+moved)) == 0 {
		return 0, false // a pole or a zero on the axis, perhaps
	}
	m := math.Sqrt(d.v / n.v)
	e := (d.e+math.Abs(d.slope)*r.x*r.err)/d.v + (n.e+math.Abs(n.slope)*r.x*r.err)/n.v
	if re.v > 0 {
		return -m, true
	}
	return m, e <= acceptMargin && !math.IsInf(m, 0) && m != 0
}

// wrap brings an angle into (-π, π].
func wrap(angle float64) float64 {
	if angle > -math.Pi && angle <= math.Pi {
		return angle
	}
	angle = math.Remainder(angle, 2*math.Pi)
	if angle <= -math.Pi {
		angle = math.Pi
	}
	return angle
}

// phaseCrossovers returns every v > 0 with g real and negative, dead time left out.
func (a *axisForm) phaseCrossovers() ([]Crossover, error) {
	if found, ok := a.phaseCrossoversFast(); ok {
		return found, nil
	}
	if found, ok := a.phaseCrossoversOfPeriods(); ok {
		return found, nil
	}
	return a.exactly().phaseCrossovers()
}

func (a *axisForm) phaseCrossoversFast() (found []Crossover, ok bool) {
	if !a.ok {
		return nil, false
	}
	brackets, ok := a.im.positiveRoots(a.memory)
	if !ok {
		return nil, false
	}
	for _, b := range brackets {
		r, ok := a.refine(b, phaseCurve, a.im)
		if ok {
			m, ok := a.gainMargin(r)
			if ok {
				if m > 0 {
					found = append(found, Crossover{a.frequency(r.x), m})
				}
				continue
			}
		}
		q, ok := a.precisely().refine(b, r.x, phaseCurve)
		if !ok || magnitude(q.dd()) < magnitude(q.dd0())-preciseBits/2 || magnitude(q.nn()) < magnitude(q.nn0())-preciseBits/2 {
			return nil, false // not simple, or a pole or a zero on the axis
		}
		if q.re().Sign() < 0 {
			p := q.point()
			found = append(found, Crossover{a.frequencyOf(p.v), p.ratio()})
		}
	}
	if a.period != 0 {
		if m := a.marginAtInfinity(); m > 0 {
			found = append(found, Crossover{math.Pi / a.period, m})
		}
	}
	return found, true
}

// marginAtInfinity returns -1/g at v = ∞ where that is finite and positive, otherwise 0.
func (a *axisForm) marginAtInfinity() float64 {
	k := a.numerator.Degree()
	if k < 0 || k != a.denominator.Degree() {
		return 0
	}
	return max(0, -a.denominator.Coefficient(k)/a.numerator.Coefficient(k))
}

// marginAtZero returns -1/g at v = 0 where that is finite and positive, otherwise 0.
func (a *axisForm) marginAtZero() float64 {
	for k := range a.numerator.Degree() + 1 {
		n, d := a.numerator.Coefficient(k), a.denominator.Coefficient(k)
		if n != 0 && d != 0 {
			return max(0, -d/n)
		}
		if n != 0 || d != 0 {
			break
		}
	}
	return 0
}
