package tf

import (
	"math"
	"math/big"
	"slices"

	"github.com/polewright/polewright/internal/exact"
)

const (
	// listedDownTo is the |L| down to which phase crossovers of a loop with dead time, which
	// are infinitely many, are listed unless asked for otherwise.
	listedDownTo = 0.02
	// mostCrossovers bounds the work of a call and the length of its list.
	mostCrossovers = 20000
)

// A delayedPhase lists the phase crossovers of a function with dead time.
type delayedPhase struct {
	crossovers []Crossover
	beyond     []Crossover // those found beyond the list
	completeTo float64
	smallest   float64 // the smallest margin above 1 of all, listed or not; +Inf if none
	largest    float64 // the largest below 1, likewise; 0 if none
	last       float64 // v beyond which magnitude and phase are monotone
	tail       float64 // v of the first crossing beyond which |g| is monotone
}

// delayedPhaseCrossovers solves arg(-g) - ω·deadTime = 2πm. Between the roots of two
// polynomials, the crossings of the real axis by the rational part and the extrema of the
// whole phase, this phase is monotone and its principal value continuous, so that each
// value 2πm is taken once or not at all. upTo > 0 sets the end of the list.
func (a *axisForm) delayedPhaseCrossovers(upTo float64) (delayedPhase, error) {
	if !a.ok {
		return delayedPhase{}, &UnsupportedError{Call: "tf: phase crossovers", What: "dead time with a rational part of this order or span of coefficients"}
	}
	rational := *a
	rational.deadTime = 0
	b, err := rational.phaseBreaks(a.unit * a.deadTime)
	if err != nil {
		return delayedPhase{}, err
	}
	tau := a.deadTime * a.unit
	turn := turning{tau: tau}
	out := delayedPhase{smallest: math.Inf(1)}
	level, err := rational.lastMagnitude(listedDownTo)
	if err != nil {
		return delayedPhase{}, err
	}
	last := 0.0
	if len(b.phase) > 0 {
		last = math.Sqrt(b.phase[len(b.phase)-1])
	}
	if len(b.gain) > 0 {
		last = max(last, math.Sqrt(b.gain[len(b.gain)-1]))
	}
	out.last = last
	// From last on, magnitude and phase are monotone; two turns more hold a crossing at least.
	// The rational phase can take back less than π·degree... of a turn of the dead time, which
	// the loop below allows for by going on until a crossing is found.
	end := 0.0 // of the list, in v
	switch {
	case upTo > 0:
		end = upTo / a.unit
	case math.IsInf(level, 1):
		end = last + 16*math.Pi/tau // |g| stays above the level: eight turns beyond the last feature
	case level > 0:
		end = level
	}
	listAll := end == 0 // nothing reaches the level: list through the first crossing of the tail
	if limit := last + float64(mostCrossovers)*math.Pi/tau; end > limit {
		end = limit
	}
	stop := max(end, last)
	points := b.phase
	edges := make([]float64, 0, len(points)+2)
	start := 1e-10 * stop
	if len(points) > 0 {
		start = 1e-10 * min(stop, math.Sqrt(points[0]))
	}
	if stop == 0 {
		start = 1e-10 / tau
	}
	edges = append(edges, start)
	for _, x := range points {
		if v := math.Sqrt(x); v > start && v < stop {
			edges = append(edges, v)
		}
	}
	if stop > start {
		edges = append(edges, stop)
	}
	var all []Crossover
	for i := 1; i < len(edges); i++ {
		all = rational.solvePhase(edges[i-1], edges[i], turn, all)
	}
	// The tail, turn by turn, until it has a crossing.
	tailStart := edges[len(edges)-1]
	for range a.degree + 4 {
		before := len(all)
		next := tailStart + 2*math.Pi/tau
		all = rational.solvePhase(tailStart, next, turn, all)
		tailStart = next
		if len(all) > before {
			break
		}
	}
	slices.SortFunc(all, func(x, y Crossover) int {
		switch {
		case x.Frequency < y.Frequency:
			return -1
		case x.Frequency > y.Frequency:
			return 1
		}
		return 0
	})
	if listAll && len(all) > 0 {
		end = all[len(all)-1].Frequency / a.unit
	}
	out.completeTo = end * a.unit
	if upTo > 0 && end == upTo/a.unit {
		out.completeTo = upTo
	}
	for _, c := range all {
		if c.Frequency <= out.completeTo {
			out.crossovers = append(out.crossovers, c)
		} else {
			out.beyond = append(out.beyond, c)
		}
		if c.Margin > 1 {
			out.smallest = min(out.smallest, c.Margin)
		}
		if c.Margin < 1 {
			out.largest = max(out.largest, c.Margin)
		}
	}
	out.tail = tailStart
	if len(all) > 0 {
		out.tail = max(last, all[len(all)-1].Frequency/a.unit)
	}
	// Margins that are approached as ω → ∞.
	if n, d := a.numerator.Degree(), a.denominator.Degree(); n == d {
		q := math.Abs(a.denominator.Coefficient(d) / a.numerator.Coefficient(n))
		if q > 1 {
			out.smallest = min(out.smallest, q)
		} else if q < 1 {
			out.largest = max(out.largest, q)
		}
	}
	return out, nil
}

// breaks are the x at which something changes its direction.
type breaks struct {
	phase []float64 // crossings of the real axis, poles and zeros on it, extrema of the phase
	gain  []float64 // extrema of the magnitude
}

// phaseBreaks finds the breaks of a rational g followed by a dead time of tau/unit.
func (a *axisForm) phaseBreaks(tau float64) (breaks, error) {
	var b breaks
	if a.ok {
		slope := a.phaseSlope(tau)
		w := newIntervalPoly(2*len(a.nn.c) + 1)
		w.addWronskian(a.nn, a.dd)
		phase, ok1 := a.looseRoots(a.im)
		extrema, ok2 := a.looseRoots(slope)
		gain, ok3 := a.looseRoots(w)
		if ok1 && ok2 && ok3 {
			b.phase = append(phase, extrema...)
			b.gain = gain
			slices.Sort(b.phase)
			return b, nil
		}
	}
	e := a.exactly()
	toX := func(list []float64) []float64 {
		for i := range list {
			list[i] = list[i] / a.unit / a.unit
		}
		return list
	}
	for _, x := range positiveRoots(e.im) {
		b.phase = append(b.phase, float(x))
	}
	for _, x := range positiveRoots(e.phaseSlope(exact.Float(tau / a.unit))) {
		b.phase = append(b.phase, float(x))
	}
	for _, x := range positiveRoots(e.nn.Derivative().Mul(e.dd).Sub(e.nn.Mul(e.dd.Derivative()))) {
		b.gain = append(b.gain, float(x))
	}
	slices.Sort(b.phase)
	b.phase, b.gain = toX(b.phase), toX(b.gain)
	return b, nil
}

// looseRoots returns all positive roots of p, proven complete, to about the accuracy that
// the expanded coefficients have.
func (a *axisForm) looseRoots(p intervalPoly) ([]float64, bool) {
	if q, _ := p.trim(); len(q.c) == 0 {
		return nil, true // identically zero: nothing changes
	}
	brackets, ok := p.positiveRoots(a.memory)
	if !ok {
		return nil, false
	}
	roots := make([]float64, len(brackets))
	for i, b := range brackets {
		lo, hi, x := b.lo, b.hi, b.guess
		if !(lo < x && x < hi) {
			x = between(lo, hi)
		}
		for range 100 {
			g := p.evaluate(x)
			s := sign(g.v, g.e)
			if s == 0 {
				break
			}
			if s == b.below {
				lo = x
			} else {
				hi = x
			}
			next := x - g.v/g.slope
			if next == x {
				break
			}
			if !(lo < next && next < hi) {
				next = between(lo, hi)
				if next == lo || next == hi {
					break
				}
			}
			x = next
		}
		roots[i] = x
	}
	slices.Sort(roots)
	return roots, true
}

// phaseSlope returns the numerator of d arg g(jv)/dv - tau as a polynomial in x:
// with h(jv) = e(x) + jv·o(x), |h|²·d arg h/dv = e·o + 2x(e·o′ - e′·o) = s(h), and the whole is
// s(N)·|D|² - s(D)·|N|² - tau·|N|²·|D|².
func (a *axisForm) phaseSlope(tau float64) intervalPoly {
	size := 2*len(a.nn.c) + 1
	out := newIntervalPoly(size)
	turn := func(h halves) intervalPoly {
		p := newIntervalPoly(len(h.even.c) + len(h.odd.c) + 1)
		p.addProduct(1, h.even, h.odd, 0)
		w := newIntervalPoly(len(p.c))
		w.addWronskian(h.odd, h.even)
		shifted := intervalPoly{append([]float64{0}, w.c...), append([]float64{0}, w.e...)}
		top := len(shifted.c)
		for top > len(p.c) && shifted.c[top-1] == 0 && shifted.e[top-1] == 0 {
			top--
		}
		p.add(2, intervalPoly{shifted.c[:top], shifted.e[:top]})
		q, _ := p.trim()
		return q
	}
	n, d := turn(a.n), turn(a.d)
	nn, _ := a.nn.trim()
	dd, _ := a.dd.trim()
	out.addProduct(1, n, dd, 0)
	out.addProduct(-1, d, nn, 0)
	if tau != 0 {
		product := newIntervalPoly(size)
		product.addProduct(1, nn, dd, 0)
		scaled := intervalPoly{[]float64{tau}, []float64{2 * unitRoundoff * tau}}
		out.addProduct(-1, scaled, product, 0)
	}
	return out
}

func (e *exactAxis) phaseSlope(tau exact.Dyadic) exact.Poly {
	turn := func(h exactHalves) exact.Poly {
		w := h.odd.Derivative().Mul(h.even).Sub(h.odd.Mul(h.even.Derivative()))
		return h.even.Mul(h.odd).Add(timesX(w).Scale(exact.Float(2)))
	}
	s := turn(e.n).Mul(e.dd).Sub(turn(e.d).Mul(e.nn))
	return s.Sub(e.nn.Mul(e.dd).Scale(tau))
}

// lastMagnitude returns the last v with |g| = level: 0 if |g| stays below, +Inf if it ends
// above.
func (a *axisForm) lastMagnitude(level float64) (float64, error) {
	n, d := a.numerator.Degree(), a.denominator.Degree()
	if n > d || n == d && math.Abs(a.numerator.Coefficient(n)) >= level*math.Abs(a.denominator.Coefficient(d)) {
		return math.Inf(1), nil
	}
	last := 0.0
	scaled := a.numerator.Scale(1 / level)
	b := newAxisForm(scaled, a.denominator, 0, 0)
	list, err := b.gainCrossovers()
	if err != nil {
		return 0, err
	}
	for _, c := range list {
		last = max(last, c.Frequency/a.unit)
	}
	return last, nil
}

// A turning is the phase that a delay takes away at v: tau·v, or that of whole periods.
type turning struct {
	tau     float64
	periods float64
	unit    float64
}

func (t turning) at(v float64) float64 {
	if t.periods > 0 {
		return 2 * t.periods * math.Atan(v*t.unit)
	}
	return v * t.tau
}

func (t turning) slope(v float64) float64 {
	if t.periods > 0 {
		x := v * t.unit
		return 2 * t.periods * t.unit / (1 + x*x)
	}
	return t.tau
}

// solvePhase appends the crossings with v in (lo, hi], between which the phase is monotone
// and the rational part does not cross the real axis.
func (a *axisForm) solvePhase(lo, hi float64, turn turning, found []Crossover) []Crossover {
	if !(lo < hi) {
		return found
	}
	// Which half-plane -N·conj D lies in.
	mid := math.Sqrt(lo) * math.Sqrt(hi)
	side := a.minusArgument(mid)
	half := 1.0
	if side < 0 {
		half = -1
	}
	psi := func(v float64) float64 {
		m := a.minusArgument(v)
		// At the ends of a piece the sign may be that of a neighbour, or rounding.
		if m*half < 0 {
			if math.Abs(m) > math.Pi/2 {
				m = half * math.Pi
			} else {
				m = 0
			}
		}
		return m - turn.at(v)
	}
	from, to := a.inside(lo, +1), a.inside(hi, -1)
	pa, pb := psi(from), psi(to)
	first, last := pa, pb
	if first > last {
		first, last = last, first
	}
	for m := math.Floor(last / (2 * math.Pi)); m >= math.Ceil(first/(2*math.Pi)); m-- {
		goal := 2 * math.Pi * m
		l, r := from, to
		rising := pb > pa
		v := l + (goal-pa)/(pb-pa)*(r-l)
		if goal == pa {
			continue // belongs to the piece before
		}
		for range 200 {
			if !(l < v && v < r) {
				v = l + (r-l)/2
				if v == l || v == r {
					break
				}
			}
			g := psi(v) - goal
			if g == 0 {
				break
			}
			if (g < 0) == rising {
				l = v
			} else {
				r = v
			}
			next := v - g/(a.argumentSlope(v)-turn.slope(v))
			if math.Abs(next-v) <= 2*unitRoundoff*v {
				v = next
				break
			}
			v = next
		}
		p := a.at(v * v)
		found = append(found, Crossover{a.frequencyAt(v * a.unit), math.Sqrt(p.dd().v / p.nn().v)})
	}
	return found
}

// inside moves v off a pole or a zero on the axis, to where the argument has its limit to
// about nine digits.
func (a *axisForm) inside(v float64, direction float64) float64 {
	p := a.at(v * v)
	n, d := p.nn(), p.dd()
	ne, no, de, do := math.Abs(p.ne.v), math.Abs(p.no.v)*v, math.Abs(p.de.v), math.Abs(p.do.v)*v
	if ne+no <= 1e3*(p.ne.e+v*p.no.e) || de+do <= 1e3*(p.de.e+v*p.do.e) || n.v == 0 || d.v == 0 {
		return v * (1 + direction*1e-9)
	}
	return v
}

// minusArgument returns arg(-g) in [-π, π], dead time left out. Beside a multiple pole or zero
// on the axis, where float64 has no digits left, the second stage tells.
func (a *axisForm) minusArgument(v float64) float64 {
	p := a.at(v * v)
	re, im := p.re(), p.im()
	if re.e+v*im.e < 1e-10*math.Hypot(re.v, v*im.v) {
		return math.Atan2(-v*im.v, -re.v)
	}
	if a.precise == nil {
		a.precise = a.precisely()
	}
	x := new(big.Float).SetPrec(preciseBits).SetFloat64(v)
	x.Mul(x, new(big.Float).SetFloat64(a.unit))
	minusRe, minusIm := a.precise.at(x.Mul(x, x)).point().minusProduct()
	return math.Atan2(minusIm, minusRe)
}

// argumentSlope returns d arg g/dv, dead time left out.
func (a *axisForm) argumentSlope(v float64) float64 {
	p := a.at(v * v)
	turn := func(e, o halfValue) float64 {
		return (e.v*o.v + 2*p.x*(e.v*o.slope-e.slope*o.v)) / (e.v*e.v + p.x*o.v*o.v)
	}
	return turn(p.ne, p.no) - turn(p.de, p.do)
}
