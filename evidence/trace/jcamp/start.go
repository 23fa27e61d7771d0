package jcamp

import (
	"strings"
	"time"
)

// moments are the ways to write a moment that leave nothing to guess: the standard's LONGDATE, ISO 8601 and months by their names. A year of
// two digits, the standard's DATE, has no century, and 01/02/2003 may be in January or February.
var moments = []struct {
	layout string
	zoned  bool
}{
	{"2006/01/02 15:04:05", false}, {"2006/01/02 15:04:05 -0700", true}, {"2006/01/02 15:04:05 -07:00", true},
	{"2006-01-02 15:04:05", false}, {"2006-01-02T15:04:05", false}, {"2006-01-02T15:04:05Z07:00", true}, {"2006-01-02 15:04:05 -0700", true},
	{"2006-01-02 15:04:05 -07:00", true}, {"2 Jan 2006 15:04:05", false}, {"2-Jan-2006 15:04:05", false}, {"2 January 2006 15:04:05", false},
}

// moment puts a date and time as RFC 3339, without an offset where none is stated. It returns "" where something would have to be guessed.
func moment(text string) string {
	text = strings.Join(strings.Fields(text), " ")
	for _, m := range moments {
		t, err := time.Parse(m.layout, text)
		switch {
		case err != nil || t.Year() < 1000:
		case m.zoned:
			return t.Format("2006-01-02T15:04:05.999999999Z07:00")
		default:
			return t.Format("2006-01-02T15:04:05.999999999")
		}
	}
	return ""
}

// startTime is the acquisition start. A date that cannot be put as RFC 3339 without guessing gives the warning "start-time".
func (r *reader) startTime() string {
	stated := r.agreed(func(f *facts) string { return f.longDate })
	if stated == "" {
		stated = strings.TrimSpace(r.agreed(func(f *facts) string { return f.date }) + " " + r.agreed(func(f *facts) string { return f.time }))
	}
	start := moment(stated)
	if start == "" && stated != "" {
		r.warnings.add("start-time", "the date %q is not put as RFC 3339, which would need guessing", clip(stated))
	}
	return start
}
