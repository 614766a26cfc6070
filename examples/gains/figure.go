package main

import (
	"image/color"
	"io"
	"os"
	"path/filepath"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// Colours that colour-blind people tell apart: Okabe and Ito, Color universal design (2008).
var (
	black     = color.RGBA{A: 255}
	grey      = color.RGBA{R: 150, G: 150, B: 150, A: 255}
	orange    = color.RGBA{R: 230, G: 159, B: 0, A: 255}
	skyBlue   = color.RGBA{R: 86, G: 180, B: 233, A: 255}
	green     = color.RGBA{R: 0, G: 158, B: 115, A: 255}
	blue      = color.RGBA{R: 0, G: 114, B: 178, A: 255}
	vermilion = color.RGBA{R: 213, G: 94, B: 0, A: 255}
	purple    = color.RGBA{R: 204, G: 121, B: 167, A: 255}
)

const (
	figureWidth  = 27 * vg.Centimeter
	figureHeight = 16 * vg.Centimeter
	legendWidth  = 7.6 * vg.Centimeter
	edge         = 0.4 * vg.Centimeter
)

// A figure is a plot with its legend in a strip of its own at the right, where it hides
// no curve.
type figure struct {
	plot   *plot.Plot
	legend plot.Legend
}

func newFigure(title, x, y string) *figure {
	f := &figure{plot: plot.New(), legend: plot.NewLegend()}
	f.plot.Title.Text = title
	f.plot.Title.TextStyle.Font.Size = 14
	f.plot.Title.Padding = 3 * vg.Millimeter
	f.plot.X.Label.Text, f.plot.Y.Label.Text = x, y
	f.plot.BackgroundColor = color.White
	f.legend.Top, f.legend.Left = true, true
	f.legend.Padding = 1.2 * vg.Millimeter
	f.legend.ThumbnailWidth = 0.9 * vg.Centimeter
	f.legend.YPosition = 0
	grid := plotter.NewGrid()
	grid.Horizontal.Color, grid.Vertical.Color = color.Gray{Y: 225}, color.Gray{Y: 225}
	f.plot.Add(grid)
	return f
}

// dataSize returns about how large the frame for the data comes out.
func dataSize() (width, height vg.Length) {
	return figureWidth - legendWidth - 2.2*vg.Centimeter, figureHeight - 2.8*vg.Centimeter
}

// line adds a polyline, and a legend entry unless name is empty.
func (f *figure) line(name string, points plotter.XYs, style draw.LineStyle) error {
	l, err := plotter.NewLine(points)
	if err != nil {
		return err
	}
	l.LineStyle = style
	f.plot.Add(l)
	if name != "" {
		f.legend.Add(name, l)
	}
	return nil
}

// marks adds glyphs, and a legend entry unless name is empty or there are none.
func (f *figure) marks(name string, points plotter.XYs, style draw.GlyphStyle) error {
	if len(points) == 0 {
		return nil
	}
	s, err := plotter.NewScatter(points)
	if err != nil {
		return err
	}
	s.GlyphStyle = style
	f.plot.Add(s)
	if name != "" {
		f.legend.Add(name, s)
	}
	return nil
}

// area fills a polygon.
func (f *figure) area(name string, points plotter.XYs, fill color.Color) error {
	p, err := plotter.NewPolygon(points)
	if err != nil {
		return err
	}
	p.Color = fill
	p.LineStyle.Width = 0
	f.plot.Add(p)
	if name != "" {
		f.legend.Add(name, p)
	}
	return nil
}

func (f *figure) draw(c draw.Canvas) {
	c.FillPolygon(color.White, []vg.Point{c.Min, {X: c.Max.X, Y: c.Min.Y}, c.Max, {X: c.Min.X, Y: c.Max.Y}})
	f.plot.Draw(draw.Crop(c, edge, -legendWidth-edge, edge, -edge))
	f.legend.Draw(draw.Crop(c, c.Max.X-c.Min.X-legendWidth, -edge, edge, -edge-1.2*vg.Centimeter))
}

// save writes the figure as name.png and name.svg into folder.
func (f *figure) save(folder, name string) error {
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return err
	}
	raster := vgimg.PngCanvas{Canvas: vgimg.NewWith(vgimg.UseWH(figureWidth, figureHeight), vgimg.UseDPI(150))}
	f.draw(draw.New(raster))
	if err := writeTo(filepath.Join(folder, name+".png"), raster); err != nil {
		return err
	}
	vector := vgsvg.New(figureWidth, figureHeight)
	f.draw(draw.New(vector))
	return writeTo(filepath.Join(folder, name+".svg"), vector)
}

func writeTo(path string, w io.WriterTo) (err error) {
	file, err := os.Create(path)
	if err != nil {
		return err
	}
	defer func() {
		if closing := file.Close(); err == nil {
			err = closing
		}
	}()
	_, err = w.WriteTo(file)
	return err
}

func solid(c color.Color, width vg.Length) draw.LineStyle {
	return draw.LineStyle{Color: c, Width: width}
}

func dashed(c color.Color, width vg.Length) draw.LineStyle {
	return draw.LineStyle{Color: c, Width: width, Dashes: []vg.Length{vg.Points(5), vg.Points(3)}}
}

func glyph(c color.Color, radius vg.Length, shape draw.GlyphDrawer) draw.GlyphStyle {
	return draw.GlyphStyle{Color: c, Radius: radius, Shape: shape}
}
