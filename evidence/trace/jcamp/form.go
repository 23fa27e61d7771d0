package jcamp

import (
	"fmt"
	"strings"
)

const pairForm = "(XY..XY)"

// describe works out the form of a table, and takes what the records before it say of its axes.
func (r *reader) describe(s *sheet, value string) error {
	form, rest := cutForm(value)
	s.Form = form
	wanted := formsOf[s.known]
	if form == "" || rest != "" && (s.known != labelDataTable || rest[0] != ',') {
		return r.refuse(s.Line, 1, fmt.Sprintf("%s %q", spelt[s.known], clip(value)), wanted+" alone in its line", "")
	}
	if s.known == labelDataTable {
		return r.describePage(s)
	}
	switch form {
	case pairForm:
	case "(X++(Y..Y))":
		s.stepped = true
		if s.known != labelXYData {
			return r.refuse(s.Line, 1, fmt.Sprintf("%s %q", spelt[s.known], form), wanted, "")
		}
	case "(XYA)", "(XYMA)", "(XYWA)":
		if s.known != labelPeakAssignments {
			return r.refuse(s.Line, 1, fmt.Sprintf("%s %q", spelt[s.known], form), wanted, "")
		}
	default:
		return r.refuse(s.Line, 1, fmt.Sprintf("%s %q", spelt[s.known], clip(form)), wanted, "")
	}
	return r.describePlain(s)
}

// formsOf says which forms are read.
var formsOf = map[label]string{
	labelXYData: "(X++(Y..Y)) or (XY..XY)", labelXYPoints: pairForm, labelPeakTable: pairForm,
	labelPeakAssignments: "(XYA), (XYMA), (XYWA) or (XY..XY)", labelDataTable: "(XY..XY) or (X++(Y..Y)) with symbols of ##SYMBOL=",
}

// cutForm splits a form, in capitals and without blanks, from what follows it.
func cutForm(value string) (form, rest string) {
	if value == "" || value[0] != '(' {
		return "", value
	}
	depth := 0
	for i := range len(value) {
		switch value[i] {
		case '(':
			depth++
		case ')':
			depth--
		}
		if depth == 0 {
			form = strings.ToUpper(strings.Join(strings.Fields(value[:i+1]), ""))
			return clip(form), strings.TrimSpace(value[i+1:])
		}
	}
	return "", value
}

// describePlain takes the axes from the records of a block.
func (r *reader) describePlain(s *sheet) error {
	b := r.block()
	s.XUnits, s.YUnits = b.fields[labelXUnits].text, b.fields[labelYUnits].text
	s.xName = b.fields[labelXLabel].text
	s.x.factor, s.y.factor = 1, 1
	// Factors stated for an earlier table of the block are not those of a peak list, which holds values as they are.
	listed := s.known == labelPeakTable || s.known == labelPeakAssignments
	for _, x := range []struct {
		l  label
		to *float64
	}{{labelXFactor, &s.x.factor}, {labelYFactor, &s.y.factor}} {
		f := b.fields[x.l]
		if listed && f.used {
			continue
		}
		if err := r.factor(x.l, f.text, f.line, x.to); err != nil {
			return err
		}
		if listed && *x.to != 1 {
			r.warnings.add("peak-table-factor", "line %d: the values of the peak table of line %d are multiplied by %s %s", f.line, s.Line, spelt[x.l], clip(f.text))
		}
	}
	for _, x := range []struct {
		l  label
		to *stated
	}{{labelFirstX, &s.x.first}, {labelLastX, &s.x.last}, {labelDeltaX, &s.x.delta}, {labelFirstY, &s.y.first}, {labelLastY, &s.y.last},
		{labelMaxY, &s.y.highest}, {labelMinY, &s.y.lowest}} {
		f := b.fields[x.l]
		var err error
		if *x.to, err = r.number(x.l, f.text, f.line); err != nil {
			return err
		}
	}
	return r.count(s, labelPoints, b.fields[labelPoints].text, b.fields[labelPoints].line)
}

// factor reads a factor, which is left as it is where none is stated.
func (r *reader) factor(l label, text string, line int, to *float64) error {
	f, err := r.number(l, text, line)
	if err != nil || !f.given {
		return err
	}
	if f.value == 0 {
		return r.refuse(line, 1, fmt.Sprintf("%s %q", spelt[l], clip(text)), "a factor other than 0", "")
	}
	*to = f.value
	return nil
}

// count reads a stated number of points.
func (r *reader) count(s *sheet, l label, text string, line int) error {
	f, err := r.number(l, text, line)
	if err != nil || !f.given {
		return err
	}
	if f.value != float64(int(f.value)) || f.value < 0 || f.value > 1<<40 {
		return r.refuse(line, 1, fmt.Sprintf("%s %q", spelt[l], clip(text)), "a whole number of points", "")
	}
	s.points, s.pointsOf = int(f.value), l
	return nil
}

// describePage takes the axes from the variables of NTUPLES that a form names.
func (r *reader) describePage(s *sheet) error {
	b := r.block()
	v, err := r.variables(b)
	if err != nil {
		return err
	}
	x, y, stepped, ok := v.axes(s.Form)
	if !ok {
		return r.refuse(s.Line, 1, fmt.Sprintf("%s %q", spelt[labelDataTable], clip(s.Form)), formsOf[labelDataTable], "")
	}
	s.stepped = stepped
	s.xName, s.yName = v.of(labelVarName, x), v.of(labelVarName, y)
	s.XUnits, s.YUnits = v.of(labelUnits, x), v.of(labelUnits, y)
	s.x.factor, s.y.factor = 1, 1
	line := func(l label) int { return b.fields[l].line }
	if err := r.factor(labelFactor, v.of(labelFactor, x), line(labelFactor), &s.x.factor); err != nil {
		return err
	}
	if err := r.factor(labelFactor, v.of(labelFactor, y), line(labelFactor), &s.y.factor); err != nil {
		return err
	}
	if stepped {
		if s.x.first, err = r.number(labelFirst, v.of(labelFirst, x), line(labelFirst)); err != nil {
			return err
		}
		if s.x.last, err = r.number(labelLast, v.of(labelLast, x), line(labelLast)); err != nil {
			return err
		}
		if !v.begun[y] { // the first ordinate is that of the first page of the variable
			if s.y.first, err = r.number(labelFirst, v.of(labelFirst, y), line(labelFirst)); err != nil {
				return err
			}
		}
		v.begun[y] = true
	}
	if f := b.fields[labelPoints]; f.text != "" {
		return r.count(s, labelPoints, f.text, f.line)
	}
	s.inPairs = !stepped
	size := v.of(labelVarDim, x)
	if size == "" {
		size = v.of(labelVarDim, y)
	}
	return r.count(s, labelVarDim, size, line(labelVarDim))
}

// axes finds the variables of a form.
func (v *variables) axes(form string) (x, y int, stepped, ok bool) {
	inner := strings.TrimSuffix(strings.TrimPrefix(form, "("), ")")
	if a, rest, found := strings.Cut(inner, "++("); found {
		rest, closed := strings.CutSuffix(rest, ")")
		first, second, both := strings.Cut(rest, "..")
		x, y = v.index(a), v.index(first)
		return x, y, true, closed && both && first == second && x >= 0 && y >= 0 && x != y
	}
	pair, again, both := strings.Cut(inner, "..")
	if !both || pair != again {
		return 0, 0, false, false
	}
	for x, symbol := range v.symbols {
		if rest, found := strings.CutPrefix(pair, symbol); found && symbol != "" {
			if y := v.index(rest); y >= 0 && x != y {
				return x, y, false, true
			}
		}
	}
	return 0, 0, false, false
}
