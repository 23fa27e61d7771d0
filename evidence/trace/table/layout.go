package table

import (
	"fmt"

	"assaywrit/evidence/trace"
)

// A Layout declares the columns, counted from 1.
type Layout struct {
	Separator   byte   // ',', ';', tab, or a blank, of which several count as one
	DecimalMark byte   // '.' or ','; a comma only where it is not the separator
	Encoding    string // "utf-8", "utf-16", "latin-1"; empty for UTF-8
	HeaderLines int    // lines before the first point, from 0
	TimeColumn  int    // the time's
	TimeUnit    string // "min" or "s"
	Columns     []Column
}

// A Column is one trace.
type Column struct {
	Column     int
	ID         string // its own in the layout
	Unit       string // of its intensity, for people; empty for counts
	Transition trace.Transition
}

// check refuses a layout that cannot be meant.
func (l Layout) check() error {
	switch {
	case l.Separator != ',' && l.Separator != ';' && l.Separator != '\t' && l.Separator != ' ':
		return fmt.Errorf("a separator of %q: want comma, semicolon, tab or blank", l.Separator)
	case l.Encoding != "" && l.Encoding != "utf-8" && l.Encoding != "utf-16" && l.Encoding != "latin-1":
		return fmt.Errorf("an encoding of %q: want utf-8, utf-16 or latin-1", l.Encoding)
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

// targets tells, for each column up to the last that is read, what it is: 0 for time, a trace's place from 1, -1 for neither.
func (l Layout) targets() []int {
	list := make([]int, l.width())
	for i := range list {
		list[i] = -1
	}
	list[l.TimeColumn-1] = 0
	for i, c := range l.Columns {
		list[c.Column-1] = i + 1
	}
	return list
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
