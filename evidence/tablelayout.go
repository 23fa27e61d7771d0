package evidence

import (
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/trace/table"
)

// TableLayout puts what the method declares of a delimited text file into the reader's terms.
func TableLayout(t casefile.TableLayout) table.Layout {
	l := table.Layout{
		Separator:   map[string]byte{"comma": ',', "semicolon": ';', "tab": '\t', "space": ' '}[t.Separator],
		DecimalMark: map[string]byte{"point": '.', "comma": ','}[t.DecimalMark],
		Encoding:    t.Encoding, HeaderLines: t.HeaderLines, TimeColumn: t.TimeColumn, TimeUnit: t.TimeUnit,
	}
	for _, c := range t.Columns {
		l.Columns = append(l.Columns, table.Column{Column: c.Column, ID: c.ID, Unit: c.Unit, Transition: c.Transition})
	}
	return l
}
