package timeresp

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/poly"
)

// A Series is a signal at given times: what a record was resampled to, or a log. In JSON it
// is {"times": […], "values": […]}.
type Series struct {
	Times  []float64 `json:"times"`  // s, ascending
	Values []float64 `json:"values"` // as many
}

// Len and XY make a series what plotting code calls an XYer.
func (s Series) Len() int { return len(s.Times) }

// XY returns time and value of sample i.
func (s Series) XY(i int) (t, value float64) { return s.Times[i], s.Values[i] }

// check refuses a series that is not usable.
func (s Series) check(call, argument string) error {
	bad := func(reason string, args ...any) error {
		return &poly.ArgumentError{Call: call, Argument: argument, Reason: fmt.Sprintf(reason, args...)}
	}
	if len(s.Times) != len(s.Values) {
		return bad("%d times and %d values; want as many of each", len(s.Times), len(s.Values))
	}
	for i, t := range s.Times {
		if math.IsNaN(t - t) {
			return bad("time %d is %g", i, t)
		}
		if i > 0 && t <= s.Times[i-1] {
			return bad("time %d, %g, does not come after time %d, %g", i, t, i-1, s.Times[i-1])
		}
		if v := s.Values[i]; math.IsNaN(v - v) {
			return bad("value %d is %g", i, v)
		}
	}
	return nil
}

// A Difference says how far two series are apart.
type Difference struct {
	Worst          float64 // the largest |a - b|
	At             float64 // s, the first time at which it occurs
	RootMeanSquare float64 // of a - b, over the samples
}

// Compare returns how far two series with the same times are apart. The error is a
// [*poly.ArgumentError] if a series is malformed or the times differ.
func (s Series) Compare(other Series) (Difference, error) {
	const call = "timeresp.Series.Compare"
	if err := s.check(call, "s"); err != nil {
		return Difference{}, err
	}
	if err := other.check(call, "other"); err != nil {
		return Difference{}, err
	}
	if len(s.Times) != len(other.Times) || len(s.Times) == 0 {
		return Difference{}, &poly.ArgumentError{Call: call, Argument: "other",
			Reason: fmt.Sprintf("%d samples against %d; want as many, and at least one", len(other.Times), len(s.Times))}
	}
	var d Difference
	var squares float64
	d.At = s.Times[0]
	for i, t := range s.Times {
		if other.Times[i] != t {
			return Difference{}, &poly.ArgumentError{Call: call, Argument: "other", Reason: fmt.Sprintf("time %d is %g against %g", i, other.Times[i], t)}
		}
		miss := math.Abs(s.Values[i] - other.Values[i])
		if miss > d.Worst {
			d.Worst, d.At = miss, t
		}
		squares += miss * miss / float64(len(s.Times))
	}
	d.RootMeanSquare = math.Sqrt(squares)
	return d, nil
}
