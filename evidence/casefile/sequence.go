package casefile

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"
	"unicode/utf8"

	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/units"
)

// roles that a row may have.
var roles = []Role{SolventBlank, MatrixBlank, ZeroCalibrator, Calibrator, Control, NegativeControl, CarryoverBlank, SampleAliquot, Excluded}

// readSequence reads sequence.csv as spreadsheet programs save it: UTF-8 (with or without byte-order mark) or UTF-16; separated
// by comma, semicolon or tab; any line end; quoted fields; a decimal comma where the separator is no comma; empty rows and
// columns at the end. The problems list everything that is wrong with its form; then the rows are not to be used.
func readSequence(file string, data []byte) ([]Injection, sequenceHeader, Problems) {
	h := sequenceHeader{columns: map[string]int{}, places: map[string]int{}}
	text, problem := sequenceText(file, data)
	if problem != nil {
		return nil, h, Problems{*problem}
	}
	separator, problem := separatorOf(file, text)
	if problem != nil {
		return nil, h, Problems{*problem}
	}
	t := sequenceReader{file: file, separator: separator, header: &h}
	records := t.records(text)
	if len(records) == 0 {
		if len(t.problems) == 0 {
			t.report(1, 1, "", "separators alone", "a header line and one line for each injection", "")
		}
		return nil, h, t.problems
	}
	if t.readHeader(records[0]); len(t.problems) > len(h.marked) {
		return nil, h, t.problems
	}
	t.mark = t.decimalMark(records[1:])
	var rows []Injection
	for _, t.record = range records[1:] {
		t.takeMarks()
		rows = append(rows, t.row())
	}
	if len(rows) == 0 {
		t.report(1, 1, "", "a header without rows", "one line for each injection", "")
	}
	t.problems.Sort()
	return rows, h, t.problems
}

// A record is one line of the table: its fields without blanks around them, and their places.
type record struct {
	line   int
	fields []string
	places []int // columns, counting characters from 1
	end    int   // the column after the last character
	marked []int // the fields that are still to be filled in, by index; they are empty here
}

type sequenceReader struct {
	file      string
	separator rune
	header    *sequenceHeader
	mark      rune // before the decimals of the file's numbers; 0 where no number shows which
	record    record
	problems  Problems
}

func (t *sequenceReader) report(line, column int, key, got, want, hint string) {
	t.problems = append(t.problems, Problem{File: t.file, Line: line, Column: column, Key: key, Got: got, Want: want, Hint: hint})
}

// records takes the text apart. Rows without any text are left out: spreadsheets leave empty ones.
func (t *sequenceReader) records(text string) []record {
	lines := strings.Split(text, "\n")
	place := func(line, column int) int { // the reader counts bytes
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
			t.report(bad.Line, place(bad.Line, bad.Column), "", csvFault(bad), "quotation marks around the whole field or none", "a quotation mark inside a quoted field is written twice")
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

func csvFault(err *csv.ParseError) string {
	if errors.Is(err, csv.ErrBareQuote) {
		return "a quotation mark inside a field without them"
	}
	if err.Line > err.StartLine {
		return fmt.Sprintf("a quotation mark that is opened in line %d and not closed, or followed by text", err.StartLine)
	}
	return "a quotation mark that is not closed, or followed by text"
}

// field returns the text of a column and its place in the line; beyond the end of a short line it is empty.
func (t *sequenceReader) field(index int) (string, int) {
	if index >= len(t.record.fields) {
		return "", t.record.end
	}
	return t.record.fields[index], t.record.places[index]
}

func (t *sequenceReader) named(name string) (string, int) {
	i, ok := t.header.columns[name]
	if !ok {
		return "", 1
	}
	return t.field(i)
}

func (t *sequenceReader) row() Injection {
	row := Injection{Line: t.record.line, Dilution: 1, columns: map[string]int{}}
	for _, name := range slices.Concat(requiredColumns, optionalColumns) {
		var text string
		text, row.columns[name] = t.named(name)
		if strings.Contains(text, "\n") && name != "note" {
			t.report(row.Line, row.columns[name], name, quote(text), "text in one line", "")
		}
	}
	for _, c := range t.header.nominal {
		_, row.columns["nominal "+c.analyte] = t.field(c.index)
	}
	row.ID = t.needed("injection", "an id, unique in the sequence")
	row.File = t.path()
	row.Role = t.role()
	row.AcquiredAt = t.time()
	row.Operator = t.needed("operator", "the code of a person")
	row.Level, _ = t.named("level")
	row.Aliquot, _ = t.named("aliquot")
	row.SampleCode, _ = t.named("sample_code")
	row.Note, _ = t.named("note")
	if text, column := t.named("dilution"); text != "" {
		v, hint, err := t.number(text, units.ParseNumber)
		if err != nil || !(v > 0) {
			t.report(row.Line, column, "dilution", quote(text), "a factor above zero, such as 2", hint)
		}
		row.Dilution = v
	}
	t.nominals(&row)
	if n := len(t.header.names); len(t.record.fields) > n && strings.Join(t.record.fields[n:], "") != "" {
		t.report(row.Line, t.record.places[n], "", fmt.Sprintf("%d fields", len(t.record.fields)), fmt.Sprintf("%d, as in the header", n), "quote a field that holds the separator")
	}
	return row
}

func (t *sequenceReader) needed(name, want string) string {
	text, column := t.named(name)
	if text == "" && !t.pending(name) {
		t.report(t.record.line, column, name, "nothing", want, "")
	}
	return text
}

func (t *sequenceReader) path() string {
	text, column := t.named("file")
	p, err := strictyaml.ParsePath(text)
	if err != nil && !t.pending("file") {
		t.report(t.record.line, column, "file", quote(text), "the path of a file inside the case folder, such as raw/010.mzML", strictyaml.PathHint(text))
	}
	return p
}

func (t *sequenceReader) role() Role {
	text, column := t.named("role")
	if !slices.Contains(roles, Role(text)) && !t.pending("role") {
		names := roleNames()
		t.report(t.record.line, column, "role", quote(text), "one of: "+strings.Join(names, ", "), strictyaml.Suggest(text, names))
	}
	return Role(text)
}

func roleNames() []string {
	names := make([]string, len(roles))
	for i, r := range roles {
		names[i] = string(r)
	}
	return names
}

func (t *sequenceReader) time() string {
	text, column := t.named("acquired")
	if _, err := strictyaml.ParseTime(text); err != nil && !t.pending("acquired") {
		hint := "spreadsheet programs change times: format the column as text before typing"
		if h := strictyaml.TimeHint(text); h != "" {
			hint = h + "; " + hint
		}
		t.report(t.record.line, column, "acquired", quote(text), `a time with its offset, such as "2026-03-18T08:15:00+01:00"`, hint)
	}
	return text
}

func (t *sequenceReader) nominals(row *Injection) {
	for _, c := range t.header.nominal {
		text, column := t.field(c.index)
		if text == "" {
			continue
		}
		v, hint, err := t.number(text, func(s string) (float64, error) { return units.Concentration.ParseIn(s, c.unit) })
		if err != nil || v < 0 {
			t.report(row.Line, column, "nominal "+c.analyte, quote(text), "a number of at least 0, without its unit (the header has it)", hint)
			continue
		}
		row.Nominal = append(row.Nominal, Nominal{Analyte: c.analyte, NGPerML: v})
	}
}
