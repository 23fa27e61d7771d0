package render

import (
	"assaywrit/evidence/casefile"
)

func (d *document) batch() {
	rec := d.in.Record
	d.chapter("batch", d.words.get("batch-title"))
	d.paragraph(d.words.get("batch-intro"))
	columns := []column{{head: "No.", share: 0.8}, {head: "Role", share: 2.3}, {head: "Level", share: 0.9}, {head: "Dilution", share: 1.3, right: true}, {head: "Acquired", share: 3.5}, {head: "By", share: 0.8}}
	for _, a := range rec.Analytes {
		columns = append(columns, column{head: a.Name, share: 1.75, right: true})
	}
	columns = append(columns, column{head: "Note", share: 2})
	var rows [][]string
	var links []string
	for _, r := range rec.Sequence {
		row := []string{r.ID, string(r.Role), r.Level + r.Aliquot, plain(r.Dilution), when(r.AcquiredAt), r.Operator}
		for _, a := range rec.Analytes {
			row = append(row, nominalText(r, a.ID))
		}
		rows = append(rows, append(row, r.Note))
		links = append(links, "injection/"+r.ID)
	}
	d.table(table{columns: columns, rows: rows, links: links, size: 7.2})
	d.rawFiles()
}

func nominalText(r casefile.Injection, analyte string) string {
	for _, n := range r.Nominal {
		if n.Analyte == analyte {
			return plain(n.NGPerML)
		}
	}
	return ""
}

// rawFiles tells what each raw file says about itself.
func (d *document) rawFiles() {
	d.heading(1, "raw-files", "Raw files")
	var rows [][]string
	for _, inj := range d.in.Record.Injections {
		warnings := "none"
		if len(inj.Warnings) > 0 {
			warnings = ""
			for _, w := range inj.Warnings {
				warnings = joined(warnings, w.Code+": "+w.Detail)
			}
		}
		rows = append(rows, []string{inj.ID, inj.File, inj.Format, when(inj.StartTime), inj.SampleCode, warnings, d.hashOf("data/inputs/case/" + inj.File)})
	}
	d.table(table{columns: []column{{head: "No.", share: 0.7}, {head: "File", share: 1.8}, {head: "Format", share: 1.4}, {head: "Start, as the file says", share: 2.8}, {head: "Sample, as the file says", share: 2}, {head: "Warnings", share: 1.6}, {head: "SHA-256", share: 1.7, mono: true}}, rows: rows, size: 7.2})
}

// hashOf is the first part of a file's SHA-256.
func (d *document) hashOf(path string) string {
	for _, f := range d.in.Files {
		if f.Path == path {
			return f.SHA256[:12] + "…"
		}
	}
	return "–"
}

// internalStandard draws the response of an analyte's internal standard through the batch.
func (d *document) internalStandard(k int) {
	a := &d.in.Record.Analytes[k]
	limits := d.in.Record.Method.Batch
	var xs, ys, sx, sy []float64
	high := limits.InternalStandardHigh
	for _, r := range a.InternalStandard {
		if r.Relative == nil {
			continue
		}
		switch r.Role {
		case casefile.SampleAliquot:
			sx, sy = append(sx, float64(r.InjectionIndex+1)), append(sy, *r.Relative*100)
		default:
			xs, ys = append(xs, float64(r.InjectionIndex+1)), append(ys, *r.Relative*100)
		}
		high = max(high, *r.Relative)
	}
	d.heading(1, "internal/"+a.ID, d.words.get("internal-title"))
	d.room(55)
	y := d.y()
	p := newPlot()
	n := float64(len(d.in.Record.Sequence))
	axes(p, 0, n+1, 0, high*110, 10, 5)
	p.X.Label.Text, p.Y.Label.Text = "injection", ""
	for _, l := range []float64{limits.InternalStandardLow * 100, limits.InternalStandardHigh * 100} {
		p.Add(polyline([]float64{0, n + 1}, []float64{l, l}, accent, 0.7, 3, 2))
	}
	p.Add(dots(xs, ys, signal, 2, true), dots(sx, sy, accent, 2.4, false))
	d.drawPlot(p, left, y, textW, 46)
	d.font("", 6.8)
	d.color(soft)
	d.put(left, y+1.5, "%")
	d.putRight(pageW-right, y+1.5, "● sample aliquots   ○ calibrators, controls, others")
	d.pdf.SetY(y + 48)
	d.note(d.words.get("internal-note"))
}

func (d *document) blanks(k int) {
	a := &d.in.Record.Analytes[k]
	d.heading(1, "blanks/"+a.ID, d.words.get("blanks-title"))
	var rows [][]string
	for _, b := range a.Blanks {
		is := percentage(b.OfInternalStandard, 3)
		if b.ExpectInternalStandard {
			is += " (added)"
		}
		rows = append(rows, []string{b.Injection, string(b.Role), b.After, compact(b.Area, 4), percentage(b.OfLowest, 3), compact(b.InternalStandardArea, 4), is})
	}
	d.table(table{columns: []column{{head: "No.", share: 0.8}, {head: "Role", share: 2}, {head: "After", share: 0.8}, {head: "Analyte area, counts·min", share: 1.9, right: true}, {head: "of lowest calibrator", share: 1.5, right: true},
		{head: "Internal standard area, counts·min", share: 2, right: true}, {head: "of calibrators' mean", share: 1.8, right: true}}, rows: rows})
}

func (d *document) controls(k int) {
	a := &d.in.Record.Analytes[k]
	if len(a.Controls) == 0 {
		return
	}
	d.heading(1, "controls/"+a.ID, d.words.get("controls-title"))
	var rows [][]string
	for _, c := range a.Controls {
		rows = append(rows, []string{c.Injection, c.Level, optional(c.NominalNGPerML, 12), optional(c.NGPerML, 4), percentage(c.Bias, 3), d.resultOf(a.ID + "/control/" + c.Injection), c.Missing})
	}
	d.table(table{columns: []column{{head: "No.", share: 0.8}, {head: "Level", share: 1}, {head: "Nominal, ng/mL", share: 1.4, right: true}, {head: "Found, ng/mL", share: 1.4, right: true}, {head: "Found less nominal", share: 1.5, right: true}, {head: "Result", share: 1.2}, {head: "Note", share: 2}}, rows: rows})
}

// resultOf finds the result of a check by its id.
func (d *document) resultOf(id string) string {
	for _, a := range d.in.Finding.Analytes {
		for _, c := range a.Checks {
			if c.ID == id {
				return mark(c.Result)
			}
		}
	}
	return "–"
}
