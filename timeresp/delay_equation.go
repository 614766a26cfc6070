package timeresp

import (
	"fmt"
	"math"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// Dead time in the loop: the method of steps. With a = outer·fixed, b = outer·scaled and f
// the forward polynomial, a signal y of the loop obeys
//
//	a(D) y(t) = f(D) u(t) - b(D) y(t - T),
//
// time counted from when the input first acts on it. Up to T the last term is zero; after
// that it is known, each time from the interval before. The solution is smooth between the
// breaking points kT; there jumps of the input come round again, one derivative higher each
// time or, if b has the degree of a, as jumps. Each interval is divided evenly into cells,
// on which a Taylor series of the solution is formed from that of the delayed signal on the
// same cell of the interval before: no interpolation, no approximation but the end of the
// series, in wide arithmetic.
//
// Source: R. Bellman and K. L. Cooke, Differential-Difference Equations, Academic Press
// 1963, chapter 3 (continuation interval by interval).

const (
	delayTerms    = 36      // of the series of a cell
	mostPerPeriod = 1 << 14 // cells
)

// A delayEquation is the equation in scaled time, with the states of the observer canonical
// form: y = x₁ + D·v, xᵢ′ = xᵢ₊₁ - a[n-i]·x₁ + (b - D·a)[n-i]·v, for both inputs v.
type delayEquation struct {
	n        int
	w        float64 // τ = w·t
	a        []wide  // monic, by power
	fromLoop []wide  // -b less its direct part times a, by power
	fromIn   []wide  // likewise f
	loopD    wide    // direct parts
	inD      wide
	cells    int     // per T
	h        float64 // length of a cell, scaled
	period   float64 // T, scaled
}

// newDelayEquation scales the equation so that the fastest rate in it is about 1.
func newDelayEquation(call string, a, b, f poly.Poly, seconds float64) (*delayEquation, error) {
	n := a.Degree()
	if b.Degree() > n || f.Degree() > n {
		return nil, &poly.ArgumentError{Call: call, Argument: "loop", Reason: "improper: a numerator has a higher degree than the denominator"}
	}
	poles, err := a.Roots()
	if err != nil {
		return nil, err
	}
	// The cells are set by the fastest pole; where the gain around the loop asks for shorter
	// ones, the series will tell.
	rate := 1 / seconds
	for _, p := range poles {
		rate = max(rate, cmplx.Abs(p.Value))
	}
	q := &delayEquation{n: n}
	_, scale := math.Frexp(rate)
	q.w = math.Ldexp(1, scale)
	q.period = math.Ldexp(seconds, scale)
	q.cells = int(max(1, math.Ceil(min(q.period/2, 2*mostPerPeriod))))
	if q.cells > mostPerPeriod {
		return nil, &tf.UnsupportedError{Call: call, What: fmt.Sprintf("dead time in the loop that is more than %d times the fastest time constant", 2*mostPerPeriod)}
	}
	q.h = q.period / float64(q.cells)
	da := scaledCoefficients(a, scale)
	top := wide{1, 0}.div(da[n])
	normalize := func(p poly.Poly) []wide {
		c := scaledCoefficients(p, scale)
		out := make([]wide, n+1)
		for i := range c {
			out[i] = c[i].mul(top)
		}
		return out
	}
	q.a = normalize(a)
	q.a[n] = wide{1, 0}
	q.fromLoop = normalize(b)
	for i := range q.fromLoop {
		q.fromLoop[i] = q.fromLoop[i].neg()
	}
	q.fromIn = normalize(f)
	q.loopD, q.inD = q.fromLoop[n], q.fromIn[n]
	for i := range n {
		q.fromLoop[i] = q.fromLoop[i].sub(q.loopD.mul(q.a[i]))
		q.fromIn[i] = q.fromIn[i].sub(q.inD.mul(q.a[i]))
	}
	for _, c := range [][]wide{q.a, q.fromLoop, q.fromIn} {
		for _, x := range c {
			if math.IsNaN(x.hi - x.hi) {
				return nil, &poly.RangeError{Call: call, Reason: "the coefficients, with time in units of the fastest mode, leave the range of float64"}
			}
		}
	}
	return q, nil
}

// divide makes the cells half as long.
func (q *delayEquation) divide() {
	q.cells *= 2
	q.h = q.period / float64(q.cells)
}

// A march is a solution that is continued cell by cell.
type march struct {
	*delayEquation
	in    event
	index int      // of the next cell
	x     []wide   // state at its start
	loop  [][]wide // series of the signal on the last T: cell i in loop[i % cells]
	dirac wide     // weight, in scaled time, of an impulse that comes round at the next breaking point
	rough bool     // the series of a cell has not converged

	xs      [][]wide // working storage: series of the states
	u       []wide
	factors []wide // h/(k+1)
}

func (q *delayEquation) march(in event) *march {
	m := &march{delayEquation: q, in: in, x: make([]wide, q.n)}
	m.loop = make([][]wide, q.cells)
	for i := range m.loop {
		m.loop[i] = make([]wide, delayTerms)
	}
	m.prepare()
	return m
}

func (m *march) prepare() {
	m.xs = make([][]wide, m.n+1)
	for i := range m.xs {
		m.xs[i] = make([]wide, delayTerms+1)
	}
	m.u = make([]wide, delayTerms)
	m.factors = make([]wide, delayTerms)
	for k := range m.factors {
		m.factors[k] = wide{m.h, 0}.div(wide{float64(k + 1), 0})
	}
}

// clone returns a copy that can go on by itself.
func (m *march) clone() *march {
	c := *m
	c.x = append([]wide(nil), m.x...)
	c.loop = make([][]wide, len(m.loop))
	for i := range c.loop {
		c.loop[i] = append([]wide(nil), m.loop[i]...)
	}
	c.prepare()
	return &c
}

// kick adds a Dirac impulse, of the given weight in scaled time, to an input of the system.
func (m *march) kick(from []wide, weight wide) {
	for i := range m.n {
		m.x[i] = m.x[i].add(from[m.n-1-i].mul(weight))
	}
}

// step forms the series of the signal on the next cell, by powers of the fraction of the
// cell, and goes on to the one after. The result is overwritten one T later. dirac is the
// area of an impulse at the start of the cell, in scaled time.
func (m *march) step() (y []wide, dirac wide) {
	if m.index%m.cells == 0 {
		switch {
		case m.index == 0 && m.in.impulse != 0:
			weight := wide{m.in.impulse, 0}.mulFloat(m.w)
			m.kick(m.fromIn, weight)
			m.dirac = m.inD.mul(weight)
			dirac = m.dirac
		case m.dirac.hi != 0:
			m.kick(m.fromLoop, m.dirac)
			m.dirac = m.loopD.mul(m.dirac)
			dirac = m.dirac
		}
	}
	y = m.loop[m.index%m.cells] // holds y(t-T) now
	m.drive()
	n := m.n
	for i := range n {
		m.xs[i][0] = m.x[i]
	}
	for k := range delayTerms {
		w, u := y[k], m.u[k]
		var x1 wide
		if n > 0 {
			x1 = m.xs[0][k]
		}
		factor := m.factors[k]
		for i := range n {
			var d wide
			if i+1 < n {
				d = m.xs[i+1][k]
			}
			if c := m.a[n-1-i]; c.hi != 0 {
				d = d.sub(c.mul(x1))
			}
			if c := m.fromLoop[n-1-i]; w.hi != 0 && c.hi != 0 {
				d = d.add(c.mul(w))
			}
			if c := m.fromIn[n-1-i]; u.hi != 0 && c.hi != 0 {
				d = d.add(c.mul(u))
			}
			m.xs[i][k+1] = d.mul(factor)
		}
		v := x1
		if w.hi != 0 && m.loopD.hi != 0 {
			v = v.add(m.loopD.mul(w))
		}
		if u.hi != 0 && m.inD.hi != 0 {
			v = v.add(m.inD.mul(u))
		}
		y[k] = v
	}
	for i := range n {
		var sum wide
		for k := delayTerms; k >= 0; k-- {
			sum = sum.add(m.xs[i][k])
		}
		m.x[i] = sum
	}
	// Of the terms kept the last one must not matter.
	size := 0.0
	for k := range earlyTerms {
		size += math.Abs(y[k].hi)
	}
	first := 0
	for first < earlyTerms && y[first].hi == 0 {
		first++
	}
	if first == 0 || m.index > 0 {
		if math.Abs(y[earlyTerms].hi)+math.Abs(y[earlyTerms+1].hi) > 0x1p-56*size {
			m.rough = true
		}
	}
	m.index++
	return y, dirac
}

// drive fills u with the series of the input on the next cell.
func (m *march) drive() {
	clear(m.u)
	period, i := m.index/m.cells, m.index%m.cells
	start := wide{m.period, 0}.mulFloat(float64(period)).add(wide{m.h, 0}.mulFloat(float64(i)))
	if n := len(m.in.polynomial); n > 0 {
		// c[k]·t^k with t = (start + h·x)/w.
		for k, c := range m.in.polynomial {
			m.u[k] = wide{c, 0}
			for range k {
				m.u[k] = m.u[k].mulFloat(1 / m.w)
			}
		}
		for k := range n {
			for j := n - 2; j >= k; j-- {
				m.u[j] = m.u[j].add(m.u[j+1].mul(start))
			}
		}
		power := wide{1, 0}
		for k := range n {
			m.u[k] = m.u[k].mul(power)
			power = power.mulFloat(m.h)
		}
	}
	for _, t := range m.in.sines {
		rate := t.omega / m.w
		angle := start.mulFloat(rate)
		sin, cos := math.Sincos(angle.hi)
		sin, cos = sin+angle.lo*cos, cos-angle.lo*sin
		sp, cp := math.Sincos(t.phase)
		sin, cos = sin*cp+cos*sp, cos*cp-sin*sp
		c := t.amplitude
		for k := range delayTerms {
			if k > 0 {
				c *= rate * m.h / float64(k)
			}
			d := [4]float64{sin, cos, -sin, -cos}[k%4]
			m.u[k] = m.u[k].addFloat(c * d)
		}
	}
}
