package main

import (
	"image/color"
	"math"
	"slices"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/spec"
)

// A locusPicture is what the picture of the root locus shows.
type locusPicture struct {
	title       string
	locus       *locus.Locus
	windows     []spec.GainWindow // gains that meet the sheet
	boundaries  []namedBoundary   // of regions of the plane
	recommended []complex128      // closed-loop poles at the recommended gain
	gainText    string            // the recommended gain, as text
	sign        string            // "k > 0" or "k < 0"
	unit        string            // of the axes
}

// A namedBoundary is the boundary of a region, in pieces.
type namedBoundary struct {
	name   string
	pieces []plotter.XYs
}

func drawLocus(p locusPicture) (*figure, error) {
	f := newFigure(p.title, "real part, "+p.unit, "imaginary part, "+p.unit)
	frame := widened(p.locus.Frame(), p.recommended)
	// Equal scales on both axes, so that a damping ratio is an angle that can be seen.
	width, height := dataSize()
	ratio := float64(width / height)
	f.plot.X.Min, f.plot.X.Max, f.plot.Y.Min, f.plot.Y.Max = stretched(frame, ratio)
	view := locus.Frame{ReLo: f.plot.X.Min, ReHi: f.plot.X.Max, ImLo: f.plot.Y.Min, ImHi: f.plot.Y.Max}

	for _, axis := range []plotter.XYs{{{X: view.ReLo}, {X: view.ReHi}}, {{Y: view.ImLo}, {Y: view.ImHi}}} {
		if err := f.line("", clipTo(axis, view), solid(color.Gray{Y: 120}, vg.Points(0.7))); err != nil {
			return nil, err
		}
	}
	for i, asymptote := range p.locus.Asymptotes() {
		name := ""
		if i == 0 {
			name = "asymptotes"
		}
		if err := f.line(name, clipTo(points(asymptote), view), dashed(color.Gray{Y: 170}, vg.Points(0.8))); err != nil {
			return nil, err
		}
	}
	for i, boundary := range p.boundaries {
		style := draw.LineStyle{Color: []color.Color{purple, orange, black}[i%3], Width: vg.Points(1.3), Dashes: [][]vg.Length{{vg.Points(6), vg.Points(3)}, {vg.Points(2), vg.Points(3)}, {vg.Points(8), vg.Points(3), vg.Points(2), vg.Points(3)}}[i%3]}
		name := boundary.name
		for _, piece := range boundary.pieces {
			piece = clipTo(piece, view)
			if len(piece) < 2 {
				continue
			}
			if err := f.line(name, piece, style); err != nil {
				return nil, err
			}
			name = ""
		}
	}
	if err := drawBranches(f, p, view); err != nil {
		return nil, err
	}
	for _, set := range []struct {
		name  string
		marks locus.Marks
		style draw.GlyphStyle
	}{
		{"open-loop poles", p.locus.Poles(), glyph(black, vg.Points(5), draw.CrossGlyph{})},
		{"open-loop zeros", p.locus.Zeros(), glyph(black, vg.Points(5), draw.RingGlyph{})},
	} {
		if err := f.marks(set.name, within(points(set.marks), view), set.style); err != nil {
			return nil, err
		}
	}
	var chosen plotter.XYs
	for _, s := range p.recommended {
		chosen = append(chosen, plotter.XY{X: real(s), Y: imag(s)})
	}
	if err := f.marks("closed loop at k = "+p.gainText, within(chosen, view), glyph(vermilion, vg.Points(4.5), draw.BoxGlyph{})); err != nil {
		return nil, err
	}
	return f, nil
}

// drawBranches draws every branch, where its gains meet the sheet in another colour and
// width, with arrowheads of growing gain.
func drawBranches(f *figure, p locusPicture, view locus.Frame) error {
	outsideStyle, insideStyle := solid(skyBlue, vg.Points(1.6)), solid(blue, vg.Points(3.2))
	names := map[bool]string{false: "locus, " + p.sign, true: "gains that meet the sheet"}
	for _, good := range []bool{false, true} {
		style := outsideStyle
		if good {
			style = insideStyle
		}
		for _, b := range p.locus.Branches {
			for _, run := range runs(b, p.windows, good) {
				for _, piece := range cutTo(run, view) {
					if err := f.line(names[good], piece, style); err != nil {
						return err
					}
					names[good] = ""
				}
			}
		}
	}
	for _, a := range p.locus.Arrows(2) {
		if view.Contains(a.S) {
			f.plot.Add(arrowhead{at: a.S, direction: a.Direction, color: blue})
		}
	}
	return nil
}

// runs returns the parts of a branch whose gains do (good) or do not meet the sheet, cut
// exactly at the ends of the windows.
func runs(b locus.Branch, windows []spec.GainWindow, good bool) []plotter.XYs {
	var out []plotter.XYs
	var now plotter.XYs
	add := func(from, to vertex) {
		middle := from.gain + (to.gain-from.gain)/2
		inside := slices.ContainsFunc(windows, func(w spec.GainWindow) bool { return w.Lo.Gain <= middle && middle <= w.Hi.Gain })
		switch {
		case inside != good:
			if len(now) > 0 {
				out, now = append(out, now), nil
			}
			return
		case len(now) == 0:
			now = plotter.XYs{from.XY}
		}
		now = append(now, to.XY)
	}
	for i := 0; i+1 < b.Len(); i++ {
		from, to := vertexOf(b, i), vertexOf(b, i+1)
		for _, k := range windowEnds(windows, from.gain, to.gain) {
			if s, ok := b.At(k); ok {
				cut := vertex{plotter.XY{X: real(s), Y: imag(s)}, k}
				add(from, cut)
				from = cut
			}
		}
		add(from, to)
	}
	if len(now) > 0 {
		out = append(out, now)
	}
	return out
}

// A vertex is a point of a branch with its gain.
type vertex struct {
	plotter.XY
	gain float64
}

func vertexOf(b locus.Branch, i int) vertex {
	x, y := b.XY(i)
	return vertex{plotter.XY{X: x, Y: y}, b.GainAt(i)}
}

// windowEnds returns the ends of windows strictly between two gains, in the order of travel.
func windowEnds(windows []spec.GainWindow, from, to float64) []float64 {
	var ends []float64
	for _, w := range windows {
		for _, k := range [2]float64{w.Lo.Gain, w.Hi.Gain} {
			if min(from, to) < k && k < max(from, to) {
				ends = append(ends, k)
			}
		}
	}
	slices.Sort(ends)
	if to < from {
		slices.Reverse(ends)
	}
	return ends
}

func points(source plotter.XYer) plotter.XYs {
	out := make(plotter.XYs, source.Len())
	for i := range out {
		out[i].X, out[i].Y = source.XY(i)
	}
	return out
}

func within(all plotter.XYs, view locus.Frame) plotter.XYs {
	var out plotter.XYs
	for _, p := range all {
		if view.Contains(complex(p.X, p.Y)) {
			out = append(out, p)
		}
	}
	return out
}

// widened makes room for further points.
func widened(f locus.Frame, more []complex128) locus.Frame {
	margin := 0.06 * f.Diagonal()
	for _, s := range more {
		f.ReLo, f.ReHi = math.Min(f.ReLo, real(s)-margin), math.Max(f.ReHi, real(s)+margin)
		f.ImLo, f.ImHi = math.Min(f.ImLo, imag(s)-margin), math.Max(f.ImHi, imag(s)+margin)
	}
	return f
}

// stretched makes the frame as wide beside its height as ratio says, about the same centre.
func stretched(f locus.Frame, ratio float64) (reLo, reHi, imLo, imHi float64) {
	width, height := f.ReHi-f.ReLo, f.ImHi-f.ImLo
	if width < ratio*height {
		more := (ratio*height - width) / 2
		return f.ReLo - more, f.ReHi + more, f.ImLo, f.ImHi
	}
	more := (width/ratio - height) / 2
	return f.ReLo, f.ReHi, f.ImLo - more, f.ImHi + more
}

// clipTo returns the first part of a line that lies in the view, its ends on the border.
func clipTo(line plotter.XYs, view locus.Frame) plotter.XYs {
	if parts := cutTo(line, view); len(parts) > 0 {
		return parts[0]
	}
	return plotter.XYs{{X: view.ReLo, Y: view.ImLo}, {X: view.ReLo, Y: view.ImLo}}
}

// cutTo returns the parts of a polyline that lie in the view: each piece by the rule of
// Liang and Barsky.
func cutTo(line plotter.XYs, view locus.Frame) []plotter.XYs {
	var out []plotter.XYs
	var now plotter.XYs
	for i := 0; i+1 < len(line); i++ {
		a, b, ok := cutPiece(line[i], line[i+1], view)
		if !ok {
			if len(now) > 1 {
				out = append(out, now)
			}
			now = nil
			continue
		}
		if len(now) == 0 || now[len(now)-1] != a {
			if len(now) > 1 {
				out = append(out, now)
			}
			now = plotter.XYs{a}
		}
		now = append(now, b)
	}
	if len(now) > 1 {
		out = append(out, now)
	}
	return out
}

func cutPiece(a, b plotter.XY, view locus.Frame) (from, to plotter.XY, ok bool) {
	dx, dy := b.X-a.X, b.Y-a.Y
	lo, hi := 0.0, 1.0
	for _, edge := range [4][2]float64{{-dx, a.X - view.ReLo}, {dx, view.ReHi - a.X}, {-dy, a.Y - view.ImLo}, {dy, view.ImHi - a.Y}} {
		speed, room := edge[0], edge[1]
		switch {
		case speed == 0:
			if room < 0 {
				return a, b, false
			}
		case speed < 0:
			lo = math.Max(lo, room/speed)
		default:
			hi = math.Min(hi, room/speed)
		}
	}
	if lo > hi {
		return a, b, false
	}
	from, to = a, b
	if lo > 0 {
		from = plotter.XY{X: a.X + lo*dx, Y: a.Y + lo*dy}
	}
	if hi < 1 {
		to = plotter.XY{X: a.X + hi*dx, Y: a.Y + hi*dy}
	}
	return from, to, true
}
