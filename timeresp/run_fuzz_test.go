package timeresp

import (
	"context"
	"math"
	"testing"
	"time"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// FuzzRun: a limited loop of any second-order plant with PI control is followed to the end or
// refused with an error; the effort keeps within its limits, and the record agrees with
// itself from segment to segment.
func FuzzRun(f *testing.F) {
	f.Add(2.0, 1.0, 1.0, 1.0, 0.5, 0.8, 0.0, 0.0)
	f.Add(8.0, 4.0, 2.0, 3.0, 1.0, 1.5, 3.0, 0.25)
	f.Add(-1.0, 0.0, 1.0, -0.2, 4.0, 0.1, 0.5, 0.0)
	f.Add(1e6, 1.0, 1e-6, 1.0, 1e6, 1e3, 0.0, 1e-3)
	f.Fuzz(func(t *testing.T, kp, ki, a2, a1, a0, amplitude, rate, dead float64) {
		controller, err := tf.New(poly.New(kp, ki), poly.New(1, 0))
		if err != nil {
			return
		}
		plant, err := tf.New(poly.New(1), poly.New(a2, a1, a0))
		if err != nil {
			return
		}
		if plant, err = plant.WithDeadTime(math.Abs(dead)); err != nil {
			return
		}
		ctx, cancel := context.WithTimeout(context.Background(), 2*time.Second)
		defer cancel()
		loop := tf.Loop{Controller: controller, Plant: plant, Limits: tf.Limits{Amplitude: math.Abs(amplitude), Rate: math.Abs(rate)}}
		r, err := Run(ctx, loop, StepInput(1), Until(3))
		if err != nil {
			return
		}
		d := r.Reader()
		before := 0.0
		for i := 0; i <= 300; i++ {
			at := 3 * float64(i) / 300
			u := d.At(tf.Effort, at)
			if math.IsNaN(u) {
				continue // beyond the range of float64
			}
			if m := loop.Limits.Amplitude; m > 0 && math.Abs(u) > m*(1+1e-9) {
				t.Fatalf("effort %g at t = %g, limit %g", u, at, m)
			}
			if m := loop.Limits.Rate; m > 0 && i > 0 && math.Abs(u-before) > m*3/300*(1+1e-6)+1e-9*math.Abs(u) {
				t.Fatalf("effort goes from %g to %g in 0.01 s at t = %g, limit of the rate %g", before, u, at, m)
			}
			before = u
		}
	})
}
