package main

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strings"
	"text/tabwriter"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/spec"
	"github.com/polewright/polewright/tf"
)

// printReport writes the answer for a person.
func printReport(w io.Writer, j *job, d spec.Design) error {
	var b strings.Builder
	heading := func(text string) { fmt.Fprintf(&b, "\n%s\n%s\n", text, strings.Repeat("-", len([]rune(text)))) }

	if j.title != "" {
		fmt.Fprintf(&b, "%s\n%s\n", j.title, strings.Repeat("=", len([]rune(j.title))))
	}
	b.WriteString("A gain from a model is a proposal: try it with limits, guards and an emergency stop.\n")

	heading("Asked")
	writeLoop(&b, j)
	for _, words := range j.words {
		fmt.Fprintf(&b, "  require     %s\n", words)
	}

	heading("What the second-order map would have suggested")
	writeRule(&b, j, d)

	heading("Gains that meet the sheet on the true loop")
	writeWindows(&b, j, d)

	for _, warning := range d.Warnings {
		fmt.Fprintf(&b, "  Beware: %s\n", warning)
	}

	if d.Feasible {
		heading(fmt.Sprintf("Recommended: k = %s", number(d.Gain)))
		writeRecommendation(&b, j, d)
	} else {
		heading("No gain")
		writeConflict(&b, j, d)
	}
	if d.InUse != nil {
		heading(fmt.Sprintf("The gain in use: k = %s", number(d.InUse.Place.Gain)))
		writeUse(&b, j, d)
	}
	_, err := io.WriteString(w, b.String())
	return err
}

// number writes a value with six digits.
func number(x float64) string {
	switch {
	case math.IsNaN(x):
		return "none"
	case math.IsInf(x, 1):
		return "unbounded"
	case math.IsInf(x, -1):
		return "unbounded below"
	}
	return fmt.Sprintf("%.6g", x)
}

// digits is how many digits of a coefficient are for people to read.
const digits = 10

func writeLoop(b *strings.Builder, j *job) {
	write := func(name string, g tf.Function) {
		if g.Equal(tf.Function{}) {
			return
		}
		fmt.Fprintf(b, "  %-11s %s\n", name, g.Text(digits))
	}
	write("plant", j.loop.Plant)
	controller := j.loop.Controller.Text(digits)
	if j.loop.Controller.Equal(tf.Function{}) {
		controller = "1"
	}
	fmt.Fprintf(b, "  %-11s k · %s\n", "controller", controller)
	write("sensor", j.loop.Sensor)
	write("prefilter", j.loop.Prefilter)
	for i, name := range j.names[1:] {
		fmt.Fprintf(b, "  variant     %s: plant %s", name, j.loops[i+1].Plant.Text(digits))
		if !j.loops[i+1].Controller.Equal(j.loop.Controller) {
			fmt.Fprintf(b, ", controller k · %s", j.loops[i+1].Controller.Text(digits))
		}
		if !j.loops[i+1].Sensor.Equal(j.loop.Sensor) {
			fmt.Fprintf(b, ", sensor %v", j.loops[i+1].Sensor)
		}
		b.WriteByte('\n')
	}
}

func writeRule(b *strings.Builder, j *job, d spec.Design) {
	for _, line := range d.Rule.Map.Lines {
		if line.AllPoles != nil || line.DominantPair != nil {
			fmt.Fprintf(b, "  %s: %s\n", j.words[line.Requirement], line.Words)
		}
	}
	b.WriteString("  It assumes:\n")
	for _, words := range d.Rule.Map.Assumptions {
		fmt.Fprintf(b, "  - %s\n", words)
	}
	if len(d.Rule.Windows) > 0 {
		b.WriteString("  All poles in its region:")
		for i, w := range d.Rule.Windows {
			if i > 0 {
				b.WriteByte(',')
			}
			fmt.Fprintf(b, " %s < k < %s", number(w.Lo.Gain), number(w.Hi.Gain))
		}
		b.WriteByte('\n')
	}
	if d.Rule.Sentence != "" {
		fmt.Fprintf(b, "  Verdict: %s\n", d.Rule.Sentence)
	}
	for _, r := range d.Resembles {
		fmt.Fprintf(b, "  At the recommended gain: %s\n", r.Sentence)
	}
}

func writeWindows(b *strings.Builder, j *job, d spec.Design) {
	if len(d.Gains.Windows) == 0 {
		b.WriteString("  none\n")
		return
	}
	for _, w := range d.Gains.Windows {
		left, right := "<", "<"
		if w.Lo.Closed {
			left = "≤"
		}
		if w.Hi.Closed {
			right = "≤"
		}
		if w.Lo.Gain == w.Hi.Gain {
			fmt.Fprintf(b, "  k = %s\n", number(w.Lo.Gain))
		} else {
			fmt.Fprintf(b, "  %.10g %s k %s %s\n", w.Lo.Gain, left, right, strings.TrimPrefix(wide(w.Hi.Gain), "+"))
		}
		fmt.Fprintf(b, "      lower end: %s\n", endWords(j, w.Lo))
		fmt.Fprintf(b, "      upper end: %s\n", endWords(j, w.Hi))
	}
	if d.Gains.MissedBelow > 0 {
		kind := "proven"
		if d.Gains.Estimated {
			kind = "estimated"
		}
		fmt.Fprintf(b, "  A window narrower than %.1g of the gap between critical gains could have been missed (%s).\n", d.Gains.MissedBelow, kind)
	} else {
		b.WriteString("  Proven: there are no others.\n")
	}
}

func wide(x float64) string {
	if math.IsInf(x, 0) {
		return "∞"
	}
	return fmt.Sprintf("%.10g", x)
}

// endWords says what ends a window.
func endWords(j *job, e spec.End) string {
	var parts []string
	for _, c := range e.By {
		what := c.Name
		if c.Requirement >= 0 && c.Requirement < len(j.sheet) {
			what = j.words[c.Requirement]
		}
		switch c.Kind {
		case spec.Jump:
			what += " (its figure jumps there)"
		case spec.Stability:
			what = "the closed loop is not stable beyond"
		}
		if len(j.loops) > 1 && c.Loop >= 0 && c.Loop < len(j.names) {
			what += ", on " + j.names[c.Loop]
		}
		parts = append(parts, what)
	}
	if len(parts) == 0 {
		if e.Gain == 0 || math.IsInf(e.Gain, 0) {
			return "nothing ends it, as far as was searched"
		}
		return "searched up to here"
	}
	return strings.Join(parts, "; ")
}

func writeRecommendation(b *strings.Builder, j *job, d spec.Design) {
	fmt.Fprintf(b, "  chosen by: %s\n", d.Preference)
	if d.Unbounded {
		b.WriteString("  The optimum is unbounded: larger gains come closer to it without end.\n")
	}
	for i, report := range d.Reports {
		if len(d.Reports) > 1 {
			fmt.Fprintf(b, "\n  On %s:\n", j.names[i])
		}
		writeFindings(b, j, report)
		writePoles(b, report.Poles)
		writeMargins(b, d.Loops[i])
	}
}

func writeFindings(b *strings.Builder, j *job, report spec.Report) {
	t := tabwriter.NewWriter(b, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "  requirement\treached\tlimit\tslack\tat\t")
	for i, f := range report.Findings {
		mark := ""
		switch {
		case f.Verdict == poly.Fails:
			mark = "NOT MET"
		case f.Verdict == poly.Undecided:
			mark = "undecided"
		case i == report.Binding:
			mark = "binding"
		}
		at := ""
		if !math.IsNaN(f.At) {
			at = number(f.At) + " " + f.AtUnit
		}
		reached := number(f.Reached)
		if f.Unit != "" && !math.IsNaN(f.Reached) && !math.IsInf(f.Reached, 0) {
			reached += " " + f.Unit
		}
		limit := number(f.Limit)
		if f.Unit != "" {
			limit += " " + f.Unit
		}
		fmt.Fprintf(t, "  %s\t%s\t%s\t%+.3f\t%s\t%s\n", j.words[i], reached, limit, f.Slack, at, mark)
	}
	t.Flush()
	for i, f := range report.Findings {
		if f.Reason != "" && f.Verdict != poly.Holds {
			fmt.Fprintf(b, "  %s: %s\n", j.words[i], f.Reason)
		}
	}
}

func writePoles(b *strings.Builder, poles []poly.Root) {
	if len(poles) == 0 {
		return
	}
	b.WriteByte('\n')
	t := tabwriter.NewWriter(b, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "  closed-loop pole, rad/s\tdamping ratio\tnatural frequency, rad/s")
	for _, p := range poles {
		if imag(p.Value) < 0 {
			continue
		}
		text := number(real(p.Value))
		if imag(p.Value) != 0 {
			text += " ± j" + number(imag(p.Value))
		}
		if p.Multiplicity > 1 {
			text += fmt.Sprintf(" (%d times)", p.Multiplicity)
		}
		fmt.Fprintf(t, "  %s\t%.4f\t%s\n", text, tf.DampingRatio(p.Value), number(tf.NaturalFrequency(p.Value)))
	}
	t.Flush()
}

func writeMargins(b *strings.Builder, l tf.Loop) {
	m, err := l.Margins()
	if err != nil {
		fmt.Fprintf(b, "\n  margins: %v\n", err)
		return
	}
	b.WriteByte('\n')
	t := tabwriter.NewWriter(b, 0, 0, 2, ' ', 0)
	decibels := func(ratio float64) string {
		if math.IsInf(ratio, 0) || math.IsNaN(ratio) || ratio == 0 {
			return ""
		}
		return fmt.Sprintf(" (%.2f dB)", 20*math.Log10(ratio))
	}
	fmt.Fprintf(t, "  gain margin\t%s%s\n", number(m.GainIncrease), decibels(m.GainIncrease))
	if m.GainDecrease > 0 {
		fmt.Fprintf(t, "  gain reduction margin\t%s%s\n", number(1/m.GainDecrease), decibels(1/m.GainDecrease))
	} else {
		fmt.Fprintf(t, "  gain reduction margin\tunbounded\n")
	}
	if math.IsInf(m.PhaseMargin, 0) {
		fmt.Fprintf(t, "  phase margin\tunbounded\n")
	} else {
		fmt.Fprintf(t, "  phase margin\t%s rad (%.2f°)\n", number(m.PhaseMargin), m.PhaseMargin*180/math.Pi)
	}
	if math.IsInf(m.Delay, 1) {
		fmt.Fprintf(t, "  delay margin\tunbounded\n")
	} else {
		fmt.Fprintf(t, "  delay margin\t%s s\n", number(m.Delay))
	}
	fmt.Fprintf(t, "  sensitivity peak\t%s at %s rad/s\n", number(m.SensitivityPeak), number(m.SensitivityPeakAt))
	t.Flush()
}

func writeConflict(b *strings.Builder, j *job, d spec.Design) {
	fmt.Fprintf(b, "  %s.\n", strings.TrimSuffix(d.Reason, "."))
	if len(d.Conflict) > 1 {
		b.WriteString("  The smallest set of requirements that exclude each other:\n")
		for _, i := range d.Conflict {
			fmt.Fprintf(b, "    %s\n", j.words[i])
		}
	}
	if d.OtherSign != nil {
		b.WriteString("  Gains k of the other sign do meet the sheet:\n")
		for _, w := range d.OtherSign.Windows {
			fmt.Fprintf(b, "    %s < k < %s\n", number(w.Lo.Gain), number(w.Hi.Gain))
		}
	}
	if d.Nearest != nil {
		fmt.Fprintf(b, "  Nearest miss: k = %s, with a slack of %+.3f (%s).\n", number(d.Nearest.Gain), d.Nearest.Slack, d.Nearest.By.Name)
		for i, report := range d.Nearest.Reports {
			if len(d.Nearest.Reports) > 1 {
				fmt.Fprintf(b, "\n  On %s:\n", j.names[i])
			}
			writeFindings(b, j, report)
		}
	}
}

func writeUse(b *strings.Builder, j *job, d spec.Design) {
	p := d.InUse.Place
	if p.Inside {
		b.WriteString("  It is inside a window: it meets the sheet.\n")
	} else {
		b.WriteString("  It is outside every window.\n")
	}
	distance := func(side string, d *spec.Distance) {
		if d != nil {
			fmt.Fprintf(b, "  nearest end %s: k = %s, a ratio of %.4g (%.2f dB): %s\n", side, number(d.End.Gain), d.Ratio, d.Decibels, endWords(j, d.End))
		}
	}
	distance("below", p.Below)
	distance("above", p.Above)
	for _, c := range d.InUse.Refused {
		what := c.Name
		if c.Requirement >= 0 {
			what = j.words[c.Requirement]
		}
		if len(j.loops) > 1 {
			what += ", on " + j.names[c.Loop]
		}
		fmt.Fprintf(b, "  refused by: %s\n", what)
	}
	for i, report := range d.InUse.Reports {
		if len(d.InUse.Reports) > 1 {
			fmt.Fprintf(b, "\n  On %s:\n", j.names[i])
		}
		writeFindings(b, j, report)
	}
}

// printJSON writes the answer for machines.
func printJSON(w io.Writer, j *job, d spec.Design) error {
	e := json.NewEncoder(w)
	e.SetIndent("", "  ")
	e.SetEscapeHTML(false)
	return e.Encode(struct {
		Title string      `json:"title,omitempty"`
		Loops []string    `json:"loops"`
		Sheet spec.Sheet  `json:"sheet"`
		Gains spec.Design `json:"design"`
	}{j.title, j.names, j.sheet, d})
}
