package timeresp

import (
	"context"
	"errors"

	"github.com/polewright/polewright/tf"
)

// StepOf returns the response of the output of the loop to a unit step of the reference,
// everything at rest before. The loop is taken as linear: Limits are not looked at (see
// [Run]). Dead time is exact, in the loop too.
func StepOf(l tf.Loop, opt ...Option) (*Response, error) {
	return between(context.Background(), "timeresp.StepOf", l, tf.Reference, tf.Output, unitStep, opt)
}

// Of returns the response of one signal of the loop to an input at another, everything at
// rest before: from Reference, LoadDisturbance, OutputDisturbance or Noise to Output, Error
// or Effort. The loop is taken as linear, as by [StepOf].
func Of(ctx context.Context, l tf.Loop, from, to tf.Point, in Input, opt ...Option) (*Response, error) {
	return between(ctx, "timeresp.Of", l, from, to, in, opt)
}

func between(ctx context.Context, call string, l tf.Loop, from, to tf.Point, in Input, opt []Option) (*Response, error) {
	if err := in.check(call); err != nil {
		return nil, err
	}
	if l.SampledData() {
		return nil, &tf.UnsupportedError{Call: call, What: "a sampled-data loop between its samples; Run follows it"}
	}
	path, err := l.Path(from, to)
	if err != nil {
		return nil, err
	}
	g, err := path.Function()
	if err == nil {
		return respond(ctx, call, g, in)
	}
	if irrational := (*tf.IrrationalError)(nil); errors.As(err, &irrational) {
		return delayed(ctx, call, path, in)
	}
	return nil, err
}

// delayed returns the response of a path whose loop has dead time.
func delayed(ctx context.Context, call string, path tf.Path, in Input) (*Response, error) {
	forward, delay, outer, fixed, scaled, around := path.Parts()
	q, err := newDelayEquation(call, outer.Mul(fixed), outer.Mul(scaled), forward, around)
	if err != nil {
		return nil, err
	}
	d := q.decay()
	r := &Response{}
	for _, e := range in.events() {
		s, err := q.solve(ctx, call, e, &d)
		if err != nil {
			return nil, err
		}
		r.arcs = append(r.arcs, arc{from: e.at + delay, signal: s})
		for i := 0; i < len(s.dirac); i += 2 {
			r.dirac = append(r.dirac, e.at+delay+s.dirac[i]/q.w, s.dirac[i+1]/q.w)
		}
	}
	r.final = r.limit()
	return r, nil
}
