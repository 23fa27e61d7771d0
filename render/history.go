package render

import (
	"math"
	"strings"

	"assaywrit/evidence/validation"
)

// history draws the controls of earlier batches, and those of this one behind them.
func (d *document) history() {
	h := d.in.Record.History
	d.paragraph(d.t("history.intro", "file", inputPath(h.File), "hash", d.shortHash(h.File)))
	const height, gap = 44.0, 6.0
	w := (textW - gap) / 2
	for i := range h.Charts {
		if i%2 == 0 {
			d.room(height + 8)
			d.down(3)
		}
		d.controlChart(&h.Charts[i], h.Judgement.Results, left+float64(i%2)*(w+gap), d.y, w, height)
		if i%2 == 1 || i == len(h.Charts)-1 {
			d.down(height + 2)
		}
	}
	var rows []row
	for _, x := range h.Judgement.Signals {
		call := d.words.get("history.action")
		if x.Warning {
			call = d.words.get("history.warning")
		}
		// The sentences have no hyphen but the sign of a number.
		rows = append(rows, row{cells: cells(joined(" ", x.Analyte, joinAll(", ", x.Levels)), string(x.Rule), call, strings.ReplaceAll(x.Text, "-", "−"))})
	}
	if len(rows) > 0 {
		d.paragraph(d.t("history.signals"))
		d.table(table{name: "history", columns: "lllw", rows: rows})
	} else {
		d.paragraph(d.t("history.no-signal"))
	}
	d.note(d.t("history.note"))
}

// controlChart is one level: warning and action limits, the moving average, and this batch's results filled.
func (d *document) controlChart(c *validation.Chart, now []validation.Charted, x, y, w, h float64) {
	points := append([]validation.Point(nil), c.Points...)
	old := len(points)
	for _, r := range now {
		if r.Analyte == c.Analyte && r.Level == c.Level {
			points = append(points, r.Point)
		}
	}
	low, high := c.Action.Low, c.Action.High
	for _, p := range points {
		low, high = math.Min(low, p.Found), math.Max(high, p.Found)
	}
	pad := (high - low) * 0.08
	xs := scale{-1, float64(len(points)), x + 12, x + w - 1}
	ys := scale{low - pad, high + pad, y + h - 4, y + 6}
	d.font(bold, sizeChart)
	d.fit(x, y+3, w, joined(" ", c.Analyte, c.Level), ink)
	d.font(regular, sizeChart)
	for _, l := range []struct {
		v    float64
		line dash
		text bool
	}{{c.Centre, whole, true}, {c.Warning.Low, dots, false}, {c.Warning.High, dots, false}, {c.Action.Low, dashes, true}, {c.Action.High, dashes, true}} {
		colour := accent
		if l.v == c.Centre {
			colour = rule
		}
		d.line(xs.p0, ys.at(l.v), xs.p1, ys.at(l.v), colour, 0.6, l.line)
		if l.text {
			d.textRight(xs.p0-1, ys.at(l.v)+0.85, number(l.v, 3), ink)
		}
	}
	for i, p := range points {
		at, r := xs.at(float64(i)), 0.55
		switch {
		case p.Excluded != "":
			d.line(at-0.7, ys.at(p.Found)-0.7, at+0.7, ys.at(p.Found)+0.7, soft, 0.6, whole)
			d.line(at-0.7, ys.at(p.Found)+0.7, at+0.7, ys.at(p.Found)-0.7, soft, 0.6, whole)
		case i >= old:
			d.rect(at-0.8, ys.at(p.Found)-0.8, 1.6, 1.6, accent)
		default:
			d.rect(at-r, ys.at(p.Found)-r, 2*r, 2*r, signal)
		}
	}
	first := true
	d.setLine(soft, 0.6, whole)
	for i, p := range points {
		if p.Average == nil {
			continue
		}
		op := "l\n"
		if first {
			op, first = "m\n", false
		}
		d.point(xs.at(float64(i)), ys.at(p.Average.Value), op)
	}
	if !first {
		d.op("S\n")
	}
}
