package validation

import (
	"fmt"
	"time"

	"assaywrit/evidence/strictyaml"
)

// A Control is one control of one batch. Amounts are in ng/mL.
type Control struct {
	Line     int
	Analyte  string // "" where the table has one analyte
	Batch    string
	Level    string
	Measured string   // RFC 3339, or empty
	Nominal  *float64 // nil where it is not stated
	Found    float64
	// Excluded is the reason why the result is not used for limits and rules, by a decision that is recorded elsewhere; it is shown.
	Excluded string
	Note     string
}

var historyLayout = layout{
	texts:    []string{"batch", "analyte", "level", "measured", "excluded", "note"},
	amounts:  []string{"nominal", "found"},
	required: []string{"batch", "level", "found"},
}

// ReadHistory reads a table of controls, in the order of measurement (see the package's comment); rows of one batch follow each other.
// Problems are as those of Read.
func ReadHistory(file string, data []byte) ([]Control, strictyaml.Problems) {
	t := reader{file: file, layout: historyLayout}
	var rows []Control
	var latest time.Time
	last := map[string]int{} // line of the last row of each batch
	problems := t.read(data, func() {
		c := Control{Line: t.record.line, Batch: t.text("batch", true), Level: t.text("level", true), Excluded: t.text("excluded", false), Note: t.text("note", false)}
		_, several := t.columns["analyte"]
		c.Analyte = t.text("analyte", several)
		if text, place := t.named("measured"); text != "" {
			at, err := strictyaml.ParseTime(text)
			switch {
			case err != nil:
				t.report(c.Line, place, "measured", strictyaml.Quote(text), `a time with its offset, such as "2026-03-18T08:15:00+01:00"`, strictyaml.TimeHint(text))
			case at.Before(latest):
				t.report(c.Line, place, "measured", strictyaml.Quote(text), "no time before that of the rows above", "sort the rows by time: drift is looked for in their order")
			default:
				latest, c.Measured = at, text
			}
		}
		if line, ok := last[c.Batch]; ok && c.Batch != "" && (len(rows) == 0 || rows[len(rows)-1].Batch != c.Batch) {
			_, place := t.named("batch")
			t.report(c.Line, place, "batch", fmt.Sprintf("%s again after another batch (line %d)", strictyaml.Quote(c.Batch), line), "the rows of a batch after each other", "sort the rows by time")
		}
		last[c.Batch] = c.Line
		c.Nominal = t.number("nominal", false, aboveZero)
		if v := t.number("found", true, anyNumber); v != nil {
			c.Found = *v
		}
		rows = append(rows, c)
	})
	if len(problems) > 0 {
		return nil, problems
	}
	return rows, nil
}
