// Package table reads chromatograms from delimited text whose layout a method declares: which column holds the time and in which
// unit, and what each other column followed. Nothing about the layout is guessed.
package table

import (
	"bytes"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"assaywrit/evidence/trace"
)

// A Layout declares the columns, counted from 1.
type Layout struct {
	Separator   byte   // ',', ';' or tab
	DecimalMark byte   // '.' or ','; a comma only where it is not the separator
	HeaderLines int    // lines before the first point
	TimeColumn  int    // the time's
	TimeUnit    string // "min" or "s"
	Columns     []Column
}

// A Column is one trace.
type Column struct {
	Column     int
	ID         string
	Transition trace.Transition
}

// Read reads the declared columns. Text is UTF-8, with or without a byte-order mark, with LF or CRLF. Numbers are plain decimals;
// times must increase. The error is a *trace.SyntaxError with line and column (in characters).
func Read(name string, src trace.Source, layout Layout) (*trace.File, error) {
	if err := layout.check(); err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	data, err := trace.ReadAll(src)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	r := reader{name: name, layout: layout, file: &trace.File{Format: "delimited text"}}
	for _, c := range layout.Columns {
		kind := trace.Other
		if c.Transition.ProductMZ > 0 {
			kind = trace.SRM
		}
		r.file.Chromatograms = append(r.file.Chromatograms, trace.Chromatogram{ID: c.ID, Kind: kind, Transition: c.Transition})
	}
	for len(data) > 0 {
		var line []byte
		line, data, _ = bytes.Cut(data, []byte("\n"))
		r.line++
		if r.line <= layout.HeaderLines {
			continue
		}
		if err := r.point(bytes.TrimSuffix(line, []byte("\r"))); err != nil {
			return nil, err
		}
	}
	if len(r.time) == 0 {
		return nil, r.fail(1, "no point", "one line for each point after the header", "look at header_lines in the method's tables")
	}
	for i := range r.file.Chromatograms {
		r.file.Chromatograms[i].TimeMin = r.time
	}
	return r.file, nil
}

func (l Layout) check() error {
	switch {
	case l.Separator != ',' && l.Separator != ';' && l.Separator != '\t':
		return fmt.Errorf("a separator of %q: want comma, semicolon or tab", l.Separator)
	case l.DecimalMark != '.' && l.DecimalMark != ',' || l.DecimalMark == l.Separator:
		return fmt.Errorf("a decimal mark of %q with the separator %q: want point, or comma where it is not the separator", l.DecimalMark, l.Separator)
	case l.TimeUnit != "min" && l.TimeUnit != "s":
		return fmt.Errorf("a time unit of %q: want min or s", l.TimeUnit)
	case l.TimeColumn < 1 || len(l.Columns) == 0:
		return fmt.Errorf("time in column %d and %d traces: want a column from 1 and at least one trace", l.TimeColumn, len(l.Columns))
	}
	seen := map[string]bool{}
	for _, c := range l.Columns {
		if c.Column < 1 || c.Column == l.TimeColumn || c.ID == "" || seen[c.ID] {
			return fmt.Errorf("the trace %q in column %d: want an id of its own, and a column from 1 that is not the time's", c.ID, c.Column)
		}
		seen[c.ID] = true
	}
	return nil
}

type reader struct {
	name   string
	layout Layout
	file   *trace.File
	line   int
	time   []float64
	empty  int // line of an empty line, after which nothing may follow
}

func (r *reader) fail(column int, got, want, hint string) error {
	return &trace.SyntaxError{File: r.name, Line: r.line, Column: column, Got: got, Want: want, Hint: hint}
}

// point reads one line. Empty lines are accepted at the end of the file only.
func (r *reader) point(line []byte) error {
	if len(bytes.TrimSpace(line)) == 0 {
		r.empty = r.line
		return nil
	}
	if r.empty > 0 {
		return r.fail(1, fmt.Sprintf("a point after the empty line %d", r.empty), "points without gaps", "take the empty line out, if nothing is missing there")
	}
	if !utf8.Valid(line) {
		return r.fail(1, "text that is not UTF-8", "UTF-8", "")
	}
	fields := strings.Split(string(line), string(r.layout.Separator))
	t, err := r.number(fields, r.layout.TimeColumn)
	if err != nil {
		return err
	}
	if r.layout.TimeUnit == "s" {
		t /= 60
	}
	if n := len(r.time); n > 0 && t <= r.time[n-1] {
		return r.fail(columnOf(fields, r.layout.TimeColumn), strconv.Quote(strings.TrimSpace(fields[r.layout.TimeColumn-1])), fmt.Sprintf("a time after %g min", r.time[n-1]),
			"points must be in acquisition order; export the run again and compare its SHA-256")
	}
	r.time = append(r.time, t)
	for i, c := range r.layout.Columns {
		y, err := r.number(fields, c.Column)
		if err != nil {
			return err
		}
		r.file.Chromatograms[i].Intensity = append(r.file.Chromatograms[i].Intensity, y)
	}
	return nil
}

func (r *reader) number(fields []string, column int) (float64, error) {
	if column > len(fields) {
		return 0, r.fail(1, fmt.Sprintf("%d fields", len(fields)), fmt.Sprintf("at least %d", column), "a line that is cut, or another separator than the method's tables declare")
	}
	text := strings.TrimSpace(fields[column-1])
	plain := text
	if r.layout.DecimalMark == ',' {
		if strings.Contains(text, ".") {
			plain = ""
		}
		plain = strings.Replace(plain, ",", ".", 1)
	}
	v, err := strconv.ParseFloat(plain, 64)
	if err != nil || !isDecimal(plain) || math.IsInf(v, 0) {
		return 0, r.fail(columnOf(fields, column), strconv.Quote(text), "a decimal number", "")
	}
	return v, nil
}

// isDecimal refuses what ParseFloat takes beyond plain decimals: infinities, other bases, underscores.
func isDecimal(s string) bool {
	return s != "" && strings.Trim(s, "0123456789.eE+-") == ""
}

// columnOf is the character in its line at which a field begins, counted from 1.
func columnOf(fields []string, column int) int {
	at := 1
	for _, f := range fields[:min(column-1, len(fields))] {
		at += utf8.RuneCountInString(f) + 1
	}
	return at
}
