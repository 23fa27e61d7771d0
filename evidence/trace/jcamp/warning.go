package jcamp

import (
	"fmt"

	"assaywrit/evidence/trace"
)

// warnings keeps the first warning of each code, and how many more there were: a run has thousands of pages.
type warnings struct {
	first []trace.Warning
	more  []int
}

func (w *warnings) add(code, format string, args ...any) {
	for i := range w.first {
		if w.first[i].Code == code {
			w.more[i]++
			return
		}
	}
	w.first = append(w.first, trace.Warning{Code: code, Detail: fmt.Sprintf(format, args...)})
	w.more = append(w.more, 0)
}

// list returns one warning for each code, in the order of the file.
func (w *warnings) list() []trace.Warning {
	var list []trace.Warning
	for i, first := range w.first {
		if n := w.more[i]; n > 0 {
			first.Detail += fmt.Sprintf(" (and %d more like it)", n)
		}
		list = append(list, first)
	}
	return list
}
