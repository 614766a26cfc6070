package timeresp

import (
	"context"
	"math"
	"sort"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A sequence is the response of a function of z: samples, held from each to the next. They
// come from the recursion itself, in wide arithmetic.
type sequence struct {
	period  float64
	values  []float64
	limit   float64
	settled bool
	rest    *recursion
	spreads []float64 // bound on |y - limit| from a sample on; one more for what comes after
}

// A recursion is y[k] = Σ b·u - Σ a·y, ready for the next k.
type recursion struct {
	a, b []wide // by delay, a[0] = 1
	u, y []wide // the latest first
	in   func(k int) wide
	k    int
}

const (
	leastSamples = 256
	mostSamples  = 1_000_000
)

func newRecursion(numerator, denominator poly.Poly, in func(k int) wide) *recursion {
	num, den := scaledCoefficients(numerator, 0), scaledCoefficients(denominator, 0)
	n := len(den) - 1
	r := &recursion{a: make([]wide, n+1), b: make([]wide, n+1), u: make([]wide, n+1), y: make([]wide, n+1), in: in}
	lead := wide{1, 0}.div(den[n])
	for i := range den {
		r.a[n-i] = den[i].mul(lead)
	}
	r.a[0] = wide{1, 0}
	for i := range num {
		r.b[n-i] = num[i].mul(lead)
	}
	return r
}

func (r *recursion) next() wide {
	copy(r.u[1:], r.u)
	copy(r.y[1:], r.y)
	r.u[0] = r.in(r.k)
	r.y[0] = wide{}
	r.y[0] = dotWide(r.b, r.u).sub(dotWide(r.a[1:], r.y[1:]))
	r.k++
	return r.y[0]
}

func (r *recursion) clone() *recursion {
	c := *r
	c.u = append([]wide(nil), r.u...)
	c.y = append([]wide(nil), r.y...)
	return &c
}

// sampledResponse returns the response of a function of z to the samples of an input.
func sampledResponse(ctx context.Context, call string, g tf.Function, in Input, unitPulse bool) (*Response, error) {
	roots, err := g.Poles()
	if err != nil {
		return nil, err
	}
	if g.Numerator().Degree() > g.Denominator().Degree() {
		return nil, &poly.ArgumentError{Call: call, Argument: "g", Reason: "improper: its output would come before its input"}
	}
	if in.HasImpulse() && !unitPulse {
		return nil, &tf.UnsupportedError{Call: call, What: "a Dirac impulse at the input of a function of z, which sees samples"}
	}
	period := g.Period()
	delay := int(math.Round(g.DeadTime() / period))
	u := func(k int) wide { return wide{in.At(float64(k) * period), 0} }
	if unitPulse {
		u = func(k int) wide {
			if k == 0 {
				return wide{1, 0}
			}
			return wide{}
		}
	}
	// The input after its last break, if it is constant then.
	breaks, end, constant := in.Breaks(), 0, true
	if len(breaks) > 0 {
		end = int(math.Ceil(min(breaks[len(breaks)-1]/period, 1e15)))
	}
	final := in.At(float64(end) * period)
	if unitPulse {
		end, final = 1, 0
	}
	for _, t := range in.terms {
		if math.IsInf(t.to, 1) && !unitPulse && (t.amplitude != 0 && t.omega != 0 || degree(t.polynomial) > 0) {
			constant = false
		}
	}
	s := &sequence{period: period, limit: math.NaN()}
	num, den, _, err := cancel(g.Numerator(), g.Denominator(), roots)
	if err != nil {
		return nil, err
	}
	r := newRecursion(num, den, u)
	bound, stable := sampledDecay(r)
	n := len(r.a) - 1
	if stable && constant {
		var top, bottom wide
		for i := range r.a {
			top, bottom = top.add(r.b[i]), bottom.add(r.a[i])
		}
		s.limit = top.mulFloat(final).div(bottom).float()
	}
	largest, spread := 0.0, math.Inf(1)
	for {
		if r.k%4096 == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
		}
		y := r.next().float()
		s.values = append(s.values, y)
		largest = math.Max(largest, math.Abs(y))
		if !math.IsNaN(s.limit) && r.k > end+n {
			deviation := 0.0
			for _, v := range r.y[:n] {
				deviation = math.Max(deviation, math.Abs(v.addFloat(-s.limit).float()))
			}
			spread = bound * deviation
			if spread <= settledTo*largest {
				s.settled = true
				break
			}
		}
		if r.k >= mostSamples || math.IsNaN(s.limit) && r.k >= end+leastSamples || math.Abs(y) > 1e300 {
			s.rest = r
			break
		}
	}
	if !math.IsNaN(s.limit) {
		s.spreads = make([]float64, len(s.values)+1)
		s.spreads[len(s.values)] = spread
		for k := len(s.values) - 1; k >= 0; k-- {
			s.spreads[k] = math.Max(s.spreads[k+1], math.Abs(s.values[k]-s.limit))
		}
	}
	return &Response{arcs: []arc{{from: float64(delay) * period, signal: s}}, final: s.limit}, nil
}

func degree(p []float64) int {
	n := len(p) - 1
	for n > 0 && p[n] == 0 {
		n--
	}
	return n
}

// sampledDecay returns a bound on what n values that are at most 1 can still become, from
// the fundamental solutions of the recursion, if they die away.
func sampledDecay(r *recursion) (bound float64, ok bool) {
	n := len(r.a) - 1
	if n == 0 {
		return 0, true
	}
	solutions := make([][]float64, n) // the latest value first
	for j := range solutions {
		solutions[j] = make([]float64, n)
		solutions[j][j] = 1
	}
	most, next := 1.0, n
	for k := 1; k <= 4*mostSamples/(n*n)+64; k++ {
		sum := 0.0
		for _, s := range solutions {
			y := 0.0
			for i, v := range s {
				y -= r.a[i+1].hi * v
			}
			copy(s[1:], s)
			s[0] = y
			sum += math.Abs(y)
		}
		most = max(most, sum)
		if !(most < 1e30) {
			return 0, false
		}
		if k < next {
			continue
		}
		next += n + next/4
		worst := 0.0
		for i := range n {
			sum := 0.0
			for _, s := range solutions {
				sum += math.Abs(s[i])
			}
			worst = max(worst, sum)
		}
		if worst <= 0.9 {
			return most, true
		}
	}
	return 0, false
}

func (s *sequence) at(t, lo float64) float64 {
	k := math.Floor(t / s.period)
	// The sample instants are k·period, rounded like those of the caller.
	if (k+1)*s.period <= t+lo {
		k++
	} else if k > 0 && k*s.period > t+lo {
		k--
	}
	if k < float64(len(s.values)) {
		return s.values[int(max(k, 0))]
	}
	if s.settled {
		return s.limit
	}
	if k >= 4*mostSamples {
		return math.NaN()
	}
	r := s.rest.clone()
	var y wide
	for r.k <= int(k) {
		y = r.next()
	}
	return y.float()
}

// locate returns the index of the sample that is held at t, or just before it.
func (s *sequence) locate(t float64, before bool) int {
	k := math.Floor(t / s.period)
	for (k+1)*s.period <= t {
		k++
	}
	for k > 0 && (k*s.period > t || before && k*s.period == t) {
		k--
	}
	return int(min(max(k, 0), float64(len(s.values))))
}

// The curve of a sequence: cells on which it is constant. Its time is in seconds.

func (s *sequence) node(t float64, before bool, n *node) {
	k := s.locate(t, before)
	*n = node{t: t, step: math.Inf(1)}
	if k < len(s.values) {
		n.y = s.values[k]
	} else {
		n.y = s.limit
	}
	n.spread = s.spreads[k]
}

func (s *sequence) fourth(a, b *node) float64 { return 0 }

func (s *sequence) cellEnd(t float64) float64 {
	if k := s.locate(t, false); k < len(s.values) {
		return float64(k+1) * s.period
	}
	return math.Inf(1)
}

func (s *sequence) cellStart(t float64) float64 { return float64(s.locate(t, true)) * s.period }

func (s *sequence) horizon() float64 { return 0 }

func (s *sequence) calm(level float64) float64 {
	k := sort.Search(len(s.spreads), func(k int) bool { return s.spreads[k] <= level })
	if k == len(s.spreads) {
		return math.Inf(1)
	}
	return float64(k) * s.period
}

func (s *sequence) rate() float64 { return 1 }

func (s *sequence) ultimate() float64 { return s.limit }

func (s *sequence) trend() ([]float64, bool) { return []float64{s.limit}, s.limit == s.limit }

// errorAt: the recursion loses at most a few units in 2⁻¹⁰⁰ a step; rounding to float64
// outweighs it.
func (s *sequence) errorAt(t float64) float64 {
	y := math.Abs(s.at(t, 0)) * 0x1p-52
	if s.settled && t/s.period >= float64(len(s.values)) {
		y += s.spreads[len(s.values)]
	}
	return y
}
