package main

import (
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// An arrowhead points along a curve.
type arrowhead struct {
	at        complex128
	direction float64 // rad, counter-clockwise from the x axis, both axes to the same scale
	color     color.Color
}

// Plot implements [plot.Plotter].
func (a arrowhead) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	x, y := toX(real(a.at)), toY(imag(a.at))
	const length, spread = 9, 0.42
	corner := func(angle float64) vg.Point {
		sin, cos := math.Sincos(a.direction + math.Pi + angle)
		return vg.Point{X: x + vg.Points(length*cos), Y: y + vg.Points(length*sin)}
	}
	c.FillPolygon(a.color, []vg.Point{{X: x, Y: y}, corner(spread), corner(-spread)})
}
