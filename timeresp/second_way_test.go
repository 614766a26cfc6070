package timeresp

import (
	"context"
	"math"
	"testing"

	"github.com/polewright/polewright/tf"
)

// TestAgainstRun compares with the same loops followed by integration: a second way that
// shares no modes, poles or amplitudes with the first.
func TestAgainstRun(t *testing.T) {
	loops := map[string]tf.Loop{
		"second order":            {Plant: tf.MustParse("4 / (s (s + 1.2))")},
		"right half-plane zero":   {Plant: tf.MustParse("(1 - 0.3 s) / (s + 1)^2"), Controller: tf.MustParse("0.8 + 0.5/s")},
		"light mode":              {Plant: tf.MustParse("1 / ((s + 1) (s^2 + 0.05 s + 9))"), Controller: tf.MustParse("2")},
		"sensor and prefilter":    {Plant: tf.MustParse("2 / (s + 0.5)"), Sensor: tf.MustParse("1 / (0.1 s + 1)"), Prefilter: tf.MustParse("1 / (s + 1)")},
		"dead time":               {Plant: tf.MustParse("exp(-0.4 s) / (s^2 + 1.5 s + 1)"), Controller: tf.MustParse("0.8 + 0.4/s")},
		"five equal lags, a gain": {Plant: tf.MustParse("1 / (s + 1)^5"), Controller: tf.MustParse("1.5")},
	}
	for name, l := range loops {
		record, err := Run(context.Background(), l, StepInput(1), Until(12))
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		for _, point := range []tf.Point{tf.Output, tf.Error, tf.Effort} {
			r, err := Of(context.Background(), l, tf.Reference, point, StepInput(1))
			if err != nil {
				t.Errorf("%s: %v", name, err)
				continue
			}
			largest := 0.0
			for at := 0.013; at < 12; at += 0.1 {
				y := r.At(at)
				largest = math.Max(largest, math.Abs(y))
				if got := record.At(point, at); math.Abs(got-y) > 1e-9*largest {
					t.Errorf("%s: %v(%v) = %v, integrated %v", name, point, at, y, got)
					break
				}
			}
		}
	}
}
