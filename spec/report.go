package spec

import (
	"encoding/json"
	"fmt"
	"math"
	"strings"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A Report is what [Sheet.Check] found on one loop. The zero value claims nothing.
type Report struct {
	Sheet    Sheet
	Verdict  poly.Verdict // Holds if the loop is stable and every requirement is met
	Stable   poly.Verdict // internally
	Findings []Finding    // one for each requirement, in the order of the sheet
	Binding  int          // index of the requirement with the smallest slack, a limit of 0 met exactly left aside; -1 for the empty sheet
	Poles    []poly.Root  // of the closed loop, hidden ones included; nil with dead time
}

// Met reports whether the loop meets the whole sheet, without doubt.
func (r Report) Met() bool { return r.Verdict == poly.Holds }

// Failing returns the indices of the requirements that are not met, or not decided.
func (r Report) Failing() []int {
	var out []int
	for i, f := range r.Findings {
		if f.Verdict != poly.Holds {
			out = append(out, i)
		}
	}
	return out
}

func verdictWord(v poly.Verdict) string {
	switch v {
	case poly.Holds:
		return "met"
	case poly.Fails:
		return "not met"
	}
	return "undecided"
}

// String returns the report as text: the verdict, a line for each requirement with the value
// reached, the limit, the slack and where it is attained, the binding one marked, and the
// closed-loop poles with damping ratio and natural frequency.
func (r Report) String() string {
	var b strings.Builder
	switch {
	case r.Stable == poly.Fails:
		b.WriteString("The sheet is not met: the closed loop is not internally stable.\n")
	case r.Verdict == poly.Holds:
		b.WriteString("The sheet is met.\n")
	case r.Verdict == poly.Fails:
		fmt.Fprintf(&b, "The sheet is not met: %d of %d requirements fail.\n", len(r.Failing()), len(r.Findings))
	default:
		b.WriteString("Whether the sheet is met could not be decided.\n")
	}
	for i, f := range r.Findings {
		mark := " "
		if i == r.Binding {
			mark = "*"
		}
		fmt.Fprintf(&b, "%s %-9s  %s\n", mark, verdictWord(f.Verdict), r.line(i))
	}
	if len(r.Findings) > 0 {
		b.WriteString("  (* the requirement with the smallest slack)\n")
	}
	if len(r.Poles) > 0 {
		b.WriteString("Closed-loop poles:\n")
		for _, p := range r.Poles {
			if imag(p.Value) < 0 {
				continue
			}
			fmt.Fprintf(&b, "  %-28s damping ratio %.4g, natural frequency %.6g rad/s", formatPole(p.Value), tf.DampingRatio(p.Value), tf.NaturalFrequency(p.Value))
			if p.Multiplicity > 1 {
				fmt.Fprintf(&b, ", %d times", p.Multiplicity)
			}
			b.WriteByte('\n')
		}
	}
	return b.String()
}

func (r Report) line(i int) string {
	f := r.Findings[i]
	s := f.String()
	if i < len(r.Sheet) && r.Sheet[i] != nil {
		s = describe(r.Sheet[i]) + ": " + s
	}
	return s
}

// jsonNumber writes ±Inf and NaN as words and null.
type jsonNumber float64

func (x jsonNumber) MarshalJSON() ([]byte, error) {
	switch v := float64(x); {
	case math.IsNaN(v):
		return []byte("null"), nil
	case math.IsInf(v, 1):
		return []byte(`"unbounded"`), nil
	case math.IsInf(v, -1):
		return []byte(`"unbounded below"`), nil
	default:
		return json.Marshal(v)
	}
}

type jsonPole struct {
	Real         float64    `json:"real"`
	Imaginary    float64    `json:"imaginary"`
	Multiplicity int        `json:"multiplicity"`
	Damping      jsonNumber `json:"damping ratio"`
	Frequency    jsonNumber `json:"natural frequency"`
}

func jsonPoles(poles []poly.Root) []jsonPole {
	out := make([]jsonPole, 0, len(poles))
	for _, p := range poles {
		out = append(out, jsonPole{
			real(p.Value), imag(p.Value), p.Multiplicity,
			jsonNumber(tf.DampingRatio(p.Value)), jsonNumber(tf.NaturalFrequency(p.Value)),
		})
	}
	return out
}

type jsonFinding struct {
	Requirement string     `json:"requirement,omitempty"`
	Verdict     string     `json:"verdict"`
	Quantity    string     `json:"quantity"`
	Unit        string     `json:"unit,omitempty"`
	Reached     jsonNumber `json:"reached"`
	Limit       jsonNumber `json:"limit"`
	Slack       jsonNumber `json:"slack"`
	At          jsonNumber `json:"at"`
	AtUnit      string     `json:"at unit,omitempty"`
	Pole        []float64  `json:"pole,omitempty"`
	Reason      string     `json:"reason,omitempty"`
	Binding     bool       `json:"binding,omitempty"`
}

func (f Finding) json() jsonFinding {
	j := jsonFinding{
		Verdict: verdictWord(f.Verdict), Quantity: f.Quantity, Unit: f.Unit,
		Reached: jsonNumber(f.Reached), Limit: jsonNumber(f.Limit), Slack: jsonNumber(f.Slack),
		At: jsonNumber(f.At), AtUnit: f.AtUnit, Reason: f.Reason,
	}
	if p := f.Pole; !math.IsNaN(real(p)) && f.AtUnit == "" && p != 0 {
		j.Pole = []float64{real(p), imag(p)}
	}
	return j
}

// MarshalJSON writes the finding with words for verdicts and for values that are no numbers.
func (f Finding) MarshalJSON() ([]byte, error) { return json.Marshal(f.json()) }

// MarshalJSON writes the report; see [Finding] for the members of a finding.
func (r Report) MarshalJSON() ([]byte, error) {
	type document struct {
		Verdict  string        `json:"verdict"`
		Stable   string        `json:"internally stable"`
		Findings []jsonFinding `json:"findings"`
		Poles    []jsonPole    `json:"poles,omitempty"`
	}
	d := document{Verdict: verdictWord(r.Verdict), Findings: []jsonFinding{}, Poles: jsonPoles(r.Poles)}
	switch r.Stable {
	case poly.Holds:
		d.Stable = "yes"
	case poly.Fails:
		d.Stable = "no"
	default:
		d.Stable = "undecided"
	}
	for i, f := range r.Findings {
		j := f.json()
		if i < len(r.Sheet) && r.Sheet[i] != nil {
			j.Requirement = describe(r.Sheet[i])
		}
		j.Binding = i == r.Binding
		d.Findings = append(d.Findings, j)
	}
	return json.Marshal(d)
}
