package jcamp

import (
	"bytes"
	"fmt"
	"unicode/utf8"

	"assaywrit/evidence/trace"
)

// A Table is one table of data of a file: of a block, or of a page of NTUPLES. X and Y have the same length and are finite; factors are
// applied, units are the file's own.
type Table struct {
	Title, DataType string    // of its block
	Label           string    // the record that holds it: XYDATA, XYPOINTS, PEAK TABLE, PEAK ASSIGNMENTS, DATA TABLE
	Form            string    // of the data, such as (XY..XY) or (X++(Y..Y))
	Page            string    // value of ##PAGE=, empty where there are no pages
	XUnits, YUnits  string    // as stated
	X, Y            []float64 // in the order of the file
	YFactor         float64   // by which the ordinates of the file were multiplied
	YChecks         int       // the Y-checks of DIF lines, all of which held
	Line            int       // of its record

	facts          *facts
	xName          string // VAR_NAME of the abscissa, or XLABEL
	yName          string // VAR_NAME of the ordinate
	retention      retention
	scan           string // number of the scan, as stated
	totalIon       float64
	known          label // of the record
	counted        bool  // whether the number of points was stated
	xUnit, yUnit   float64
	massSpectrumIf bool // whether it has no DATA TYPE, but records of mass spectra
}

// facts are what a block states of itself, in UTF-8.
type facts struct {
	title, dataType, dataClass, version, origin, owner, cas, formula string
	sample, instrument, date, time, longDate, ionization             string
}

// A field is the value of a data record.
type field struct {
	text string
	line int
	used bool // whether a table has been read since: a later value is then no contradiction
}

type block struct {
	line     int
	fields   [labels]field
	facts    *facts
	link     bool // whether it holds blocks
	children int
	variable *variables
	pages    int
	lastPage string
}

const (
	maxDepth  = 8
	maxTables = 100000
	// freePoints may be read from a file of any size: repeat counts make many points out of few bytes.
	freePoints = 1 << 20
)

type reader struct {
	name     string
	lines    lines
	latin1   bool
	budget   int // points that may still be read
	depth    int
	stack    [maxDepth]block
	outer    *facts
	sheet    sheet // the table that is being read
	tables   []Table
	warnings warnings
	whole    bool // whether the record read last is a table that has as many points as stated, or the end of a block
}

// Decode reads every table of a file, whatever its kind. The error is a *trace.SyntaxError, or from src.
func Decode(name string, src trace.Source) ([]Table, []trace.Warning, error) {
	r, err := decode(name, src)
	if err != nil {
		return nil, nil, err
	}
	return r.tables, r.warnings.list(), nil
}

func decode(name string, src trace.Source) (*reader, error) {
	data, err := trace.ReadAll(src)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	at, line := beginning(data)
	r := &reader{name: name, latin1: !utf8.Valid(data), budget: freePoints + len(data)/2, lines: newLines(data, at, line)}
	if !Sniff(data) {
		return nil, r.refuse(line, 1, fmt.Sprintf("content that begins with %q", data[at:min(at+16, len(data))]), "a JCAMP-DX file, which begins with ##TITLE=", "")
	}
	if i := bytes.IndexByte(data, 0); i >= 0 {
		return nil, r.refuse(lineOf(data, i), 0, "a zero byte", "text", exportHint)
	}
	for r.lines.more() {
		if err := r.record(); err != nil {
			return nil, err
		}
	}
	if err := r.finish(); err != nil {
		return nil, err
	}
	return r, nil
}

// lineOf is the line of the byte at an offset.
func lineOf(data []byte, at int) int {
	l := newLines(data, 0, 1)
	for l.more() && l.at <= at {
		l.next()
	}
	return max(1, l.number-1)
}

// record reads one labelled data record, with all lines that belong to it.
func (r *reader) record() error {
	line, start := r.lines.number, r.lines.at
	first, _ := r.lines.next()
	head := bytes.TrimLeft(first, " \t\v\f")
	l, value, ok := cutLabel(head)
	switch record := startsRecord(head); {
	case !record && len(uncommented(head)) == 0:
		return nil
	case !record || r.depth == 0 && l != labelTitle:
		return r.refuse(line, 1, fmt.Sprintf("%q after ##END=", clip(string(head))), "##TITLE= of another block, or the end of the file", "")
	}
	if !ok && r.whole && !r.lines.more() && squeezed(string(value)) == "END" {
		return nil // the file ends in its last two bytes, and finish says so
	}
	if !ok {
		if !bytes.HasPrefix(value, []byte("$")) {
			return r.refuse(line, 1, fmt.Sprintf("the record %q without an equals sign", clip(string(head))), "a label between ## and =", exportHint)
		}
		r.warnings.add("label-without-value", "line %d: the record %q has no equals sign", line, clip(string(head)))
	}
	r.whole = false
	if l >= labelXYData {
		return r.table(l, text(value, r.latin1), line)
	}
	if l == labelEnd {
		r.close()
		return nil
	}
	end, _ := r.lines.upToRecord()
	if l == labelOther {
		return nil
	}
	from := start + len(first) - len(value)
	f := field{text: text(r.lines.data[from:end], r.latin1), line: line}
	switch l {
	case labelTitle:
		return r.open(f)
	case labelEndNTuples:
		r.block().fields[labelPage] = field{}
	default:
		return r.set(l, f)
	}
	return nil
}

// block is the innermost open one.
func (r *reader) block() *block { return &r.stack[r.depth-1] }

// set keeps the value of a record.
func (r *reader) set(l label, f field) error {
	b := r.block()
	old := &b.fields[l]
	if old.line > 0 && !old.used && old.text != f.text && once[l] {
		return r.refuse(f.line, 1, fmt.Sprintf("a second %s %q", spelt[l], clip(f.text)), fmt.Sprintf("one of them, as in line %d", old.line), exportHint)
	}
	*old = f
	switch l {
	case labelVarName, labelSymbol, labelVarDim, labelUnits, labelFactor, labelFirst, labelLast:
		b.variable = nil
	case labelPage:
		if b.pages == 0 || f.text != b.lastPage {
			b.pages++
		}
		b.lastPage = f.text
	}
	return nil
}

// open begins a block.
func (r *reader) open(title field) error {
	if r.depth > 0 {
		outer := r.block()
		if !outer.link && outer.fields[labelBlocks].line == 0 && squeezed(outer.fields[labelDataType].text) != "LINK" {
			return r.refuse(title.line, 1, "##TITLE= inside a block", fmt.Sprintf("##END= of the block of line %d, or ##DATA TYPE= LINK in it", outer.line), exportHint)
		}
		outer.link = true
		outer.children++
		if r.outer == nil {
			r.outer = outer.state()
		}
	}
	if r.depth == maxDepth {
		return r.refuse(title.line, 1, fmt.Sprintf("a block inside %d others", maxDepth), fmt.Sprintf("at most %d", maxDepth-1), "")
	}
	r.depth++
	*r.block() = block{line: title.line}
	r.block().fields[labelTitle] = title
	return nil
}

// close ends a block.
func (r *reader) close() {
	b := r.block()
	if r.outer == nil {
		r.outer = b.state()
	}
	r.checkCounts(b)
	r.whole = true
	r.depth--
}

// checkCounts compares the numbers of blocks and pages with those stated.
func (r *reader) checkCounts(b *block) {
	if f := b.fields[labelBlocks]; f.line > 0 {
		// The count includes the LINK block itself or not: both are written.
		if n, ok := whole(f.text); !ok || n.value != float64(b.children) && n.value != float64(b.children+1) {
			r.warnings.add("blocks", "line %d: ##BLOCKS= %s, and %d blocks follow", f.line, clip(f.text), b.children)
		}
	}
	if want, of := b.pagesStated(r); want >= 0 && want != b.pages {
		r.warnings.add("pages", "line %d: ##VAR_DIM= states %d values of %s, and there are %d pages", b.line, want, of, b.pages)
	}
}

// pagesStated is how many pages ##VAR_DIM= states, by the symbol of the last page; -1 where it does not.
func (b *block) pagesStated(r *reader) (n int, symbol string) {
	if b.pages == 0 || b.fields[labelVarDim].text == "" {
		return -1, ""
	}
	v, err := r.variables(b)
	if err != nil {
		return -1, ""
	}
	symbol, _, _ = cutPage(b.lastPage)
	i := v.index(symbol)
	if i < 0 || v.of(labelVarDim, i) == "" {
		return -1, ""
	}
	f, ok := whole(v.of(labelVarDim, i))
	if !ok || f.value < 0 || f.value > maxTables {
		return -1, ""
	}
	return int(f.value), symbol
}

// state returns the facts of a block, which are put together once.
func (b *block) state() *facts {
	if b.facts == nil {
		t := func(l label) string { return b.fields[l].text }
		b.facts = &facts{title: t(labelTitle), dataType: t(labelDataType), dataClass: t(labelDataClass), version: t(labelVersion),
			origin: t(labelOrigin), owner: t(labelOwner), cas: t(labelCAS), formula: t(labelFormula), sample: t(labelSample),
			instrument: t(labelInstrument), date: t(labelDate), time: t(labelTime), longDate: t(labelLongDate), ionization: t(labelIonization)}
	}
	return b.facts
}

// finish looks at what is open at the end of the file.
func (r *reader) finish() error {
	if r.depth > 0 {
		b := r.block()
		if !r.whole {
			return r.refuse(r.lines.number, 1, "the end of the file", fmt.Sprintf("##END= of the block of line %d", b.line), "the file is cut: "+exportHint)
		}
		if want, of := b.pagesStated(r); want > b.pages {
			return r.refuse(r.lines.number, 1, fmt.Sprintf("the end of the file after %d pages", b.pages), fmt.Sprintf("%d, as ##VAR_DIM= states of %s", want, of), "the file is cut: "+exportHint)
		}
		for r.depth > 0 {
			b := r.block()
			if b.link {
				if n, ok := whole(b.fields[labelBlocks].text); !ok || n.value > float64(b.children) {
					return r.refuse(r.lines.number, 1, fmt.Sprintf("the end of the file after %d blocks", b.children), fmt.Sprintf("##END= of the block of line %d, or as many as its ##BLOCKS= states", b.line), "the file is cut: "+exportHint)
				}
			}
			r.warnings.add("no-end", "the block of line %d has no ##END=; its last table or block is whole", b.line)
			r.close()
		}
	}
	if len(r.tables) == 0 {
		return r.refuse(r.lines.number, 1, "a file without a table of data", "##XYDATA=, ##XYPOINTS=, ##PEAK TABLE=, ##PEAK ASSIGNMENTS= or ##DATA TABLE=", "")
	}
	return nil
}
