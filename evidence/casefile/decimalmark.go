package casefile

import (
	"fmt"
	"regexp"
	"strings"

	"assaywrit/evidence/units"
)

// Spreadsheet programs write numbers as their country does: 1,5 or 1.5, and 1.500 or 1,500 for fifteen hundred. Taking one for the
// other would be wrong a thousandfold, so a file must show which it is: in a file separated by commas the mark is the point; in
// others it is the one of the first number that can be read in one way only, and all numbers must use it. Where no number shows it,
// those that could be read in two ways are refused.

// twoWays: three digits behind the only mark, one to three before it that do not begin with zero.
var twoWays = regexp.MustCompile(`^[+-]?[1-9]\d{0,2}[.,]\d{3}$`)

// markOf returns the mark that stands in a number, or 0.
func markOf(text string) rune {
	if i := strings.IndexAny(text, ".,"); i >= 0 {
		return rune(text[i])
	}
	return 0
}

// decimalMark finds the mark that the file's numbers use, or 0 where none shows it.
func (t *sequenceReader) decimalMark(records []record) rune {
	if t.separator == ',' {
		return '.'
	}
	var columns []int
	if i, ok := t.header.columns["dilution"]; ok {
		columns = append(columns, i)
	}
	for _, c := range t.header.nominal {
		columns = append(columns, c.index)
	}
	for _, r := range records {
		for _, i := range columns {
			if i >= len(r.fields) || twoWays.MatchString(r.fields[i]) || strings.Count(r.fields[i], ".")+strings.Count(r.fields[i], ",") != 1 {
				continue
			}
			return markOf(r.fields[i])
		}
	}
	return 0
}

// number reads a number of the file, or gives advice.
func (t *sequenceReader) number(text string, parse func(string) (float64, error)) (v float64, hint string, err error) {
	switch mark := markOf(text); {
	case mark == 0:
	case strings.Count(text, ".")+strings.Count(text, ",") > 1:
		return 0, "write numbers without separators of thousands", fmt.Errorf("got %q", text)
	case t.mark == 0:
		whole, rest, _ := strings.Cut(text, string(mark))
		return 0, fmt.Sprintf("it can be read in two ways: write %s%s, or %s", whole, rest, shortened(whole, mark, rest)), fmt.Errorf("got %q", text)
	case mark != t.mark && t.separator == ',':
		return 0, "write a decimal point: the comma separates the columns", fmt.Errorf("got %q", text)
	case mark != t.mark:
		return 0, fmt.Sprintf("other numbers of the file have %q before their decimals", t.mark), fmt.Errorf("got %q", text)
	}
	plain := strings.Replace(text, ",", ".", 1)
	v, err = parse(plain)
	return v, units.NumberHint(plain), err
}

// shortened writes a number of three decimals with fewer, or with more, so that it can be read in one way only.
func shortened(whole string, mark rune, rest string) string {
	if short := strings.TrimRight(rest, "0"); short == "" {
		return whole
	} else if len(short) < 3 {
		return whole + string(mark) + short
	}
	return whole + string(mark) + rest + "0"
}
