package validation

import (
	"slices"
	"strconv"
	"strings"

	"assaywrit/evidence/strictyaml"
)

// Kind of a row of a validation table.
type Kind string

// The kinds, with the columns that each needs.
const (
	KindPrecision          Kind = "precision"           // run, level, found; nominal where it is known
	KindReference          Kind = "reference"           // a reference material or proficiency test: level (its name), nominal, u_nominal, found
	KindBlank              Kind = "blank"               // found
	KindRecovery           Kind = "recovery"            // through the whole method: level, nominal, found
	KindNeat               Kind = "neat"                // in solvent: level, response
	KindBefore             Kind = "before-extraction"   // matrix spiked before extraction: level, response
	KindAfter              Kind = "after-extraction"    // matrix spiked after extraction: level, response; source
	KindCarryover          Kind = "carry-over"          // a blank after nominal: nominal (of the injection before), found
	KindStabilityReference Kind = "stability-reference" // fresh: level, found
	KindStability          Kind = "stability"           // kept: level, condition, found
)

func kinds() []string {
	return []string{string(KindPrecision), string(KindReference), string(KindBlank), string(KindRecovery), string(KindNeat), string(KindBefore), string(KindAfter),
		string(KindCarryover), string(KindStabilityReference), string(KindStability)}
}

// A Row is one result. Amounts are in ng/mL; those that the row does not have are nil.
type Row struct {
	Line      int
	Analyte   string // "" where the table has one analyte
	Kind      Kind
	Run       string
	Level     string
	Replicate string
	Source    string // of the matrix
	Condition string // of storage
	Nominal   *float64
	UNominal  *float64 // its standard uncertainty
	Found     *float64
	Response  *float64 // in the unit of the instrument
	Note      string
}

var rowLayout = layout{
	texts:    []string{"kind", "analyte", "run", "level", "replicate", "source", "condition", "note"},
	amounts:  []string{"nominal", "u_nominal", "found"},
	plain:    []string{"response"},
	required: []string{"kind"},
}

// Read reads a validation table (see the package's comment). It is a pure function of the bytes. The problems list everything that is
// wrong, each with file, line, column, what was found and what would be accepted; then the rows are not to be used.
func Read(file string, data []byte) ([]Row, strictyaml.Problems) {
	t := reader{file: file, layout: rowLayout}
	var rows []Row
	seen := map[[6]string]int{}
	nominal := map[[3]string]Row{}
	problems := t.read(data, func() {
		row, ok := t.row()
		if !ok {
			return
		}
		t.checkAgainst(row, seen, nominal)
		rows = append(rows, row)
	})
	if len(problems) > 0 {
		return nil, problems
	}
	return rows, nil
}

// row reads one record; ok is false where its kind is not known, so that nothing else can be said of it.
func (t *reader) row() (Row, bool) {
	text, place := t.named("kind")
	kind := Kind(text)
	if !slices.Contains(kinds(), text) {
		got := strictyaml.Quote(text)
		if text == "" {
			got = "nothing"
		}
		t.report(t.record.line, place, "kind", got, "one of: "+strings.Join(kinds(), ", "), strictyaml.Suggest(text, kinds()))
		return Row{}, false
	}
	row := Row{Line: t.record.line, Kind: kind, Note: t.text("note", false)}
	_, several := t.columns["analyte"]
	row.Analyte = t.text("analyte", several)
	row.Run = t.text("run", kind == KindPrecision)
	row.Level = t.text("level", kind != KindBlank && kind != KindCarryover)
	row.Replicate = t.text("replicate", false)
	row.Source = t.text("source", false)
	if kind == KindStability {
		row.Condition = t.text("condition", true)
	} else {
		t.forbid("condition", text)
	}
	switch kind {
	case KindPrecision, KindReference, KindRecovery, KindCarryover:
		row.Nominal = t.number("nominal", kind != KindPrecision, aboveZero)
	default:
		t.forbid("nominal", text)
	}
	if kind == KindReference {
		row.UNominal = t.number("u_nominal", true, zeroOrMore)
	} else {
		t.forbid("u_nominal", text)
	}
	switch kind {
	case KindNeat, KindBefore, KindAfter:
		row.Response = t.number("response", true, zeroOrMore)
		t.forbid("found", text)
	default:
		row.Found = t.number("found", true, anyNumber)
		t.forbid("response", text)
	}
	return row, true
}

// checkAgainst reports a row that is there twice, and nominal values that contradict each other.
func (t *reader) checkAgainst(row Row, seen map[[6]string]int, nominal map[[3]string]Row) {
	if row.Replicate != "" {
		key := [6]string{row.Analyte, string(row.Kind), row.Run, row.Level, row.Source + "\n" + row.Condition, row.Replicate}
		if line, twice := seen[key]; twice {
			_, place := t.named("replicate")
			t.report(row.Line, place, "replicate", strictyaml.Quote(row.Replicate)+", as in line "+strconv.Itoa(line), "each replicate once", "")
		} else {
			seen[key] = row.Line
		}
	}
	if row.Kind != KindPrecision && row.Kind != KindReference && row.Kind != KindRecovery {
		return
	}
	key := [3]string{row.Analyte, string(row.Kind), row.Level}
	first, known := nominal[key]
	if !known {
		nominal[key] = row
		return
	}
	for _, f := range []struct {
		name string
		a, b *float64
	}{{"nominal", first.Nominal, row.Nominal}, {"u_nominal", first.UNominal, row.UNominal}} {
		if (f.a == nil) != (f.b == nil) || f.a != nil && *f.a != *f.b {
			text, place := t.named(f.name)
			t.report(row.Line, place, f.name, strictyaml.Quote(text)+" where line "+strconv.Itoa(first.Line)+" has another value", "the same value in all rows of the level "+strictyaml.Quote(row.Level), "")
		}
	}
}
