package jcamp

import (
	"bytes"
	"fmt"
	"math"
)

// readAssignments reads peak assignments in parentheses: abscissa, ordinate, and after them a multiplicity or a width and an assignment,
// which are left out. A parenthesis stands in one line, except for the text between angle brackets.
func (r *reader) readAssignments(s *sheet, body lines) error {
	s.lastLine, s.YFactor = s.Line, s.y.factor
	finestX, finestY := math.MaxInt, math.MaxInt
	limit := r.limit(s)
	inText, open := false, 0
	for body.more() {
		line, _ := body.next()
		if !inText {
			line = uncommented(line)
		}
		for i := 0; i < len(line); {
			s.lastLine = body.number - 1
			switch c := line[i]; {
			case inText:
				end := bytes.IndexByte(line[i:], '>')
				if end < 0 {
					i = len(line)
					continue
				}
				inText = false
				i += end + 1
			case blank(c) || open == 0 && (c == ',' || c == ';'):
				i++
			case open == 0 && c == '(':
				x, y, end, ok := pair(line, i+1)
				if !ok {
					return r.refuse(s.lastLine, column(line, i), clipped(line[i:]), "an abscissa and an ordinate after the parenthesis", exportHint)
				}
				if len(s.X) >= limit {
					return r.tooMany(s, s.lastLine)
				}
				s.X, s.Y = append(s.X, float64(x.value*s.x.factor)), append(s.Y, float64(y.value*s.y.factor))
				finestX, finestY = min(finestX, x.last), min(finestY, y.last)
				open, i = s.lastLine, end
			case open > 0 && c == '<':
				inText = true
				i++
			case open > 0 && c == ')':
				open = 0
				i++
			case open > 0 && c != '(':
				i++
			default:
				return r.refuse(s.lastLine, column(line, i), clipped(line[i:]), "a peak assignment in parentheses", exportHint)
			}
		}
	}
	if open > 0 {
		return r.refuse(s.lastLine, 0, "a peak assignment without its end", fmt.Sprintf("the parenthesis that closes the one of line %d", open), exportHint)
	}
	if len(s.X) > 0 {
		s.xUnit = float64(math.Abs(s.x.factor) * figure{last: finestX}.unit())
		s.yUnit = float64(math.Abs(s.y.factor) * figure{last: finestY}.unit())
	}
	return nil
}

// pair reads two numbers with a comma or blank space between them.
func pair(line []byte, i int) (x, y figure, end int, ok bool) {
	for i < len(line) && blank(line[i]) {
		i++
	}
	if x, end, ok = number(line, i, false); !ok {
		return
	}
	i, of := separator(line, end)
	if of != ',' && of != ' ' {
		return x, y, end, false
	}
	y, end, ok = number(line, i, false)
	return x, y, end, ok
}
