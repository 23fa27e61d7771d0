package render

import (
	"fmt"
	"image/color"

	"assaywrit/evidence"
	"assaywrit/evidence/peak"
)

// Chromatograms are drawn straight with the pen: there are hundreds in a package, and all they need is a frame of two axes.

// A traceChart is one measurement in a rectangle of the page.
type traceChart struct {
	d          *document
	file       string
	m          *evidence.Measurement
	span       span
	x, y, w, h float64
	large      bool
	used       *peak.Peak   // the peak that is drawn as the one used
	title      string       // what is followed
	figures    string       // what was measured
	other      []*peak.Peak // drawn dashed

	ts, ys []float64 // points in the stretch
	xs     scale
	vs     scale
}

// Room of a chart around its axes, millimetres.
const (
	chartHead   = 7.6
	chartLabels = 8.5 // of counts, at the left
	chartFoot   = 7.2
)

// chart sets up a measurement's chart with the peak that was used.
func (d *document) chart(inj *evidence.Injection, m *evidence.Measurement, s span, x, y, w, h float64, large bool) *traceChart {
	c := &traceChart{d: d, file: inj.File, m: m, span: s, x: x, y: y, w: w, h: h, large: large, used: m.Peak, title: d.ionTitle(m), figures: d.figures(m, m.Peak, m.Manual != nil)}
	for i := range m.Others {
		c.other = append(c.other, &m.Others[i])
	}
	if m.Automatic != nil {
		c.other = append(c.other, m.Automatic)
	}
	return c
}

// ionTitle names what a trace followed.
func (d *document) ionTitle(m *evidence.Measurement) string {
	name := d.words.or("trace.", m.Trace)
	if x := m.Extraction; x != nil {
		return name + "  " + d.t("chart.window", "low", number(x.LowMZ, 7), "high", number(x.HighMZ, 7))
	}
	if m.Transition.ProductMZ == 0 {
		return name + "  " + m.TraceID
	}
	return name + "  " + fmt.Sprintf("%.1f → %.1f", m.Transition.PrecursorMZ, m.Transition.ProductMZ)
}

// figures tells what was measured, or that no peak was found.
func (d *document) figures(m *evidence.Measurement, p *peak.Peak, byHand bool) string {
	if p == nil {
		return d.t("chart.no-peak", "noise", powered(m.Noise, 3))
	}
	text := d.t("chart.figures", "rt", fixed(p.ApexMin, 3), "area", powered(p.Area, 4), "sn", number(p.SignalToNoise, 3))
	if byHand {
		text += d.t("chart.by-hand")
	}
	for _, f := range p.Flags {
		text += ", " + d.words.or("flag.", f)
	}
	return text
}

// draw draws the chart, and returns the number of points drawn and recorded.
func (c *traceChart) draw() {
	d := c.d
	small := c.w - 0.5
	d.font(bold, sizeChart)
	d.fit(c.x, c.y+2.6, small, c.title, ink)
	d.font(regular, sizeChart)
	d.fit(c.x, c.y+5.6, small, c.figures, ink)
	rec, ok := d.in.Traces.Chromatogram(c.file, c.m.TraceID)
	if ok {
		c.ts, c.ys = within(rec, c.span)
	}
	if len(c.ts) < 2 {
		d.fit(c.x, c.y+11, small, d.t("chart.missing"), accent)
		return
	}
	low, high, largest := counts(c.ys)
	c.xs = scale{c.span.from, c.span.to, c.x + chartLabels, c.x + c.w - 1}
	c.vs = scale{low, high, c.y + c.h - chartFoot, c.y + chartHead + 2.4}
	pt, py := thinned(c.ts, c.ys)
	c.window()
	if c.used != nil {
		c.area(c.used)
	}
	c.axes(low, high)
	d.setLine(signal, map[bool]float64{true: 0.7, false: 0.55}[c.large], whole)
	for i := range pt {
		op := "l\n"
		if i == 0 {
			op = "m\n"
		}
		d.point(c.xs.at(pt[i]), c.vs.at(py[i]), op)
	}
	d.op("S\n")
	for _, p := range c.other {
		c.limits(p, soft, true)
	}
	c.curves()
	if c.used != nil {
		c.limits(c.used, accent, false)
	}
	c.foot(largest, len(pt), rec.TimeMin)
}

// curves draws what was fitted to peaks that share a baseline: each curve on the fitted line, the one in use whole, others dashed.
func (c *traceChart) curves() {
	v := c.m.Division
	if v == nil || v.Fit == nil || c.m.Manual != nil {
		return
	}
	d, line := c.d, v.Fit.Baseline
	from, to := max(line.StartMin, c.span.from), min(line.EndMin, c.span.to)
	if from >= to {
		return
	}
	const steps = 160
	for i, p := range v.Fit.Peaks {
		pattern := dash{1.6, 1.4}
		if i == v.Index {
			pattern = whole
		}
		d.setLine(accent, 0.6, pattern)
		for k := range steps + 1 {
			t := from + (to-from)*float64(k)/steps
			op := "l\n"
			if k == 0 {
				op = "m\n"
			}
			d.point(c.xs.at(t), c.vs.at(line.At(t)+p.At(t)), op)
		}
		d.op("S\n")
	}
}

// foot states the scale and how many points are drawn.
func (c *traceChart) foot(largest float64, drawn int, recorded []float64) {
	d := c.d
	d.font(regular, 6.5)
	d.textRight(c.xs.p1, c.vs.p1-0.5, d.t("chart.largest", "counts", powered(largest, 3), "unit", c.unit()), soft)
	key := "chart.points"
	if drawn < len(c.ts) {
		key = "chart.points-thinned"
	}
	d.textRight(c.xs.p1, c.vs.p0+6.4, d.t(key, "drawn", itoa(drawn), "shown", itoa(len(c.ts)), "recorded", itoa(len(recorded))), soft)
	d.text(c.xs.p0, c.vs.p0+6.4, d.t("chart.minutes"), soft)
}

// unit is that of the intensity.
func (c *traceChart) unit() string {
	if c.m.Unit != "" {
		return c.m.Unit
	}
	return c.d.t("chart.counts")
}

// axes draws time and counts, with short marks.
func (c *traceChart) axes(low, high float64) {
	d := c.d
	d.font(regular, sizeChart)
	x0, y0 := c.xs.p0, c.vs.p0
	d.line(x0, c.vs.p1, x0, y0, ink, 0.5, whole)
	d.line(x0, y0, c.xs.p1, y0, ink, 0.5, whole)
	most := map[bool]int{true: 5, false: 3}[c.large]
	power := axisPower(high)
	unit := pow10(power)
	values, step := steps(low, high, most)
	for _, v := range values {
		y := c.vs.at(v)
		d.line(x0-1, y, x0, y, ink, 0.5, whole)
		d.textRight(x0-1.5, y+0.85, axisNumber(v/unit, step/unit), ink)
	}
	if power > 0 {
		d.textRight(x0-0.6, c.vs.p1-0.5, "×10"+superscript(power), ink)
	}
	values, step = steps(c.span.from, c.span.to, int(max(3, c.w/14)))
	for _, v := range values {
		x := c.xs.at(v)
		d.line(x, y0, x, y0+1, ink, 0.5, whole)
		d.textCentre(x, y0+3.7, axisNumber(v, step), ink)
	}
}

func pow10(n int) float64 {
	v := 1.0
	for range n {
		v *= 10
	}
	return v
}

// base is the height of a peak's baseline at a time.
func base(p *peak.Peak, t float64) float64 {
	if p.BaselineEndMin == p.BaselineStartMin {
		return p.BaselineStartCounts
	}
	f := (t - p.BaselineStartMin) / (p.BaselineEndMin - p.BaselineStartMin)
	return p.BaselineStartCounts + f*(p.BaselineEndCounts-p.BaselineStartCounts)
}

// area shades what was integrated: between the points from the peak's start to its end and its baseline.
func (c *traceChart) area(p *peak.Peak) {
	d := c.d
	from, to := max(p.StartMin, c.span.from), min(p.EndMin, c.span.to)
	if from >= to {
		return
	}
	d.setFill(tint)
	d.point(c.xs.at(from), c.vs.at(base(p, from)), "m\n")
	for i, t := range c.ts {
		if t >= from && t <= to {
			d.point(c.xs.at(t), c.vs.at(c.ys[i]), "l\n")
		}
	}
	d.point(c.xs.at(to), c.vs.at(base(p, to)), "l h f\n")
}

// limits draws a baseline, with ticks where the peak begins and ends; those of peaks that are not in use are dashed.
func (c *traceChart) limits(p *peak.Peak, col color.RGBA, dashedLine bool) {
	d := c.d
	from, to := max(p.StartMin, c.span.from), min(p.EndMin, c.span.to)
	if from >= to {
		return
	}
	pattern := whole
	if dashedLine {
		pattern = dash{1.6, 1.4}
	}
	d.line(c.xs.at(from), c.vs.at(base(p, from)), c.xs.at(to), c.vs.at(base(p, to)), col, 0.8, pattern)
	tick := map[bool]float64{true: 1.5, false: 1.1}[c.large]
	for _, t := range []float64{p.StartMin, p.EndMin} {
		if c.span.holds(t) {
			x, y := c.xs.at(t), c.vs.at(base(p, t))
			d.line(x, y-tick, x, min(y+tick, c.vs.p0+tick), col, 0.8, whole)
		}
	}
}

// window grounds the stretch in which the peak was sought.
func (c *traceChart) window() {
	from, to := max(c.m.WindowStartMin, c.span.from), min(c.m.WindowEndMin, c.span.to)
	if from >= to {
		return
	}
	c.d.rect(c.xs.at(from), c.vs.p1, c.xs.at(to)-c.xs.at(from), c.vs.p0-c.vs.p1, shade)
}
