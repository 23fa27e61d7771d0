package strictyaml

import (
	"fmt"
	"sort"
	"strings"
)

// A Problem is one thing wrong in a file that people write: where, what was found, what would be accepted. Line and Column
// count from 1; 0 means that the place is not known. Got and Want are phrases; text from the file is quoted in them.
type Problem struct {
	File         string
	Line, Column int
	Key          string // path of the key, such as sample.collected or custody[2].at
	Got, Want    string
	Hint         string
}

func (p *Problem) Error() string {
	var b strings.Builder
	b.WriteString(p.File)
	if p.Line > 0 {
		fmt.Fprintf(&b, ":%d", p.Line)
		if p.Column > 0 {
			fmt.Fprintf(&b, ":%d", p.Column)
		}
	}
	if p.Key != "" {
		b.WriteString(": " + p.Key)
	}
	fmt.Fprintf(&b, ": got %s, want %s", p.Got, p.Want)
	return b.String()
}

// Problems is everything wrong with some files, as one error.
type Problems []Problem

func (ps Problems) Error() string {
	lines := make([]string, len(ps))
	for i := range ps {
		lines[i] = ps[i].Error()
	}
	return strings.Join(lines, "\n")
}

// Sort orders problems by file, line and column.
func (ps Problems) Sort() {
	sort.SliceStable(ps, func(i, j int) bool {
		a, b := &ps[i], &ps[j]
		switch {
		case a.File != b.File:
			return a.File < b.File
		case a.Line != b.Line:
			return a.Line < b.Line
		}
		return a.Column < b.Column
	})
}
