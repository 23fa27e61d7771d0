package jcamp

import (
	"fmt"
	"math"
)

// A ladder is one way to place the points of (X++(Y..Y)): the first abscissa and the step that records of the file state. Every line states
// where it begins, which tells whether the ladder holds.
type ladder struct {
	first, step       float64
	slackAt, slackPer float64 // what rounding of the stated numbers allows: at the first point, and more at each further one
	stepFrom          label   // labelOther where there is no step
	badLine           int     // the first line whose abscissa contradicts, or 0
	want              float64 // what it should be, as the line would write it
}

// at is the abscissa of a point.
func (l *ladder) at(i int) float64 { return l.first + float64(float64(i)*l.step) }

// readStepped reads a table of the form (X++(Y..Y)).
func (r *reader) readStepped(s *sheet, body lines) error {
	s.xUnit = float64(finest(body) * math.Abs(s.x.factor))
	o := &ordinates{limit: r.limit(s)}
	size := (len(body.data)-body.at)/2 + 1
	if s.points >= 0 {
		size = min(s.points, 2*size)
	}
	o.y = make([]float64, 0, min(size, o.limit))
	var ladders []ladder
	var started bool
	var got float64
	for body.more() {
		raw, _ := body.next()
		line, at := uncommented(raw), 0
		for at < len(line) && blank(line[at]) {
			at++
		}
		if at == len(line) {
			continue
		}
		before := s.lastLine
		s.lastLine = body.number - 1
		x, end, ok := number(line, at, true)
		if !ok {
			return r.refuse(s.lastLine, column(line, at), clipped(line[at:]), "an abscissa at the beginning of the line", exportHint)
		}
		index := len(o.y)
		checked, f := o.line(line, end)
		switch {
		case f != nil && f.full:
			return r.tooMany(s, s.lastLine)
		case f != nil && f.before:
			return r.refuse(before, 0, f.got, f.want, f.hint)
		case f != nil:
			return r.refuse(s.lastLine, column(line, f.at), f.got, f.want, f.hint)
		case checked:
			index--
		}
		if !started {
			started = true
			ladders = s.ladders(float64(x.value * s.x.factor))
		}
		for i := range ladders {
			l := &ladders[i]
			if want := l.at(index); l.badLine == 0 && math.Abs(float64(x.value*s.x.factor)-want) > s.xUnit+l.slackAt+float64(float64(index)*l.slackPer)+math.Abs(float64(want*1e-9)) {
				l.badLine, l.want = s.lastLine, want/s.x.factor
			}
		}
		if got = x.value; len(ladders) > 0 && fallen(ladders) {
			break
		}
	}
	if s.lastLine == 0 {
		s.lastLine = s.Line
	}
	s.YChecks, s.YFactor, s.unchecked = o.checks, s.y.factor, o.dif
	if o.dif {
		r.warnings.add("no-last-y-check", "line %d: the table of line %d ends in a difference, which no further line checks", s.lastLine, s.Line)
	}
	return r.place(s, o, ladders, got)
}

// finest is what the last digit of the abscissae of a table is worth: writers drop zeros at the end.
func finest(body lines) float64 {
	last := math.MaxInt
	for body.more() {
		line, _ := body.next()
		at := 0
		for at < len(line) && blank(line[at]) {
			at++
		}
		if f, _, ok := number(line, at, true); ok {
			last = min(last, f.last)
		}
	}
	if last == math.MaxInt {
		return 0
	}
	return figure{last: last}.unit()
}

func fallen(ladders []ladder) bool {
	for _, l := range ladders {
		if l.badLine == 0 {
			return false
		}
	}
	return true
}

// ladders are the ways that the records offer, the standard's own first. x is the abscissa of the first line.
func (s *sheet) ladders(x float64) []ladder {
	var all []ladder
	first, last, delta := s.x.first, s.x.last, s.x.delta
	if first.given && last.given && s.points > 1 {
		n := float64(s.points - 1)
		u := (first.unit() + last.unit()) / n
		all = append(all, ladder{first: first.value, step: (last.value - first.value) / n, slackAt: first.unit(), slackPer: u, stepFrom: last.label})
	}
	if first.given && delta.given {
		all = append(all, ladder{first: first.value, step: delta.value, slackAt: first.unit(), slackPer: delta.unit(), stepFrom: delta.label})
	}
	// The lines may not stand in for a stated first abscissa: a damaged first line would move every point.
	if delta.given && !first.given {
		all = append(all, ladder{first: x, step: delta.value, slackAt: s.xUnit, slackPer: delta.unit(), stepFrom: delta.label})
	}
	if last.given && !first.given && s.points > 1 {
		n := float64(s.points - 1)
		all = append(all, ladder{first: x, step: (last.value - x) / n, slackAt: s.xUnit, slackPer: (s.xUnit + last.unit()) / n, stepFrom: last.label})
	}
	if len(all) == 0 { // enough for a single point
		return []ladder{{first: x, slackAt: s.xUnit, stepFrom: labelOther}}
	}
	return all
}

// place works out the abscissae and applies the factors.
func (r *reader) place(s *sheet, o *ordinates, ladders []ladder, got float64) error {
	var held *ladder
	for i := range ladders {
		if ladders[i].badLine == 0 {
			held = &ladders[i]
			break
		}
	}
	switch {
	case len(o.y) == 0:
		return nil
	case held != nil && held.stepFrom == labelOther && len(o.y) > 1 || held == nil && ladders[0].stepFrom == labelOther:
		return r.refuse(s.Line, 1, "a table of the form "+s.Form+" without its step", "##FIRSTX=, ##LASTX= and ##NPOINTS=, or ##DELTAX=, before it", exportHint)
	case held == nil:
		bad := &ladders[0]
		for i := range ladders {
			if ladders[i].badLine > bad.badLine {
				bad = &ladders[i]
			}
		}
		return r.refuse(bad.badLine, 1, fmt.Sprintf("a line that begins at the abscissa %s", plain(got)), fmt.Sprintf("one near %g, after as many points (X-check)", bad.want), "points are missing or too many in the line before, or "+spelt[labelFirstX]+", "+spelt[labelLastX]+" or "+spelt[labelDeltaX]+" is wrong")
	}
	s.X = make([]float64, len(o.y))
	for i := range s.X {
		s.X[i] = held.at(i)
	}
	if s.y.factor != 1 {
		for i, y := range o.y {
			o.y[i] = float64(y * s.y.factor)
		}
	}
	s.Y = o.y
	s.yUnit = float64(math.Abs(s.y.factor) * figure{last: -o.decimals}.unit())
	slack := s.xUnit + held.slackAt + float64(float64(len(s.X)-1)*held.slackPer)
	if held.stepFrom != s.x.delta.label && len(s.X) > 1 {
		r.compare(s, "delta-x", s.x.delta, held.step, held.slackPer)
	}
	if held.stepFrom != s.x.last.label {
		r.compare(s, "last-x", s.x.last, s.X[len(s.X)-1], slack)
	}
	return nil
}
