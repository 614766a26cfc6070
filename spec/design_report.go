package spec

import (
	"encoding/json"
	"fmt"
	"math"
	"strings"

	"github.com/polewright/polewright/poly"
)

// String returns the design as text: what the second-order map would have chosen, the
// windows with what ends them, the recommended gain with the report of each loop, or why
// there is none.
func (d Design) String() string {
	var b strings.Builder
	if d.Rule.Sentence != "" {
		b.WriteString(d.Rule.Sentence + "\n")
	}
	b.WriteString(d.Gains.String())
	if d.Feasible {
		fmt.Fprintf(&b, "Recommended gain: %.8g (%s)", d.Gain, d.Preference)
		if d.Unbounded {
			b.WriteString("; larger gains are better still, without bound")
		}
		b.WriteByte('\n')
		for i, r := range d.Reports {
			if len(d.Reports) > 1 {
				fmt.Fprintf(&b, "Loop %d: ", i)
			}
			b.WriteString(r.String())
		}
		for i, r := range d.Resembles {
			if len(d.Resembles) > 1 {
				fmt.Fprintf(&b, "Loop %d: ", i)
			}
			b.WriteString(r.Sentence + "\n")
		}
	} else {
		fmt.Fprintf(&b, "No gain is recommended: %s.\n", d.Reason)
		if d.OtherSign != nil {
			b.WriteString("Gains of the other sign do meet the sheet:\n" + d.OtherSign.String())
		}
		if d.Nearest != nil {
			fmt.Fprintf(&b, "Nearest miss: gain %.8g, slack %+.3g by %s\n", d.Nearest.Gain, d.Nearest.Slack, d.Nearest.By.String())
		}
	}
	for _, w := range d.Warnings {
		b.WriteString("Note: " + w + "\n")
	}
	if d.InUse != nil {
		b.WriteString("In use: " + d.InUse.Place.String())
		if len(d.InUse.Refused) > 0 {
			b.WriteString("; refused by " + names(d.InUse.Refused))
		}
		b.WriteByte('\n')
	}
	return b.String()
}

// String lists the windows, one a line, with what ends them.
func (g Gains) String() string {
	if len(g.Windows) == 0 {
		return "No gain meets the sheet.\n"
	}
	var b strings.Builder
	for _, w := range g.Windows {
		b.WriteString("  " + w.String() + "\n")
	}
	return b.String()
}

type jsonEnd struct {
	Gain   jsonNumber  `json:"gain"`
	Closed bool        `json:"closed"`
	Proven bool        `json:"proven"`
	By     []jsonCause `json:"by,omitempty"`
}

type jsonCause struct {
	Requirement int    `json:"requirement"`
	Name        string `json:"name"`
	Loop        int    `json:"loop"`
	Kind        string `json:"kind"`
}

func (c Cause) json() jsonCause { return jsonCause{c.Requirement, c.Name, c.Loop, c.Kind.String()} }

func jsonCauses(causes []Cause) []jsonCause {
	var out []jsonCause
	for _, c := range causes {
		out = append(out, c.json())
	}
	return out
}

func (e End) json() jsonEnd {
	return jsonEnd{jsonNumber(e.Gain), e.Closed, e.Proven, jsonCauses(e.By)}
}

// MarshalJSON writes the cause with its kind in words.
func (c Cause) MarshalJSON() ([]byte, error) { return json.Marshal(c.json()) }

// MarshalJSON writes the end; an infinite gain is "unbounded" or "unbounded below".
func (e End) MarshalJSON() ([]byte, error) { return json.Marshal(e.json()) }

type jsonWindow struct {
	Lo jsonEnd `json:"lo"`
	Hi jsonEnd `json:"hi"`
}

func jsonWindows(windows []GainWindow) []jsonWindow {
	out := make([]jsonWindow, 0, len(windows))
	for _, w := range windows {
		out = append(out, jsonWindow{w.Lo.json(), w.Hi.json()})
	}
	return out
}

// MarshalJSON writes the window with its two ends.
func (w GainWindow) MarshalJSON() ([]byte, error) {
	return json.Marshal(jsonWindow{w.Lo.json(), w.Hi.json()})
}

// MarshalJSON writes the windows and how sure they are.
func (g Gains) MarshalJSON() ([]byte, error) {
	return json.Marshal(struct {
		Windows      []jsonWindow `json:"windows"`
		MissedBelow  jsonNumber   `json:"missed below"`
		Estimated    bool         `json:"estimated"`
		SearchedFrom jsonNumber   `json:"searched from"`
		SearchedTo   jsonNumber   `json:"searched to"`
	}{jsonWindows(g.Windows), jsonNumber(g.MissedBelow), g.Estimated, jsonNumber(g.SearchedFrom), jsonNumber(g.SearchedTo)})
}

type jsonRuleGain struct {
	Gain    jsonNumber  `json:"gain"`
	Met     bool        `json:"met"`
	Refused []jsonCause `json:"refused by,omitempty"`
}

func (r *RuleGain) json() *jsonRuleGain {
	if r == nil {
		return nil
	}
	return &jsonRuleGain{jsonNumber(r.Gain), r.Met, jsonCauses(r.Refused)}
}

type jsonDistance struct {
	End      jsonEnd    `json:"end"`
	Ratio    jsonNumber `json:"ratio"`
	Decibels jsonNumber `json:"decibels"`
}

func (d *Distance) json() *jsonDistance {
	if d == nil {
		return nil
	}
	return &jsonDistance{d.End.json(), jsonNumber(d.Ratio), jsonNumber(d.Decibels)}
}

type jsonResemblance struct {
	Verdict   string         `json:"behaves like second order"`
	Damping   jsonNumber     `json:"damping ratio"`
	Frequency jsonNumber     `json:"natural frequency"`
	Weight    jsonNumber     `json:"share of the response"`
	ThirdPole jsonNumber     `json:"third pole"`
	Zero      jsonNumber     `json:"nearest zero"`
	DeadTime  jsonNumber     `json:"dead time"`
	Predicted jsonPrediction `json:"predicted"`
	Actual    jsonPrediction `json:"actual"`
	Sentence  string         `json:"sentence"`
}

type jsonPrediction struct {
	Overshoot jsonNumber `json:"overshoot"`
	Peak      jsonNumber `json:"peak time"`
	Rise      jsonNumber `json:"rise time"`
	Settling  jsonNumber `json:"settling time"`
}

func (p Prediction) json() jsonPrediction {
	return jsonPrediction{jsonNumber(p.Overshoot), jsonNumber(p.PeakTime), jsonNumber(p.RiseTime), jsonNumber(p.SettlingTime)}
}

// MarshalJSON writes the resemblance; figures that do not exist are null.
func (r Resemblance) MarshalJSON() ([]byte, error) {
	word := "undecided"
	switch r.Verdict {
	case poly.Holds:
		word = "yes"
	case poly.Fails:
		word = "no"
	}
	return json.Marshal(jsonResemblance{
		word, jsonNumber(r.SecondOrder.Damping), jsonNumber(r.SecondOrder.NaturalFrequency), jsonNumber(r.Weight),
		jsonNumber(r.ThirdPole), jsonNumber(r.NearestZero), jsonNumber(r.DeadTime), r.Predicted.json(), r.Actual.json(), r.Sentence,
	})
}

// MarshalJSON writes the design for machines; numbers that do not exist are null, infinite
// ones "unbounded".
func (d Design) MarshalJSON() ([]byte, error) {
	type rule struct {
		Holds       string        `json:"holds"`
		Windows     []jsonWindow  `json:"windows"`
		OnTheLine   *jsonRuleGain `json:"on the line,omitempty"`
		InTheMiddle *jsonRuleGain `json:"in the middle,omitempty"`
		Assumptions []string      `json:"assumptions"`
		Sentence    string        `json:"sentence"`
	}
	type miss struct {
		Gain    jsonNumber `json:"gain"`
		Slack   jsonNumber `json:"slack"`
		By      jsonCause  `json:"by"`
		Reports []Report   `json:"reports"`
	}
	type use struct {
		Gain    jsonNumber    `json:"gain"`
		Inside  bool          `json:"inside"`
		Window  *int          `json:"window,omitempty"`
		Below   *jsonDistance `json:"below,omitempty"`
		Above   *jsonDistance `json:"above,omitempty"`
		Refused []jsonCause   `json:"refused by,omitempty"`
		Reports []Report      `json:"reports"`
	}
	type document struct {
		Feasible   bool          `json:"feasible"`
		Reason     string        `json:"reason,omitempty"`
		Gains      Gains         `json:"gains"`
		Gain       jsonNumber    `json:"gain"`
		Unbounded  bool          `json:"unbounded,omitempty"`
		Preference string        `json:"preference"`
		Slack      jsonNumber    `json:"slack"`
		By         *jsonCause    `json:"binding,omitempty"`
		Reports    []Report      `json:"reports,omitempty"`
		Resembles  []Resemblance `json:"second order,omitempty"`
		Rule       rule          `json:"second-order map"`
		OtherSign  *Gains        `json:"gains of the other sign,omitempty"`
		Conflict   []string      `json:"conflict,omitempty"`
		Nearest    *miss         `json:"nearest miss,omitempty"`
		InUse      *use          `json:"in use,omitempty"`
		Warnings   []string      `json:"warnings,omitempty"`
	}
	holds := "undecided"
	switch d.Rule.Holds {
	case poly.Holds:
		holds = "yes"
	case poly.Fails:
		holds = "no"
	}
	o := document{
		Feasible: d.Feasible, Reason: d.Reason, Gains: d.Gains, Gain: jsonNumber(d.Gain), Unbounded: d.Unbounded,
		Preference: d.Preference, Slack: jsonNumber(d.Slack), Reports: d.Reports, Resembles: d.Resembles, OtherSign: d.OtherSign, Warnings: d.Warnings,
		Rule: rule{holds, jsonWindows(d.Rule.Windows), d.Rule.OnTheLine.json(), d.Rule.InTheMiddle.json(), d.Rule.Map.Assumptions, d.Rule.Sentence},
	}
	if d.Feasible && !math.IsInf(d.Slack, 0) {
		c := d.By.json()
		o.By = &c
	}
	for _, i := range d.Conflict {
		o.Conflict = append(o.Conflict, describe(d.Sheet[i]))
	}
	if n := d.Nearest; n != nil {
		o.Nearest = &miss{jsonNumber(n.Gain), jsonNumber(n.Slack), n.By.json(), n.Reports}
	}
	if u := d.InUse; u != nil {
		o.InUse = &use{
			Gain: jsonNumber(u.Place.Gain), Inside: u.Place.Inside, Below: u.Place.Below.json(), Above: u.Place.Above.json(),
			Refused: jsonCauses(u.Refused), Reports: u.Reports,
		}
		if u.Place.Inside {
			o.InUse.Window = &u.Place.Window
		}
	}
	return json.Marshal(o)
}
