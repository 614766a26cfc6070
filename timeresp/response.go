package timeresp

import (
	"context"
	"math"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A Response is a signal over all time: zero before t = 0, then known at every t, not only
// at samples. It never changes; goroutines may share one.
type Response struct {
	arcs  []arc   // by the instant they begin at; the signal is their sum
	final float64 // the limit for t → ∞; NaN if there is none
	dirac []float64
}

// An arc is a summand of the signal, zero before from.
type arc struct {
	from   float64 // s
	signal signal
}

var (
	unitStep    = StepInput(1)
	unitImpulse = ImpulseInput(1)
	unitRamp    = RampInput(1)
)

// Step returns the response of g to a unit step at t = 0, g at rest before.
//
// Of a function of z it is the response to the samples of the step, by the recursion in
// extended precision, held from each sample to the next; likewise for the other inputs.
//
// The error is that of g if it is invalid, a [*poly.ArgumentError] for an improper g, a
// [*poly.RangeError] where numbers leave the range of float64, and a [*tf.UnsupportedError]
// where the promised accuracy cannot be kept.
func Step(g tf.Function, opt ...Option) (*Response, error) {
	return respond(context.Background(), "timeresp.Step", g, unitStep)
}

// Impulse returns the response of g to a unit Dirac impulse at t = 0. The direct part of a
// biproper g is an impulse itself, see [Response.Impulses]; At has the smooth part. Of a
// function of z it is the response to a single sample of 1.
func Impulse(g tf.Function, opt ...Option) (*Response, error) {
	return respond(context.Background(), "timeresp.Impulse", g, unitImpulse)
}

// Ramp returns the response of g to the input t, from t = 0 on.
func Ramp(g tf.Function, opt ...Option) (*Response, error) {
	return respond(context.Background(), "timeresp.Ramp", g, unitRamp)
}

func respond(ctx context.Context, call string, g tf.Function, in Input) (*Response, error) {
	if err := g.Err(); err != nil {
		return nil, err
	}
	if g.Period() > 0 {
		return sampledResponse(ctx, call, g, in, call == "timeresp.Impulse")
	}
	roots, err := g.Poles()
	if err != nil {
		return nil, err
	}
	return rational(call, g.Numerator(), g.Denominator(), roots, in, g.DeadTime())
}

// rational returns the response of numerator/denominator, whose roots are given.
func rational(call string, numerator, denominator poly.Poly, roots []poly.Root, in Input, deadTime float64) (*Response, error) {
	if numerator.Degree() > denominator.Degree() {
		return nil, &poly.ArgumentError{Call: call, Argument: "g", Reason: "improper: the numerator has a higher degree than the denominator"}
	}
	numerator, denominator, roots, err := cancel(numerator, denominator, roots)
	if err != nil {
		return nil, err
	}
	fastest := 0.0
	for _, t := range in.terms {
		fastest = max(fastest, math.Abs(t.omega))
	}
	r := &Response{}
	for _, e := range in.events() {
		for _, c := range e.factors() {
			f, dirac, err := newTransform(call, numerator, denominator, roots, c, fastest)
			if err != nil {
				return nil, err
			}
			k, err := newKernel(f)
			if err != nil {
				return nil, err
			}
			r.arcs = append(r.arcs, arc{from: e.at + deadTime, signal: k})
			if dirac != 0 {
				r.dirac = append(r.dirac, e.at+deadTime, dirac)
			}
		}
	}
	r.final = r.limit()
	return r, nil
}

// At returns the response at t, in seconds; at a jump the value just after it, and the
// limit, if there is one, at +Inf. The error is below 1e-11 of the largest |y| up to t, see
// [Response.ErrorBound].
//
// Where a growing response has left the range of float64 the result is ±Inf or NaN. A loop
// with dead time that does not come to rest is known for some thousand of its fastest time
// constants; beyond, At continues the solution anew each time, and gives NaN after two
// million.
func (r *Response) At(t float64) float64 {
	if math.IsInf(t, 1) {
		return r.final
	}
	y := 0.0
	for i := range r.arcs {
		a := &r.arcs[i]
		if !(t >= a.from) {
			break
		}
		s := t - a.from
		u := s - t
		y += a.signal.at(s, (t-(s-u))+(-a.from-u))
	}
	if t != t {
		return t
	}
	return y
}

// Final returns the limit of the response for t → ∞; NaN if there is none.
func (r *Response) Final() float64 { return r.final }

// Impulses returns the Dirac impulses in the response, the direct part of a biproper
// function that is driven by an impulse: instants in seconds and areas. [Response.At]
// leaves them out.
func (r *Response) Impulses() (times, areas []float64) {
	for i := 0; i < len(r.dirac); i += 2 {
		times = append(times, r.dirac[i])
		areas = append(areas, r.dirac[i+1])
	}
	return times, areas
}
