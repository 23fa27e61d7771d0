package casefile

import (
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
)

// columnWanted says what may stand in the header.
const columnWanted = "the name of a column, such as nominal salbutamol [ng/mL]: the analyte's id and the unit of the amounts below it"

// markWanted says what each column holds, for fields that are still to be filled in.
var markWanted = map[string]string{
	"injection":   "an id, unique in the sequence",
	"file":        "the path of a file inside the case folder, such as raw/010.mzML",
	"role":        "one of: " + strings.Join(roleNames(), ", "),
	"level":       "the level of a calibrator or control, such as low; nothing in other rows",
	"aliquot":     "the aliquot of the sample that was injected, such as A1; nothing in other rows",
	"sample_code": "the code of the sample; nothing in rows that are not the sample's",
	"dilution":    "the factor by which the sample was diluted before the analysis, such as 2; 1 where it was not",
	"acquired":    `the start of the acquisition, a time with its offset, such as "2026-03-18T08:15:00+01:00"`,
	"operator":    "the code of one of the people in " + CaseFile,
	"note":        "what else is to be said of the injection, or nothing",
}

// amountWanted is for the columns of nominal amounts, also where the name of the column is still to be filled in.
const amountWanted = "the amount in a calibrator or control, without its unit (the header has it); nothing in other rows"

// takeMarks reports the fields of a row that are still to be filled in, and leaves them empty.
func (t *sequenceReader) takeMarks() {
	rec := &t.record
	for i, text := range rec.fields {
		if i >= len(t.header.names) || !strictyaml.IsMark(text) {
			continue
		}
		key, want := strings.ToLower(t.header.names[i]), ""
		if want = markWanted[key]; want == "" {
			key, want = "nominal", amountWanted
		}
		for _, c := range t.header.nominal {
			if c.index == i {
				key = "nominal " + c.analyte
			}
		}
		t.report(rec.line, rec.places[i], key, strictyaml.MarkFound, want, "")
		rec.fields[i], rec.marked = "", append(rec.marked, i)
	}
}

// pending tells of a field that has its problem already: it, or the name of its column, is still to be filled in.
func (t *sequenceReader) pending(name string) bool {
	i, ok := t.header.columns[name]
	return !ok || slices.Contains(t.record.marked, i)
}
