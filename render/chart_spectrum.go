package render

import (
	"math"
	"slices"

	"assaywrit/evidence/trace"
)

// Room around the axes of a mirror chart, millimetres.
const (
	mirrorLabels = 8.0
	mirrorFoot   = 6.0
	mirrorMarks  = 9 // m/z that are written, on each side
)

// mirror draws one spectrum upwards and another, the reference, downwards from the same axis, each scaled to its own base peak.
func (d *document) mirror(x, y, w, h float64, up, down trace.Spectrum) {
	low, high := math.Inf(1), math.Inf(-1)
	for _, s := range []trace.Spectrum{up, down} {
		if n := len(s.MZ); n > 0 {
			low, high = min(low, s.MZ[0]), max(high, s.MZ[n-1])
		}
	}
	if !(high >= low) {
		return
	}
	pad := max(5, (high-low)*0.04)
	xs := scale{max(0, low-pad), high + pad, x + mirrorLabels, x + w - 1}
	half := (h - mirrorFoot) / 2
	above, below := scale{0, 110, y + half, y}, scale{0, 110, y + half, y + 2*half}
	d.line(xs.p0, y, xs.p0, y+2*half, ink, 0.5, whole)
	d.font(regular, sizeChart)
	for _, v := range []float64{0, 50, 100} {
		for _, s := range []scale{above, below} {
			d.line(xs.p0-1, s.at(v), xs.p0, s.at(v), ink, 0.5, whole)
			if v > 0 || s == above {
				d.textRight(xs.p0-1.5, s.at(v)+0.85, plain(v), ink)
			}
		}
	}
	d.sticks(up, xs, above, true)
	d.sticks(down, xs, below, false)
	d.line(xs.p0, y+half, xs.p1, y+half, ink, 0.5, whole)
	d.line(xs.p0, y+2*half, xs.p1, y+2*half, ink, 0.5, whole)
	d.font(regular, sizeChart)
	values, step := steps(xs.v0, xs.v1, int(max(3, w/18)))
	for _, v := range values {
		d.line(xs.at(v), y+2*half, xs.at(v), y+2*half+1, ink, 0.5, whole)
		d.textCentre(xs.at(v), y+2*half+3.7, axisNumber(v, step), ink)
	}
	d.text(xs.p0, y+h, d.t("chart.mz"), soft)
	d.textRight(xs.p1, y+h, d.t("chart.mirror"), soft)
}

// sticks draws the points of a spectrum, in per cent of the highest, and writes the m/z of the highest that leave room for it.
func (d *document) sticks(s trace.Spectrum, xs, ys scale, up bool) {
	if len(s.Intensity) == 0 {
		return
	}
	base := slices.Max(s.Intensity)
	if !(base > 0) {
		return
	}
	order := make([]int, len(s.MZ))
	colour := signal
	if !up {
		colour = soft
	}
	for i := range order {
		order[i] = i
		if v := s.Intensity[i] / base * 100; v > 0.1 {
			d.line(xs.at(s.MZ[i]), ys.p0, xs.at(s.MZ[i]), ys.at(v), colour, 0.9, whole)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int { return int(math.Copysign(1, s.Intensity[b]-s.Intensity[a])) })
	d.font(regular, sizeChart)
	var taken []float64
	for _, i := range order {
		if len(taken) == mirrorMarks || s.Intensity[i] < base/100 {
			break
		}
		at := xs.at(s.MZ[i])
		if slices.ContainsFunc(taken, func(t float64) bool { return math.Abs(t-at) < 9 }) {
			continue
		}
		taken = append(taken, at)
		y := ys.at(s.Intensity[i]/base*100) - 0.7
		if !up {
			y += 3.2
		}
		d.textCentre(at, y, number(s.MZ[i], 4), ink)
	}
}
