package table

import "bytes"

// Powers of ten that a float64 holds exactly.
var powers = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// fast reads a line of the kind that nearly all are: short plain numbers, separators alone between them, as many fields as before,
// a later time. It gives what take would, or false, with nothing changed.
func (r *reader) fast(line []byte) bool {
	separator, mark := r.layout.Separator, r.layout.DecimalMark
	if separator == ' ' || r.line < r.layout.HeaderLines {
		return false
	}
	at, timeFrom, timeTo := 0, 0, 0
	for field, target := range r.target {
		if target < 0 {
			i := bytes.IndexByte(line[at:], separator)
			if i < 0 {
				if field < len(r.target)-1 {
					return false
				}
				i = len(line) - at
			}
			at += i
		} else {
			v, end, ok := plain(line, at, mark)
			if !ok {
				return false
			}
			if target == 0 {
				timeFrom, timeTo = at, end
			}
			r.row[target], at = v, end
		}
		last := field == len(r.target)-1
		switch {
		case at < len(line) && line[at] == separator && !last:
			at++
		case at < len(line) && line[at] == separator:
		case at == len(line) && last:
		default:
			return false
		}
	}
	if n := len(r.target) + bytes.Count(line[at:], []byte{separator}); n != r.fields || r.row[0] <= r.last {
		return false
	}
	r.line++
	t := r.row[0]
	r.last, r.lastLine, r.lastFrom, r.lastTo = t, line, timeFrom, timeTo
	if r.layout.TimeUnit == "s" {
		t /= 60
	}
	r.time = append(r.time, t)
	for i := range r.intensity {
		r.intensity[i] = append(r.intensity[i], r.row[i+1])
	}
	return true
}

// plain reads a number of at most 15 digits from at on, with or without a sign and decimals. It is exact: the digits and the power
// of ten are both exact in a float64, and their quotient is rounded once.
func plain(line []byte, at int, mark byte) (v float64, end int, ok bool) {
	negative := at < len(line) && line[at] == '-'
	if negative {
		at++
	}
	from, m := at, uint64(0)
	for at < len(line) && line[at]-'0' < 10 {
		m = m*10 + uint64(line[at]-'0')
		at++
	}
	digits, decimals := at-from, 0
	if at < len(line) && line[at] == mark {
		at++
		from = at
		for at < len(line) && line[at]-'0' < 10 {
			m = m*10 + uint64(line[at]-'0')
			at++
		}
		decimals = at - from
	}
	if digits+decimals == 0 || digits+decimals > 15 {
		return 0, at, false
	}
	v = float64(m)
	if decimals > 0 {
		v /= powers[decimals]
	}
	if negative {
		v = -v
	}
	return v, at, true
}
