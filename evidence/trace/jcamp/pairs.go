package jcamp

import "math"

// readPairs reads a table of the form (XY..XY): abscissa and ordinate in AFFN form, with a comma or blank space between them, and a
// semicolon or blank space between points; a comma between points only where none stands inside of them. Points do not go on from one line
// to the next.
func (r *reader) readPairs(s *sheet, body lines) error {
	limit := r.limit(s)
	size := (len(body.data)-body.at)/8 + 1
	if s.points >= 0 && !s.inPairs {
		size = min(s.points, 4*size)
	}
	size = min(size, limit)
	s.X, s.Y = make([]float64, 0, size), make([]float64, 0, size)
	finestX, finestY := math.MaxInt, math.MaxInt
	s.lastLine = s.Line
	for body.more() {
		raw, _ := body.next()
		line := uncommented(raw)
		i := 0
		for i < len(line) && blank(line[i]) {
			i++
		}
		if i < len(line) {
			s.lastLine = body.number - 1
		}
		for i < len(line) {
			x, end, ok := number(line, i, false)
			if !ok {
				return r.refuse(s.lastLine, column(line, i), clipped(line[i:]), "a number", exportHint)
			}
			at, inside := separator(line, end)
			y, after, ok := number(line, at, false)
			switch {
			case at == len(line):
				return r.refuse(s.lastLine, column(line, i), "an abscissa without an ordinate in its line", "whole points in each line", exportHint)
			case inside == ';' || inside == 0 || !ok:
				return r.refuse(s.lastLine, column(line, end), clipped(line[end:]), "a comma or blank space, and a number", exportHint)
			}
			var between byte
			if i, between = separator(line, after); between == 0 && i < len(line) || between == ',' && (inside == ',' || i == len(line)) {
				return r.refuse(s.lastLine, column(line, after), clipped(line[after:]), "a semicolon or blank space between points", "a comma inside numbers is no decimal mark here: "+exportHint)
			}
			if len(s.X) >= limit {
				return r.tooMany(s, s.lastLine)
			}
			s.X, s.Y = append(s.X, float64(x.value*s.x.factor)), append(s.Y, float64(y.value*s.y.factor))
			finestX, finestY = min(finestX, x.last), min(finestY, y.last)
		}
	}
	s.YFactor = s.y.factor
	if len(s.X) > 0 {
		s.xUnit = float64(math.Abs(s.x.factor) * figure{last: finestX}.unit())
		s.yUnit = float64(math.Abs(s.y.factor) * figure{last: finestY}.unit())
	}
	return nil
}

// separator skips what stands between numbers: blank space with one comma or semicolon at most. It returns the place of what follows,
// and the comma or semicolon, or a space, or 0 where nothing stands between.
func separator(line []byte, i int) (end int, of byte) {
	for ; i < len(line); i++ {
		switch c := line[i]; {
		case blank(c) && of == 0:
			of = ' '
		case blank(c):
		case (c == ',' || c == ';') && (of == 0 || of == ' '):
			of = c
		default:
			return i, of
		}
	}
	return i, of
}
