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
		return respond(call, g, in)
	}
	if irrational := (*tf.IrrationalError)(nil); errors.As(err, &irrational) {
		return delayed(ctx, call, l, path, in, opt)
	}
	return nil, err
}

func delayed(ctx context.Context, call string, l tf.Loop, path tf.Path, in Input, opt []Option) (*Response, error) {
	return nil, &tf.UnsupportedError{Call: call, What: "dead time in the loop"}
}
