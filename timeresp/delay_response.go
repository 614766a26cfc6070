package timeresp

import (
	"context"
	"math"
	"sort"

	"github.com/polewright/polewright/tf"
)

// A stepwise is the solution of a delay equation: Taylor polynomials on cells, and after
// them its limit, or the solution continued for as long as one asks.
type stepwise struct {
	w         float64
	h, period float64   // scaled
	perPeriod int       // cells
	q         []float64 // earlyTerms for each cell, by powers of the fraction of the cell
	leading   int       // the first cell is this power times its polynomial
	drift     []wide    // polynomial in τ, by power, that the signal tends to; nil if there is none
	settled   bool      // after the last cell the signal is its trend, to the accuracy promised
	rest      *march    // at the end of the last cell; nil if settled
	spreads   []float64 // bound on |y - trend| from a cell on; nil if there is no trend
	largest   []float64 // |y| so far, by cell
	dirac     []float64 // τ and areas of impulses, in scaled time
}

const (
	leastPeriods = 8
	mostCells    = 1 << 15
	settledTo    = 1e-13 // of the largest value so far
	askedCells   = 2_000_000
)

// solve follows the equation from rest under one event.
func (q *delayEquation) solve(ctx context.Context, call string, in event, d *decay) (*stepwise, error) {
	for attempt := 0; ; attempt++ {
		s, err := q.attempt(ctx, in, d)
		if s != nil || err != nil {
			return s, err
		}
		if q.cells > mostPerPeriod {
			return nil, &tf.UnsupportedError{Call: call, What: "dead time in a loop of so high a gain that the series of its response do not converge"}
		}
		q.divide()
	}
}

// attempt returns nil if the cells are too long.
func (q *delayEquation) attempt(ctx context.Context, in event, d *decay) (*stepwise, error) {
	m := q.march(in)
	s := &stepwise{w: q.w, h: q.h, period: q.period, perPeriod: q.cells}
	var steady [][]wide
	if d.ok {
		s.drift, steady = q.steady(in)
	}
	largest := 0.0
	deviation := make([]float64, q.n+1)
	remaining := math.Inf(1)
	for {
		if m.index%q.cells == 0 {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			if m.index > 0 && steady != nil && m.dirac.hi == 0 {
				for i := range q.n {
					deviation[i] = m.x[i].sub(polynomialAt(steady[i], q.start(m.index))).hi
				}
				deviation[q.n] = s.largestDeviation(m.index - q.cells)
				remaining = d.bound(deviation)
				if remaining <= settledTo*largest {
					s.settled = true
					break
				}
			}
			if m.index >= mostCells || steady == nil && m.index >= max(4096, min(leastPeriods*q.cells, mostCells/2)) {
				s.rest = m.clone()
				break
			}
		}
		at := m.index
		y, dirac := m.step()
		if m.rough {
			return nil, nil
		}
		if dirac.hi != 0 && math.Abs(dirac.hi) > 0x1p-1000 {
			s.dirac = append(s.dirac, q.period*float64(at/q.cells), dirac.hi)
		}
		skip := 0
		if at == 0 {
			for skip < delayTerms-earlyTerms && y[skip].hi == 0 {
				skip++
			}
			s.leading = skip
		}
		end := 0.0
		for _, c := range y[skip : skip+earlyTerms] {
			s.q = append(s.q, c.hi)
			end += c.hi
		}
		largest = max(largest, math.Abs(end), math.Abs(y[0].hi))
		s.largest = append(s.largest, largest)
		if largest > 1e300 {
			s.rest = m.clone()
			break
		}
	}
	if steady != nil {
		cells := len(s.q) / earlyTerms
		s.spreads = make([]float64, cells+1)
		s.spreads[cells] = remaining
		for i := cells - 1; i >= 0; i-- {
			s.spreads[i] = max(s.spreads[i+1], s.cellDeviation(i))
		}
	}
	return s, nil
}

// cellDeviation bounds |y - trend| on a cell.
func (s *stepwise) cellDeviation(i int) float64 {
	trend := shiftedWide(s.drift, wide{s.period, 0}.mulFloat(float64(i/s.perPeriod)).add(wide{s.h, 0}.mulFloat(float64(i%s.perPeriod))))
	q := s.q[i*earlyTerms:][:earlyTerms]
	sum, power := 0.0, 1.0
	apart := i == 0 && s.leading > 0
	for k, c := range q {
		if k < len(trend) && !apart {
			c -= trend[k].hi * power
			power *= s.h
		}
		sum += math.Abs(c)
	}
	if apart {
		for _, c := range trend {
			sum += math.Abs(c.hi) * power
			power *= s.h
		}
	}
	return sum
}

// largestDeviation bounds |y - limit| from a cell on.
func (s *stepwise) largestDeviation(i int) float64 {
	top := 0.0
	for ; i < len(s.q)/earlyTerms; i++ {
		top = max(top, s.cellDeviation(i))
	}
	return top
}

// start returns where a cell begins.
func (q *delayEquation) start(i int) wide {
	return wide{q.period, 0}.mulFloat(float64(i / q.cells)).add(wide{q.h, 0}.mulFloat(float64(i % q.cells)))
}

// steady returns the polynomials in τ that signal and states tend to under a polynomial
// input; none if it has other parts, or if the loop has no gain to let go by at s = 0.
//
// With A(D) = a(D) + b(D)·e^(-TD) as a power series the signal is y = A(D)⁻¹·f(D)·u, of which
// only the derivatives of u that are not zero count; the states follow from their equations.
func (q *delayEquation) steady(in event) (y []wide, x [][]wide) {
	if len(in.sines) > 0 {
		return nil, nil
	}
	count := max(len(in.polynomial), 1)
	u := make([]wide, count)
	for k, c := range in.polynomial {
		u[k] = wide{c, 0}
		for range k {
			u[k] = u[k].mulFloat(1 / q.w)
		}
	}
	coefficient := func(c []wide, direct wide, k int) wide {
		if k > q.n {
			return wide{}
		}
		if k == q.n {
			return direct
		}
		return c[k].add(direct.mul(q.a[k]))
	}
	around, forward := make([]wide, count), make([]wide, count)
	for k := range count {
		if k <= q.n {
			around[k] = q.a[k]
		}
		forward[k] = coefficient(q.fromIn, q.inD, k)
		delay := wide{1, 0} // (-T)^(k-j)/(k-j)!
		for j := k; j >= 0; j-- {
			around[k] = around[k].sub(coefficient(q.fromLoop, q.loopD, j).mul(delay))
			delay = delay.mulFloat(-q.period).div(wide{float64(k - j + 1), 0})
		}
	}
	if around[0].hi == 0 {
		return nil, nil
	}
	y = make([]wide, count)
	gain := make([]wide, count)
	derivative := append([]wide(nil), u...)
	for k := range count {
		c := forward[k]
		for j := 1; j <= k; j++ {
			c = c.sub(around[j].mul(gain[k-j]))
		}
		gain[k] = c.div(around[0])
		for i, d := range derivative {
			y[i] = y[i].add(gain[k].mul(d))
		}
		derivative = derive(derivative)
	}
	delayed := shiftedWide(y, wide{-q.period, 0})
	x = make([][]wide, q.n)
	first := make([]wide, count)
	for k := range count {
		first[k] = y[k].sub(q.loopD.mul(delayed[k])).sub(q.inD.mul(u[k]))
	}
	next := first
	for i := range q.n {
		x[i] = next
		rate := derive(next)
		next = make([]wide, count)
		for k := range count {
			if k < len(rate) {
				next[k] = rate[k]
			}
			next[k] = next[k].add(q.a[q.n-1-i].mul(first[k])).sub(q.fromLoop[q.n-1-i].mul(delayed[k])).sub(q.fromIn[q.n-1-i].mul(u[k]))
		}
	}
	for len(y) > 1 && y[len(y)-1].hi == 0 {
		y = y[:len(y)-1]
	}
	return y, x
}

// derive returns the derivative of a polynomial by power.
func derive(p []wide) []wide {
	if len(p) == 0 {
		return nil
	}
	d := make([]wide, len(p)-1)
	for k := range d {
		d[k] = p[k+1].mulFloat(float64(k + 1))
	}
	return d
}

// shiftedWide returns the polynomial of x - d instead of x, by power.
func shiftedWide(p []wide, d wide) []wide {
	p = append([]wide(nil), p...)
	for k := range p {
		for i := len(p) - 2; i >= k; i-- {
			p[i] = p[i].add(p[i+1].mul(d))
		}
	}
	return p
}

func polynomialAt(p []wide, x wide) (y wide) {
	for k := len(p) - 1; k >= 0; k-- {
		y = y.mul(x).add(p[k])
	}
	return y
}

// trendAt returns the trend and its derivatives at τ.
func (s *stepwise) trendAt(tau float64) (y, d, c float64) {
	p := shiftedWide(s.drift, wide{tau, 0})
	for k, v := range p {
		switch k {
		case 0:
			y = v.float()
		case 1:
			d = v.float()
		case 2:
			c = 2 * v.float()
		}
	}
	return y, d, c
}

// locate returns the cell at τ, or the one before if τ is where it begins, and the fraction of it.
func (s *stepwise) locate(tau, lo float64, before bool) (i int, x float64) {
	p := math.Floor(tau / s.period)
	r := math.FMA(-p, s.period, tau)
	switch {
	case r+lo < 0:
		p--
		r = math.FMA(-p, s.period, tau)
	case r >= s.period:
		p++
		r = math.FMA(-p, s.period, tau)
	}
	if before && r == 0 && p > 0 {
		return int(p)*s.perPeriod - 1, 1
	}
	c := min(int(r/s.h), s.perPeriod-1)
	if before && c > 0 && r == float64(c)*s.h {
		c--
	}
	return int(p)*s.perPeriod + c, max((r-float64(c)*s.h+lo)/s.h, 0)
}

func (s *stepwise) at(t, lo float64) float64 {
	tau := t * s.w
	if tau/s.h > askedCells*1.0+float64(len(s.q)/earlyTerms) && !s.settled {
		return math.NaN()
	}
	if s.settled && tau/s.h > float64(len(s.q)/earlyTerms+1) {
		y, _, _ := s.trendAt(tau)
		return y
	}
	i, x := s.locate(tau, lo*s.w, false)
	if i >= len(s.q)/earlyTerms {
		if s.settled {
			y, _, _ := s.trendAt(tau)
			return y
		}
		return s.continued(i, x)
	}
	q := s.q[i*earlyTerms:][:earlyTerms]
	y := 0.0
	for k := len(q) - 1; k >= 0; k-- {
		y = y*x + q[k]
	}
	if i == 0 && s.leading > 0 {
		y *= math.Pow(x, float64(s.leading))
	}
	return y
}

// continued goes on from the last cell.
func (s *stepwise) continued(i int, x float64) float64 {
	m := s.rest.clone()
	for m.index < i {
		m.step()
	}
	q, _ := m.step()
	y := 0.0
	for k := len(q) - 1; k >= 0; k-- {
		y = y*x + q[k].hi
	}
	return y
}

// The curve of a stepwise, for its figures.

func (s *stepwise) node(tau float64, before bool, n *node) {
	n.t = tau
	i, x := s.locate(tau, 0, before)
	if last := len(s.q) / earlyTerms; i >= last {
		*n = node{t: tau, step: math.Inf(1), spread: s.spreads[last]}
		n.y, n.d, n.c = s.trendAt(tau)
		if len(s.drift) > 4 {
			n.fourth = math.Inf(1) // no figures of what grows so
		}
		return
	}
	q := s.q[i*earlyTerms:][:earlyTerms]
	var y, d, c, fourth float64
	lead := 0
	if i == 0 {
		lead = s.leading
	}
	for k := len(q) - 1; k >= 0; k-- {
		c = c*x + 2*d
		d = d*x + y
		y = y*x + q[k]
		j := float64(k + lead)
		fourth += j * (j - 1) * (j - 2) * (j - 3) * math.Abs(q[k])
	}
	if r := float64(lead); r > 0 {
		p2, p1 := 0.0, 1.0
		if r > 1 {
			p2 = math.Pow(x, r-2)
			p1 = p2 * x
		}
		y, d, c = p1*x*y, p1*(x*d+r*y), p1*(x*c+2*r*d)+r*(r-1)*p2*y
	}
	g := 1 / s.h
	n.y, n.d, n.c = y, d*g, c*g*g
	n.fourth = fourth * g * g * g * g
	n.spread = s.spreads[i]
	n.step = s.h
}

func (s *stepwise) fourth(a, b *node) float64 {
	i, _ := s.locate(a.t, 0, false)
	if i != 0 || s.leading < 4 || i >= len(s.q)/earlyTerms {
		return a.fourth
	}
	// Near t = 0 the bound over the whole cell says too little.
	x := b.t / s.h
	sum := 0.0
	for k := earlyTerms - 1; k >= 0; k-- {
		j := float64(k + s.leading)
		sum = sum*x + j*(j-1)*(j-2)*(j-3)*math.Abs(s.q[k])
	}
	g := 1 / s.h
	return sum * math.Pow(x, float64(s.leading-4)) * g * g * g * g
}

// boundary returns where cell i begins.
func (s *stepwise) boundary(i int) float64 {
	return float64(i/s.perPeriod)*s.period + float64(i%s.perPeriod)*s.h
}

func (s *stepwise) cellEnd(tau float64) float64 {
	i, _ := s.locate(tau, 0, false)
	for ; i < len(s.q)/earlyTerms; i++ {
		if end := s.boundary(i + 1); end > tau {
			return end
		}
	}
	return math.Inf(1)
}

func (s *stepwise) cellStart(tau float64) float64 {
	i, _ := s.locate(tau, 0, true)
	i = min(i, len(s.q)/earlyTerms)
	for i > 0 && s.boundary(i) >= tau {
		i--
	}
	return s.boundary(i)
}

func (s *stepwise) rate() float64 { return s.w }

func (s *stepwise) ultimate() float64 {
	if len(s.drift) != 1 {
		return math.NaN()
	}
	return s.drift[0].float()
}

func (s *stepwise) trend() ([]float64, bool) {
	p := make([]float64, len(s.drift))
	for k, c := range s.drift {
		p[k] = c.float()
	}
	return p, s.drift != nil
}

func (s *stepwise) horizon() float64 { return 0 }

func (s *stepwise) calm(level float64) float64 {
	i := sort.Search(len(s.spreads), func(i int) bool { return s.spreads[i] <= level })
	if i == len(s.spreads) {
		return math.Inf(1)
	}
	return s.boundary(i)
}
