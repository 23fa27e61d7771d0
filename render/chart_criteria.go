package render

import (
	"sort"

	"assaywrit/decision"
)

// A windowRow is one criterion with what each aliquot showed.
type windowRow struct {
	title    string
	required bool
	checks   []*decision.Check
}

// windowRows gathers an analyte's identification criteria that have a window, in the order in which the finding names them.
func windowRows(f *decision.AnalyteFinding) []windowRow {
	var rows []windowRow
	at := map[string]int{}
	for i := range f.Checks {
		c := &f.Checks[i]
		if c.Group != "identification" || c.Measured == nil || c.Low == nil || c.High == nil || !(c.High.Value > c.Low.Value) {
			continue
		}
		key := c.Title + traceIn(c.ID)
		k, ok := at[key]
		if !ok {
			k = len(rows)
			at[key] = k
			rows = append(rows, windowRow{title: c.Title, required: c.Required})
			if t := traceIn(c.ID); t != "" {
				rows[k].title += ", " + t
			}
		}
		rows[k].checks = append(rows[k].checks, c)
	}
	sort.SliceStable(rows, func(i, j int) bool { return rows[i].required && !rows[j].required })
	return rows
}

// windowChart draws every criterion of identity scaled to its own window, so that one sees how near to a limit each aliquot lies.
func (d *document) windowChart(f *decision.AnalyteFinding) {
	rows := windowRows(f)
	if len(rows) == 0 {
		return
	}
	const step, labelW, edge = 6.2, 58.0, 1.5
	d.room(step*float64(min(len(rows), 8)) + 14)
	d.down(2)
	d.font(regular, sizeChart)
	x := scale{-edge, edge, left + labelW, left + textW - 24}
	d.textCentre(x.at(-1), d.y+2.4, d.t("chart.window-low"), soft)
	d.textCentre(x.at(0), d.y+2.4, d.t("chart.window-centre"), soft)
	d.textCentre(x.at(1), d.y+2.4, d.t("chart.window-high"), soft)
	d.down(3.6)
	for _, r := range rows {
		d.room(step)
		d.windowLine(r, x, step)
		d.down(step)
	}
	d.down(2)
	d.note(d.t("chart.window-note"))
}

func (d *document) windowLine(r windowRow, x scale, step float64) {
	y := d.y + step/2
	d.font(regular, sizeSmall)
	title := r.title
	if !r.required {
		title += d.t("chart.advisory")
	}
	d.fit(left, y+1, 56, title, ink)
	d.rect(x.at(-1), y-1.9, x.at(1)-x.at(-1), 3.8, band)
	d.line(x.p0, y, x.p1, y, rule, 0.4, whole)
	for _, v := range []float64{-1, 1} {
		d.line(x.at(v), y-1.9, x.at(v), y+1.9, accent, 0.8, whole)
	}
	d.line(x.at(0), y-1.2, x.at(0), y+1.2, soft, 0.5, whole)
	outside := 0
	for _, c := range r.checks {
		v := 2*(c.Measured.Value-c.Low.Value)/(c.High.Value-c.Low.Value) - 1
		switch {
		case v > x.v1:
			outside++
			d.arrow(x.p1, y, 1)
		case v < x.v0:
			outside++
			d.arrow(x.p0, y, -1)
		default:
			d.diamond(x.at(v), y, 1.05)
		}
	}
	met := 0
	for _, c := range r.checks {
		if c.Result == decision.Passed {
			met++
		}
	}
	d.font(regular, sizeSmall)
	text := d.t("chart.window-met", "met", itoa(met), "of", itoa(len(r.checks)))
	if met < len(r.checks) {
		d.font(bold, sizeSmall)
		d.textRight(left+textW, y+1, "✗ "+text, accent)
		return
	}
	d.textRight(left+textW, y+1, "✓ "+text, ink)
}

func (d *document) diamond(x, y, r float64) {
	d.setLine(ink, 0.8, whole)
	d.point(x-r, y, "m ")
	d.point(x, y-r*1.35, "l ")
	d.point(x+r, y, "l ")
	d.point(x, y+r*1.35, "l s\n")
}

// arrow stands where a value lies outside the chart.
func (d *document) arrow(x, y, towards float64) {
	d.setFill(accent)
	d.point(x+towards*2.2, y, "m ")
	d.point(x, y-1.2, "l ")
	d.point(x, y+1.2, "l f\n")
}
