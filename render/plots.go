package render

import (
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// Charts other than chromatograms are drawn by gonum/plot: it lays out the axes, and what stands inside are layers of ours.

// newPlot is an empty chart in the documents' font.
func newPlot() *plot.Plot {
	p := plot.New()
	p.BackgroundColor = nil
	h := fonts().text
	p.TextHandler = h
	for _, s := range []*text.Style{&p.Title.TextStyle, &p.Legend.TextStyle, &p.X.Label.TextStyle, &p.Y.Label.TextStyle, &p.X.Tick.Label, &p.Y.Tick.Label} {
		s.Handler, s.Font, s.Color = h, font.Font{Typeface: chartFace, Size: sizeChart}, ink
	}
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.LineStyle.Width, a.Tick.LineStyle.Width = 0.6, 0.6
		a.LineStyle.Color, a.Tick.LineStyle.Color = ink, ink
		a.Tick.Length = 3
		a.Padding = 0
	}
	return p
}

// drawPlot draws a chart into a rectangle of the page.
func (d *document) drawPlot(p *plot.Plot, x, y, w, h float64) {
	cv := newCanvas(d.pen, x, y, h)
	p.Draw(draw.NewCanvas(cv, vg.Length(w*pointsPerMM), vg.Length(h*pointsPerMM)))
}

func axes(p *plot.Plot, xLow, xHigh, yLow, yHigh float64, xTicks, yTicks int) {
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = xLow, xHigh, yLow, yHigh
	p.X.Tick.Marker, p.Y.Tick.Marker = ticks{xTicks}, ticks{yTicks}
}

// A layer is one thing drawn in a chart, in data coordinates.
type layer func(c draw.Canvas, x, y func(float64) vg.Length)

// Plot makes a layer a plot.Plotter.
func (l layer) Plot(c draw.Canvas, p *plot.Plot) {
	x, y := p.Transforms(&c)
	l(c, x, y)
}

func pathOf(xs, ys []float64, x, y func(float64) vg.Length) vg.Path {
	path := make(vg.Path, 0, len(xs)+1)
	for i := range xs {
		p := vg.Point{X: x(xs[i]), Y: y(ys[i])}
		if i == 0 {
			path.Move(p)
		} else {
			path.Line(p)
		}
	}
	return path
}

// polyline strokes a line through points.
func polyline(xs, ys []float64, col color.RGBA, width float64, pattern dash) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		c.SetColor(col)
		c.SetLineWidth(vg.Length(width))
		if pattern == whole {
			c.SetLineDash(nil, 0)
		} else {
			c.SetLineDash([]vg.Length{vg.Length(pattern.on), vg.Length(pattern.off)}, 0)
		}
		c.Stroke(pathOf(xs, ys, x, y))
	}
}

// segment strokes one straight line.
func segment(x1, y1, x2, y2 float64, col color.RGBA, width float64, pattern dash) layer {
	return polyline([]float64{x1, x2}, []float64{y1, y2}, col, width, pattern)
}

// polygon fills the area that points enclose.
func polygon(xs, ys []float64, col color.RGBA) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		path := pathOf(xs, ys, x, y)
		path.Close()
		c.SetColor(col)
		c.Fill(path)
	}
}

// box fills a rectangle.
func box(x1, y1, x2, y2 float64, col color.RGBA) layer {
	return polygon([]float64{x1, x2, x2, x1}, []float64{y1, y1, y2, y2}, col)
}

// A shape marks a point; shapes differ by outline and filling, so that they are told apart in grey.
type shape int

const (
	disc shape = iota
	ring
	square
	triangle
	cross
)

// shapes marks points.
func shapes(xs, ys []float64, kind shape, col color.RGBA, radius vg.Length) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		c.SetColor(col)
		c.SetLineWidth(0.9)
		c.SetLineDash(nil, 0)
		for i := range xs {
			drawShape(c, vg.Point{X: x(xs[i]), Y: y(ys[i])}, kind, radius)
		}
	}
}

func drawShape(c draw.Canvas, at vg.Point, kind shape, r vg.Length) {
	var path vg.Path
	corners := func(points ...vg.Length) {
		path.Move(vg.Point{X: at.X + points[0], Y: at.Y + points[1]})
		for i := 2; i < len(points); i += 2 {
			path.Line(vg.Point{X: at.X + points[i], Y: at.Y + points[i+1]})
		}
		path.Close()
	}
	switch kind {
	case disc, ring:
		path.Move(vg.Point{X: at.X + r, Y: at.Y})
		path.Arc(at, r, 0, 2*math.Pi)
		path.Close()
	case square:
		s := r * 0.9
		corners(-s, -s, s, -s, s, s, -s, s)
	case triangle:
		corners(-r, -0.75*r, r, -0.75*r, 0, 1.05*r)
	case cross:
		s := r * 0.85
		path.Move(vg.Point{X: at.X - s, Y: at.Y - s})
		path.Line(vg.Point{X: at.X + s, Y: at.Y + s})
		path.Move(vg.Point{X: at.X - s, Y: at.Y + s})
		path.Line(vg.Point{X: at.X + s, Y: at.Y - s})
	}
	if kind == disc || kind == square {
		c.Fill(path)
		return
	}
	c.Stroke(path)
}

// caption writes above a chart what its axes are: a label for y at the left, a legend at the right.
func (d *document) caption(x, y, w float64, label, legend string) {
	d.font(regular, sizeChart)
	d.text(x, y, label, ink)
	d.textRight(x+w, y, legend, soft)
}
