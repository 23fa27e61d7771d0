package validation

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"regexp"
	"strings"
	"unicode/utf8"

	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/units"
)

// A record is one line of a table: its fields without blanks around them, and their places.
type record struct {
	line   int
	fields []string
	places []int // columns, counting characters from 1
	end    int   // the column after the last character
}

// A reader reads one table. Spreadsheet programs save tables in several ways: UTF-8 or UTF-16; comma, semicolon or tab; decimal point or
// comma; empty rows and columns at the end. All are accepted as long as they can be read in one way only.
type reader struct {
	file      string
	layout    layout
	separator rune
	mark      rune // before decimals; 0 where no number of the file shows which
	columns   map[string]column
	width     int
	record    record
	problems  strictyaml.Problems
}

func (t *reader) report(line, place int, key, got, want, hint string) {
	t.problems = append(t.problems, strictyaml.Problem{File: t.file, Line: line, Column: place, Key: key, Got: got, Want: want, Hint: hint})
}

// read takes the table apart and calls row for each record. The problems are everything that is wrong.
func (t *reader) read(data []byte, row func()) strictyaml.Problems {
	text, problem := decoded(t.file, data)
	if problem == nil {
		t.separator, problem = separatorOf(t.file, text)
	}
	if problem != nil {
		return strictyaml.Problems{*problem}
	}
	records := t.records(text)
	if len(records) == 0 {
		if len(t.problems) == 0 {
			t.report(1, 1, "", "separators alone", "a header line and one line for each result", "")
		}
		return t.problems
	}
	if t.readHeader(records[0]); len(t.problems) > 0 {
		return t.problems
	}
	if len(records) == 1 {
		t.report(records[0].line, 1, "", "a header without rows", "one line for each result", "")
	}
	t.mark = t.decimalMark(records[1:])
	for _, t.record = range records[1:] {
		if len(t.record.fields) > t.width && strings.Join(t.record.fields[t.width:], "") != "" {
			t.report(t.record.line, t.record.places[t.width], "", fmt.Sprintf("%d fields", len(t.record.fields)), fmt.Sprintf("%d, as in the header", t.width), "quote a field that holds the separator")
		}
		row()
	}
	t.problems.Sort()
	return t.problems
}

// records takes the text apart. Rows without any text are left out.
func (t *reader) records(text string) []record {
	lines := strings.Split(text, "\n")
	place := func(line, column int) int { // the csv package counts bytes
		s := lines[line-1]
		return utf8.RuneCountInString(s[:min(column-1, len(s))]) + 1
	}
	r := csv.NewReader(strings.NewReader(text))
	r.Comma, r.FieldsPerRecord, r.TrimLeadingSpace = t.separator, -1, t.separator != '\t'
	var all []record
	for {
		fields, err := r.Read()
		var bad *csv.ParseError
		switch {
		case errors.Is(err, io.EOF):
			return all
		case errors.As(err, &bad):
			got := "a quotation mark inside a field without them"
			if !errors.Is(bad, csv.ErrBareQuote) {
				got = fmt.Sprintf("a quotation mark that is opened in line %d and not closed, or followed by text", bad.StartLine)
			}
			t.report(bad.Line, place(bad.Line, bad.Column), "", got, "quotation marks around the whole field or none", "a quotation mark inside a quoted field is written twice")
			return nil
		case err != nil:
			t.report(1, 1, "", err.Error(), "a table", "")
			return nil
		}
		rec := record{fields: fields}
		rec.line, _ = r.FieldPos(0)
		for i := range fields {
			line, column := r.FieldPos(i)
			rec.places = append(rec.places, place(line, column))
			fields[i] = strings.TrimSpace(fields[i])
		}
		rec.end = utf8.RuneCountInString(lines[rec.line-1]) + 1
		if strings.Join(fields, "") != "" {
			all = append(all, rec)
		}
	}
}

// named is the text of a column and its place in the line; beyond the end of a short line, and of a column that the file has not, it is
// empty.
func (t *reader) named(name string) (string, int) {
	c, ok := t.columns[name]
	switch {
	case !ok:
		return "", 1
	case c.index >= len(t.record.fields):
		return "", t.record.end
	}
	return t.record.fields[c.index], t.record.places[c.index]
}

// text is a field in one line; where it is needed and empty that is a problem.
func (t *reader) text(name string, needed bool) string {
	text, place := t.named(name)
	switch {
	case strings.Contains(text, "\n"):
		t.report(t.record.line, place, name, strictyaml.Quote(text), "text in one line", "")
	case text == "" && needed:
		t.report(t.record.line, place, name, "nothing", "a "+name+" in a row of this kind", "")
	}
	return text
}

// A range of numbers that a field accepts.
type accepted struct {
	words string
	ok    func(v float64) bool
}

var (
	anyNumber  = accepted{"a number", func(float64) bool { return true }}
	aboveZero  = accepted{"a number above zero", func(v float64) bool { return v > 0 }}
	zeroOrMore = accepted{"a number of at least 0", func(v float64) bool { return v >= 0 }}
)

// number is the value of a field, in ng/mL where the column has a unit; nil where it is empty or wrong.
func (t *reader) number(name string, needed bool, want accepted) *float64 {
	text, place := t.named(name)
	if text == "" {
		if needed {
			t.report(t.record.line, place, name, "nothing", want.words, "")
		}
		return nil
	}
	words := want.words
	parse := units.ParseNumber
	if unit := t.columns[name].unit; unit != "" {
		words += ", without its unit (the header has it)"
		parse = func(s string) (float64, error) { return units.Concentration.ParseIn(s, unit) }
	}
	v, hint, err := t.parse(text, parse)
	if err != nil || !want.ok(v) {
		t.report(t.record.line, place, name, strictyaml.Quote(text), words, hint)
		return nil
	}
	return &v
}

// forbid reports a field that means nothing in a row of its kind.
func (t *reader) forbid(name, kind string) {
	if text, place := t.named(name); text != "" {
		t.report(t.record.line, place, name, strictyaml.Quote(text), "nothing in a row of the kind "+kind, "")
	}
}

// twoWays: three digits behind the only mark, one to three before it that do not begin with zero. Taking 1,500 for 1.5 would be wrong a
// thousandfold, so the file must show which mark it uses: in a file separated by commas it is the point, in others that of the first
// number that can be read in one way only.
var twoWays = regexp.MustCompile(`^[+-]?[1-9]\d{0,2}[.,]\d{3}$`)

func marks(text string) int { return strings.Count(text, ".") + strings.Count(text, ",") }

func (t *reader) decimalMark(records []record) rune {
	if t.separator == ',' {
		return '.'
	}
	for _, r := range records {
		for _, names := range [][]string{t.layout.amounts, t.layout.plain} {
			for _, name := range names {
				c, ok := t.columns[name]
				if !ok || c.index >= len(r.fields) || twoWays.MatchString(r.fields[c.index]) || marks(r.fields[c.index]) != 1 {
					continue
				}
				return rune(r.fields[c.index][strings.IndexAny(r.fields[c.index], ".,")])
			}
		}
	}
	return 0
}

// parse reads a number of the file, or gives advice.
func (t *reader) parse(text string, parse func(string) (float64, error)) (v float64, hint string, err error) {
	if i := strings.IndexAny(text, ".,"); i >= 0 {
		mark := rune(text[i])
		switch {
		case marks(text) > 1:
			return 0, "write numbers without separators of thousands", errors.New("marks")
		case t.mark == 0:
			return 0, "it can be read in two ways: write it with another number of decimals", errors.New("two ways")
		case mark != t.mark && t.separator == ',':
			return 0, "write a decimal point: the comma separates the columns", errors.New("comma")
		case mark != t.mark:
			return 0, fmt.Sprintf("other numbers of the file have %q before their decimals", t.mark), errors.New("mark")
		}
	}
	plain := strings.Replace(text, ",", ".", 1)
	v, err = parse(plain)
	return v, units.NumberHint(plain), err
}
