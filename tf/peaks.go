package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// A Peak is the supremum of a magnitude over all frequencies.
type Peak struct {
	Magnitude float64 // a ratio; +Inf if unbounded
	Frequency float64 // rad/s; 0 or +Inf also where the supremum is only approached there
}

// better keeps the larger of two peaks, the earlier frequency where they are equal.
func (p *Peak) better(q Peak) {
	if q.Magnitude > p.Magnitude || q.Magnitude == p.Magnitude && q.Frequency < p.Frequency {
		*p = q
	}
}

// magnitudes returns the polynomials whose ratio |numerator/denominator| a curve belongs to.
func (c curve) magnitudes(p axisPoint) (numerator, denominator halfValue) {
	switch c {
	case sensitivityCurve:
		return p.dd(), p.ff()
	case complementaryCurve:
		return p.nn(), p.ff()
	}
	return p.nn(), p.dd()
}

// peak returns the supremum of |D/F|, |N/F| or |N/D| over the axis, exact suprema from the
// roots of the derivative and the two ends; for high orders enclosed by a search instead, as with
// dead time.
func (a *axisForm) peak(c curve) (Peak, error) {
	if p, ok := a.peakFast(c); ok {
		return p, nil
	}
	if p, ok := a.peakBySearch(c); ok {
		return p, nil
	}
	return a.exactly().peak(c)
}

func (a *axisForm) peakFast(c curve) (best Peak, ok bool) {
	if !a.ok {
		return Peak{}, false
	}
	top, bottom := a.dd, a.nn
	switch c {
	case complementaryCurve:
		top, bottom = a.nn, a.dd
	case resonanceCurve:
		top, bottom = a.dd, a.nn
	}
	memory := a.memory
	m := bottom
	if c != resonanceCurve {
		m = memory.takeZero(len(bottom.c))
		m.add(1, bottom)
		m.add(2, a.re)
	}
	w := memory.takeZero(2*len(bottom.c) + 1)
	w.addWronskian(m, top)
	ends := c.ends(a)
	if math.IsNaN(ends[0]) || math.IsNaN(ends[1]) {
		return Peak{}, false
	}
	best = Peak{ends[0], 0}
	best.better(Peak{ends[1], a.lastFrequency()})
	trimmed, _ := w.trim()
	if len(trimmed.c) == 0 {
		return best, true
	}
	brackets, ok := w.positiveRoots(memory)
	if !ok {
		return Peak{}, false
	}
	for _, b := range brackets {
		// Only where the magnitude has a maximum: the derivative of its inverse square goes
		// from negative to positive there, that of |N|²/|D|² the other way.
		if (b.below > 0) != (c == resonanceCurve) {
			continue
		}
		r, ok := a.refine(b, c, w)
		if ok {
			n, d := c.magnitudes(a.at(r.x))
			if d.e < acceptMargin*d.v && (n.e < acceptMargin*n.v || n.v <= 0x1p-40*d.v) {
				best.better(Peak{math.Sqrt(n.v / d.v), a.frequency(r.x)})
				continue
			}
		}
		q, ok := a.precisely().refine(b, r.x, c)
		if !ok {
			return Peak{}, false
		}
		m := q.magnitudeRatio(c)
		if m > 0x1p60 { // a pole on the axis, perhaps
			return Peak{}, false
		}
		best.better(Peak{m, a.frequencyOf(q.point().v)})
	}
	return best, true
}

// lastFrequency returns the end of the axis: +Inf, in z half the sampling frequency.
func (a *axisForm) lastFrequency() float64 {
	if a.period != 0 {
		return math.Pi / a.period
	}
	return math.Inf(1)
}

// ends returns the magnitude at both ends of the axis, NaN where float64 cannot tell.
func (c curve) ends(a *axisForm) [2]float64 {
	n, d := a.numerator, a.denominator
	var out [2]float64
	for side := range out {
		k, step := 0, 1
		if side == 1 {
			k, step = max(n.Degree(), d.Degree()), -1
		}
		for n.Coefficient(k) == 0 && d.Coefficient(k) == 0 {
			k += step
		}
		x, y := n.Coefficient(k), d.Coefficient(k)
		switch c {
		case resonanceCurve:
			out[side] = math.Abs(x / y)
			continue
		case sensitivityCurve:
			x, y = y, x
		}
		// |x/(x+y)|
		sum := x + y
		if math.Abs(sum) < 0x1p-10*math.Abs(x) {
			out[side] = math.NaN()
			continue
		}
		if x == 0 {
			out[side] = 0
			continue
		}
		out[side] = math.Abs(x / sum)
	}
	return out
}

func (e *exactAxis) peak(c curve) (Peak, error) {
	top, bottom := e.nn, e.dd
	ff := e.nn.Add(e.dd).Add(e.re).Add(e.re)
	switch c {
	case sensitivityCurve:
		top, bottom = e.dd, ff
	case complementaryCurve:
		top, bottom = e.nn, ff
	}
	if bottom.IsZero() {
		return Peak{Magnitude: math.Inf(1)}, &DegenerateError{Call: "tf: peak", What: "the open loop is -1 at every frequency"}
	}
	best := Peak{Magnitude: math.Inf(-1)}
	at := func(x *big.Float, frequency float64) {
		n, d := inDigits(top).at(x), inDigits(bottom).at(x)
		// A double root of |F|² is its only kind of positive root.
		if d.Sign() <= 0 || magnitude(d) < magnitude(termSize(bottom, x))-digits/2 {
			best.better(Peak{math.Inf(1), frequency})
			return
		}
		if n.Sign() < 0 {
			n.SetInt64(0)
		}
		n.Quo(n, d)
		best.better(Peak{float(n.Sqrt(n)), frequency})
	}
	end := func(p, q exact.Dyadic, frequency float64) {
		if q.Sign() == 0 {
			best.better(Peak{math.Inf(1), frequency})
			return
		}
		n := number(p, digits)
		n.Quo(n, number(q, digits))
		best.better(Peak{float(n.Sqrt(n.Abs(n))), frequency})
	}
	k := 0
	for top.Coefficient(k).Sign() == 0 && bottom.Coefficient(k).Sign() == 0 {
		k++
	}
	end(top.Coefficient(k), bottom.Coefficient(k), 0)
	k = max(top.Degree(), bottom.Degree())
	end(top.Coefficient(k), bottom.Coefficient(k), e.a.lastFrequency())
	for _, x := range positiveRoots(bottom) {
		v := new(big.Float).SetPrec(x.Prec()).Sqrt(x)
		best.better(Peak{math.Inf(1), e.a.frequencyOf(v)})
	}
	if math.IsInf(best.Magnitude, 1) {
		return best, nil
	}
	w := top.Derivative().Mul(bottom).Sub(top.Mul(bottom.Derivative()))
	for _, x := range positiveRoots(w) {
		v := new(big.Float).SetPrec(x.Prec()).Sqrt(x)
		at(x, e.a.frequencyOf(v))
	}
	return best, nil
}

// termSize returns the sum of |terms| of p at x ≥ 0.
func termSize(p exact.Poly, x *big.Float) *big.Float {
	q := inDigits(p)
	for _, c := range q {
		c.Abs(c)
	}
	return q.at(x)
}
