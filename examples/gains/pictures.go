package main

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"math"

	"gonum.org/v1/plot/plotter"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/spec"
	"github.com/polewright/polewright/timeresp"
)

// drawPictures writes the locus and the step response, as PNG and SVG, of the plant and of
// each variant. Where no gain works they show the nearest miss. What cannot be drawn is told
// in notes.
func drawPictures(ctx context.Context, folder string, j *job, d spec.Design, notes io.Writer) error {
	gain := d.Gain
	if !d.Feasible {
		if d.Nearest == nil {
			return fmt.Errorf("no picture: %s", d.Reason)
		}
		gain = d.Nearest.Gain
	}
	for i := range j.loops {
		suffix := ""
		if i > 0 {
			suffix = fmt.Sprintf("-variant-%d", i)
		}
		title := j.title
		if len(j.loops) > 1 {
			title += ", " + j.names[i]
		}
		if err := drawLocusOf(ctx, folder, "locus"+suffix, title, j, d, i, gain, notes); err != nil {
			return err
		}
		if err := drawStepOf(folder, "step"+suffix, title, j, d, i, gain); err != nil {
			return err
		}
	}
	return nil
}

func drawLocusOf(ctx context.Context, folder, name, title string, j *job, d spec.Design, i int, gain float64, notes io.Writer) error {
	open, err := j.loops[i].Open()
	if err != nil {
		return err
	}
	if open.DeadTime() > 0 {
		_, err := fmt.Fprintf(notes, "gains: no picture of the locus of %s: with dead time it has infinitely many branches\n", j.names[i])
		return err
	}
	family, err := locus.Gain(open)
	if err != nil {
		return err
	}
	lo, hi := 0.0, math.Inf(1)
	if gain < 0 {
		lo, hi = math.Inf(-1), 0
	}
	traced, err := family.Trace(lo, hi, locus.Interrupted(ctx))
	if err != nil {
		return err
	}
	poles, err := family.PolesAt(gain)
	if err != nil {
		return err
	}
	p := locusPicture{sign: "k > 0", title: "Root locus: " + title, locus: traced, windows: d.Gains.Windows, gainText: number(gain), unit: "rad/s"}
	if gain < 0 {
		p.sign = "k < 0"
	}
	for _, pole := range poles {
		p.recommended = append(p.recommended, pole.Value)
	}
	frame := widened(traced.Frame(), p.recommended)
	p.boundaries = append(p.boundaries, namedBoundary{"region of the second-order map", boundaryOf(d.Rule.Map.AllPoles, frame)})
	f, err := drawLocus(p)
	if err != nil {
		return err
	}
	return f.save(folder, name)
}

// boundaryOf returns the boundary of a region as polylines that reach beyond the frame.
func boundaryOf(r locus.Region, frame locus.Frame) []plotter.XYs {
	if r == nil {
		return nil
	}
	reach := 4 * (frame.Diagonal() + math.Hypot(math.Max(math.Abs(frame.ReLo), math.Abs(frame.ReHi)), math.Max(math.Abs(frame.ImLo), math.Abs(frame.ImHi))))
	var out []plotter.XYs
	for _, c := range r.Boundary() {
		const n = 400
		lo, hi := c.Interval()
		// Lines and rays have infinite intervals; their parameter is a length.
		lo, hi = math.Max(lo, -reach), math.Min(hi, reach)
		var line plotter.XYs
		for k := 0; k <= n; k++ {
			s := c.At(lo + (hi-lo)*float64(k)/n)
			line = append(line, plotter.XY{X: real(s), Y: imag(s)})
		}
		out = append(out, line)
	}
	return out
}

func drawStepOf(folder, name, title string, j *job, d spec.Design, i int, gain float64) error {
	response, err := timeresp.StepOf(j.loops[i].WithGain(gain))
	if err != nil {
		return err
	}
	limits := limitsOf(j.sheet)
	band := limits.band
	if math.IsNaN(band) {
		band = 0.02
	}
	figures, err := response.Figures(band)
	if err != nil {
		return err
	}
	until := 1.6 * figures.SettlingTime
	if !math.IsNaN(limits.settling) {
		until = math.Max(until, 1.3*limits.settling)
	}
	if math.IsNaN(until) || until <= 0 {
		return fmt.Errorf("no picture of the step response: it does not settle")
	}
	p := stepPicture{title: fmt.Sprintf("Step response at k = %s: %s", number(gain), title), response: response.At, until: until, final: figures.Final, limits: limits}
	if rule := d.Rule.OnTheLine; rule != nil && !rule.Met {
		if other, err := timeresp.StepOf(j.loops[i].WithGain(rule.Gain)); err == nil {
			p.others = append(p.others, otherResponse{fmt.Sprintf("k = %.4g (second-order map)", rule.Gain), other.At})
		}
	}
	f, err := drawStep(p)
	if err != nil {
		return err
	}
	return f.save(folder, name)
}

// limitsOf finds those limits of the sheet that show in a step response. It reads them off
// the sheet's JSON, which any requirement of the standard vocabulary has.
func limitsOf(sheet spec.Sheet) stepLimits {
	nan := math.NaN()
	l := stepLimits{nan, nan, nan, nan, nan, nan}
	data, err := json.Marshal(sheet)
	if err != nil {
		return l
	}
	var entries []struct {
		Require string  `json:"require"`
		AtMost  float64 `json:"at most"`
		Band    float64 `json:"band"`
	}
	if err := json.Unmarshal(data, &entries); err != nil {
		return l
	}
	for _, e := range entries {
		switch e.Require {
		case "overshoot":
			l.overshoot = e.AtMost
		case "undershoot":
			l.undershoot = e.AtMost
		case "rise time":
			l.rise = e.AtMost
		case "peak time":
			l.peak = e.AtMost
		case "settling time":
			l.settling, l.band = e.AtMost, e.Band
		}
	}
	return l
}
