package jcamp

import (
	"fmt"
	"strings"

	"assaywrit/evidence/trace"
)

// longestID is the longest beginning of a title, in bytes, that names a trace.
const longestID = 200

// chromatogram makes a table a chromatogram in minutes. ids are those that are taken. The table's numbers are taken over, not copied.
func (r *reader) chromatogram(t *Table, ids map[string]bool) (trace.Chromatogram, error) {
	var c trace.Chromatogram
	if t.known == labelPeakTable || t.known == labelPeakAssignments {
		r.warnings.add("peak-table", "line %d: the chromatogram is a peak table; its points may be the tops of peaks only", t.Line)
	}
	stated := t.XUnits
	if stated == "" {
		stated = t.xName
	}
	unit := timeUnit(stated)
	if unit == "" {
		return c, r.refuse(t.Line, 1, fmt.Sprintf("a chromatogram over %q", clip(stated)), "an x axis in MINUTES or SECONDS", unitHint)
	}
	if unit == "s" {
		for i := range t.X {
			t.X[i] /= 60
		}
	}
	c = trace.Chromatogram{ID: uniqueID(t, ids), Kind: detector(t), Unit: t.YUnits, TimeMin: t.X, Intensity: t.Y}
	if len(c.TimeMin) == 0 {
		return c, r.refuse(t.Line, 1, "a chromatogram without points", "at least one", exportHint)
	}
	if b := c.Check(); b != nil {
		return c, r.refuse(t.Line, 1, fmt.Sprintf("%s at point %d", b.Got, b.Point), b.Want, exportHint)
	}
	return c, nil
}

// uniqueID names a trace by its variable, or the title of its block, and by a number if that name is taken.
func uniqueID(t *Table, ids map[string]bool) string {
	name := t.yName
	if name == "" || t.known != labelDataTable {
		name = t.Title
	}
	name = strings.ToValidUTF8(name[:min(len(name), longestID)], "")
	if name == "" {
		name = "trace"
	}
	id := name
	for n := len(ids) + 1; ids[id]; n++ {
		id = fmt.Sprintf("%s (%d)", name, n)
	}
	ids[id] = true
	return id
}

// detector tells what a chromatogram followed, where its type or unit says so.
func detector(t *Table) trace.Kind {
	what := squeezed(t.DataType)
	switch unit := squeezed(t.YUnits); {
	case strings.Contains(what, "TOTALION") || strings.Contains(squeezed(t.yName), "TOTALION"):
		return trace.TIC
	case strings.Contains(what, "UV") || unit == "AU" || unit == "MAU" || unit == "ABSORBANCE":
		return trace.Absorption
	}
	return trace.Other
}
