package jcamp

import (
	"fmt"
	"strings"
)

// maxVariables is how many variables NTUPLES may have.
const maxVariables = 64

// variables are the columns of the table that describes NTUPLES: one list for each of the records from VAR_NAME to LAST.
type variables struct {
	symbols []string // in capitals: the list of ##SYMBOL=
	lists   [labelLast - labelVarName + 1][]string
	begun   [maxVariables]bool // whether a page of the variable has been read
}

// variables returns the description of the pages of a block. It is made once, and again after one of its records changes.
func (r *reader) variables(b *block) (*variables, error) {
	if b.variable != nil {
		return b.variable, nil
	}
	v := &variables{}
	for l := labelVarName; l <= labelLast; l++ {
		f := b.fields[l]
		if f.text == "" {
			continue
		}
		if n := strings.Count(f.text, ",") + 1; n > maxVariables {
			return nil, r.refuse(f.line, 1, fmt.Sprintf("%d variables in %s", n, spelt[l]), fmt.Sprintf("at most %d", maxVariables), "")
		}
		v.lists[l-labelVarName] = make([]string, 0, strings.Count(f.text, ",")+1)
		for s := range strings.SplitSeq(f.text, ",") {
			v.lists[l-labelVarName] = append(v.lists[l-labelVarName], strings.TrimSpace(s))
		}
	}
	list := v.lists[labelSymbol-labelVarName]
	for i, s := range list {
		s = strings.ToUpper(s)
		if v.index(s) >= 0 {
			return nil, r.refuse(b.fields[labelSymbol].line, 1, fmt.Sprintf("the symbol %q twice", clip(s)), "each once", "")
		}
		list[i] = s
		v.symbols = list[:i+1]
	}
	b.variable = v
	return v, nil
}

// index is the place of a symbol, or -1.
func (v *variables) index(symbol string) int {
	if symbol == "" {
		return -1
	}
	for i, s := range v.symbols {
		if s == symbol {
			return i
		}
	}
	return -1
}

// of is what a record says of the variable at a place, or "".
func (v *variables) of(l label, i int) string {
	list := v.lists[l-labelVarName]
	if i < 0 || i >= len(list) {
		return ""
	}
	return list[i]
}

// cutPage splits the value of ##PAGE=, such as "T= 1.52", into the symbol, in capitals, and the value.
func cutPage(page string) (symbol, value string, ok bool) {
	symbol, value, ok = strings.Cut(page, "=")
	return strings.ToUpper(strings.TrimSpace(symbol)), strings.TrimSpace(value), ok
}

// squeezed is a word in capitals without blanks, dashes, slashes and underscores, as labels are compared.
func squeezed(s string) string {
	return strings.Map(func(c rune) rune {
		switch c {
		case ' ', '\t', '-', '/', '_':
			return -1
		}
		return c
	}, strings.ToUpper(s))
}
