package casefile

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"regexp"
	"slices"
	"strings"
	"time"
	"unicode/utf16"
	"unicode/utf8"

	"assaywrit/evidence/units"
)

// sequenceColumns are the columns of sequence.csv that are not nominal amounts; the required ones come first.
var (
	requiredColumns = []string{"injection", "file", "role", "acquired", "operator"}
	optionalColumns = []string{"level", "aliquot", "sample_code", "dilution", "note"}
)

// roles that a row may have.
var roles = []Role{SolventBlank, MatrixBlank, ZeroCalibrator, Calibrator, Control, NegativeControl, CarryoverBlank, SampleAliquot, Excluded}

// A sequenceHeader tells which column holds what.
type sequenceHeader struct {
	file      string
	separator rune
	columns   map[string]int // by name
	nominal   []nominalColumn
	names     []string // as written
}

type nominalColumn struct {
	index   int
	analyte string
	unit    string
}

var nominalName = regexp.MustCompile(`(?i)^nominal\s+([a-z0-9-]+)\s*[\[(]([^\])]*)[\])]$`)

// readSequence reads sequence.csv as spreadsheet programs save it: UTF-8 (with or without byte-order mark) or UTF-16; separated
// by comma, semicolon or tab; any line end; quoted fields; a decimal comma where the separator is no comma; empty rows and
// columns at the end.
func readSequence(file string, data []byte) ([]Injection, sequenceHeader, Problems) {
	h := sequenceHeader{file: file, columns: map[string]int{}}
	text, problem := sequenceText(file, data)
	if problem != nil {
		return nil, h, Problems{*problem}
	}
	if h.separator, problem = separatorOf(file, text); problem != nil {
		return nil, h, Problems{*problem}
	}
	t := sequenceReader{header: &h, r: csv.NewReader(strings.NewReader(text))}
	t.r.Comma = h.separator
	t.r.FieldsPerRecord = -1
	t.r.TrimLeadingSpace = h.separator != '\t'
	return t.rows(), h, t.problems
}

// sequenceText decodes the file's text.
func sequenceText(file string, data []byte) (string, *Problem) {
	if len(data) >= 2 && (data[0] == 0xff && data[1] == 0xfe || data[0] == 0xfe && data[1] == 0xff) {
		big := data[0] == 0xfe
		words := make([]uint16, 0, len(data)/2)
		for i := 2; i+1 < len(data); i += 2 {
			w := uint16(data[i]) | uint16(data[i+1])<<8
			if big {
				w = w<<8 | w>>8
			}
			words = append(words, w)
		}
		data = []byte(string(utf16.Decode(words)))
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	if !utf8.Valid(data) {
		line := 1 + bytes.Count(data[:firstInvalid(data)], []byte("\n"))
		return "", &Problem{File: file, Line: line, Got: "text that is neither UTF-8 nor UTF-16", Want: "UTF-8",
			Hint: "in the spreadsheet program, save as \"CSV UTF-8\""}
	}
	if len(bytes.TrimSpace(data)) == 0 {
		return "", &Problem{File: file, Line: 1, Column: 1, Got: "an empty file", Want: "a header line and one line for each injection"}
	}
	text := strings.ReplaceAll(string(data), "\r\n", "\n")
	return strings.ReplaceAll(text, "\r", "\n"), nil
}

func firstInvalid(data []byte) int {
	for i := 0; i < len(data); {
		r, n := utf8.DecodeRune(data[i:])
		if r == utf8.RuneError && n == 1 {
			return i
		}
		i += n
	}
	return len(data)
}

// separatorOf finds the separator from the header line: the one of the three that stands in it.
func separatorOf(file, text string) (rune, *Problem) {
	line, _, _ := strings.Cut(text, "\n")
	var found []rune
	for _, c := range []rune{',', ';', '\t'} {
		if strings.ContainsRune(line, c) {
			found = append(found, c)
		}
	}
	if len(found) != 1 {
		return 0, &Problem{File: file, Line: 1, Column: 1, Got: fmt.Sprintf("a header line with %d kinds of separators", len(found)),
			Want: "one of comma, semicolon or tab between all names"}
	}
	return found[0], nil
}

type sequenceReader struct {
	header   *sequenceHeader
	r        *csv.Reader
	record   []string
	line     int
	problems Problems
}

func (t *sequenceReader) report(line, column int, key, got, want, hint string) {
	t.problems = append(t.problems, Problem{File: t.header.file, Line: line, Column: column, Key: key, Got: got, Want: want, Hint: hint})
}

func (t *sequenceReader) rows() []Injection {
	record, err := t.r.Read()
	if err != nil {
		t.csvError(err)
		return nil
	}
	t.readHeader(record)
	if len(t.problems) > 0 {
		return nil
	}
	var rows []Injection
	for {
		t.record, err = t.r.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			t.csvError(err)
			break
		}
		t.line, _ = t.r.FieldPos(0)
		if strings.TrimSpace(strings.Join(t.record, "")) == "" {
			continue // spreadsheets leave empty rows
		}
		rows = append(rows, t.row())
	}
	if len(rows) == 0 && len(t.problems) == 0 {
		t.report(2, 1, "", "no injection", "one line for each injection", "")
	}
	return rows
}

func (t *sequenceReader) csvError(err error) {
	var p *csv.ParseError
	if errors.As(err, &p) {
		t.report(p.Line, p.Column, "", p.Err.Error(), "fields with quotes at both ends or none", "")
		return
	}
	t.report(1, 1, "", err.Error(), "a header line", "")
}

// readHeader understands the column names, in any order and case.
func (t *sequenceReader) readHeader(names []string) {
	for len(names) > 0 && strings.TrimSpace(names[len(names)-1]) == "" {
		names = names[:len(names)-1]
	}
	h := t.header
	h.names = names
	for i, name := range names {
		_, column := t.r.FieldPos(i)
		key := strings.ToLower(strings.TrimSpace(name))
		switch m := nominalName.FindStringSubmatch(strings.TrimSpace(name)); {
		case m != nil:
			analyte, unit := strings.ToLower(m[1]), strings.TrimSpace(m[2])
			if !units.Concentration.Has(unit) {
				t.report(1, column, name, fmt.Sprintf("unit %q", unit), units.Concentration.Want(), "write the unit in brackets: nominal "+analyte+" [ng/mL]")
			}
			if slices.ContainsFunc(h.nominal, func(c nominalColumn) bool { return c.analyte == analyte }) {
				t.report(1, column, name, "a second column for "+analyte, "one column for each analyte", "")
			}
			h.nominal = append(h.nominal, nominalColumn{i, analyte, unit})
		case strings.HasPrefix(key, "nominal"):
			t.report(1, column, name, fmt.Sprintf("%q", name), "the analyte's id and the unit in brackets, such as nominal salbutamol [ng/mL]", "")
		case slices.Contains(requiredColumns, key) || slices.Contains(optionalColumns, key):
			if _, twice := h.columns[key]; twice {
				t.report(1, column, name, "a second column of that name", "each column once", "")
			}
			h.columns[key] = i
		default:
			t.report(1, column, name, fmt.Sprintf("the unknown column %q", name),
				"one of: "+strings.Join(append(slices.Clone(requiredColumns), optionalColumns...), ", ")+", nominal ANALYTE [UNIT]", "")
		}
	}
	for _, name := range requiredColumns {
		if _, ok := h.columns[name]; !ok {
			t.report(1, 1, name, "no such column", "a column "+name, "")
		}
	}
}

// field returns the text of a column and its place in the line.
func (t *sequenceReader) field(index int) (string, int) {
	if index >= len(t.record) {
		return "", 0
	}
	_, column := t.r.FieldPos(index)
	return strings.TrimSpace(t.record[index]), column
}

func (t *sequenceReader) named(name string) (string, int) {
	i, ok := t.header.columns[name]
	if !ok {
		return "", 0
	}
	return t.field(i)
}

func (t *sequenceReader) row() Injection {
	row := Injection{Line: t.line, Dilution: 1, columns: map[string]int{}}
	for name := range t.header.columns {
		_, row.columns[name] = t.named(name)
	}
	for _, c := range t.header.nominal {
		_, row.columns["nominal "+c.analyte] = t.field(c.index)
	}
	row.ID = t.needed("injection", "an id, unique in the sequence")
	row.File = t.path()
	row.Role = t.role()
	row.Operator = t.needed("operator", "the code of a person")
	row.Level, _ = t.named("level")
	row.Aliquot, _ = t.named("aliquot")
	row.SampleCode, _ = t.named("sample_code")
	row.Note, _ = t.named("note")
	acquired, column := t.named("acquired")
	if _, err := time.Parse(time.RFC3339, acquired); err != nil {
		t.report(t.line, column, "acquired", fmt.Sprintf("%q", acquired), `a time with its offset, such as "2026-03-18T08:15:00+01:00"`,
			"spreadsheet programs change times: format the column as text")
	}
	row.AcquiredAt = acquired
	if text, column := t.named("dilution"); text != "" {
		v, err := units.ParseNumber(t.decimal(text))
		if err != nil || !(v > 0) {
			t.report(t.line, column, "dilution", fmt.Sprintf("%q", text), "a factor above zero, such as 2", "")
		}
		row.Dilution = v
	}
	t.nominals(&row)
	if extra := len(t.record) - len(t.header.names); extra > 0 && strings.TrimSpace(strings.Join(t.record[len(t.header.names):], "")) != "" {
		t.report(t.line, 0, "", fmt.Sprintf("%d fields", len(t.record)), fmt.Sprintf("%d, as in the header", len(t.header.names)), "quote a field that holds the separator")
	}
	return row
}

func (t *sequenceReader) needed(name, want string) string {
	text, column := t.named(name)
	if text == "" {
		t.report(t.line, column, name, "nothing", want, "")
	}
	return text
}

func (t *sequenceReader) path() string {
	text, column := t.named("file")
	p := strings.ReplaceAll(text, `\`, "/")
	if !fs.ValidPath(p) || p == "." || strings.Contains(p, ":") {
		t.report(t.line, column, "file", fmt.Sprintf("%q", text), "the path of a file inside the case folder, such as raw/010.mzML", "")
		return ""
	}
	return p
}

func (t *sequenceReader) role() Role {
	text, column := t.named("role")
	if !slices.Contains(roles, Role(text)) {
		names := make([]string, len(roles))
		for i, r := range roles {
			names[i] = string(r)
		}
		t.report(t.line, column, "role", fmt.Sprintf("%q", text), "one of: "+strings.Join(names, ", "), "")
	}
	return Role(text)
}

func (t *sequenceReader) nominals(row *Injection) {
	for _, c := range t.header.nominal {
		text, column := t.field(c.index)
		if text == "" {
			continue
		}
		v, err := units.Concentration.ParseIn(t.decimal(text), c.unit)
		if err != nil || v < 0 {
			t.report(t.line, column, "nominal "+c.analyte, fmt.Sprintf("%q", text), "a number of at least 0, without its unit (the header has it)", "")
			continue
		}
		row.Nominal = append(row.Nominal, Nominal{Analyte: c.analyte, NGPerML: v})
	}
}

// decimal turns a decimal comma into a point where the comma is not the separator.
func (t *sequenceReader) decimal(text string) string {
	if t.header.separator != ',' && strings.Count(text, ",") == 1 && !strings.Contains(text, ".") {
		return strings.Replace(text, ",", ".", 1)
	}
	return text
}
