package render

import (
	"fmt"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// chromatograms draws every trace that was used: those of the sample large, a page for each substance; the others a page an
// injection.
func (d *document) chromatograms() {
	d.chapter("traces", d.words.get("traces-title"))
	d.paragraph(d.words.get("traces-note"))
	first := true
	for i := range d.in.Record.Injections {
		inj := &d.in.Record.Injections[i]
		if len(inj.Measurements) == 0 {
			continue
		}
		if inj.Role == casefile.SampleAliquot {
			d.sampleTraces(inj)
			first = false
		}
	}
	for i := range d.in.Record.Injections {
		inj := &d.in.Record.Injections[i]
		if len(inj.Measurements) > 0 && inj.Role != casefile.SampleAliquot {
			d.injectionTraces(inj, first)
			first = false
		}
	}
}

// describe names an injection in a heading.
func describe(inj *evidence.Injection) string {
	text := fmt.Sprintf("Injection %s: %s", inj.ID, inj.Role)
	if inj.Level != "" {
		text += " " + inj.Level
	}
	if inj.Aliquot != "" {
		text += ", aliquot " + inj.Aliquot
	}
	return text
}

func (d *document) source(inj *evidence.Injection) string {
	return fmt.Sprintf("%s, SHA-256 %s  ·  time in min, intensity in counts", inj.File, d.hashOf("data/inputs/case/"+inj.File))
}

// tracesOf lists the measurements of an analyte in an injection, its internal standard last.
func (d *document) tracesOf(inj *evidence.Injection, analyte string) []*evidence.Measurement {
	standard := ""
	for _, a := range d.in.Record.Method.Analytes {
		if a.ID == analyte {
			standard = a.InternalStandard
		}
	}
	var list []*evidence.Measurement
	for _, want := range []string{analyte, standard} {
		for i := range inj.Measurements {
			if m := &inj.Measurements[i]; m.Compound == want {
				list = append(list, m)
			}
		}
	}
	return list
}

func (d *document) sampleTraces(inj *evidence.Injection) {
	for k, a := range d.in.Record.Analytes {
		d.newPage()
		if k == 0 {
			d.heading(1, "injection/"+inj.ID, describe(inj))
		} else {
			d.subheading(describe(inj) + ", continued")
		}
		d.block(a.Name+"  ·  "+d.source(inj), left, textW, sizeSmall, "", soft)
		list := d.tracesOf(inj, a.ID)
		const gap = 6.0
		w, h := (textW-gap)/2, 82.0
		y := d.y() + 1
		for i, m := range list {
			if i > 0 && i%4 == 0 {
				d.newPage()
				y = d.y()
			}
			d.traceChart(inj, m, left+float64(i%2)*(w+gap), y+float64(i%4/2)*(h+5), w, h)
		}
		rows := (min(len(list), 4) + 1) / 2
		d.pdf.SetY(y + float64(rows)*(h+5))
		d.peakTable(list)
	}
}

func (d *document) subheading(text string) {
	d.font("B", sizeH2)
	d.color(ink)
	d.down(8)
	d.put(left, d.y(), text)
	d.down(1.5)
}

// peakTable gives the figures of merit of the peaks of one page.
func (d *document) peakTable(list []*evidence.Measurement) {
	var rows [][]string
	for _, m := range list {
		p := m.Peak
		if p == nil {
			rows = append(rows, []string{m.Compound, m.Trace, "no peak", "", "", "", "", "", "", ""})
			continue
		}
		rs := "–"
		if p.ResolutionPre != nil || p.ResolutionPos != nil {
			rs = optional(p.ResolutionPre, 3) + " / " + optional(p.ResolutionPos, 3)
		}
		rows = append(rows, []string{m.Compound, m.Trace, fmt.Sprintf("%.3f to %.3f", p.StartMin, p.EndMin), compact(p.Height, 4), compact(m.Noise, 3), fixed3(p.WidthHalfMin), optional(p.Symmetry, 3), optional(p.Plates, 4), rs,
			string(p.StartKind) + ", " + string(p.EndKind)})
	}
	d.table(table{columns: []column{{head: "Substance", share: 1.6}, {head: "Trace", share: 1.8}, {head: "From, to, min", share: 1.8}, {head: "Height, counts", share: 1.35, right: true}, {head: "Noise, counts", share: 0.9, right: true}, {head: "Width at half, min", share: 1, right: true},
		{head: "Symmetry, 5 %", share: 1.35, right: true}, {head: "N (half)", share: 0.9, right: true}, {head: "Rs (half) before / after", share: 1.3, right: true}, {head: "Limits at", share: 1.3}}, rows: rows, size: 7.2})
}

// injectionTraces is a page of small charts: a row for each analyte, its ions and its internal standard.
func (d *document) injectionTraces(inj *evidence.Injection, _ bool) {
	d.newPage()
	d.heading(1, "injection/"+inj.ID, describe(inj))
	d.block(d.source(inj), left, textW, sizeSmall, "", soft)
	const columns, gap = 2, 5.0
	w := (textW - gap*(columns-1)) / columns
	var list []*evidence.Measurement
	for _, a := range d.in.Record.Analytes {
		list = append(list, d.tracesOf(inj, a.ID)...)
	}
	const perPage = 12
	for i, m := range list {
		if i > 0 && i%perPage == 0 {
			d.newPage()
		}
		h := 36.0
		row := i % perPage / columns
		d.traceChart(inj, m, left+float64(i%columns)*(w+gap), d.y()+1+float64(row)*(h+1.6), w, h-1)
	}
}
