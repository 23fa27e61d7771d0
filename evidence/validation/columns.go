package validation

import (
	"fmt"
	"regexp"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/units"
)

// A layout is what the columns of a kind of table may be.
type layout struct {
	texts    []string // columns of text
	amounts  []string // columns of concentrations, with their unit in the header
	plain    []string // columns of numbers without a unit
	required []string
}

// A column is one that the file has.
type column struct {
	index int
	place int // in the header line
	unit  string
}

var unitInName = regexp.MustCompile(`^(.*?)\s*[\[(]\s*([^\])]*?)\s*[\])]$`)

func (l layout) describe() string {
	names := slices.Concat(l.texts, l.plain)
	for _, a := range l.amounts {
		names = append(names, a+" [UNIT]")
	}
	return strings.Join(names, ", ")
}

// readHeader understands the names of the columns, in any order and case.
func (t *reader) readHeader(header record) {
	names := header.fields
	for len(names) > 0 && names[len(names)-1] == "" {
		names = names[:len(names)-1]
	}
	t.width = len(names)
	t.columns = map[string]column{}
	known := slices.Concat(t.layout.texts, t.layout.amounts, t.layout.plain)
	for i, name := range names {
		key, unit := strings.ToLower(name), ""
		if m := unitInName.FindStringSubmatch(name); m != nil {
			key, unit = strings.ToLower(m[1]), m[2]
		}
		bad := func(got, want, hint string) { t.report(header.line, header.places[i], name, got, want, hint) }
		amount := slices.Contains(t.layout.amounts, key)
		switch {
		case !slices.Contains(known, key):
			bad("the unknown column "+strictyaml.Quote(name), "one of: "+t.layout.describe(), strictyaml.Suggest(key, known))
			continue
		case amount && !units.Concentration.Has(unit):
			hint := units.Concentration.Hint("1 " + unit)
			if unit == "" || hint == "" {
				hint = fmt.Sprintf("write the unit in brackets: %s [ng/mL]", key)
			}
			bad("the unit "+strictyaml.Quote(unit), units.Concentration.Want(), hint)
		case !amount && unit != "":
			bad("the column "+strictyaml.Quote(name), key+" without a unit", "")
		}
		if _, twice := t.columns[key]; twice {
			bad("a second column of that name", "each column once", "")
		}
		t.columns[key] = column{i, header.places[i], unit}
	}
	for _, name := range t.layout.required {
		if _, ok := t.columns[name]; !ok {
			want := "a column " + name
			if slices.Contains(t.layout.amounts, name) {
				want += " [UNIT]"
			}
			t.report(header.line, 1, name, "no such column", want, "")
		}
	}
}
