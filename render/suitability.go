package render

import "assaywrit/evidence"

// suitability tells how each compound behaved on the system over the batch.
func (d *document) suitability() {
	var rows []row
	for _, s := range d.in.Record.Suitability {
		worst, groups := missing, len(s.Replicates)
		most := 0.0
		for _, r := range s.Replicates {
			if r.ResponseSD >= most {
				most = r.ResponseSD
				worst = percent(r.ResponseSD, 3)
			}
		}
		rows = append(rows, row{cells: cells(s.Compound, itoa(s.Injections), optPercentSigned(s.RetentionDrift), optPercentSigned(s.ResponseDrift), worst, itoa(groups),
			extreme(s.Resolution, 3), extreme(s.SymmetryLow, 3)+" – "+extreme(s.SymmetryTop, 3), extreme(s.Plates, 4))})
	}
	d.table(table{name: "suitability", columns: "wddddddrd", rows: rows})
	key := "suitability.limits-none"
	if d.in.Record.Method.Suitability != nil {
		key = "suitability.limits"
	}
	d.note(d.t("suitability.note") + " " + d.t(key))
}

func optPercentSigned(v *float64) string {
	return opt(v, func(v float64) string { return signed(v*100, 2) })
}

func extreme(e *evidence.Extreme, digits int) string {
	if e == nil {
		return missing
	}
	return number(e.Value, digits)
}
