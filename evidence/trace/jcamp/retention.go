package jcamp

import (
	"fmt"
	"math"
	"strings"
)

// A retention is the retention time of a mass spectrum as stated: its number and its unit, which may be empty.
type retention struct {
	given bool
	value float64
	unit  string
	line  int
}

// timeUnit tells what text names as a unit of time: "min", "s", or nothing. Words that only say that it is a time are skipped.
func timeUnit(text string) string {
	unit := ""
	words := strings.FieldsFunc(strings.ToUpper(text), func(c rune) bool { return (c < 'A' || c > 'Z') && c < 0x80 })
	for _, w := range words {
		u := ""
		switch w {
		case "MINUTES", "MINUTE", "MIN":
			u = "min"
		case "SECONDS", "SECOND", "SEC", "S":
			u = "s"
		case "RETENTION", "TIME", "IN":
			continue
		}
		if u == "" || unit != "" {
			return ""
		}
		unit = u
	}
	return unit
}

// minutes is the retention time in minutes. stated is false where the file gives no unit: it is then in seconds, the default of the mass
// spectrometry protocol (from memory).
func (t retention) minutes() (min float64, stated bool) {
	if t.unit == "min" {
		return t.value, true
	}
	return t.value / 60, t.unit == "s"
}

// retention finds the retention time that a page or a record states.
func (r *reader) retention(b *block) (retention, error) {
	page, err := r.pageTime(b)
	if err != nil {
		return page, err
	}
	f := b.fields[labelRetention]
	if f.text == "" {
		return page, nil
	}
	record, err := r.timeOf(labelRetention, f.text, f.line)
	if err != nil || !page.given {
		return record, err
	}
	if record.unit == "" {
		record.unit = page.unit
	}
	if page.unit == "" {
		page.unit = record.unit
	}
	a, _ := page.minutes()
	c, _ := record.minutes()
	if math.Abs(a-c) > math.Abs(float64(a*1e-6)) { // both may be rounded
		return page, r.refuse(f.line, 1, fmt.Sprintf("%s %s", spelt[labelRetention], clip(f.text)), fmt.Sprintf("the time of ##PAGE= %s", clip(b.fields[labelPage].text)), exportHint)
	}
	return record, nil
}

// pageTime is the time that ##PAGE= states, if its variable is one.
func (r *reader) pageTime(b *block) (retention, error) {
	f := b.fields[labelPage]
	symbol, value, ok := cutPage(f.text)
	if !ok {
		return retention{}, nil
	}
	v, err := r.variables(b)
	if err != nil {
		return retention{}, err
	}
	i := v.index(symbol)
	unit, name := v.of(labelUnits, i), squeezed(v.of(labelVarName, i))
	if name != "RETENTIONTIME" && name != "TIME" && (name != "" || symbol != "T") {
		return retention{}, nil
	}
	t, err := r.timeOf(labelPage, value, f.line)
	if err != nil || unit == "" {
		return t, err
	}
	of := timeUnit(unit)
	if of == "" || t.unit != "" && t.unit != of {
		return t, r.refuse(b.fields[labelUnits].line, 1, fmt.Sprintf("the unit %q of %s", clip(unit), symbol), "SECONDS or MINUTES, and the same in ##PAGE=", unitHint)
	}
	t.unit = of
	return t, nil
}

// timeOf reads a number and, if there is one, a unit of time.
func (r *reader) timeOf(l label, text string, line int) (retention, error) {
	f, end, ok := number([]byte(text), 0, false)
	if rest := strings.TrimSpace(text[end:]); ok && rest == "" {
		return retention{given: true, value: f.value, line: line}, nil
	} else if unit := timeUnit(rest); ok && unit != "" {
		return retention{given: true, value: f.value, unit: unit, line: line}, nil
	}
	return retention{}, r.refuse(line, 1, fmt.Sprintf("%s %q", spelt[l], clip(text)), "a time, in seconds or with its unit", "")
}
