package casefile

import (
	"fmt"
	"regexp"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/units"
)

// The columns of sequence.csv that are not nominal amounts.
var (
	requiredColumns = []string{"injection", "file", "role", "acquired", "operator"}
	optionalColumns = []string{"level", "aliquot", "sample_code", "dilution", "note"}
)

// A sequenceHeader tells which column holds what.
type sequenceHeader struct {
	line    int
	columns map[string]int // index by name
	places  map[string]int // column in the header line, by name; nominal amounts as "nominal analyte"
	nominal []nominalColumn
	names   []string // as written
	marked  []int    // columns whose name is still to be filled in, by index
}

type nominalColumn struct {
	index   int
	analyte string
	unit    string
}

var nominalName = regexp.MustCompile(`(?i)^nominal\s+([a-z0-9-]+)\s*[\[(]\s*([^\])]*?)\s*[\])]$`)

// readHeader understands the names of the columns, in any order and case.
func (t *sequenceReader) readHeader(header record) {
	names := header.fields
	for len(names) > 0 && names[len(names)-1] == "" {
		names = names[:len(names)-1]
	}
	h := t.header
	h.names, h.line = names, header.line
	known := slices.Concat(requiredColumns, optionalColumns)
	for i, name := range names {
		key := strings.ToLower(name)
		bad := func(got, want, hint string) { t.report(header.line, header.places[i], name, got, want, hint) }
		m := nominalName.FindStringSubmatch(name)
		switch {
		case strictyaml.IsMark(name):
			h.marked = append(h.marked, i)
			t.report(header.line, header.places[i], "header", strictyaml.MarkFound, columnWanted, "")
		case m != nil:
			t.nominalColumn(nominalColumn{i, strings.ToLower(m[1]), m[2]}, header.places[i], bad)
		case strings.HasPrefix(key, "nominal"):
			bad(quote(name), "the analyte's id and the unit in brackets, such as nominal salbutamol [ng/mL]", "")
		case !slices.Contains(known, key):
			bad("the unknown column "+quote(name), "one of: "+strings.Join(known, ", ")+", nominal ANALYTE [UNIT]", strictyaml.Suggest(name, known))
		default:
			if _, twice := h.columns[key]; twice {
				bad("a second column of that name", "each column once", "")
			}
			h.columns[key], h.places[key] = i, header.places[i]
		}
	}
	for _, name := range requiredColumns {
		if _, ok := h.columns[name]; !ok && len(h.marked) == 0 {
			t.report(header.line, 1, name, "no such column", "a column "+name, "")
		}
	}
}

func (t *sequenceReader) nominalColumn(c nominalColumn, place int, bad func(got, want, hint string)) {
	h := t.header
	if !units.Concentration.Has(c.unit) {
		hint := units.Concentration.Hint("1 " + c.unit)
		if hint == "" {
			hint = fmt.Sprintf("write the unit in brackets: nominal %s [ng/mL]", c.analyte)
		}
		bad("the unit "+quote(c.unit), units.Concentration.Want(), hint)
	}
	if slices.ContainsFunc(h.nominal, func(o nominalColumn) bool { return o.analyte == c.analyte }) {
		bad("a second column for "+c.analyte, "one column for each analyte", "")
	}
	h.nominal = append(h.nominal, c)
	h.places["nominal "+c.analyte] = place
}
