package render

import (
	"fmt"
	"math"
	"sort"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"assaywrit/evidence"
	"assaywrit/evidence/peak"
)

// maxColumns bounds how many points a chart draws: beyond it, each column is drawn by its first, lowest, highest and last point.
const maxColumns = 600

// traceChart draws one measurement with its baseline and limits, and its figures above it.
func (d *document) traceChart(inj *evidence.Injection, m *evidence.Measurement, x, y, w, h float64) {
	d.font("B", sizeSmall)
	d.color(ink)
	d.put(x, y+2.6, m.Compound)
	head := d.width(m.Compound) + 1.5
	d.font("", 6.8)
	d.color(soft)
	d.put(x+head, y+2.6, fmt.Sprintf("%s  %s", m.Trace, ions(m)))
	d.put(x, y+5.8, figures(m))
	c, ok := d.in.Traces.Chromatogram(inj.File, m.TraceID)
	if !ok || len(c.TimeMin) == 0 {
		d.put(x, y+12, d.words.get("trace-missing"))
		return
	}
	from, to := drawnRange(m)
	lo := sort.SearchFloat64s(c.TimeMin, from)
	hi := sort.Search(len(c.TimeMin), func(i int) bool { return c.TimeMin[i] > to })
	ts, ys := c.TimeMin[lo:hi], c.Intensity[lo:hi]
	if len(ts) < 2 {
		return
	}
	low, high := extent(ys)
	pt, py := thinned(ts, ys)
	p := newPlot()
	axes(p, from, to, low-(high-low)*0.04, high+(high-low)*0.10, 5, 5)
	p.Add(traceLayer{ts, ys, pt, py, m}.layer())
	d.drawPlot(p, x-1, y+6.6, w, h-6.6)
	if len(pt) < len(ts) {
		d.font("", 5.5)
		d.color(soft)
		d.putRight(x+w-2, y+h+0.6, fmt.Sprintf("%d points drawn of %d", len(pt), len(ts)))
	}
}

func ions(m *evidence.Measurement) string {
	if m.Transition.ProductMZ == 0 {
		return m.TraceID
	}
	return fmt.Sprintf("m/z %.1f → %.1f", m.Transition.PrecursorMZ, m.Transition.ProductMZ)
}

// figures tells what was measured, or that no peak was found.
func figures(m *evidence.Measurement) string {
	if m.Peak == nil {
		return fmt.Sprintf("no peak in the window, noise %s counts", compact(m.Noise, 3))
	}
	how := ""
	if m.Manual != nil {
		how = "  set by hand"
	}
	return fmt.Sprintf("RT %.3f min  area %s  S/N %s%s", m.Peak.ApexMin, compact(m.Peak.Area, 4), number(m.Peak.SignalToNoise, 3), how)
}

// drawnRange is the search window with as much on either side, within what was recorded.
func drawnRange(m *evidence.Measurement) (from, to float64) {
	w := m.WindowEndMin - m.WindowStartMin
	from, to = m.WindowStartMin-w, m.WindowEndMin+w
	if m.Peak != nil {
		from, to = min(from, m.Peak.StartMin-w/4), max(to, m.Peak.EndMin+w/4)
	}
	return max(from, m.FirstMin), min(to, m.LastMin)
}

func extent(ys []float64) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, y := range ys {
		low, high = min(low, y), max(high, y)
	}
	if low == high {
		high = low + 1
	}
	return low, high
}

// thinned keeps each column's first, lowest, highest and last point.
func thinned(ts, ys []float64) (pt, py []float64) {
	if len(ts) <= 2*maxColumns {
		return ts, ys
	}
	span := ts[len(ts)-1] - ts[0]
	for i := 0; i < len(ts); {
		column := int((ts[i] - ts[0]) / span * maxColumns)
		j, lowest, highest := i, i, i
		for j < len(ts) && int((ts[j]-ts[0])/span*maxColumns) == column {
			if ys[j] < ys[lowest] {
				lowest = j
			}
			if ys[j] > ys[highest] {
				highest = j
			}
			j++
		}
		keep := []int{i, lowest, highest, j - 1}
		sort.Ints(keep)
		for k, at := range keep {
			if k == 0 || at != keep[k-1] {
				pt, py = append(pt, ts[at]), append(py, ys[at])
			}
		}
		i = j
	}
	return pt, py
}

// traceLayer draws in one go what a trace chart shows.
type traceLayer struct {
	ts, ys []float64 // all points in range
	pt, py []float64 // those drawn
	m      *evidence.Measurement
}

func (l traceLayer) layer() layer {
	return func(c draw.Canvas, x, y func(float64) vg.Length) {
		for _, other := range l.m.Others {
			l.limits(c, x, y, &other, false)
		}
		if p := l.m.Peak; p != nil {
			l.area(c, x, y, p)
		}
		polyline(l.pt, l.py, signal, 0.6)(c, x, y)
		if p := l.m.Peak; p != nil {
			l.limits(c, x, y, p, true)
		}
		if p := l.m.Automatic; p != nil {
			l.limits(c, x, y, p, false)
		}
		l.window(c, x, y)
	}
}

// base is the height of a peak's baseline at a time.
func base(p *peak.Peak, t float64) float64 {
	if p.BaselineEndMin == p.BaselineStartMin {
		return p.BaselineStartCounts
	}
	f := (t - p.BaselineStartMin) / (p.BaselineEndMin - p.BaselineStartMin)
	return p.BaselineStartCounts + f*(p.BaselineEndCounts-p.BaselineStartCounts)
}

func (l traceLayer) area(c draw.Canvas, x, y func(float64) vg.Length, p *peak.Peak) {
	xs, ys := []float64{p.StartMin}, []float64{base(p, p.StartMin)}
	for i, t := range l.ts {
		if t >= p.StartMin && t <= p.EndMin {
			xs, ys = append(xs, t), append(ys, l.ys[i])
		}
	}
	xs, ys = append(xs, p.EndMin), append(ys, base(p, p.EndMin))
	polygon(xs, ys, tint)(c, x, y)
}

// limits draws the baseline, and ticks where the peak begins and ends; those of peaks that are not in use are dashed.
func (l traceLayer) limits(c draw.Canvas, x, y func(float64) vg.Length, p *peak.Peak, used bool) {
	from, to := p.StartMin, p.EndMin
	if from < l.ts[0] || to > l.ts[len(l.ts)-1] {
		from, to = max(from, l.ts[0]), min(to, l.ts[len(l.ts)-1])
		if from >= to {
			return
		}
	}
	col, dash := accent, []vg.Length(nil)
	if !used {
		col, dash = soft, []vg.Length{1.5, 1.5}
	}
	polyline([]float64{from, to}, []float64{base(p, from), base(p, to)}, col, 0.7, dash...)(c, x, y)
	for _, t := range []float64{from, to} {
		at := vg.Point{X: x(t), Y: y(base(p, t))}
		path := vg.Path{}
		path.Move(vg.Point{X: at.X, Y: at.Y - 3})
		path.Line(vg.Point{X: at.X, Y: at.Y + 3})
		c.SetColor(col)
		c.SetLineWidth(0.7)
		c.SetLineDash(nil, 0)
		c.Stroke(path)
	}
}

// window marks where the peak was sought, by two small hooks at the top.
func (l traceLayer) window(c draw.Canvas, x, y func(float64) vg.Length) {
	topY := c.Max.Y
	c.SetColor(soft)
	c.SetLineWidth(0.5)
	c.SetLineDash(nil, 0)
	for _, e := range []struct{ at, inward float64 }{{l.m.WindowStartMin, 1}, {l.m.WindowEndMin, -1}} {
		px := x(e.at)
		if px < c.Min.X || px > c.Max.X {
			continue
		}
		path := vg.Path{}
		path.Move(vg.Point{X: px, Y: topY - 4})
		path.Line(vg.Point{X: px, Y: topY})
		path.Line(vg.Point{X: px + vg.Length(3*e.inward), Y: topY})
		c.Stroke(path)
	}
}
