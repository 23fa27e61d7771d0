package table

import (
	"fmt"

	"assaywrit/evidence/trace"
)

// A Layout declares the columns, counted from 1.
type Layout struct {
	Separator   byte   // ',', ';' or tab
	DecimalMark byte   // '.' or ','; a comma only where it is not the separator
	HeaderLines int    // lines before the first point, from 0
	TimeColumn  int    // the time's
	TimeUnit    string // "min" or "s"
	Columns     []Column
}

// A Column is one trace.
type Column struct {
	Column     int
	ID         string // its own in the layout
	Transition trace.Transition
}

// check refuses a layout that cannot be meant.
func (l Layout) check() error {
	switch {
	case l.Separator != ',' && l.Separator != ';' && l.Separator != '\t':
		return fmt.Errorf("a separator of %q: want comma, semicolon or tab", l.Separator)
	case l.DecimalMark != '.' && l.DecimalMark != ',' || l.DecimalMark == l.Separator:
		return fmt.Errorf("a decimal mark of %q with the separator %q: want point, or comma where it is not the separator", l.DecimalMark, l.Separator)
	case l.HeaderLines < 0:
		return fmt.Errorf("%d header lines: want 0 or more", l.HeaderLines)
	case l.TimeUnit != "min" && l.TimeUnit != "s":
		return fmt.Errorf("a time unit of %q: want min or s", l.TimeUnit)
	case l.TimeColumn < 1 || len(l.Columns) == 0:
		return fmt.Errorf("time in column %d and %d traces: want a column from 1 and at least one trace", l.TimeColumn, len(l.Columns))
	}
	ids, columns := map[string]bool{}, map[int]bool{l.TimeColumn: true}
	for _, c := range l.Columns {
		if c.Column < 1 || columns[c.Column] || c.ID == "" || ids[c.ID] {
			return fmt.Errorf("the trace %q in column %d: want an id and a column (from 1) that no other trace has, nor the time", c.ID, c.Column)
		}
		ids[c.ID], columns[c.Column] = true, true
	}
	return nil
}

// width is the number of fields that a line must have at least.
func (l Layout) width() int {
	w := l.TimeColumn
	for _, c := range l.Columns {
		w = max(w, c.Column)
	}
	return w
}

// kind is what the ions of a column say about it.
func kind(t trace.Transition) trace.Kind {
	switch {
	case t.ProductMZ > 0:
		return trace.SRM
	case t.PrecursorMZ > 0:
		return trace.SIM
	}
	return trace.Other
}
