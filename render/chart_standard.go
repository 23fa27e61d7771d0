package render

import (
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// standardChart draws the response of an analyte's internal standard over the whole sequence.
func (d *document) standardChart(a *evidence.Analyte) {
	const h = 46.0
	d.room(h + 8)
	d.down(3)
	limits := d.in.Record.Method.Batch
	var xs, ys [3][]float64
	high := limits.InternalStandardHigh
	for _, r := range a.InternalStandard {
		if r.Relative == nil {
			continue
		}
		k := 2
		switch r.Role {
		case casefile.SampleAliquot:
			k = 0
		case casefile.Calibrator, casefile.Control:
			k = 1
		}
		xs[k], ys[k] = append(xs[k], float64(r.InjectionIndex+1)), append(ys[k], *r.Relative*100)
		high = max(high, *r.Relative)
	}
	n := float64(len(d.in.Record.Sequence))
	p := newPlot()
	axes(p, 0, n+1, 0, high*108, 12, 5)
	p.X.Label.Text = d.t("chart.sequence")
	low, up := limits.InternalStandardLow*100, limits.InternalStandardHigh*100
	p.Add(box(0, low, n+1, up, shade), segment(0, low, n+1, low, accent, 0.8, dashes), segment(0, up, n+1, up, accent, 0.8, dashes), segment(0, 100, n+1, 100, soft, 0.5, whole),
		shapes(xs[1], ys[1], ring, ink, 2.1), shapes(xs[2], ys[2], cross, ink, 2.1), shapes(xs[0], ys[0], square, accent, 2.4))
	d.caption(left, d.y, textW, d.t("chart.standard"), d.t("chart.standard-legend"))
	d.drawPlot(p, left, d.y+1.5, textW, h)
	d.down(h + 3)
}
