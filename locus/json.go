package locus

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
)

// end is an end of a window in JSON: a number, "unbounded" for +Inf, "unbounded below" for
// -Inf, null for NaN.
type end float64

func (x end) MarshalJSON() ([]byte, error) {
	switch f := float64(x); {
	case math.IsNaN(f):
		return []byte("null"), nil
	case math.IsInf(f, 1):
		return []byte(`"unbounded"`), nil
	case math.IsInf(f, -1):
		return []byte(`"unbounded below"`), nil
	default:
		return json.Marshal(f)
	}
}

func (x *end) UnmarshalJSON(data []byte) error {
	switch string(data) {
	case "null":
		*x = end(math.NaN())
	case `"unbounded"`:
		*x = end(math.Inf(1))
	case `"unbounded below"`:
		*x = end(math.Inf(-1))
	default:
		return json.Unmarshal(data, (*float64)(x))
	}
	return nil
}

func readStrictly(what string, data []byte, to any) error {
	d := json.NewDecoder(bytes.NewReader(data))
	d.DisallowUnknownFields()
	if err := d.Decode(to); err != nil {
		return fmt.Errorf("locus: %s: %w", what, err)
	}
	return nil
}

type windowJSON struct {
	Lo end `json:"lo"`
	Hi end `json:"hi"`
}

// MarshalJSON writes an object of lo and hi, "unbounded" for +Inf and "unbounded below" for
// -Inf.
func (w Window) MarshalJSON() ([]byte, error) {
	return json.Marshal(windowJSON{end(w.Lo), end(w.Hi)})
}

// UnmarshalJSON reads what [Window.MarshalJSON] writes. Unknown members, and windows that do
// not begin below their end, are errors.
func (w *Window) UnmarshalJSON(data []byte) error {
	var j windowJSON
	if err := readStrictly("window", data, &j); err != nil {
		return err
	}
	if !(j.Lo < j.Hi) {
		return fmt.Errorf("locus: window: lo %v is not below hi %v", float64(j.Lo), float64(j.Hi))
	}
	*w = Window{Lo: float64(j.Lo), Hi: float64(j.Hi)}
	return nil
}

type asymptotesJSON struct {
	Centroid end       `json:"centroid"`
	Angles   []float64 `json:"angles"`
}

// MarshalJSON writes an object of centroid, null where there is none, and angles, rad.
func (a Asymptotes) MarshalJSON() ([]byte, error) {
	angles := a.Angles
	if angles == nil {
		angles = []float64{}
	}
	return json.Marshal(asymptotesJSON{end(a.Centroid), angles})
}

// UnmarshalJSON reads what [Asymptotes.MarshalJSON] writes. Unknown members are errors.
func (a *Asymptotes) UnmarshalJSON(data []byte) error {
	var j asymptotesJSON
	if err := readStrictly("asymptotes", data, &j); err != nil {
		return err
	}
	*a = Asymptotes{Centroid: float64(j.Centroid), Angles: j.Angles}
	return nil
}
