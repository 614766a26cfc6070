package timeresp

import (
	"errors"
	"math"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// FuzzStep forms step responses of functions with arbitrary coefficients and dead time, open
// and in a loop. Whatever the numbers: no panic and no hang; a value is finite or follows
// from growth; the bound on the error keeps its promise; figures agree with samples.
func FuzzStep(f *testing.F) {
	f.Add(1.0, 0.0, 0.0, 1.0, 0.0, 0.0, 1.0, 0.0)
	f.Add(1.0, 0.0, 0.0, 1.0, 3.0, 3.0, 1.0, 0.5)   // three equal lags
	f.Add(1.0, -2.0, 4.0, 1.0, 3.0, 3.0, 1.0, 0.0)  // zeros in the right half-plane
	f.Add(2.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 1.0)   // an integrator
	f.Add(2.0, 1.0, 0.0, -1.0, 0.5, 1.0, 0.0, 0.25) // unstable
	f.Add(1e-9, 0.0, 0.0, 1e-27, 3e-18, 3e-9, 1.0, 1e-9)
	f.Add(1.0, 0.0, 0.0, 1.0, 1e6, 1e6, 1.0, 0.0) // stiff
	f.Add(1e300, 1e-300, 0.0, 1e300, 1.0, 1e-300, 1.0, 0.0)
	f.Add(1.0, 0.0, 1.0, 0.0, 1.0, 0.0, 1.0, 0.0) // undamped
	f.Fuzz(func(t *testing.T, b0, b1, b2, a3, a2, a1, a0, delay float64) {
		g, err := tf.New(poly.New(b2, b1, b0), poly.New(a3, a2, a1, a0))
		if err != nil {
			return
		}
		if g, err = g.WithDeadTime(delay); err != nil {
			return
		}
		for _, in := range []string{"open", "closed"} {
			var r *Response
			if in == "open" {
				r, err = Step(g)
			} else {
				r, err = StepOf(tf.Loop{Plant: g})
			}
			if err != nil {
				checkErrorType(t, err)
				continue
			}
			checkResponse(t, r)
		}
	})
}

// checkErrorType fails unless the error is one that callers can branch on.
func checkErrorType(t *testing.T, err error) {
	t.Helper()
	var (
		argument    *poly.ArgumentError
		outside     *poly.RangeError
		unsupported *tf.UnsupportedError
	)
	if !errors.As(err, &argument) && !errors.As(err, &outside) && !errors.As(err, &unsupported) {
		t.Errorf("error of type %T: %v", err, err)
	}
}

func checkResponse(t *testing.T, r *Response) {
	t.Helper()
	if len(r.arcs) == 0 {
		return
	}
	span, start := r.Span(), r.arcs[0].from
	if math.IsNaN(span) || span < start {
		t.Fatalf("Span() = %v with a start at %v", span, start)
	}
	const n = 400
	out := make([]float64, n+1)
	step := (span - start) / n
	r.Sample(out, start, step)
	largest := 0.0
	for i, y := range out {
		at := start + float64(i)*step
		if math.IsInf(y, 0) || math.IsNaN(y) && largest > 1e150 {
			return // out of range
		}
		if math.IsNaN(y) {
			t.Fatalf("y(%v) is NaN", at)
		}
		largest = math.Max(largest, math.Abs(y))
		// The samples may have missed the largest value so far.
		if bound := r.ErrorBound(at); i > 0 && largest > 1e-290 && !(bound <= 3e-11*largest) {
			t.Errorf("ErrorBound(%v) = %v with values up to %v", at, bound, largest)
		}
		if got := r.At(at); !(math.Abs(got-y) <= 3e-11*largest+1e-300) && !jumpsNear(r, at) {
			t.Errorf("Sample has %v at %v, At %v", y, at, got)
		}
	}
	f, err := r.Figures(0.02)
	if err != nil {
		if missing := (*NoFinalValueError)(nil); !errors.As(err, &missing) {
			checkErrorType(t, err)
		}
		return
	}
	if f.Final == 0 || math.Abs(f.Final) < 1e-250 {
		return
	}
	for i, y := range out {
		at, u := start+float64(i)*step, y/f.Final
		if u > 1+f.Overshoot+2e-9 {
			t.Errorf("overshoot %v, but y(%v) is %v of the final value", f.Overshoot, at, u)
		}
		if -u > f.Undershoot+2e-9 {
			t.Errorf("undershoot %v, but y(%v) is %v of the final value", f.Undershoot, at, u)
		}
		if at > f.SettlingTime*(1+1e-9) && math.Abs(u-1) > 0.02*(1+1e-7) {
			t.Errorf("settling time %v, but y(%v) is %v of the final value", f.SettlingTime, at, u)
		}
	}
}

func jumpsNear(r *Response, t float64) bool {
	return r.At(t*(1-1e-12)) != r.At(t*(1+1e-12))
}
