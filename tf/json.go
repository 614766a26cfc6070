package tf

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"strings"
)

// MarshalText writes the function as [Function.String] does. It returns the error of an
// invalid function.
func (g Function) MarshalText() ([]byte, error) {
	if g.err != nil {
		return nil, g.err
	}
	return []byte(g.String()), nil
}

// UnmarshalText reads the function as [Parse] does. In JSON a Function is such a text.
func (g *Function) UnmarshalText(text []byte) error {
	h, err := Parse(string(text))
	if err != nil {
		return err
	}
	*g = h
	return nil
}

// A JSONError reports the member of a JSON object that could not be read.
type JSONError struct {
	Member string // where, such as "plant" or "limits.rate"
	Err    error  // what is wrong
}

func (e *JSONError) Error() string { return fmt.Sprintf("tf: JSON member %q: %v", e.Member, e.Err) }

// Unwrap returns the reason.
func (e *JSONError) Unwrap() error { return e.Err }

// loopJSON is what a Loop looks like in JSON. Absent blocks are wires.
type loopJSON struct {
	Prefilter        *Function   `json:"prefilter,omitempty"`
	Controller       *Function   `json:"controller,omitempty"`
	Plant            *Function   `json:"plant,omitempty"`
	Sensor           *Function   `json:"sensor,omitempty"`
	Hold             string      `json:"hold,omitempty"`
	ComputationDelay float64     `json:"computation_delay,omitempty"`
	Limits           *limitsJSON `json:"limits,omitempty"`
}

type limitsJSON struct {
	Amplitude any `json:"amplitude,omitempty"`
	Rate      any `json:"rate,omitempty"`
}

// unbounded stands for an infinite number.
const unbounded = "unbounded"

// MarshalJSON writes an object with the members prefilter, controller, plant, sensor (texts
// as [Parse] reads them), hold (a name in words), computation_delay (s) and limits (an object of amplitude
// and rate), each only if it is not the zero value. It returns the error of an invalid block.
func (l Loop) MarshalJSON() ([]byte, error) {
	var j loopJSON
	for _, block := range []struct {
		to **Function
		g  Function
	}{{&j.Prefilter, l.Prefilter}, {&j.Controller, l.Controller}, {&j.Plant, l.Plant}, {&j.Sensor, l.Sensor}} {
		if block.g.err != nil {
			return nil, block.g.err
		}
		if !block.g.isWire() {
			*block.to = &block.g
		}
	}
	if l.Hold != ZeroOrderHold {
		text, err := l.Hold.MarshalText()
		if err != nil {
			return nil, err
		}
		j.Hold = string(text)
	}
	if math.IsNaN(l.ComputationDelay) || math.IsInf(l.ComputationDelay, 0) {
		return nil, badArgument("tf.Loop.MarshalJSON", "ComputationDelay", "%v is not finite", l.ComputationDelay)
	}
	j.ComputationDelay = l.ComputationDelay
	if l.Limits != (Limits{}) {
		j.Limits = &limitsJSON{}
		for _, limit := range []struct {
			name string
			to   *any
			x    float64
		}{{"Amplitude", &j.Limits.Amplitude, l.Limits.Amplitude}, {"Rate", &j.Limits.Rate, l.Limits.Rate}} {
			switch {
			case !(limit.x >= 0):
				return nil, badArgument("tf.Loop.MarshalJSON", "Limits."+limit.name, "%v is not a number ≥ 0", limit.x)
			case math.IsInf(limit.x, 1):
				*limit.to = unbounded
			case limit.x > 0:
				*limit.to = limit.x
			}
		}
	}
	return json.Marshal(j)
}

// UnmarshalJSON reads what [Loop.MarshalJSON] writes. Names are read in any case. The error
// is a [*JSONError] that names the member, also of one that is unknown or comes twice.
func (l *Loop) UnmarshalJSON(data []byte) error {
	var read Loop
	err := members(data, "", func(name string, value json.RawMessage) error {
		switch name {
		case "prefilter":
			return json.Unmarshal(value, &read.Prefilter)
		case "controller":
			return json.Unmarshal(value, &read.Controller)
		case "plant":
			return json.Unmarshal(value, &read.Plant)
		case "sensor":
			return json.Unmarshal(value, &read.Sensor)
		case "hold":
			return json.Unmarshal(value, &read.Hold)
		case "computation_delay", "computationdelay":
			return nonNegative(value, &read.ComputationDelay, false)
		case "limits":
			return members(value, "limits.", func(name string, value json.RawMessage) error {
				switch name {
				case "amplitude":
					return nonNegative(value, &read.Limits.Amplitude, true)
				case "rate":
					return nonNegative(value, &read.Limits.Rate, true)
				}
				return errUnknownMember
			})
		}
		return errUnknownMember
	})
	if err != nil {
		return err
	}
	*l = read
	return nil
}

var errUnknownMember = fmt.Errorf("is unknown")

// members calls read for every member of an object, its name in lower case.
func members(data []byte, prefix string, read func(name string, value json.RawMessage) error) error {
	place := strings.TrimSuffix(prefix, ".")
	decoder := json.NewDecoder(bytes.NewReader(data))
	if t, err := decoder.Token(); err != nil {
		return &JSONError{Member: place, Err: err}
	} else if t != json.Delim('{') {
		return &JSONError{Member: place, Err: fmt.Errorf("expected an object, found %v", t)}
	}
	seen := map[string]bool{}
	for decoder.More() {
		t, err := decoder.Token()
		if err != nil {
			return &JSONError{Member: place, Err: err}
		}
		written, _ := t.(string) // names are strings
		name := strings.ToLower(written)
		var value json.RawMessage
		if err := decoder.Decode(&value); err != nil {
			return &JSONError{Member: prefix + written, Err: err}
		}
		if seen[name] {
			return &JSONError{Member: prefix + written, Err: fmt.Errorf("comes twice")}
		}
		seen[name] = true
		if string(value) == "null" {
			return &JSONError{Member: prefix + written, Err: fmt.Errorf("is null")}
		}
		if err := read(name, value); err != nil {
			if inner, ok := err.(*JSONError); ok {
				return inner
			}
			return &JSONError{Member: prefix + written, Err: err}
		}
	}
	if _, err := decoder.Token(); err != nil {
		return &JSONError{Member: place, Err: err}
	}
	return nil
}

// nonNegative reads a number ≥ 0, or "unbounded" where that is allowed.
func nonNegative(value json.RawMessage, to *float64, mayBeUnbounded bool) error {
	if mayBeUnbounded && string(value) == `"`+unbounded+`"` {
		*to = math.Inf(1)
		return nil
	}
	var x float64
	if err := json.Unmarshal(value, &x); err != nil {
		return err
	}
	if !(x >= 0) {
		return fmt.Errorf("%v is not a number ≥ 0", x)
	}
	*to = x
	return nil
}
