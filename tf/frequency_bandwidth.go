package tf

import (
	"math"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// Bandwidth returns the bandwidth of the path, rad/s, as [Function.Bandwidth] does, dead time in
// the loop included. The error is a [*poly.ArgumentError] if the value at zero frequency is zero or
// infinite, or an [*UnsupportedError] where a path with dead time in its loop stays so near to the
// level, or its coefficients span so much, that the bounded search does not find the end.
func (p Path) Bandwidth() (float64, error) {
	const call = "tf.Path.Bandwidth"
	if !p.made || p.around.zero() || p.scaled.Degree() < 0 {
		g, err := p.function(call)
		if err != nil {
			return math.NaN(), err
		}
		return g.Bandwidth()
	}
	at0 := cmplx.Abs(p.At(0))
	if !(at0 > 0) || math.IsInf(at0, 1) {
		return math.NaN(), badArgument(call, "p", "has the value %v at zero frequency; a bandwidth needs one that is neither 0 nor infinite", at0)
	}
	f, ok := newDelayedLevel(p.outer.Mul(p.fixed), p.outer.Mul(p.scaled), p.forward, p.around.near, at0)
	if !ok {
		return math.NaN(), &UnsupportedError{Call: call, What: "dead time with coefficients of this order or span"}
	}
	w, ok := f.firstZero()
	if !ok {
		return math.NaN(), &UnsupportedError{Call: call, What: "a path whose magnitude does not leave the level within the bounded search"}
	}
	return w, nil
}

// A delayedLevel is h(v) = |R|² - c²·|P + Q·e^(-jτv)|² on the axis, positive where the magnitude
// |R/(P + Q·e^(-jτv))| is above c.
type delayedLevel struct {
	p, q, r [2][]float64 // real and imaginary parts as polynomials in v
	tau, c2 float64
	unit    float64
	work    []float64
}

// newDelayedLevel takes the polynomials in s, and the magnitude at zero frequency of which c is
// 1/√2.
func newDelayedLevel(p, q, r poly.Poly, deadTime, at0 float64) (*delayedLevel, bool) {
	shift := unitExponent(q, p)
	f := &delayedLevel{unit: math.Ldexp(1, shift), c2: at0 * at0 / 2}
	f.tau = deadTime * f.unit
	var scaled [3]intervalPoly
	var tops [3]int
	size := 0
	for i, x := range [...]poly.Poly{p, q, r} {
		if x.Degree() > maxAxisDegree {
			return nil, false
		}
		var a axisForm
		var bottom int
		var ok bool
		if scaled[i], tops[i], bottom, ok = a.scaledCoefficients(x, shift); !ok || tops[i]-bottom > 400 {
			return nil, false
		}
		size = max(size, x.Degree()+2)
	}
	// P and Q by one factor, R by another that c takes up.
	common := max(tops[0], tops[1])
	scaled[0].shift(tops[0] - common)
	scaled[1].shift(tops[1] - common)
	f.c2 *= math.Ldexp(1, 2*min(max(common-tops[2], -500), 500))
	for i, out := range [...]*[2][]float64{&f.p, &f.q, &f.r} {
		var a axisForm
		re, im := alternate(a.split(scaled[i]))
		*out = [2][]float64{re, im}
		size = max(size, len(re), len(im))
	}
	f.work = make([]float64, 6*(size+1))
	return f, f.c2 > 0 && !math.IsInf(f.c2, 1)
}

// enclose returns h at the centre of the cell, and a bound on its change within it.
func (f *delayedLevel) enclose(c cell) (value, change float64) {
	size := len(f.work) / 6
	part := func(i int, p []float64) []float64 { return taylor(f.work[i*size:(i+1)*size], p, c.centre) }
	pr, pi := part(0, f.p[0]), part(1, f.p[1])
	qr, qi := part(2, f.q[0]), part(3, f.q[1])
	rr, ri := part(4, f.r[0]), part(5, f.r[1])
	p0, p1, _, _ := bounds(pr, pi, c.half)
	q0, q1, _, _ := bounds(qr, qi, c.half)
	r0, r1, _, _ := bounds(rr, ri, c.half)
	sin, cos := math.Sincos(-f.tau * c.centre)
	u := complex(pr[0], pi[0]) + complex(qr[0], qi[0])*complex(cos, sin)
	u1 := p1 + q1 + f.tau*q0
	uMost := min(p0+q0, cmplx.Abs(u)+u1*c.half)
	value = rr[0]*rr[0] + ri[0]*ri[0] - f.c2*(real(u)*real(u)+imag(u)*imag(u))
	return value, 2 * (r0*r1 + f.c2*uMost*u1) * c.half
}

// firstZero returns the lowest frequency, rad/s, at which h is 0. Cells that h provably does not
// vanish in are passed from below; where none can be passed there is the zero.
func (f *delayedLevel) firstZero() (float64, bool) {
	lo, width := 0.0, 1.0/1024
	for range 200000 {
		c := cell{lo + width/2, width / 2}
		value, change := f.enclose(c)
		switch {
		case math.IsNaN(value) || math.IsInf(value, 0):
			return 0, false
		case value > change:
			if lo > 0x1p40 {
				// Far beyond every root, where powers decide: h stays positive.
				return math.Inf(1), true
			}
			lo += width
			width *= 2
			continue
		case width > 8*unitRoundoff*lo:
			width /= 2
			continue
		}
		return f.unit * f.settle(lo), true
	}
	return 0, false
}

// settle improves a zero that the float64 spacing already encloses, by a secant over a distance at which
// rounding does not matter.
func (f *delayedLevel) settle(v float64) float64 {
	at := func(v float64) float64 {
		h, _ := f.enclose(cell{v, 0})
		return h
	}
	d := 1e-7 * v
	a, b := at(v-d), at(v+d)
	if a > 0 && b < 0 {
		lo, hi := v-d, v+d
		for range 60 {
			m := lo + (hi-lo)/2
			if at(m) > 0 {
				lo = m
			} else {
				hi = m
			}
		}
		return hi
	}
	return v
}
