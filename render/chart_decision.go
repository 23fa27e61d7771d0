package render

import (
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"assaywrit/decision"
)

// limitIn are the values of a limit in the unit that people read.
type limitIn struct {
	unit                                      string
	value, u, expanded, threshold, decisionAt float64
}

func shown(l *decision.Limit) limitIn {
	in := func(v float64) float64 { return inUnit(v, l.DisplayUnit) }
	return limitIn{unitText(l.DisplayUnit), in(l.Value), in(l.StdU), in(l.ExpU), in(l.Threshold), in(l.DecisionLimit)}
}

// limitsLayer grounds the guard band and draws threshold and decision limit up to heights of their own, so that their labels never meet.
func (d *document) limitsLayer(l limitIn, low, high float64, thresholdUp, decisionUp float64) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		if l.decisionAt > l.threshold {
			box(l.threshold, 0, l.decisionAt, thresholdUp, band)(c, x, y)
		}
		segment(l.threshold, 0, l.threshold, thresholdUp, ink, 1.1, whole)(c, x, y)
		d.labelAt(c, x(l.threshold), y(thresholdUp), d.t("chart.threshold", "value", number(l.threshold, 4)), true)
		if l.decisionAt > l.threshold {
			segment(l.decisionAt, 0, l.decisionAt, decisionUp, accent, 1.1, dashes)(c, x, y)
			d.labelAt(c, x(l.decisionAt), y(decisionUp), d.t("chart.decision-limit", "value", number(l.decisionAt, 4)), false)
		}
	}
}

// labelAt writes beside the top of a line, on the side where there is room.
func (d *document) labelAt(c draw.Canvas, x, y vg.Length, text string, toLeft bool) {
	style := newPlot().X.Tick.Label
	style.YAlign = draw.YTop
	w := style.Width(text) + 3
	if toLeft && x-w > c.Min.X || x+w > c.Max.X {
		style.XAlign = draw.XRight
		c.FillText(style, vg.Point{X: x - 3, Y: y}, text)
		return
	}
	style.XAlign = draw.XLeft
	c.FillText(style, vg.Point{X: x + 3, Y: y}, text)
}

// intervalLayer draws the value with its expanded uncertainty, and its numbers above it.
func (d *document) intervalLayer(l limitIn, at, half float64) layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		v, e := l.value, l.expanded
		segment(v-e, at, v+e, at, ink, 1.3, whole)(c, x, y)
		segment(v-e, at-half, v-e, at+half, ink, 1.3, whole)(c, x, y)
		segment(v+e, at-half, v+e, at+half, ink, 1.3, whole)(c, x, y)
		shapes([]float64{v}, []float64{at}, disc, ink, 2.7)(c, x, y)
		vt, ut := withU(v, e)
		text := vt + " ± " + ut
		style := newPlot().X.Tick.Label
		style.XAlign, style.YAlign = draw.XCenter, draw.YBottom
		w := style.Width(text)
		at := vg.Point{X: min(max(x(v), c.Min.X+w/2), c.Max.X-w/2), Y: y(at+half) + 1.5}
		c.SetColor(paper)
		c.Fill(vg.Path{{Type: vg.MoveComp, Pos: vg.Point{X: at.X - w/2 - 1, Y: at.Y}}, {Type: vg.LineComp, Pos: vg.Point{X: at.X + w/2 + 1, Y: at.Y}},
			{Type: vg.LineComp, Pos: vg.Point{X: at.X + w/2 + 1, Y: at.Y + 8}}, {Type: vg.LineComp, Pos: vg.Point{X: at.X - w/2 - 1, Y: at.Y + 8}}, {Type: vg.CloseComp}})
		c.FillText(style, at, text)
	}
}

func numberAxis(low, high float64, unit string, marks int) *plot.Plot {
	p := newPlot()
	axes(p, low, high, 0, 1, marks, 1)
	p.HideY()
	p.X.Label.Text = unit
	return p
}

// numberLine draws the value with its interval against threshold and decision limit, from zero.
func (d *document) numberLine(limit *decision.Limit, x, w, h float64) {
	l := shown(limit)
	high := max(l.value+l.expanded, l.decisionAt) * 1.12
	p := numberAxis(0, high, l.unit, 8)
	p.Add(d.limitsLayer(l, 0, high, 0.72, 1), d.intervalLayer(l, 0.22, 0.09))
	d.drawPlot(p, x, d.y, w, h)
	d.down(h + 1)
}

// bell is a normal curve of height 1 about a value, for drawing.
func bell(value, u, low, high float64) (xs, ys []float64) {
	const points = 160
	if !(high > low) || !(u > 0) {
		return nil, nil
	}
	for i := range points + 1 {
		x := low + (high-low)*float64(i)/points
		z := (x - value) / u
		xs, ys = append(xs, x), append(ys, math.Exp(-z*z/2))
	}
	return xs, ys
}

// decisionChart draws the distribution of the value against threshold and decision limit.
func (d *document) decisionChart(limit *decision.Limit, h float64) {
	l := shown(limit)
	low, high := min(l.threshold, l.value-4*l.u), max(l.decisionAt, l.value+4*l.u)
	if !(l.u > 0) || !(high > low) {
		d.numberLine(limit, left, textW, 34)
		return
	}
	pad := (high - low) * 0.05
	low, high = max(0, low-pad), high+pad
	p := numberAxis(low, high, l.unit, 8)
	const peakAt = 0.74
	flat := func(ys []float64) []float64 {
		out := make([]float64, len(ys))
		for i, y := range ys {
			out[i] = y * peakAt
		}
		return out
	}
	xs, ys := bell(l.value, l.u, low, high)
	p.Add(d.limitsLayer(l, low, high, 0.9, 1))
	if ax, ay := bell(l.value, l.u, max(low, l.threshold), high); len(ax) > 1 {
		p.Add(polygon(append(append([]float64{ax[0]}, ax...), ax[len(ax)-1]), append(append([]float64{0}, flat(ay)...), 0), tint))
	}
	p.Add(polyline(xs, flat(ys), signal, 1.1, whole))
	p.Add(segment(l.threshold, 0, l.threshold, 0.9, ink, 1.1, whole))
	if l.decisionAt > l.threshold {
		p.Add(segment(l.decisionAt, 0, l.decisionAt, 1, accent, 1.1, dashes))
	}
	p.Add(d.intervalLayer(l, 0.07, 0.035))
	d.drawPlot(p, left, d.y, textW, h)
	d.down(h + 1.5)
}
