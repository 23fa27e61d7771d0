package render

import (
	"fmt"
	"io"
	"math"
	"strings"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/separation"
)

// Study writes a separation study by itself, as a PDF. It returns the number of pages.
func Study(w io.Writer, study *evidence.SeparationStudy) (pages int, err error) {
	words, err := loadWords("")
	if err != nil {
		return 0, err
	}
	rec := &evidence.Record{Separation: study}
	rec.Case.Number = study.File
	d := newDocument(Input{Record: rec, Finding: &decision.Finding{}}, words, words.get("study.title"))
	d.number([]section{{key: "study", title: d.t("study.title"), draw: d.study}})
	d.play()
	d.bullets(decision.Cautions)
	d.end(d.t("study.end"))
	return d.finish(w)
}

// study tells how the composition of the mobile phase was chosen.
func (d *document) study() {
	s := d.in.Record.Separation
	r := s.Result
	d.paragraph(s.Study.Title + ". " + d.t("study.intro", "solvent", s.Study.Solvent, "void", plain(s.Study.VoidTimeMin)))
	var rows []row
	for _, run := range s.Runs {
		at := ""
		for i, x := range s.Study.Runs {
			if strings.HasSuffix(run.File, x.File) && i < len(s.Study.Runs) {
				at = composition(x.Phi)
				if g := x.Gradient; g != nil {
					at = fmt.Sprintf("%s – %s in %s min", percent(g.StartPhi, 4)+" %", percent(g.EndPhi, 4)+" %", plain(g.TimeMin))
				}
			}
		}
		var times []string
		for _, p := range run.Peaks {
			times = append(times, fixed(p.ApexMin, 2))
		}
		rows = append(rows, row{cells: cells(run.File, at, run.TraceID, strings.Join(times, ", "), itoa(run.LeftOut), run.SHA256[:16]+"…")})
	}
	d.table(table{name: "study-runs", columns: "wlwwdl", rows: rows, bare: true})
	rows = nil
	for _, c := range r.Compounds {
		rows = append(rows, row{cells: cells(c.Name, c.Model.Algorithm, fixed(c.Model.LogKw, 3), optNumber(c.Model.LogKwStdU, 2), fixed(c.Model.S, 3), optNumber(c.Model.SStdU, 2), curved(c.Model.C), optNumber(c.Model.Residual, 2), number(c.Plates, 4))})
	}
	d.table(table{name: "study-models", columns: "wldddddd d", rows: rows})
	d.note(d.t("study.models-note", "tracking", d.words.or("tracking.", r.Tracking)))
	d.resolutionMap(r, s.Study.Limits.Resolution)
	d.recommended(r, s)
}

func composition(phi *float64) string {
	if phi == nil {
		return ""
	}
	return percent(*phi, 4) + " %"
}

func curved(c float64) string {
	if c == 0 {
		return missing
	}
	return fixed(c, 3)
}

// at writes a composition of the map.
func (d *document) at(r *separation.Result, v float64) string {
	if r.Gradients {
		return fixed(v, 2) + " min"
	}
	return fixed(v*100, 2) + " %"
}

// resolutionMap draws the resolution of the critical pair against the composition; what lies outside the study is shaded.
func (d *document) resolutionMap(r *separation.Result, least float64) {
	const h = 70.0
	d.room(h + 12)
	d.down(3)
	x0, y0, y1 := left+chartLabels+4, d.y+4, d.y+h-8
	low, high := r.Map[0].At, r.Map[len(r.Map)-1].At
	top := least * 1.5
	for _, p := range r.Map {
		top = max(top, p.Resolution)
	}
	xs, ys := scale{low, high, x0, left + textW - 2}, scale{0, top * 1.05, y1, y0}
	d.rect(xs.at(low), y0, xs.at(r.LowStudied)-xs.at(low), y1-y0, shade)
	d.rect(xs.at(r.HighStudied), y0, xs.at(high)-xs.at(r.HighStudied), y1-y0, shade)
	d.font(regular, sizeChart)
	values, step := steps(0, top, 5)
	for _, v := range values {
		d.line(x0-1, ys.at(v), x0, ys.at(v), ink, 0.5, whole)
		d.textRight(x0-1.5, ys.at(v)+0.85, axisNumber(v, step), ink)
	}
	unit := 100.0
	if r.Gradients {
		unit = 1
	}
	values, step = steps(low*unit, high*unit, 8)
	for _, v := range values {
		d.line(xs.at(v/unit), y1, xs.at(v/unit), y1+1, ink, 0.5, whole)
		d.textCentre(xs.at(v/unit), y1+3.7, axisNumber(v, step), ink)
	}
	d.line(x0, y0, x0, y1, ink, 0.5, whole)
	d.line(x0, y1, xs.p1, y1, ink, 0.5, whole)
	d.line(x0, ys.at(least), xs.p1, ys.at(least), accent, 0.7, dashes)
	d.setLine(signal, 0.9, whole)
	for i, p := range r.Map {
		op := "l\n"
		if i == 0 {
			op = "m\n"
		}
		d.point(xs.at(p.At), ys.at(math.Max(p.Resolution, 0)), op)
	}
	d.op("S\n")
	if b := r.Best; b != nil {
		d.line(xs.at(b.At), y0, xs.at(b.At), y1, accent, 0.7, whole)
		d.line(xs.at(b.LowTolerated), y1-1, xs.at(b.HighTolerated), y1-1, accent, 1.6, whole)
	}
	key := "study.axis"
	if r.Gradients {
		key = "study.axis-gradient"
	}
	d.text(x0, d.y+h-0.5, d.t(key, "solvent", d.in.Record.Separation.Study.Solvent), soft)
	d.text(left, y0-1.5, d.t("study.axis-resolution"), soft)
	d.down(h + 3)
	d.note(d.t("study.map-note", "least", plain(least)))
}

// recommended tells the composition that separates best, and draws the chromatogram that the models predict for it.
func (d *document) recommended(r *separation.Result, s *evidence.SeparationStudy) {
	b := r.Best
	if b != nil {
		d.paragraph(d.t("study.best", "at", d.at(r, b.At), "rs", fixed(b.Resolution, 2), "first", b.First, "second", b.Second, "last", fixed(b.LastMin, 2), "limit", plain(s.Study.Limits.TimeMin)))
		if b.Holds {
			d.paragraph(d.t("study.tolerance", "low", d.at(r, b.LowTolerated), "high", d.at(r, b.HighTolerated), "least", plain(s.Study.Limits.Resolution)))
		}
		d.predicted(b, r)
	}
	if len(r.Remarks) > 0 {
		d.bullets(r.Remarks)
	}
}

// predicted draws Gaussians of the predicted places and widths and of the measured areas.
func (d *document) predicted(b *separation.Best, r *separation.Result) {
	const h, points = 46.0, 900
	d.room(h + 10)
	area := map[string]float64{}
	for _, c := range r.Compounds {
		area[c.Name] = c.Area
	}
	value := func(t float64) float64 {
		y := 0.0
		for _, p := range b.Predicted {
			sigma := p.WidthHalfMin / 2.3548
			z := (t - p.RetentionMin) / sigma
			y += area[p.Compound] / sigma * math.Exp(-z*z/2)
		}
		return y
	}
	end, top := b.LastMin*1.03, 0.0
	for i := range points + 1 {
		top = math.Max(top, value(end*float64(i)/points))
	}
	for _, p := range b.Predicted {
		top = math.Max(top, value(p.RetentionMin))
	}
	x0, y0, y1 := left+2, d.y+6, d.y+h-8
	xs, ys := scale{0, end, x0, left + textW - 2}, scale{0, top * 1.08, y1, y0}
	d.line(x0, y1, xs.p1, y1, ink, 0.5, whole)
	d.font(regular, sizeChart)
	values, step := steps(0, end, 8)
	for _, v := range values {
		d.line(xs.at(v), y1, xs.at(v), y1+1, ink, 0.5, whole)
		d.textCentre(xs.at(v), y1+3.7, axisNumber(v, step), ink)
	}
	d.setLine(signal, 0.7, whole)
	for i := range points + 1 {
		t := end * float64(i) / points
		op := "l\n"
		if i == 0 {
			op = "m\n"
		}
		d.point(xs.at(t), ys.at(value(t)), op)
	}
	d.op("S\n")
	for _, p := range b.Predicted {
		d.textCentre(xs.at(p.RetentionMin), ys.at(value(p.RetentionMin))-0.8, p.Compound, ink)
	}
	d.text(x0, d.y+h-0.5, d.t("study.predicted"), soft)
	d.down(h + 4)
}
