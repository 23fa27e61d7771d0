// Package table reads chromatograms from delimited text whose layout a method declares: which column holds the time and in which
// unit, and what each other column followed. Nothing about the layout is guessed. Times come out in minutes, intensities as written.
//
// Quoted fields are not read: exports of traces hold numbers.
package table

import (
	"bytes"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"assaywrit/evidence/trace"
)

const (
	orderHint  = "points must be in acquisition order; export the run again and compare its SHA-256"
	layoutHint = "compare the file with its layout in the method's tables: separator, decimal mark, header lines, columns"
)

var byteOrderMark = []byte("\xef\xbb\xbf")

// Read reads the declared columns. Text is in the declared encoding, with or without a byte-order mark (UTF-16 needs one), with LF
// or CRLF. Numbers are plain decimals; every point has as many fields as the first; times must increase; empty lines may stand at
// the end only. A last point without a line end may have lost digits, which gives the warning "unfinished-line". The error is a
// *trace.SyntaxError with line and column (in characters, of the field's start), or says what is wrong with the layout.
func Read(name string, src trace.Source, layout Layout) (*trace.File, error) {
	if err := layout.check(); err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	data, err := trace.ReadAll(src)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	r := &reader{name: name, layout: layout, width: layout.width(), target: layout.targets(), intensity: make([][]float64, len(layout.Columns)), row: make([]float64, 1+len(layout.Columns))}
	r.valid = layout.Encoding == "latin-1"
	if data, err = r.decode(data); err != nil {
		return nil, err
	}
	r.valid = utf8.Valid(data)
	// No more points than lines, and none without two bytes for each field.
	points := min(1+bytes.Count(data, []byte("\n")), 1+len(data)/(2*r.width))
	r.time = make([]float64, 0, points)
	for i := range r.intensity {
		r.intensity[i] = make([]float64, 0, points)
	}
	for len(data) > 0 {
		line, rest := data, []byte(nil)
		if i := bytes.IndexByte(data, '\n'); i >= 0 {
			line, rest, r.ended = data[:i], data[i+1:], true
		} else {
			r.ended = len(bytes.TrimSpace(line)) == 0
		}
		data = rest
		if n := len(line); n > 0 && line[n-1] == '\r' {
			line = line[:n-1]
		}
		if r.fields > 0 && r.empty == 0 && r.valid && r.fast(line) {
			continue
		}
		if err := r.take(line); err != nil {
			return nil, err
		}
	}
	return r.finish()
}

type reader struct {
	name   string
	layout Layout
	line   int
	width  int  // fields that a line must have at least
	fields int  // of the first point
	empty  int  // line of an empty line, after which nothing may follow
	ended  bool // whether the line read last has its end
	valid  bool // the whole text is UTF-8
	target []int
	row    []float64 // memory of fast

	written   string // the last time as the file writes it; after fast, it is in lastLine
	lastLine  []byte
	lastFrom  int
	lastTo    int
	last      float64 // the same as a number, in the file's unit
	time      []float64
	intensity [][]float64
}

func (r *reader) fail(column int, got, want, hint string) error {
	return &trace.SyntaxError{File: r.name, Line: r.line, Column: column, Got: got, Want: want, Hint: hint}
}

// take reads one line.
func (r *reader) take(line []byte) error {
	r.line++
	if !r.valid && !utf8.Valid(line) {
		return r.fail(1+validRunes(line), "text that is not UTF-8", "UTF-8", "")
	}
	if r.line <= r.layout.HeaderLines {
		return nil
	}
	if len(bytes.TrimSpace(line)) == 0 {
		if r.empty == 0 {
			r.empty = r.line
		}
		return nil
	}
	if r.empty > 0 {
		return r.fail(1, fmt.Sprintf("a point after the empty line %d", r.empty), "points without gaps", "take the empty line out, if nothing is missing there")
	}
	return r.point(r.split(string(line)))
}

// split takes a line apart. Blanks as separators count as one, and those at the ends as none: the fields before them are kept as
// long as they are, so that places stay right.
func (r *reader) split(line string) []string {
	if r.layout.Separator != ' ' {
		return strings.Split(line, string(r.layout.Separator))
	}
	var fields []string
	pending := ""
	for _, f := range strings.Split(strings.TrimRight(line, " \t"), " ") {
		if strings.Trim(f, "\t") == "" {
			pending += f + " "
			continue
		}
		fields, pending = append(fields, pending+f), ""
	}
	return fields
}

// validRunes counts the characters before the first byte that is not UTF-8.
func validRunes(line []byte) int {
	n := 0
	for len(line) > 0 {
		c, size := utf8.DecodeRune(line)
		if c == utf8.RuneError && size == 1 {
			break
		}
		line = line[size:]
		n++
	}
	return n
}

// point reads the fields of one line.
func (r *reader) point(fields []string) error {
	switch n := len(fields); {
	case n < r.width:
		return r.fail(start(fields, n), fmt.Sprintf("a line of %d fields", n), fmt.Sprintf("at least %d", r.width), layoutHint)
	case r.fields == 0:
		r.fields = n
	case n != r.fields:
		return r.fail(start(fields, min(n, r.fields+1)), fmt.Sprintf("a line of %d fields", n), fmt.Sprintf("%d, as in the first point", r.fields), layoutHint)
	}
	at := r.layout.TimeColumn
	t, err := r.number(fields, at)
	if err != nil {
		return err
	}
	written := strings.Trim(fields[at-1], " \t")
	if len(r.time) > 0 && t <= r.last {
		return r.fail(start(fields, at), strconv.Quote(written), fmt.Sprintf("a time after %s %s", r.before(), r.layout.TimeUnit), orderHint)
	}
	r.last, r.written, r.lastLine = t, written, nil
	if r.layout.TimeUnit == "s" {
		t /= 60
	}
	r.time = append(r.time, t)
	for i, c := range r.layout.Columns {
		y, err := r.number(fields, c.Column)
		if err != nil {
			return err
		}
		r.intensity[i] = append(r.intensity[i], y)
	}
	return nil
}

// before is the last time as the file writes it.
func (r *reader) before() string {
	if r.lastLine != nil {
		return string(r.lastLine[r.lastFrom:r.lastTo])
	}
	return r.written
}

func (r *reader) number(fields []string, column int) (float64, error) {
	text := strings.Trim(fields[column-1], " \t")
	plain, want := text, "a decimal number"
	if r.layout.DecimalMark == ',' {
		want = "a decimal number with a comma"
		plain = strings.Map(func(c rune) rune { // a point is then no part of a number
			switch c {
			case ',':
				return '.'
			case '.':
				return ','
			}
			return c
		}, text)
	}
	v, ok := trace.Decimal(plain)
	if !ok {
		return 0, r.fail(start(fields, column), strconv.Quote(text), want, layoutHint)
	}
	return v, nil
}

// start is the character in its line at which a field begins, counted from 1.
func start(fields []string, column int) int {
	at := 1
	for _, f := range fields[:column-1] {
		at += utf8.RuneCountInString(f) + 1
	}
	return at
}

// finish makes the chromatograms.
func (r *reader) finish() (*trace.File, error) {
	if len(r.time) == 0 {
		r.line++
		return nil, r.fail(1, "the end of the file", fmt.Sprintf("points after %d header lines", r.layout.HeaderLines), layoutHint)
	}
	file := &trace.File{Format: "delimited text"}
	if !r.ended {
		file.Warnings = append(file.Warnings, trace.Warning{Code: "unfinished-line", Detail: fmt.Sprintf("line %d, the last, has no line end: the file may be cut", r.line)})
	}
	for i, c := range r.layout.Columns {
		t := trace.Chromatogram{ID: c.ID, Kind: kind(c.Transition), Transition: c.Transition, Unit: c.Unit, TimeMin: slices.Clone(r.time), Intensity: r.intensity[i]}
		if b := t.Check(); b != nil {
			return nil, &trace.SyntaxError{File: r.name, Line: r.layout.HeaderLines + b.Point, Got: fmt.Sprintf("%s in the trace %q", b.Got, c.ID), Want: b.Want, Hint: orderHint}
		}
		file.Chromatograms = append(file.Chromatograms, t)
	}
	return file, nil
}
