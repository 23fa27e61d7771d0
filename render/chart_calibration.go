package render

import "assaywrit/evidence"

// calibrationCharts draws the line with its points and the sample's aliquots and, beside it, how far each back-calculated amount lies
// from its nominal one.
func (d *document) calibrationCharts(a *evidence.Analyte) {
	const h, gap = 60.0, 6.0
	w := (textW - gap) / 2
	d.room(h + 6)
	d.down(3)
	y := d.y
	fit := a.Calibration.Fit
	var xs, ys, rx, rs, sx, sy []float64
	for _, p := range fit.Points {
		xs, ys = append(xs, p.X), append(ys, p.Y)
		if p.RelativeBias != nil {
			rx, rs = append(rx, p.X), append(rs, *p.RelativeBias*100)
		}
	}
	high, top := a.Calibration.HighNGPerML, 0.0
	for _, c := range a.Aliquots {
		if c.ReadNGPerML != nil && c.Response != nil {
			sx, sy = append(sx, *c.ReadNGPerML), append(sy, *c.Response)
			high = max(high, *c.ReadNGPerML)
		}
	}
	high *= 1.05
	for _, v := range append(append([]float64{fit.A + fit.B*high}, ys...), sy...) {
		top = max(top, v)
	}
	lineAt := func(x float64) float64 { return fit.A + fit.B*x }
	p := newPlot()
	axes(p, 0, high, min(0, fit.A*1.1), top*1.04, 5, 5)
	p.X.Label.Text = d.t("chart.amount")
	p.Add(segment(a.Calibration.LowNGPerML, lineAt(a.Calibration.LowNGPerML), a.Calibration.HighNGPerML, lineAt(a.Calibration.HighNGPerML), signal, 1, whole),
		shapes(xs, ys, ring, ink, 2.2), shapes(sx, sy, square, accent, 2.4))
	d.caption(left, y, w, d.t("chart.response"), d.t("chart.calibration-legend"))
	d.drawPlot(p, left, y+1.5, w, h-1.5)

	limits := d.in.Record.Method.Batch
	limit, lowestLimit := limits.CalibratorBias*100, limits.LowestCalibratorBias*100
	span := max(limit, lowestLimit) * 1.25
	for _, r := range rs {
		span = max(span, r*1.1, -r*1.1)
	}
	from := a.Calibration.LowNGPerML
	edge := min(from*1.5, secondAmount(xs, from)/2+from/2)
	p = newPlot()
	axes(p, 0, high, -span, span, 5, 6)
	p.X.Label.Text = d.t("chart.amount")
	p.Add(box(0, -lowestLimit, edge, lowestLimit, shade), box(edge, -limit, high, limit, shade))
	for _, s := range []float64{-1, 1} {
		p.Add(segment(0, s*lowestLimit, edge, s*lowestLimit, accent, 0.8, dashes), segment(edge, s*limit, high, s*limit, accent, 0.8, dashes))
	}
	p.Add(segment(0, 0, high, 0, soft, 0.6, whole), shapes(rx, rs, ring, ink, 2.2))
	d.caption(left+w+gap, y, w, d.t("chart.residual"), d.t("chart.residual-legend"))
	d.drawPlot(p, left+w+gap, y+1.5, w, h-1.5)
	d.y = y + h + 3
}

// secondAmount is the smallest amount above the lowest, or the lowest.
func secondAmount(xs []float64, lowest float64) float64 {
	second := lowest
	for _, x := range xs {
		if x > lowest && (second == lowest || x < second) {
			second = x
		}
	}
	return second
}
