package main

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
)

// A stepPicture is what the picture of the step response shows.
type stepPicture struct {
	title    string
	response func(t float64) float64
	until    float64 // s
	final    float64
	limits   stepLimits
	others   []otherResponse
}

// stepLimits are those limits of the sheet that can be seen in a step response; NaN where
// the sheet has none.
type stepLimits struct{ overshoot, undershoot, rise, peak, settling, band float64 }

// An otherResponse is drawn beside the main one, for comparison.
type otherResponse struct {
	name     string
	response func(t float64) float64
}

func drawStep(p stepPicture) (*figure, error) {
	f := newFigure(p.title, "time, s", "output for a unit step of the reference")
	sample := func(y func(float64) float64) plotter.XYs {
		const n = 1200
		out := make(plotter.XYs, 0, n+1)
		for i := 0; i <= n; i++ {
			t := p.until * float64(i) / n
			if v := y(t); !math.IsNaN(v) && !math.IsInf(v, 0) {
				out = append(out, plotter.XY{X: t, Y: v})
			}
		}
		return out
	}
	curve := sample(p.response)
	lo, hi := math.Min(0, p.final), math.Max(0, p.final)
	for _, q := range curve {
		lo, hi = math.Min(lo, q.Y), math.Max(hi, q.Y)
	}
	if o := p.limits.overshoot; !math.IsNaN(o) {
		lo, hi = math.Min(lo, p.final*(1+o)), math.Max(hi, p.final*(1+o))
	}
	if u := p.limits.undershoot; !math.IsNaN(u) {
		lo, hi = math.Min(lo, -p.final*u), math.Max(hi, -p.final*u)
	}
	room := 0.06 * (hi - lo)
	f.plot.X.Min, f.plot.X.Max, f.plot.Y.Min, f.plot.Y.Max = 0, p.until, lo-room, hi+room

	rectangle := func(x0, x1, y0, y1 float64) plotter.XYs {
		clampX := func(x float64) float64 { return math.Max(0, math.Min(p.until, x)) }
		clampY := func(y float64) float64 { return math.Max(f.plot.Y.Min, math.Min(f.plot.Y.Max, y)) }
		return plotter.XYs{{X: clampX(x0), Y: clampY(y0)}, {X: clampX(x1), Y: clampY(y0)}, {X: clampX(x1), Y: clampY(y1)}, {X: clampX(x0), Y: clampY(y1)}}
	}
	forbidden := color.NRGBA{R: 213, G: 94, B: 0, A: 60}
	if t, b := p.limits.settling, p.limits.band; !math.IsNaN(t) && t < p.until {
		name := fmt.Sprintf("outside ±%.3g %% after %.3g s", 100*b, t)
		above := p.final + b*math.Abs(p.final)
		below := p.final - b*math.Abs(p.final)
		if err := f.area(name, rectangle(t, p.until, above, f.plot.Y.Max), forbidden); err != nil {
			return nil, err
		}
		if err := f.area("", rectangle(t, p.until, f.plot.Y.Min, below), forbidden); err != nil {
			return nil, err
		}
	}
	level := func(name string, y float64) error {
		return f.line(name, plotter.XYs{{X: 0, Y: y}, {X: p.until, Y: y}}, dashed(vermilion, vg.Points(1.3)))
	}
	if o := p.limits.overshoot; !math.IsNaN(o) {
		if err := level(fmt.Sprintf("overshoot limit, %.3g %%", 100*o), p.final*(1+o)); err != nil {
			return nil, err
		}
	}
	if u := p.limits.undershoot; !math.IsNaN(u) {
		if err := level(fmt.Sprintf("undershoot limit, %.3g %%", 100*u), -p.final*u); err != nil {
			return nil, err
		}
	}
	if err := f.line("final value", plotter.XYs{{X: 0, Y: p.final}, {X: p.until, Y: p.final}}, solid(grey, vg.Points(1))); err != nil {
		return nil, err
	}
	for i, other := range p.others {
		line := sample(other.response)
		for j := range line {
			line[j].Y = math.Max(f.plot.Y.Min, math.Min(f.plot.Y.Max, line[j].Y))
		}
		if err := f.line(other.name, line, dashed([]color.Color{purple, orange, green}[i%3], vg.Points(1.5))); err != nil {
			return nil, err
		}
	}
	return f, f.line("response", curve, solid(blue, vg.Points(2.2)))
}
