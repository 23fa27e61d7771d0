package render

import (
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// A layer is one thing drawn in a chart, in data coordinates.
type layer func(c draw.Canvas, x, y func(float64) vg.Length)

// Plot makes a layer a plot.Plotter.
func (l layer) Plot(c draw.Canvas, p *plot.Plot) {
	x, y := p.Transforms(&c)
	l(c, x, y)
}

// drawPlot draws a chart into a rectangle of the page, in millimetres from the top left.
func (d *document) drawPlot(p *plot.Plot, x, y, w, h float64) {
	cv := newCanvas(d.pdf, x, y, h)
	p.BackgroundColor = nil
	p.Draw(draw.NewCanvas(cv, vg.Length(w*pointsPerMM), vg.Length(h*pointsPerMM)))
	d.color(ink)
}

func axes(p *plot.Plot, xLow, xHigh, yLow, yHigh float64, xTicks, yTicks int) {
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = xLow, xHigh, yLow, yHigh
	p.X.Tick.Marker, p.Y.Tick.Marker = ticks{xTicks}, ticks{yTicks}
}

// polyline strokes a line through points.
func polyline(xs, ys []float64, col color.RGBA, width vg.Length, dash ...vg.Length) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		path := make(vg.Path, 0, len(xs))
		for i := range xs {
			p := vg.Point{X: x(xs[i]), Y: y(ys[i])}
			if i == 0 {
				path.Move(p)
			} else {
				path.Line(p)
			}
		}
		c.SetColor(col)
		c.SetLineWidth(width)
		c.SetLineDash(dash, 0)
		c.Stroke(path)
	}
}

// polygon fills the area that points enclose.
func polygon(xs, ys []float64, col color.RGBA) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		path := make(vg.Path, 0, len(xs)+1)
		for i := range xs {
			p := vg.Point{X: x(xs[i]), Y: y(ys[i])}
			if i == 0 {
				path.Move(p)
			} else {
				path.Line(p)
			}
		}
		path.Close()
		c.SetColor(col)
		c.Fill(path)
	}
}

// dots marks points: filled or open circles.
func dots(xs, ys []float64, col color.RGBA, radius vg.Length, open bool) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		c.SetColor(col)
		c.SetLineWidth(0.8)
		c.SetLineDash(nil, 0)
		for i := range xs {
			var path vg.Path
			at := vg.Point{X: x(xs[i]), Y: y(ys[i])}
			path.Move(vg.Point{X: at.X + radius, Y: at.Y})
			path.Arc(at, radius, 0, 6.283185307179586)
			path.Close()
			if open {
				c.Stroke(path)
			} else {
				c.Fill(path)
			}
		}
	}
}

// label writes text at a point, shifted by points of type.
func label(at, level float64, text string, col color.RGBA, dx, dy vg.Length, align draw.XAlignment) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		p := newPlotStyle()
		p.Color, p.XAlign = col, align
		c.FillText(p, vg.Point{X: x(at) + dx, Y: y(level) + dy}, text)
	}
}

func newPlotStyle() draw.TextStyle {
	s := newPlot().X.Tick.Label
	s.YAlign = draw.YBottom
	return s
}
