package render

import (
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// hasMerit tells whether any figure of merit of an analyte was recorded.
func (d *document) hasMerit(analyte string) bool {
	for i := range d.in.Record.Injections {
		for _, m := range d.in.Record.Injections[i].Measurements {
			if m.Compound == analyte && m.Merit != nil {
				return true
			}
		}
	}
	return false
}

// merit lists the figures of merit: every trace of the sample, and the quantifier of calibrators and controls.
func (d *document) merit(k int) {
	a := &d.in.Record.Analytes[k]
	d.paragraph(d.t("merit.intro"))
	var rows []row
	for _, sample := range []bool{true, false} {
		for i := range d.in.Record.Injections {
			inj := &d.in.Record.Injections[i]
			if sample != (inj.Role == casefile.SampleAliquot) || !sample && inj.Role != casefile.Calibrator && inj.Role != casefile.Control {
				continue
			}
			first := true
			for j := range inj.Measurements {
				m := &inj.Measurements[j]
				if m.Compound != a.ID || m.Merit == nil || !sample && m.Trace != evidence.QuantifierTrace {
					continue
				}
				name := ""
				if first {
					name = joined(" ", inj.ID, d.role(inj.Role), joined(" ", inj.Level, inj.Aliquot))
				}
				rows = append(rows, row{cells: d.meritCells(name, m), keep: !first, open: !first, to: map[bool]string{true: d.toInjection(inj.ID)}[first]})
				first = false
			}
		}
	}
	d.table(table{name: "merit", columns: "wldddddddddddl", rows: rows, size: 6.8})
	d.note(d.t("merit.note"))
}

func (d *document) meritCells(name string, m *evidence.Measurement) []cell {
	f, texts := m.Merit.Figures, make([]string, 12)
	for i := range texts {
		texts[i] = missing
	}
	if b := m.Merit.AreaBudget; b != nil && m.Peak.Area > 0 {
		texts[0] = percent(b.StdU/m.Peak.Area, 2)
	}
	if f != nil {
		texts[1], texts[2] = optNumber(f.SignalToNoise, 3), optNumber(f.RetentionFactor, 3)
		texts[3], texts[4], texts[5] = optNumber(f.PlatesHalf, 4), optNumber(f.PlatesBase, 4), optNumber(f.PlatesMoments, 4)
		texts[6] = optNumber(f.PlateHeightMM, 3)
	}
	var half, base, alpha, valley *float64
	for i := range m.Merit.Neighbours { // the nearer of two
		n := &m.Merit.Neighbours[i]
		if half == nil || n.ResolutionHalf != nil && *n.ResolutionHalf < *half {
			half, base, alpha, valley = n.ResolutionHalf, n.ResolutionBase, n.SeparationFactor, n.PeakToValley
		}
	}
	if half != nil || base != nil {
		texts[7] = optNumber(half, 3) + " / " + optNumber(base, 3)
	}
	texts[8], texts[9] = optNumber(alpha, 4), optNumber(valley, 3)
	texts[10] = optNumber(m.Merit.PercentArea, 3)
	if f != nil {
		texts[11] = d.t("yes")
		for i, h := range m.Merit.Hindrances {
			if i == 0 {
				texts[11] = ""
			}
			texts[11] = joined(", ", texts[11], d.words.or("cannot.", h.Reason))
		}
	}
	return cells(append([]string{name, d.words.or("trace.", m.Trace)}, texts...)...)
}
