package timeresp

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// Figures are the figures of merit of a response. Times are in seconds from t = 0, dead time
// included; fractions are of |Final|. What does not exist is NaN. If Final is 0 only the
// largest value and its time exist.
type Figures struct {
	Final          float64 // the limit for t → ∞
	Overshoot      float64 // the largest excess beyond Final, fraction of |Final|; 0 if there is none
	Undershoot     float64 // the largest excursion to the side opposite Final, fraction of |Final|; 0 if there is none
	PeakTime       float64 // of the overshoot; NaN if there is none
	RiseTime       float64 // from the first crossing of 10 % to that of 90 %; 0 if already there at the start
	SettlingTime   float64 // the last entry into the band
	PeakValue      float64 // the response at PeakTime
	UndershootTime float64 // of the undershoot; NaN if there is none
	Reach10        float64 // first crossing of 10 % of Final; likewise the next two
	DelayTime      float64 // of 50 %
	Reach90        float64 // of 90 %
	Reach100       float64 // of 100 %, less the dead time the rise time from 0 % on; NaN if Final is only approached
	LargestValue   float64 // the value of largest magnitude; Final if that is only approached
	LargestTime    float64 // when it is taken; NaN if it is only approached
}

// noExcursion is the excursion beyond the final value, as a fraction of it, that counts as none.
const noExcursion = 1e-9

// A curve is a signal as the figures look at it, by scaled time from its start at τ = 0. It
// is smooth within a cell; at the end of one it may jump.
type curve interface {
	// node fills n with the signal just after τ, or just before it.
	node(tau float64, before bool, n *node)
	// fourth bounds |y⁗| between two nodes of one cell.
	fourth(a, b *node) float64
	// cellEnd returns where a cell that starts at τ must end at the latest, and cellStart
	// where one that ends there must start at the earliest.
	cellEnd(tau float64) float64
	cellStart(tau float64) float64
	// horizon returns the τ from which on the spread of nodes bounds what is still to come.
	horizon() float64
	// calm returns a τ not before the horizon from which on the spread is at most the level;
	// +Inf if the curve is not known for so long.
	calm(level float64) float64
}

// A signal is a curve that starts at rest.
type signal interface {
	curve
	at(t, lo float64) float64 // value at t + lo seconds after the start
	errorAt(t float64) float64
	rate() float64     // w
	ultimate() float64 // limit for t → ∞; NaN if there is none
	// trend returns the polynomial in τ, by power, that the signal tends to; not ok if it
	// tends to none. The spread of nodes is that about the trend.
	trend() (p []float64, ok bool)
}

// A node is the signal at one instant, by scaled time.
type node struct {
	t       float64
	y, d, c float64 // value, first and second derivative
	spread  float64 // bound on |y - limit| from here on
	fourth  float64 // bound on |y⁗| from here on, at least up to the end of the cell
	step    float64 // a length of cell over which the cubic misses the signal by some per cent of its spread
}

// cell holds a signal between two nodes as a cubic with a proven error. Errors of cubic
// Hermite interpolation: G. Birkhoff and A. Priver, Hermite interpolation errors for
// derivatives, J. Math. and Phys. 46 (1967) 440–447: 1/384, √3/216 and 1/12 times h⁴, h³,
// h² times the bound on the fourth derivative.
type cell struct {
	low, high           float64 // of y
	lowRate, highRate   float64 // of dy/dτ
	lowCurve, highCurve float64 // of d²y/dτ²
}

func enclose(a, b *node, fourth float64) (c cell) {
	h := b.t - a.t
	e := h * h * fourth * (1.0 / 12)
	p, q := a.y+a.d*h/3, b.y-b.d*h/3
	c.low = min(min(a.y, b.y), min(p, q)) - e*h*h/32
	c.high = max(max(a.y, b.y), max(p, q)) + e*h*h/32
	mid := 3 * (q - p) / h
	e1 := e * h * 0.0962251 // 12·√3/216, rounded up
	c.lowRate = min(min(a.d, b.d), mid) - e1
	c.highRate = max(max(a.d, b.d), mid) + e1
	u, v := 2*(mid-a.d)/h, 2*(b.d-mid)/h
	c.lowCurve = min(u, v) - e
	c.highCurve = max(u, v) + e
	return c
}

// A scan reads figures off one kernel, divided by the final value.
type scan struct {
	curve   curve
	inverse float64 // of the final value
	levels  [4]float64
	reached [4]float64 // τ of the first crossing; NaN
	next    int        // the lowest level not reached
	most    float64    // largest value so far and where, if above 1 + noExcursion
	mostAt  float64
	least   float64
	leastAt float64
	band    float64
	span    float64 // nothing closer to the final value than this, over it, is looked for
	only    int     // stop after so many levels; 0: do not
	open    bool    // the curve, or the work allowed, ended before everything was decided
	either  bool    // most and least move together: only the largest magnitude is looked for
	nodes   int     // evaluated so far
}

const (
	maxDepth = 60
	maxNodes = 4_000_000 // of one scan
)

func (s *scan) node(tau float64) (n node) {
	s.fill(tau, false, &n)
	return n
}

func (s *scan) fill(tau float64, before bool, n *node) {
	s.nodes++
	s.curve.node(tau, before, n)
	n.y *= s.inverse
	n.d *= s.inverse
	n.c *= s.inverse
	n.spread *= math.Abs(s.inverse)
}

func (s *scan) fourth(a, b *node) float64 {
	return s.curve.fourth(a, b) * math.Abs(s.inverse)
}

// see takes note of the signal at one node.
func (s *scan) see(n *node) {
	for s.next < len(s.levels) && n.y >= s.levels[s.next] {
		s.reached[s.next] = n.t
		s.next++
	}
	if n.y > s.most {
		s.most, s.mostAt = n.y, n.t
		if s.either {
			s.least, s.leastAt = -n.y, math.NaN()
		}
	}
	if n.y < s.least {
		s.least, s.leastAt = n.y, n.t
		if s.either {
			s.most, s.mostAt = -n.y, math.NaN()
		}
	}
}

// forward takes note of everything between a, seen already, and b.
func (s *scan) forward(a, b *node, depth int) {
	c := enclose(a, b, s.fourth(a, b))
	if !(c.high > s.most || c.low < s.least || s.next < len(s.levels) && c.high >= s.levels[s.next]) {
		return
	}
	if s.nodes > maxNodes {
		s.open = true
		return
	}
	if c.lowRate >= 0 || c.highRate <= 0 || depth > maxDepth || b.t-a.t <= 4e-16*b.t {
		for s.next < len(s.levels) && b.y >= s.levels[s.next] {
			n := s.crossing(*a, *b, s.levels[s.next])
			s.reached[s.next] = n.t
			s.next++
		}
		s.see(b)
		return
	}
	if c.lowCurve >= 0 || c.highCurve <= 0 {
		if a.d*b.d < 0 {
			m := s.extremum(*a, *b)
			s.forward(a, &m, maxDepth+1)
			s.forward(&m, b, maxDepth+1)
		} else {
			s.forward(a, b, maxDepth+1)
		}
		return
	}
	m := s.node(a.t + (b.t-a.t)/2)
	s.forward(a, &m, depth+1)
	s.forward(&m, b, depth+1)
}

// crossing returns where the signal, monotone between a and b, passes the level.
func (s *scan) crossing(a, b node, level float64) node {
	if a.y == level {
		return a
	}
	if b.y == level {
		return b
	}
	rising := b.y > a.y
	t := guessCrossing(&a, &b, level)
	for range 100 {
		if !(t > a.t && t < b.t) {
			t = a.t + (b.t-a.t)/2
			if t <= a.t || t >= b.t {
				return b
			}
		}
		n := s.node(t)
		miss := level - n.y
		if miss == 0 {
			return n
		}
		if (miss > 0) == rising {
			a = n
		} else {
			b = n
		}
		step := miss / n.d
		if math.Abs(step) <= 1e-15*t {
			return n
		}
		if math.Abs(step) <= 3e-8*t && n.c*step*step <= 1e-15*math.Abs(n.d)*t*2 {
			n.t += step
			return n
		}
		t += step
		if a.t > t || b.t < t || math.IsNaN(t) {
			t = a.t + (b.t-a.t)/2
		}
	}
	return b
}

// guessCrossing solves the cubic through both nodes.
func guessCrossing(a, b *node, level float64) float64 {
	h := b.t - a.t
	rise := b.y - a.y
	x := (level - a.y) / rise
	c1, c2, c3 := a.d*h, 3*rise-h*(2*a.d+b.d), h*(a.d+b.d)-2*rise
	for range 3 {
		f := a.y - level + x*(c1+x*(c2+x*c3))
		g := c1 + x*(2*c2+x*3*c3)
		if g == 0 {
			break
		}
		x -= f / g
		x = min(max(x, 0), 1)
	}
	return a.t + h*x
}

// extremum returns where the derivative, monotone between a and b, is zero.
func (s *scan) extremum(a, b node) node {
	h := b.t - a.t
	// The derivative of the cubic is a parabola; its root by the stable formula.
	rise := b.y - a.y
	q0, q1, q2 := a.d*h, 3*rise-h*(2*a.d+b.d), 3*(h*(a.d+b.d)-2*rise)
	x := 0.5
	if disc := q1*q1 - q2*q0; disc >= 0 {
		root := -(q1 + math.Copysign(math.Sqrt(disc), q1))
		x = root / q2
		if y := q0 / root; y >= 0 && y <= 1 {
			x = y
		}
	}
	t := a.t + h*x
	for range 100 {
		if !(t > a.t && t < b.t) {
			t = a.t + (b.t-a.t)/2
			if t <= a.t || t >= b.t {
				break
			}
		}
		n := s.node(t)
		if n.d == 0 {
			return n
		}
		if n.d*a.d > 0 {
			a = n
		} else {
			b = n
		}
		step := -n.d / n.c
		if math.Abs(step) <= 1e-11*t {
			n.t += step // the value is stationary
			return n
		}
		t += step
	}
	if math.Abs(a.d) < math.Abs(b.d) {
		return a
	}
	return b
}

// scan returns a scan that has looked at nothing yet.
func (r *Response) scan() (s scan, start, w float64) {
	nan := math.NaN()
	s = scan{levels: [4]float64{0.1, 0.5, 0.9, 1}, reached: [4]float64{nan, nan, nan, nan}, mostAt: nan, leastAt: nan}
	s.curve, w = r.curve()
	if r.final == 0 {
		s.inverse, s.next, s.either = 1, len(s.levels), true
	} else {
		s.inverse, s.most, s.least = 1/r.final, 1+noExcursion, -noExcursion
		s.span = 1
	}
	return s, r.arcs[0].from, w
}

// ready reports why a call for figures has no answer.
func (r *Response) ready(call string) error {
	if math.IsNaN(r.final) {
		return &NoFinalValueError{Call: call}
	}
	return nil
}

func checkBand(call string, band float64) error {
	if !(band > 0) || math.IsInf(band, 0) {
		return &poly.ArgumentError{Call: call, Argument: "band", Reason: fmt.Sprintf("%v is no positive fraction of the final value", band)}
	}
	return nil
}

// Figures returns the figures of merit, with the settling time for a band that is a fraction
// of the final value, such as 0.02. An excursion below 1e-9·|Final| is none.
//
// The error is a [*poly.ArgumentError] for a band that is not positive and finite, a
// [*NoFinalValueError], with every figure NaN, if the response has no limit, and a
// [*tf.UnsupportedError] if a loop with dead time dies away too slowly, or a sampled one, for
// the figures to be decided: then what is not NaN holds.
func (r *Response) Figures(band float64) (Figures, error) {
	const call = "timeresp.Response.Figures"
	f := noFigures()
	f.Final = r.final
	if err := checkBand(call, band); err != nil {
		return f, err
	}
	if err := r.ready(call); err != nil {
		return f, err
	}
	if len(r.arcs) == 0 {
		f.LargestValue = 0
		return f, nil
	}
	s, start, w := r.scan()
	s.run()
	if s.open {
		return f, unsettled(call)
	}
	seconds := func(tau float64) float64 { return start + tau/w }
	if r.final == 0 {
		f.LargestValue, f.LargestTime = s.largest(0)
		f.LargestTime = seconds(f.LargestTime)
		return f, nil
	}
	f.Overshoot, f.Undershoot = 0, 0
	if s.mostAt == s.mostAt {
		f.Overshoot, f.PeakTime, f.PeakValue = s.most-1, seconds(s.mostAt), s.most*r.final
		f.Reach100 = seconds(s.reached[3])
	}
	if s.leastAt == s.leastAt {
		f.Undershoot, f.UndershootTime = -s.least, seconds(s.leastAt)
	}
	f.Reach10, f.DelayTime, f.Reach90 = seconds(s.reached[0]), seconds(s.reached[1]), seconds(s.reached[2])
	f.RiseTime = (s.reached[2] - s.reached[0]) / w
	f.LargestValue, f.LargestTime = s.largest(r.final)
	f.LargestTime = seconds(f.LargestTime)
	s.band = band
	f.SettlingTime = seconds(s.settle())
	if s.open {
		return f, unsettled(call)
	}
	return f, nil
}

// unsettled says that a response dies away too slowly for its figures to be decided.
func unsettled(call string) error {
	return &tf.UnsupportedError{Call: call, What: "a response that needs too many of its fastest time constants to settle"}
}

// largest returns the value of largest magnitude and its τ after run.
func (s *scan) largest(final float64) (value, tau float64) {
	switch {
	case s.mostAt == s.mostAt && !(s.leastAt == s.leastAt && -s.least > s.most):
		return s.most / s.inverse, s.mostAt
	case s.leastAt == s.leastAt && (-s.least > 1 || final == 0):
		return s.least / s.inverse, s.leastAt
	}
	return final, math.NaN()
}

// SettlingTime returns the last entry into a band about the final value, as by
// [Response.Figures], and nothing else. It is NaN if the final value is 0.
func (r *Response) SettlingTime(band float64) (float64, error) {
	const call = "timeresp.Response.SettlingTime"
	if err := checkBand(call, band); err != nil {
		return math.NaN(), err
	}
	if err := r.ready(call); err != nil || r.final == 0 {
		return math.NaN(), err
	}
	s, start, w := r.scan()
	s.band = band
	tau := s.settle()
	if s.open {
		return math.NaN(), unsettled(call)
	}
	return start + tau/w, nil
}

// Overshoot returns the overshoot and its time, as by [Response.Figures], and nothing else.
func (r *Response) Overshoot() (fraction, time float64, err error) {
	if err := r.ready("timeresp.Response.Overshoot"); err != nil || r.final == 0 {
		return math.NaN(), math.NaN(), err
	}
	s, start, w := r.scan()
	s.next, s.least = len(s.levels), math.Inf(-1)
	if s.run(); s.open {
		return math.NaN(), math.NaN(), unsettled("timeresp.Response.Overshoot")
	}
	if s.mostAt != s.mostAt {
		return 0, math.NaN(), nil
	}
	return s.most - 1, start + s.mostAt/w, nil
}

// RiseTime returns the time from the first crossing of 10 % of the final value to that of
// 90 %, as by [Response.Figures], and nothing else. It is NaN if the final value is 0.
func (r *Response) RiseTime() (float64, error) {
	if err := r.ready("timeresp.Response.RiseTime"); err != nil || r.final == 0 {
		return math.NaN(), err
	}
	s, _, w := r.scan()
	s.most, s.least, s.only = math.Inf(1), math.Inf(-1), 3
	if s.run(); s.open && s.next < 3 {
		return math.NaN(), unsettled("timeresp.Response.RiseTime")
	}
	return (s.reached[2] - s.reached[0]) / w, nil
}

// Largest returns the value of largest magnitude, and when it is taken; the final value and
// NaN if that is only approached. Of an effort it is what the actuator must give.
func (r *Response) Largest() (value, time float64, err error) {
	if err := r.ready("timeresp.Response.Largest"); err != nil {
		return math.NaN(), math.NaN(), err
	}
	if len(r.arcs) == 0 {
		return 0, math.NaN(), nil
	}
	s, start, w := r.scan()
	s.next = len(s.levels)
	if r.final != 0 {
		s.least = -1
	}
	if s.run(); s.open {
		return math.NaN(), math.NaN(), unsettled("timeresp.Response.Largest")
	}
	value, tau := s.largest(r.final)
	return value, start + tau/w, nil
}

// run looks from the start on until nothing is left to be found.
func (s *scan) run() {
	var a, b node
	s.fill(0, false, &a)
	s.see(&a)
	horizon := s.curve.horizon()
	for {
		if s.only > 0 && s.next >= s.only {
			return
		}
		if a.t >= horizon && s.next >= 3 && a.spread <= s.most-s.span && a.spread <= s.span-s.least {
			return
		}
		end := s.curve.cellEnd(a.t)
		if math.IsInf(end, 1) && math.IsInf(a.step, 1) || s.nodes > maxNodes {
			s.open = a.spread > 0
			return
		}
		if a.t+a.step < end {
			s.fill(a.t+a.step, false, &b)
			s.forward(&a, &b, 0)
			a = b
			continue
		}
		s.fill(end, true, &b)
		s.forward(&a, &b, 0)
		s.fill(end, false, &a)
		s.see(&a)
	}
}

// settle returns the last entry into the band.
func (s *scan) settle() float64 {
	// From the horizon on the modes together cannot leave the band.
	n := node{t: s.curve.calm(s.band / math.Abs(s.inverse))}
	if math.IsInf(n.t, 1) {
		s.open = true
		return math.NaN()
	}
	outside := func(n *node) bool { return !(math.Abs(n.y-1) <= s.band) }
	for n.t > 0 {
		var a, b node
		s.fill(n.t, true, &b)
		if outside(&b) {
			return n.t
		}
		s.fill(max(b.t-b.step, s.curve.cellStart(b.t)), false, &a)
		if t, found := s.backward(&a, &b, 0); found {
			return t
		}
		if s.nodes > 2*maxNodes {
			s.open = true
			return math.NaN()
		}
		n = a
	}
	return 0
}

// backward returns the last entry into the band between a and b, b being inside.
func (s *scan) backward(a, b *node, depth int) (float64, bool) {
	c := enclose(a, b, s.fourth(a, b))
	if c.low > 1-s.band && c.high < 1+s.band || s.nodes > 2*maxNodes {
		return 0, false
	}
	if c.lowRate >= 0 || c.highRate <= 0 || depth > maxDepth || b.t-a.t <= 4e-16*b.t {
		switch {
		case a.y > 1+s.band:
			return s.crossing(*a, *b, 1+s.band).t, true
		case a.y < 1-s.band:
			return s.crossing(*a, *b, 1-s.band).t, true
		}
		return 0, false
	}
	if c.lowCurve >= 0 || c.highCurve <= 0 {
		if a.d*b.d >= 0 {
			return s.backward(a, b, maxDepth+1)
		}
		m := s.extremum(*a, *b)
		if t, found := s.backward(&m, b, maxDepth+1); found {
			return t, true
		}
		return s.backward(a, &m, maxDepth+1)
	}
	m := s.node(a.t + (b.t-a.t)/2)
	if t, found := s.backward(&m, b, depth+1); found {
		return t, true
	}
	return s.backward(a, &m, depth+1)
}

// A NoFinalValueError reports a response without a limit: it grows without bound, or swings forever.
type NoFinalValueError struct{ Call string }

func (e *NoFinalValueError) Error() string { return e.Call + ": the response has no final value" }

// calmBySearch finds a τ where the spread of the nodes, which does not grow, is at most the
// level.
func calmBySearch(c curve, level float64) float64 {
	var n node
	lo := c.horizon()
	if c.node(lo, false, &n); n.spread <= level {
		return lo
	}
	hi := max(lo, 1)
	for c.node(hi, false, &n); !(n.spread <= level); c.node(hi, false, &n) {
		if hi > 0x1p1000 {
			return math.Inf(1)
		}
		lo = hi
		hi *= 2
	}
	for range 12 {
		m := lo + (hi-lo)/2
		if c.node(m, false, &n); n.spread <= level {
			hi = m
		} else {
			lo = m
		}
	}
	return hi
}
