package render

import (
	"assaywrit/evidence"
	"assaywrit/evidence/peak"
)

// alternativeMethods are the columns of the table, in order.
var alternativeMethods = []string{peak.SeparateDrop, peak.SeparateValley, peak.SeparateTangent, peak.SeparateExponent, peak.SeparateFit, peak.SeparateFitAlike}

// alternativeTable tells what other defensible ways to divide shared peaks would have given; nothing where no peak is shared.
func (d *document) alternativeTable(list []*evidence.Measurement) {
	var rows []row
	marked := false
	for _, m := range list {
		if len(alternativesOf(m)) == 0 {
			continue
		}
		r := row{cells: cells(m.Compound, d.words.or("trace.", m.Trace))}
		for _, method := range alternativeMethods {
			text := missing
			for _, a := range alternativesOf(m) {
				if a.Method == method && a.Difference != nil {
					text = signed(*a.Difference*100, 2)
					if len(a.Distrust) > 0 {
						text += " ?"
						marked = true
					}
				}
			}
			r.cells = append(r.cells, cell{text: text})
		}
		rows = append(rows, r)
	}
	if len(rows) == 0 {
		return
	}
	d.down(1.5)
	d.table(table{name: "alternatives", columns: "llrrrrrr", rows: rows, size: peakSize})
	note := d.t("alternatives.note")
	if marked {
		note += " " + d.t("alternatives.distrust")
	}
	d.note(note)
}

// alternativeRoom is the room that the table takes for an injection.
func alternativeRoom(inj *evidence.Injection) float64 {
	n := 0
	for i := range inj.Measurements {
		if len(alternativesOf(&inj.Measurements[i])) > 0 {
			n++
		}
	}
	if n == 0 {
		return 0
	}
	return float64(n)*(lead(peakSize)*0.97+2*padY) + 9*lead(peakSize) + 6
}

func alternativesOf(m *evidence.Measurement) []evidence.Alternative {
	if m.Merit == nil {
		return nil
	}
	return m.Merit.Alternatives
}
