package render

import (
	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// sequence lists every injection of the batch in the order of acquisition, excluded ones too.
func (d *document) sequence() {
	rec := d.in.Record
	d.paragraph(d.t("sequence.intro", "n", itoa(len(rec.Sequence))))
	heads, columns := d.words.list("table.sequence"), "lllrll"
	for _, a := range rec.Analytes {
		heads, columns = append(heads, a.Name), columns+"d"
	}
	heads, columns = append(heads, d.t("table.sequence-note")), columns+"w"
	var rows []row
	for _, r := range rec.Sequence {
		texts := []string{r.ID, d.role(r.Role), joined(" ", r.Level, r.Aliquot), plain(r.Dilution), when(r.AcquiredAt), r.Operator}
		for _, a := range rec.Analytes {
			texts = append(texts, nominalText(r, a.ID))
		}
		rows = append(rows, row{cells: cells(append(texts, r.Note)...), to: d.toInjection(r.ID)})
	}
	d.table(table{heads: heads, columns: columns, rows: rows, bare: true, size: 7.4})
	d.note(d.t("sequence.note"))
}

func nominalText(r casefile.Injection, analyte string) string {
	for _, n := range r.Nominal {
		if n.Analyte == analyte {
			return plain(n.NGPerML)
		}
	}
	return ""
}

// batchAtAGlance counts, for each rule of the batch and each substance, how many checks were met.
func (d *document) batchAtAGlance() {
	type count struct{ met, of int }
	var titles []string
	seen := map[string]bool{}
	counts := make([]map[string]count, len(d.in.Finding.Analytes))
	required := map[string]bool{}
	for k, a := range d.in.Finding.Analytes {
		counts[k] = map[string]count{}
		for _, c := range a.Checks {
			if c.Group != "batch" && c.Group != "calibration" || c.Result == decision.NotApplicable {
				continue
			}
			if !seen[c.Title] {
				seen[c.Title] = true
				titles = append(titles, c.Title)
			}
			n := counts[k][c.Title]
			n.of++
			if c.Result == decision.Passed {
				n.met++
			}
			counts[k][c.Title] = n
			required[c.Title] = required[c.Title] || c.Required
		}
	}
	if len(titles) == 0 {
		d.paragraph(d.t("checks.none"))
		return
	}
	d.paragraph(d.t("batch-checks.intro"))
	heads, columns := d.words.list("table.glance"), "wl"
	for _, a := range d.in.Finding.Analytes {
		heads, columns = append(heads, a.Name), columns+"l"
	}
	var rows []row
	for _, title := range titles {
		r := row{cells: cells(title, d.requirement(required[title]))}
		for k, a := range d.in.Finding.Analytes {
			n, text := counts[k][title], missing
			if n.of > 0 {
				text = "✓ "
				if n.met < n.of {
					text = "✗ "
				}
				text += d.t("met-of", "met", itoa(n.met), "of", itoa(n.of))
			}
			r.cells = append(r.cells, cell{text: text, to: "checks/" + a.Analyte})
		}
		rows = append(rows, r)
	}
	d.table(table{heads: heads, columns: columns, rows: rows})
}

// rawFiles tells what each raw file says about itself.
func (d *document) rawFiles() {
	var rows []row
	for _, inj := range d.in.Record.Injections {
		warnings := d.t("none")
		for i, w := range inj.Warnings {
			if i == 0 {
				warnings = ""
			}
			warnings = joined("; ", warnings, w.Code+": "+w.Detail)
		}
		for _, m := range inj.Measurements {
			for _, w := range m.Warnings {
				if warnings == d.t("none") {
					warnings = ""
				}
				warnings = joined("; ", warnings, joined(" ", m.Compound, d.words.or("trace.", m.Trace))+": "+w.Detail)
			}
		}
		rows = append(rows, row{cells: cells(inj.ID, inj.File, inj.Format, when(inj.StartTime), inj.SampleCode, warnings, d.shortHash(inj.File))})
	}
	d.table(table{name: "raw-files", columns: "lwlwwwm", rows: rows, bare: true})
	d.note(d.t("raw-files.note"))
}

// standard shows the response of an analyte's internal standard through the batch.
func (d *document) standard(k int) {
	a := &d.in.Record.Analytes[k]
	d.standardChart(a)
	limits := d.in.Record.Method.Batch
	d.note(d.t("standard.note", "standard", d.standardOf(a.ID), "low", statedPercent(limits.InternalStandardLow), "high", statedPercent(limits.InternalStandardHigh)))
}

// standardOf is the name of an analyte's internal standard.
func (d *document) standardOf(analyte string) string {
	id := d.standardID(analyte)
	for _, s := range d.in.Record.Method.InternalStandards {
		if s.ID == id {
			return s.Name
		}
	}
	return id
}

func (d *document) standardID(analyte string) string {
	for _, a := range d.in.Record.Method.Analytes {
		if a.ID == analyte {
			return a.InternalStandard
		}
	}
	return ""
}

// blanks lists what the injections that should hold no analyte show.
func (d *document) blanks(k int) {
	a := &d.in.Record.Analytes[k]
	if len(a.Blanks) == 0 {
		d.paragraph(d.t("blanks.none"))
		return
	}
	var rows []row
	for _, b := range a.Blanks {
		name := a.ID + "/blank/" + b.Injection
		if d.check(name) == nil {
			name = a.ID + "/carry-over/" + b.Injection
		}
		added := ""
		if b.ExpectInternalStandard {
			added = d.t("blanks.added")
		}
		rows = append(rows, row{cells: cells(b.Injection, d.role(b.Role), b.After, blankArea(b.Area), optPercent(b.OfLowest, 3), d.resultOf(name),
			blankArea(b.InternalStandardArea), optPercent(b.OfInternalStandard, 3), d.standardVerdict(a, &b, added)), to: d.toInjection(b.Injection)})
	}
	d.table(table{name: "blanks", columns: "lwlddlddl", rows: rows})
	limits := d.in.Record.Method.Batch
	d.note(d.t("blanks.note", "analyte", statedPercent(limits.BlankMaxOfLowest), "standard", statedPercent(limits.BlankMaxOfInternalStandard)))
}

func (d *document) standardVerdict(a *evidence.Analyte, b *evidence.Blank, added string) string {
	if added != "" {
		return added
	}
	return d.resultOf(a.ID + "/blank-internal-standard/" + b.Injection)
}

// blankArea writes an area, or that no peak was found.
func blankArea(v float64) string {
	if v == 0 {
		return "0"
	}
	return powered(v, 4)
}

// controls lists the controls of known amount.
func (d *document) controls(k int) {
	a := &d.in.Record.Analytes[k]
	var rows []row
	for _, c := range a.Controls {
		rows = append(rows, row{cells: cells(c.Injection, c.Level, optNumber(c.NominalNGPerML, 12), optNumber(c.NGPerML, 4), opt(c.Bias, func(v float64) string { return signed(v*100, 1) }),
			d.resultOf(a.ID+"/control/"+c.Injection), c.Missing), to: d.toInjection(c.Injection)})
	}
	d.table(table{name: "controls", columns: "llddd lw", rows: rows, bare: true})
	b := d.in.Record.Method.Batch
	d.note(d.t("controls.note", "v", statedPercent(b.ControlBias), "share", statedPercent(b.ControlShare), "each", statedPercent(b.ControlShareEachLevel)))
}
