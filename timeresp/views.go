package timeresp

import (
	"encoding/json"
	"fmt"
	"iter"
	"math"

	"github.com/polewright/polewright/poly"
)

// Samples iterates over instants and values at start, start + step and so on, in seconds,
// without end and without allocation. [Response.Sample] is faster.
func (r *Response) Samples(start, step float64) iter.Seq2[float64, float64] {
	return func(yield func(t, y float64) bool) {
		for i := 0.0; ; i++ {
			t := start + i*step
			if !yield(t, r.At(t)) {
				return
			}
		}
	}
}

// Resample returns the response at 0, period, 2·period and so on up to until, in seconds: a
// [Series] is what plotting code calls an XYer, and can be compared with a log. The error is
// a [*poly.ArgumentError] for a period that is not positive and finite, an until that is not
// finite or negative, and more than ten million samples.
func (r *Response) Resample(period, until float64) (Series, error) {
	const call = "timeresp.Response.Resample"
	if !(period > 0) || math.IsInf(period, 0) {
		return Series{}, &poly.ArgumentError{Call: call, Argument: "period", Reason: fmt.Sprintf("%v is not a finite number above 0", period)}
	}
	if !(until >= 0) || math.IsInf(until, 0) {
		return Series{}, &poly.ArgumentError{Call: call, Argument: "until", Reason: fmt.Sprintf("%v is not a finite number from 0 on", until)}
	}
	count := math.Floor(until/period*(1+1e-12)) + 1
	if count > 1e7 {
		return Series{}, &poly.ArgumentError{Call: call, Argument: "period", Reason: fmt.Sprintf("%v makes %.3g samples; at most ten million", period, count)}
	}
	s := Series{Times: make([]float64, int(count)), Values: make([]float64, int(count))}
	for i := range s.Times {
		s.Times[i] = float64(i) * period
	}
	r.Sample(s.Values, 0, period)
	return s, nil
}

// Span returns a time, in seconds, by which the response has come to rest within 0.1 % of
// what it has been through; of one without a limit, twenty times the time constant or period
// of its fastest mode. It is meant for pictures and promises no more.
func (r *Response) Span() float64 {
	if len(r.arcs) == 0 {
		return 1
	}
	c, w := r.curve()
	last := r.arcs[len(r.arcs)-1].from
	if math.IsNaN(r.final) {
		return last + 20/w
	}
	size := math.Abs(r.final)
	if _, largest, err := r.Largest(); err == nil && !math.IsNaN(largest) {
		size = math.Max(size, math.Abs(r.At(largest)))
	}
	if size == 0 {
		return last + 20/w
	}
	if tau := c.calm(1e-3 * size); !math.IsInf(tau, 1) {
		return r.arcs[0].from + tau/w
	}
	return last + 1000/w
}

// Picture returns n samples, at least 2, evenly spread over [Response.Span].
func (r *Response) Picture(n int) Series {
	n = max(n, 2)
	span := r.Span()
	s := Series{Times: make([]float64, n), Values: make([]float64, n)}
	step := span / float64(n-1)
	for i := range s.Times {
		s.Times[i] = float64(i) * step
	}
	r.Sample(s.Values, 0, step)
	return s
}

// jsonNumber writes what is not finite as null.
type jsonNumber float64

func (x jsonNumber) MarshalJSON() ([]byte, error) {
	if f := float64(x); math.IsNaN(f) || math.IsInf(f, 0) {
		return []byte("null"), nil
	}
	return json.Marshal(float64(x))
}

func (x *jsonNumber) UnmarshalJSON(data []byte) error {
	if string(data) == "null" {
		*x = jsonNumber(math.NaN())
		return nil
	}
	return json.Unmarshal(data, (*float64)(x))
}

// MarshalJSON writes final value, impulses and a picture of 201 samples:
// {"final": …, "impulses": {"times": […], "areas": […]}, "picture": {"times": […], "values": […]}}.
// A missing final value is null. It is for viewers: a response is not read back.
func (r *Response) MarshalJSON() ([]byte, error) {
	type impulses struct {
		Times []float64 `json:"times"`
		Areas []float64 `json:"areas"`
	}
	out := struct {
		Final    jsonNumber `json:"final"`
		Impulses *impulses  `json:"impulses,omitempty"`
		Picture  Series     `json:"picture"`
	}{Final: jsonNumber(r.final), Picture: r.Picture(201)}
	if t, a := r.Impulses(); len(t) > 0 {
		out.Impulses = &impulses{t, a}
	}
	return json.Marshal(out)
}

// figuresJSON lists the figures under their names in JSON.
func (f *Figures) fields() []struct {
	name  string
	value *float64
} {
	return []struct {
		name  string
		value *float64
	}{
		{"final", &f.Final}, {"overshoot", &f.Overshoot}, {"undershoot", &f.Undershoot},
		{"peak_time", &f.PeakTime}, {"rise_time", &f.RiseTime}, {"settling_time", &f.SettlingTime},
		{"peak_value", &f.PeakValue}, {"undershoot_time", &f.UndershootTime},
		{"reach_10", &f.Reach10}, {"delay_time", &f.DelayTime}, {"reach_90", &f.Reach90}, {"reach_100", &f.Reach100},
		{"largest_value", &f.LargestValue}, {"largest_time", &f.LargestTime},
	}
}

// MarshalJSON writes every figure under its name in lower case, words joined by
// underscores; what does not exist is null.
func (f Figures) MarshalJSON() ([]byte, error) {
	out := []byte{'{'}
	for i, field := range f.fields() {
		if i > 0 {
			out = append(out, ',')
		}
		number, err := jsonNumber(*field.value).MarshalJSON()
		if err != nil {
			return nil, err
		}
		out = append(out, fmt.Sprintf("%q:", field.name)...)
		out = append(out, number...)
	}
	return append(out, '}'), nil
}

// UnmarshalJSON reads what MarshalJSON writes. A figure that is left out is NaN; an unknown
// name is an error that tells it.
func (f *Figures) UnmarshalJSON(data []byte) error {
	var in map[string]jsonNumber
	if err := json.Unmarshal(data, &in); err != nil {
		return fmt.Errorf("timeresp: figures: %w", err)
	}
	for _, field := range f.fields() {
		*field.value = math.NaN()
		if x, ok := in[field.name]; ok {
			*field.value = float64(x)
			delete(in, field.name)
		}
	}
	for name := range in {
		return fmt.Errorf("timeresp: figures: unknown field %q", name)
	}
	return nil
}
