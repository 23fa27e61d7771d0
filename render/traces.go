package render

import (
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
)

// tracesIntro says how charts are to be read, with one of the sample's own as the example.
func (d *document) tracesIntro() {
	d.paragraph(d.t("traces.intro"))
	d.bullets(d.words.list("traces.rules"))
	inj, list := d.example()
	if len(list) == 0 {
		return
	}
	d.down(2)
	d.room(80)
	d.font(bold, sizeBody)
	d.down(4)
	d.text(left, d.y, d.t("traces.example", "injection", inj.ID), ink)
	d.down(2)
	m := list[0]
	c := d.chart(inj, m, span{m.FirstMin, m.LastMin}, left, d.y, textW, 70, true)
	c.draw()
	d.down(76)
	d.note(d.t("traces.example-note"))
}

// example is the first measurement of the sample, or of anything.
func (d *document) example() (*evidence.Injection, []*evidence.Measurement) {
	var any *evidence.Injection
	for i := range d.in.Record.Injections {
		inj := &d.in.Record.Injections[i]
		if len(inj.Measurements) == 0 {
			continue
		}
		if any == nil || inj.Role == casefile.SampleAliquot {
			any = inj
		}
		if inj.Role == casefile.SampleAliquot {
			break
		}
	}
	if any == nil || len(d.in.Record.Analytes) == 0 {
		return nil, nil
	}
	return any, d.tracesOf(any, d.in.Record.Analytes[0].ID)
}

// source names the raw file of a page.
func (d *document) source(inj *evidence.Injection) string {
	return d.t("traces.source", "file", inj.File, "hash", d.shortHash(inj.File), "time", when(d.in.Record.Sequence[d.rowOf(inj)].AcquiredAt))
}

func (d *document) rowOf(inj *evidence.Injection) int {
	for i := range d.in.Record.Sequence {
		if d.in.Record.Sequence[i].ID == inj.ID {
			return i
		}
	}
	panic("render: internal error: injection " + inj.ID + " is not in the sequence")
}

// tracesOf lists the measurements of an analyte in an injection, its internal standard last.
func (d *document) tracesOf(inj *evidence.Injection, analyte string) []*evidence.Measurement {
	var list []*evidence.Measurement
	for _, want := range []string{analyte, d.standardID(analyte)} {
		for i := range inj.Measurements {
			if m := &inj.Measurements[i]; m.Compound == want {
				list = append(list, m)
			}
		}
	}
	return list
}

// aliquotTraces draws an aliquot of the sample large, a page for each substance.
func (d *document) aliquotTraces(inj *evidence.Injection) {
	for k, a := range d.in.Record.Analytes {
		if k > 0 {
			d.newPage()
			d.heading(1, d.ref(injectionKey(inj.ID)), d.t("continued", "what", d.injectionTitle(inj)))
		}
		d.block(joined("  ·  ", a.Name, d.t("traces.with-standard", "standard", d.standardOf(a.ID)), d.source(inj)), left, textW, regular, sizeSmall, soft)
		d.down(2)
		list := d.tracesOf(inj, a.ID)
		s := spanOf(list)
		const gap, perPage = 6.0, 4
		w, h := (textW-gap)/2, 86.0
		if alternativeRoom(inj) > 0 {
			h -= 6 // for the table below
		}
		for i, m := range list {
			if i > 0 && i%perPage == 0 {
				d.newPage()
			}
			if i%2 == 0 && i%perPage > 0 {
				d.down(h + 4)
			}
			d.chart(inj, m, s, left+float64(i%2)*(w+gap), d.y, w, h, true).draw()
		}
		d.down(h + 6)
		d.peakTable(list)
		d.alternativeTable(list)
	}
}

// injectionTraces draws an injection on one page: a row of charts for each substance, quantifier, qualifiers and internal standard.
func (d *document) injectionTraces(inj *evidence.Injection) {
	d.block(d.source(inj), left, textW, regular, sizeSmall, soft)
	d.down(1)
	const gap, columns = 2.0, 4
	w := (textW - gap*(columns-1)) / columns
	var all []*evidence.Measurement
	h := d.gridHeight(inj, columns)
	for _, a := range d.in.Record.Analytes {
		list := d.tracesOf(inj, a.ID)
		all = append(all, list...)
		s := spanOf(list)
		for i := 0; i < len(list); i += columns {
			if d.y+h+5 > lowest {
				d.newPage()
			}
			d.font(bold, sizeTable)
			d.down(4)
			d.text(left, d.y, a.Name, ink)
			d.line(left+d.wide(a.Name)+2, d.y-1, left+textW, d.y-1, rule, 0.5, whole)
			d.down(0.8)
			for j, m := range list[i:min(i+columns, len(list))] {
				d.chart(inj, m, s, left+float64(j)*(w+gap), d.y, w, h, false).draw()
			}
			d.down(h)
		}
	}
	d.down(3)
	d.peakTable(all)
	d.alternativeTable(all)
}

// gridHeight is the height of a row of small charts: all rows and the table of peaks fit the page, if they can.
func (d *document) gridHeight(inj *evidence.Injection, columns int) float64 {
	rows, traces := 0, 0
	for _, a := range d.in.Record.Analytes {
		n := len(d.tracesOf(inj, a.ID))
		rows, traces = rows+(n+columns-1)/columns, traces+n
	}
	return min(68, max(42, (lowest-d.y-peakRoom(traces)-alternativeRoom(inj)-4)/float64(max(1, rows))-4.8))
}

// peakTable gives limits and figures of merit of the peaks that were used.
func (d *document) peakTable(list []*evidence.Measurement) {
	var rows []row
	before := ""
	for _, m := range list {
		p := m.Peak
		if p == nil {
			continue
		}
		name := m.Compound
		if name == before {
			name = ""
		}
		before = m.Compound
		resolution := missing
		if p.ResolutionPre != nil || p.ResolutionPos != nil {
			resolution = optNumber(p.ResolutionPre, 3) + " / " + optNumber(p.ResolutionPos, 3)
		}
		rows = append(rows, row{open: name == "", keep: name == "", cells: cells(name, d.words.or("trace.", m.Trace), fixed(p.StartMin, 3)+" – "+fixed(p.EndMin, 3), powered(p.Area, 4), powered(p.Height, 3), powered(m.Noise, 3),
			optFixed(p.WidthHalfMin, 3), optFixed(p.Symmetry, 2), optNumber(p.Plates, 4), resolution, d.ends(p))})
	}
	if len(rows) == 0 {
		d.note(d.t("peaks.none"))
		return
	}
	d.table(table{name: "peaks", columns: "lllrrrdddrl", rows: rows, size: peakSize})
	if units := unitsOf(list); units != "" {
		d.note(d.t("peaks.units", "units", units))
	}
}

// unitsOf names the units of the traces' intensities that are not counts.
func unitsOf(list []*evidence.Measurement) string {
	text := ""
	seen := map[string]bool{}
	for _, m := range list {
		if m.Unit != "" && m.Peak != nil && !seen[m.Unit] {
			seen[m.Unit] = true
			text = joined(", ", text, m.Unit)
		}
	}
	return text
}

const peakSize = 7.0

// peakRoom is the room that the table of so many peaks takes.
func peakRoom(n int) float64 {
	return float64(n)*(lead(peakSize)*0.97+2*padY) + 3*lead(peakSize) + 6
}

// ends tells how a peak ends on its sides.
func (d *document) ends(p *peak.Peak) string {
	start, end := d.words.or("edge.", string(p.StartKind)), d.words.or("edge.", string(p.EndKind))
	if start == end {
		return start
	}
	return start + " / " + end
}
