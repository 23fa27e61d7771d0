package render

import "assaywrit/evidence"

// hasStored tells whether any raw file brings a peak table along.
func (d *document) hasStored() bool {
	for _, inj := range d.in.Record.Injections {
		if len(inj.StoredPeaks) > 0 {
			return true
		}
	}
	return false
}

// stored sets the peaks in use beside those of the instrument's software.
func (d *document) stored() {
	d.paragraph(d.t("stored.intro"))
	var rows []row
	files, peaks := 0, 0
	for i := range d.in.Record.Injections {
		inj := &d.in.Record.Injections[i]
		if len(inj.StoredPeaks) > 0 {
			files, peaks = files+1, peaks+len(inj.StoredPeaks)
		}
		for k := range inj.Measurements {
			if m := &inj.Measurements[k]; m.Stored != nil {
				rows = append(rows, row{cells: d.storedCells(inj, m), to: d.toInjection(inj.ID)})
			}
		}
	}
	if len(rows) > 0 {
		d.table(table{name: "stored", columns: "lwldddddl", rows: rows, size: 7.4})
	}
	d.note(d.t("stored.note", "files", itoa(files), "peaks", itoa(peaks)))
}

func (d *document) storedCells(inj *evidence.Injection, m *evidence.Measurement) []cell {
	s := inj.StoredPeaks[m.Stored.Index]
	byHand := ""
	if s.ByHand {
		byHand = d.t("yes")
	}
	return cells(inj.ID, joined(" ", m.Compound, d.words.or("trace.", m.Trace)), s.Name, powered(m.Peak.Area, 4), opt(s.Area, func(v float64) string { return powered(v, 4) }),
		opt(m.Stored.AreaDifference, func(v float64) string { return signed(v*100, 2) }), optSigned(m.Stored.StartDifference, 3), optSigned(m.Stored.EndDifference, 3), byHand)
}

// crossChecks lists what does not agree between raw files, or between them and the sequence.
func (d *document) crossChecks() {
	list := d.in.Record.CrossChecks
	if len(list) == 0 {
		d.note(d.t("cross.none"))
		return
	}
	var rows []row
	for _, x := range list {
		rows = append(rows, row{cells: cells(d.words.or("cross.", x.Code), joinAll(", ", x.Injections), x.Detail)})
	}
	d.table(table{name: "cross", columns: "lww", rows: rows})
}

func joinAll(between string, list []string) string {
	text := ""
	for _, s := range list {
		text = joined(between, text, s)
	}
	return text
}
