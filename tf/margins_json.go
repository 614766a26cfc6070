package tf

import (
	"bytes"
	"encoding/json"
	"maps"
	"math"
	"slices"

	"github.com/polewright/polewright/poly"
)

type marginsJSON struct {
	GainCrossovers    []crossoverJSON `json:"gain_crossovers"`
	PhaseCrossovers   []crossoverJSON `json:"phase_crossovers"`
	CompleteTo        extended        `json:"complete_to"`
	Delay             extended        `json:"delay"`
	SensitivityPeak   extended        `json:"sensitivity_peak"`
	SensitivityPeakAt extended        `json:"sensitivity_peak_at"`
	GainIncrease      extended        `json:"gain_increase"`
	GainDecrease      extended        `json:"gain_decrease"`
	PhaseMargin       extended        `json:"phase_margin"`
	Stable            poly.Verdict    `json:"stable"`
}

type crossoverJSON struct {
	Frequency extended `json:"frequency"`
	Margin    extended `json:"margin"`
}

// extended is a float64 in JSON: a number, "unbounded" for +Inf, "unbounded below" for -Inf,
// null for NaN.
type extended float64

const unboundedBelow = unbounded + " below"

func (x extended) MarshalJSON() ([]byte, error) {
	switch f := float64(x); {
	case math.IsNaN(f):
		return []byte("null"), nil
	case math.IsInf(f, 1):
		return json.Marshal(unbounded)
	case math.IsInf(f, -1):
		return json.Marshal(unboundedBelow)
	default:
		return json.Marshal(f)
	}
}

func (x *extended) UnmarshalJSON(data []byte) error {
	switch string(data) {
	case "null":
		*x = extended(math.NaN())
	case `"` + unbounded + `"`:
		*x = extended(math.Inf(1))
	case `"` + unboundedBelow + `"`:
		*x = extended(math.Inf(-1))
	default:
		return json.Unmarshal(data, (*float64)(x))
	}
	return nil
}

// MarshalJSON writes an object with the members gain_crossovers and phase_crossovers (arrays
// of objects of frequency and margin), complete_to, delay, sensitivity_peak,
// sensitivity_peak_at, gain_increase, gain_decrease, phase_margin and stable, in the units of
// the fields. An infinite number is written "unbounded", NaN null.
func (m Margins) MarshalJSON() ([]byte, error) {
	list := func(c []Crossover) []crossoverJSON {
		out := make([]crossoverJSON, len(c))
		for i, x := range c {
			out[i] = crossoverJSON{extended(x.Frequency), extended(x.Margin)}
		}
		return out
	}
	return json.Marshal(marginsJSON{
		list(m.GainCrossovers), list(m.PhaseCrossovers), extended(m.CompleteTo), extended(m.Delay),
		extended(m.SensitivityPeak), extended(m.SensitivityPeakAt), extended(m.GainIncrease),
		extended(m.GainDecrease), extended(m.PhaseMargin), m.Stable,
	})
}

// UnmarshalJSON reads what [Margins.MarshalJSON] writes. The error is a [*JSONError] that names the member, also of one
// that is unknown.
func (m *Margins) UnmarshalJSON(data []byte) error {
	var j marginsJSON
	places := map[string]any{
		"gain_crossovers": &j.GainCrossovers, "phase_crossovers": &j.PhaseCrossovers,
		"complete_to": &j.CompleteTo, "delay": &j.Delay,
		"sensitivity_peak": &j.SensitivityPeak, "sensitivity_peak_at": &j.SensitivityPeakAt,
		"gain_increase": &j.GainIncrease, "gain_decrease": &j.GainDecrease,
		"phase_margin": &j.PhaseMargin, "stable": &j.Stable,
	}
	var raw map[string]json.RawMessage
	if err := json.Unmarshal(data, &raw); err != nil {
		return err
	}
	for _, name := range slices.Sorted(maps.Keys(raw)) {
		place, ok := places[name]
		if !ok {
			return &JSONError{Member: name, Err: errUnknownMember}
		}
		d := json.NewDecoder(bytes.NewReader(raw[name]))
		d.DisallowUnknownFields()
		if err := d.Decode(place); err != nil {
			return &JSONError{Member: name, Err: err}
		}
	}
	list := func(c []crossoverJSON) []Crossover {
		var out []Crossover
		for _, x := range c {
			out = append(out, Crossover{Frequency: float64(x.Frequency), Margin: float64(x.Margin)})
		}
		return out
	}
	*m = Margins{
		GainCrossovers: list(j.GainCrossovers), PhaseCrossovers: list(j.PhaseCrossovers),
		CompleteTo: float64(j.CompleteTo), Delay: float64(j.Delay),
		SensitivityPeak: float64(j.SensitivityPeak), SensitivityPeakAt: float64(j.SensitivityPeakAt),
		GainIncrease: float64(j.GainIncrease), GainDecrease: float64(j.GainDecrease),
		PhaseMargin: float64(j.PhaseMargin), Stable: j.Stable,
	}
	return nil
}
