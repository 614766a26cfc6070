package spec

import (
	"math"
	"sync"
)

// The search for gain windows looks at hundreds of closed loops that differ in the gain
// alone. A trajectory is the step response of one of them, as a sum over the modes in
// float64, with every extremum up to a horizon and a bound on what comes after it. It
// answers the questions that decide a requirement: the largest value in a span of time,
// the first time at a level, the total variation.

// modes are the poles of a signal, simple ones, with Im ≥ 0: a pair counts once.
type modes struct {
	re, im []float64
}

// signal is final + Σ Re(w·e^(pt)) over the modes; pairs carry twice the residue.
type signal struct {
	modes  *modes
	wr, wi []float64 // weights w
	size   []float64 // |w|
	final  float64
	scale  float64 // |final| + Σ|w|

	t, f, d []float64 // samples: time, value, derivative; t[0] = 0
	turns   []turn    // extrema, ascending in time, the start not counted
	horizon float64
	tail    float64 // bound on |f - final| from the horizon on
	swing   float64 // bound on the total variation from the horizon on

	until, small float64 // what trace was asked for
	cut          bool    // trace gave up before
}

// samples are working storage, handed on from one signal to the next.
type samples struct{ t, f, d []float64 }

var spare sync.Pool // of *samples

// release gives the samples back; the signal must not be used after.
func (s *signal) release() {
	if s != nil && s.t != nil {
		spare.Put(&samples{s.t[:0], s.f[:0], s.d[:0]})
		s.t, s.f, s.d = nil, nil, nil
	}
}

// turn is an extremum in a cell of the samples.
type turn struct {
	lo, hi  float64 // bracket of the sign change of the derivative
	t, f    float64 // until refined: of the cubic through the samples
	refined bool
}

// roughness bounds the error of the cubic at an extremum, relative to its distance from the
// final value and to the steps about it.
const roughness = 1e-3

// at returns value and derivative at time t ≥ 0.
func (s *signal) at(t float64) (f, d float64) {
	f = s.final
	m := s.modes
	for i, re := range m.re {
		e := math.Exp(re * t)
		if e == 0 {
			continue
		}
		zr, zi := s.wr[i]*e, 0.0
		if im := m.im[i]; im != 0 {
			sin, cos := math.Sincos(im * t)
			zr, zi = e*(s.wr[i]*cos-s.wi[i]*sin), e*(s.wr[i]*sin+s.wi[i]*cos)
			d += re*zr - im*zi
		} else {
			d += re * zr
		}
		f += zr
	}
	return f, d
}

// envelope bounds |f - final| at every time from t on.
func (s *signal) envelope(t float64) float64 {
	sum := 0.0
	for i, re := range s.modes.re {
		sum += s.size[i] * math.Exp(re*t)
	}
	return sum
}

// variationFrom bounds the total variation from time t on.
func (s *signal) variationFrom(t float64) float64 {
	sum := 0.0
	for i, re := range s.modes.re {
		sum += s.size[i] * math.Exp(re*t) * math.Hypot(re, s.modes.im[i]) / -re
	}
	return sum
}

const (
	blockSteps = 16
	// stepAngle is the step, times the fastest rate alive. Between samples the value is
	// known to stepAngle⁴/384 of what the fast modes carry, and a pair of extrema in one
	// step shows in the second derivative.
	stepAngle = 0.5
	maxSteps  = 1 << 16
	deadBelow = 1e-15
)

// trace samples the signal until the envelope has fallen to small and finds the extrema. It
// gives up limit samples after the time given; tail then tells how much may still come.
func (s *signal) trace(until, small float64, limit int) {
	m := s.modes
	n := len(m.re)
	if s.t == nil {
		if b, ok := spare.Get().(*samples); ok {
			s.t, s.f, s.d = b.t, b.f, b.d
		} else {
			s.t, s.f, s.d = make([]float64, 0, 192), make([]float64, 0, 192), make([]float64, 0, 192)
		}
	}
	s.t, s.f, s.d, s.turns = s.t[:0], s.f[:0], s.d[:0], s.turns[:0]
	var store [4 * 32]float64
	work := store[:0]
	if 4*n > len(store) {
		work = make([]float64, 0, 4*n)
	}
	zr, zi, qr, qi := work[0:n], work[n:2*n], work[2*n:3*n], work[3*n:4*n]
	dead := deadBelow * s.scale
	t := 0.0
	late := 0       // samples before the time given
	previous := 0.0 // second derivative at the last sample
	for {
		rate, rest := 0.0, 0.0
		for i := range n {
			e := math.Exp(m.re[i] * t)
			size := s.size[i] * e
			rest += size
			if size <= dead {
				zr[i], zi[i], qr[i], qi[i] = 0, 0, 0, 0
				continue
			}
			rate = math.Max(rate, math.Hypot(m.re[i], m.im[i]))
			sin, cos := 0.0, 1.0
			if m.im[i] != 0 {
				sin, cos = math.Sincos(m.im[i] * t)
			}
			zr[i], zi[i] = e*(s.wr[i]*cos-s.wi[i]*sin), e*(s.wr[i]*sin+s.wi[i]*cos)
		}
		if t < until {
			late = len(s.t)
		}
		if rest <= small || rate == 0 || t >= until && len(s.t) >= late+limit || len(s.t) >= maxSteps {
			s.horizon, s.tail = t, rest
			s.until, s.small, s.cut = until, small, rest > small && limit < maxSteps
			s.add(t, zr, zi, &previous)
			s.swing = s.variationFrom(t)
			return
		}
		dt := stepAngle / rate
		for i := range n {
			if zr[i] == 0 && zi[i] == 0 {
				continue
			}
			e := math.Exp(m.re[i] * dt)
			qr[i], qi[i] = e, 0
			if m.im[i] != 0 {
				sin, cos := math.Sincos(m.im[i] * dt)
				qr[i], qi[i] = e*cos, e*sin
			}
		}
		start := t
		for j := range blockSteps {
			s.add(start+float64(j)*dt, zr, zi, &previous)
			for i := range n {
				x, y := zr[i], zi[i]
				zr[i], zi[i] = x*qr[i]-y*qi[i], x*qi[i]+y*qr[i]
			}
		}
		t = start + blockSteps*dt
	}
}

// extend samples on where trace gave up, and reports whether there was more to see.
func (s *signal) extend() bool {
	if !s.cut {
		return false
	}
	s.trace(s.until, s.small, maxSteps)
	return true
}

// add appends a sample and looks for extrema since the last one.
func (s *signal) add(t float64, zr, zi []float64, previous *float64) {
	m := s.modes
	f, d, c := s.final, 0.0, 0.0 // value, first and second derivative
	for i, re := range m.re {
		x, y := zr[i], zi[i]
		im := m.im[i]
		f += x
		x, y = re*x-im*y, re*y+im*x
		d += x
		c += re*x - im*y
	}
	n := len(s.t)
	if n > 0 {
		t0, d0, c0 := s.t[n-1], s.d[n-1], *previous
		switch {
		case d0 == 0 && n == 1:
			// The start of a strictly proper response is no extremum.
		case d0 > 0 && d <= 0 || d0 < 0 && d >= 0:
			s.turns = append(s.turns, cubicTurn(t0, t, s.f[n-1], f, d0, d))
		case d0*c0 < 0 && d*c > 0:
			s.dip(t0, t, d0, c0, d, c)
		}
	}
	s.t, s.f, s.d = append(s.t, t), append(s.f, f), append(s.d, d)
	*previous = c
}

// cubicTurn returns the extremum of the cubic with the given values and slopes, of opposite
// sign, at its ends.
func cubicTurn(t0, t1, f0, f1, d0, d1 float64) turn {
	h := t1 - t0
	a, b := d0*h, d1*h
	c2, c3 := 3*(f1-f0)-2*a-b, a+b-2*(f1-f0) // f0 + x(a + x(c2 + x·c3)), x in [0, 1]
	x := a / (a - b)
	for range 2 {
		g, gg := a+x*(2*c2+3*x*c3), 2*c2+6*x*c3
		if y := x - g/gg; y > 0 && y < 1 {
			x = y
		}
	}
	return turn{lo: t0, hi: t1, t: t0 + x*h, f: f0 + x*(a+x*(c2+x*c3))}
}

// dip handles a step in which the derivative falls towards zero and grows again: where the
// cubic through the ends comes near zero, the minimum is looked for.
func (s *signal) dip(t0, t1, d0, c0, d1, c1 float64) {
	h := t1 - t0
	// The tangents meet below the curve of a function that is convex (in the sense of the sign).
	x := (d1 - d0 - c1*h) / (c0 - c1) // time after t0 where the tangents meet
	if !(x > 0 && x < h) || (d0+c0*x)*d0 > 0 {
		return
	}
	lo, hi := t0, t1
	for range 40 { // ternary search on |d|; ends early once the sign has changed
		a, b := lo+(hi-lo)/3, hi-(hi-lo)/3
		_, da := s.at(a)
		_, db := s.at(b)
		if da*d0 <= 0 || db*d0 <= 0 {
			mid := a
			if da*d0 > 0 {
				mid = b
			}
			for _, u := range []turn{{lo: t0, hi: mid, t: t0 + (mid-t0)/2}, {lo: mid, hi: t1, t: mid + (t1-mid)/2}} {
				s.refine(&u)
				s.turns = append(s.turns, u)
			}
			return
		}
		if math.Abs(da) < math.Abs(db) {
			hi = b
		} else {
			lo = a
		}
	}
}

// refine sets time and value of an extremum.
func (s *signal) refine(u *turn) {
	if u.refined {
		return
	}
	lo, hi := u.lo, u.hi
	_, dlo := s.at(lo)
	_, dhi := s.at(hi)
	t := u.t
	if dlo == 0 {
		t = lo
	}
	side := 0
	for range 60 { // Illinois variant of false position
		f, d := s.at(t)
		u.t, u.f = t, f
		if d == 0 || hi-lo <= 4e-16*hi {
			break
		}
		if d*dlo > 0 {
			lo, dlo = t, d
			if side == -1 {
				dhi /= 2
			}
			side = -1
		} else {
			hi, dhi = t, d
			if side == 1 {
				dlo /= 2
			}
			side = 1
		}
		next := (lo*dhi - hi*dlo) / (dhi - dlo)
		if !(next > lo && next < hi) {
			next = lo + (hi-lo)/2
			if next == lo || next == hi {
				break
			}
		}
		if math.Abs(next-t) <= 1e-15*t {
			u.t = next
			break
		}
		t = next
	}
	u.refined = true
}

// estimate returns the value at an extremum, to rounding.
func (s *signal) estimate(u *turn) float64 {
	s.refine(u)
	return u.f
}

// largest returns the supremum of sign·f over [from, to], to may be +Inf, and where it is
// attained; above bounds it from above, the time after the horizon included. The value at
// from counts only if from > 0 or the response starts there.
func (s *signal) largest(sign, from, to float64) (value, where, above float64) {
	f, _ := s.at(from)
	value, where = sign*f, from
	if !math.IsInf(to, 1) {
		if f, _ = s.at(to); sign*f > value {
			value, where = sign*f, to
		}
	} else if sign*s.final > value {
		value, where = sign*s.final, inf
	}
	for i := range s.turns {
		u := &s.turns[i]
		if u.hi <= from {
			continue
		}
		if u.lo >= to {
			break
		}
		if !u.refined && sign*u.f+roughness*math.Abs(u.f-s.final) < value {
			continue
		}
		if x := sign * s.estimate(u); x > value && u.t >= from && u.t <= to {
			value, where = x, u.t
		}
	}
	if from > s.horizon && from > 0 && math.IsInf(to, 1) {
		// Nothing was sampled here: either all has died down, or the signal has swung so often
		// that its envelope tells its extrema.
		if top := sign*s.final + s.envelope(from); top > value {
			value, where = top, from*(1+1e-6)
		}
		return value, where, value
	}
	above = value
	if to > s.horizon {
		above = math.Max(above, sign*s.final+s.tail)
	}
	return value, where, above
}

// largestAbs is largest of |f - about|.
func (s *signal) largestAbs(about, from, to float64) (value, where, above float64) {
	v1, w1, a1 := s.largest(1, from, to)
	v2, w2, a2 := s.largest(-1, from, to)
	v1, a1, v2, a2 = v1-about, a1-about, v2+about, a2+about
	if v1 >= v2 {
		return v1, w1, math.Max(a1, a2)
	}
	return v2, w2, math.Max(a1, a2)
}

// firstAt returns the first time at which sign·f reaches level; +Inf if it does not before
// the horizon.
func (s *signal) firstAt(sign, level float64) float64 {
	if sign*s.f[0] >= level {
		return 0
	}
	k := 0 // next extremum
	for j := 1; j < len(s.t); j++ {
		for k < len(s.turns) && s.turns[k].hi <= s.t[j] {
			u := &s.turns[k]
			k++
			if !u.refined && sign*u.f+roughness*math.Abs(u.f-s.final) < level {
				continue
			}
			if sign*s.estimate(u) >= level {
				return s.cross(sign, level, s.t[j-1], u.t)
			}
		}
		if sign*s.f[j] >= level {
			return s.cross(sign, level, s.t[j-1], s.t[j])
		}
	}
	return inf
}

// cross returns where sign·f passes level upwards in [lo, hi], by Newton's method kept
// inside the bracket.
func (s *signal) cross(sign, level, lo, hi float64) float64 {
	if sf, _ := s.at(hi); sign*sf <= level {
		return hi
	}
	return increasing(lo, hi, lo+(hi-lo)/2, func(t float64) (float64, float64) {
		f, d := s.at(t)
		return sign*f - level, sign * d
	})
}

// variation bounds the total variation over t > 0, the jump at 0 included.
func (s *signal) variation() float64 {
	sum := math.Abs(s.f[0])
	last := s.f[0]
	for i := range s.turns {
		f := s.turns[i].f
		sum += math.Abs(f-last) + 2*roughness*math.Abs(f-s.final)
		last = f
	}
	end := s.f[len(s.f)-1]
	sum += math.Abs(end-last) + s.swing
	return math.Min(math.Abs(s.f[0])+s.variationFrom(0), sum)
}
