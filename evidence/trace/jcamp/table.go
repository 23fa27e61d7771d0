package jcamp

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// A sheet is a table while it is read: what the records before it say of its numbers.
type sheet struct {
	Table
	stepped   bool // whether it has the form (X++(Y..Y))
	x, y      axis
	points    int // stated, or -1
	pointsOf  label
	inPairs   bool // whether the number of points comes from ##VAR_DIM=, which states the most of any page for pairs
	ended     bool // whether the last line has its end
	lastLine  int
	unchecked bool // whether the last line ends in a difference, which nothing checks
}

// An axis is what is stated of abscissae or ordinates. first, last and delta are in the unit of the axis; a factor leads from the numbers
// of the table to it. line and name say where they were stated.
type axis struct {
	factor             float64
	first, last, delta stated
	highest, lowest    stated
}

// A stated number may be absent.
type stated struct {
	figure
	given bool
	line  int
	label label
}

// number reads a number that a record of the block states. No number at all is an error.
func (r *reader) number(l label, text string, line int) (stated, error) {
	if text == "" {
		return stated{}, nil
	}
	f, ok := whole(text)
	if !ok {
		return stated{}, r.refuse(line, 1, fmt.Sprintf("%s %q", spelt[l], clip(text)), "a number", "")
	}
	return stated{f, true, line, l}, nil
}

// table reads a record that holds data.
func (r *reader) table(l label, form string, line int) error {
	b := r.block()
	r.sheet = sheet{points: -1}
	s := &r.sheet
	s.Table = Table{facts: b.state(), Line: line, known: l, Label: strings.Trim(spelt[l], "#=")}
	s.Title, s.DataType, s.Page = s.facts.title, s.facts.dataType, b.fields[labelPage].text
	if len(r.tables) == maxTables {
		return r.refuse(line, 1, fmt.Sprintf("more than %d tables", maxTables), "fewer", "")
	}
	if err := r.describe(s, form); err != nil {
		return err
	}
	if err := r.pageFacts(s); err != nil {
		return err
	}
	body := r.lines // the lines of the table end where the next record begins
	end, ended := r.lines.upToRecord()
	body.data = body.data[:end]
	body.feed = -1
	s.ended = ended
	var err error
	if s.stepped {
		err = r.readStepped(s, body)
	} else if l == labelPeakAssignments && s.Form != pairForm {
		err = r.readAssignments(s, body)
	} else {
		err = r.readPairs(s, body)
	}
	if err != nil {
		return err
	}
	if err := r.checkTable(s); err != nil {
		return err
	}
	r.budget -= len(s.X)
	r.whole = s.counted && s.ended && !s.unchecked
	if len(r.tables) == cap(r.tables) {
		r.tables = slices.Grow(r.tables, len(r.tables)+1)
	}
	r.tables = append(r.tables, s.Table)
	s.Table = Table{}
	r.spend(b)
	return nil
}

// spend marks what was said of a table, so that nothing of it is taken for the next one.
func (r *reader) spend(b *block) {
	for _, l := range ofTable {
		b.fields[l] = field{}
	}
	for i := range b.fields {
		b.fields[i].used = true
	}
	b.fields[labelTitle].used = false
}

// pageFacts takes over what mass spectra of a run state of each page.
func (r *reader) pageFacts(s *sheet) error {
	b := r.block()
	s.scan = b.fields[labelScanNumber].text
	s.massSpectrumIf = s.DataType == "" && b.fields[labelMassRange].line > 0 && b.fields[labelIonization].line > 0
	if f, ok := whole(b.fields[labelTIC].text); ok {
		s.totalIon = f.value
	}
	var err error
	s.retention, err = r.retention(b)
	return err
}

// checkTable compares the points with what was stated of them.
func (r *reader) checkTable(s *sheet) error {
	n := len(s.X)
	switch {
	case s.points < 0:
	case s.inPairs && n != s.points:
		r.warnings.add("var-dim", "line %d: the page has %d points, and ##VAR_DIM= states %d", s.Line, n, s.points)
	case n != s.points:
		return r.refuse(s.lastLine, 0, fmt.Sprintf("%d points in the table of line %d", n, s.Line), fmt.Sprintf("%d, as %s states", s.points, spelt[s.pointsOf]), exportHint)
	default:
		s.counted = true
	}
	for i := range s.X {
		if math.IsInf(s.X[i], 0) || math.IsInf(s.Y[i], 0) || math.IsNaN(s.X[i]) || math.IsNaN(s.Y[i]) {
			return r.refuse(s.Line, 0, fmt.Sprintf("point %d of the table times its factors", i+1), "a number that 64 bits hold", "")
		}
	}
	if n == 0 {
		return nil
	}
	if !s.stepped {
		r.compare(s, "first-x", s.x.first, s.X[0], s.xUnit)
		r.compare(s, "last-x", s.x.last, s.X[n-1], s.xUnit)
	}
	r.compare(s, "first-y", s.y.first, s.Y[0], s.yUnit)
	r.compare(s, "last-y", s.y.last, s.Y[n-1], s.yUnit)
	if s.y.highest.given || s.y.lowest.given {
		high, low := s.Y[0], s.Y[0]
		for _, y := range s.Y {
			high, low = max(high, y), min(low, y)
		}
		r.compare(s, "max-y", s.y.highest, high, s.yUnit)
		r.compare(s, "min-y", s.y.lowest, low, s.yUnit)
	}
	return nil
}

// compare warns where a stated value is not that of the table. Both are rounded, or cut, in their last digit; a millionth is allowed
// for numbers that were single precision on their way.
func (r *reader) compare(s *sheet, code string, want stated, got, unit float64) {
	if !want.given {
		return
	}
	within := want.unit() + unit + math.Abs(float64(got*1e-6))
	if math.Abs(got-want.value) > within {
		r.warnings.add(code, "line %d: %s %g, and the table of line %d has %g", want.line, spelt[want.label], want.value, s.Line, got)
	}
}

// tooMany refuses points beyond what is stated, or beyond what a file of this size may hold.
func (r *reader) tooMany(s *sheet, line int) error {
	if s.points >= 0 && !s.inPairs && s.points <= r.budget {
		return r.refuse(line, 0, fmt.Sprintf("more than %d points", s.points), fmt.Sprintf("%d, as %s states", s.points, spelt[s.pointsOf]), exportHint)
	}
	return r.refuse(line, 0, "more points than a file of this size may hold", fmt.Sprintf("at most %d and one for every two bytes", freePoints), "repeat counts (DUP) make points out of nothing: "+exportHint)
}

// limit is how many points the table may have.
func (r *reader) limit(s *sheet) int {
	if s.points >= 0 && !s.inPairs {
		return min(s.points, r.budget)
	}
	return r.budget
}
