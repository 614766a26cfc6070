package timeresp

import (
	"math"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A Response is a signal over all time: zero before t = 0, then known at every t, not only
// at samples. It never changes; goroutines may share one.
type Response struct {
	arcs  []arc
	final float64 // the limit for t → ∞; NaN if there is none
	dirac float64
}

// An arc is the signal from one instant to the start of the next arc.
type arc struct {
	from   float64 // s
	signal *kernel
}

var (
	impulseFactor = factor{num: []float64{1}}
	stepFactor    = factor{num: []float64{1}, zeros: 1}
	rampFactor    = factor{num: []float64{1}, zeros: 2}
)

// Step returns the response of g to a unit step at t = 0, g at rest before.
func Step(g tf.Function, opt ...Option) (*Response, error) {
	return respond("timeresp.Step", g, stepFactor)
}

// Impulse returns the response of g to a unit Dirac impulse at t = 0.
func Impulse(g tf.Function, opt ...Option) (*Response, error) {
	return respond("timeresp.Impulse", g, impulseFactor)
}

// Ramp returns the response of g to the input t, from t = 0 on.
func Ramp(g tf.Function, opt ...Option) (*Response, error) {
	return respond("timeresp.Ramp", g, rampFactor)
}

func respond(call string, g tf.Function, in factor) (*Response, error) {
	if err := g.Err(); err != nil {
		return nil, err
	}
	if g.Period() > 0 {
		return nil, &tf.UnsupportedError{Call: call, What: "a function of z"}
	}
	roots, err := g.Poles()
	if err != nil {
		return nil, err
	}
	return rational(call, g.Numerator(), g.Denominator(), roots, in, g.DeadTime())
}

func rational(call string, numerator, denominator poly.Poly, roots []poly.Root, in factor, deadTime float64) (*Response, error) {
	if numerator.Degree() > denominator.Degree() {
		return nil, &poly.ArgumentError{Call: call, Argument: "g", Reason: "improper: the numerator has a higher degree than the denominator"}
	}
	f, dirac, err := newTransform(call, numerator, denominator, roots, in)
	if err != nil {
		return nil, err
	}
	k, err := newKernel(f)
	if err != nil {
		return nil, err
	}
	r := &Response{arcs: []arc{{from: deadTime, signal: k}}, dirac: dirac}
	r.final = k.limit()
	return r, nil
}

// At returns the response at t, in seconds; at a jump the value just after it, and the
// limit, if there is one, at +Inf.
func (r *Response) At(t float64) float64 {
	if len(r.arcs) == 0 || !(t >= r.arcs[0].from) {
		if t != t {
			return t
		}
		return 0
	}
	if math.IsInf(t, 1) {
		return r.final
	}
	a := &r.arcs[0]
	if len(r.arcs) > 1 {
		lo, hi := 0, len(r.arcs)
		for hi-lo > 1 {
			if m := (lo + hi) / 2; r.arcs[m].from <= t {
				lo = m
			} else {
				hi = m
			}
		}
		a = &r.arcs[lo]
	}
	s := t - a.from
	u := s - t
	return a.signal.at(s, (t-(s-u))+(-a.from-u))
}
