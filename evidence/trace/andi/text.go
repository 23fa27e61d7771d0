package andi

import (
	"fmt"
	"strings"
	"time"
	"unicode/utf8"
)

// text cleans what a file writes: up to the first NUL, without space around it. Software before UTF-8 wrote ISO 8859-1; such text is
// read as that, and the file gets a warning.
func (r *reader) text(raw string) string {
	raw, _, _ = strings.Cut(raw, "\x00")
	if !utf8.ValidString(raw) {
		var b strings.Builder
		for _, c := range []byte(raw) {
			b.WriteRune(rune(c))
		}
		raw = b.String()
		if !r.recode {
			r.recode = true
			r.warn("text-encoding", fmt.Sprintf("text that is not UTF-8, such as %.80q, is read as ISO 8859-1", raw))
		}
	}
	return strings.TrimSpace(raw)
}

// global is the text of an attribute of the file, or empty.
func (r *reader) global(name string) string {
	if a := r.nc.Attribute(name); a != nil {
		return r.text(a.Text())
	}
	return ""
}

// attribute is the text of an attribute of a variable, or empty.
func (r *reader) attribute(variable, name string) string {
	if v := r.nc.Variable(variable); v != nil {
		if a := v.Attribute(name); a != nil {
			return r.text(a.Text())
		}
	}
	return ""
}

// rows is the text of a variable, each row cleaned; nothing where there is no such variable of text.
func (r *reader) rows(name string) ([]string, error) {
	if v := r.nc.Variable(name); v == nil || !isText(v) {
		return nil, nil
	}
	rows, err := r.nc.Text(name)
	for i := range rows {
		rows[i] = r.text(rows[i])
	}
	return rows, err
}

// start reads a date and time stamp of both standards, YYYYMMDDhhmmss and the difference from universal time as ±hhmm, into RFC 3339;
// without offset where the file gives none.
func (r *reader) start(attribute string) {
	stamp := r.global(attribute)
	if stamp == "" {
		return
	}
	if t, err := time.Parse("20060102150405-0700", stamp); err == nil {
		r.file.StartTime = t.Format("2006-01-02T15:04:05-07:00")
	} else if t, err := time.Parse("20060102150405", stamp); err == nil && len(stamp) == len("20060102150405") {
		r.file.StartTime = t.Format("2006-01-02T15:04:05")
	} else {
		r.warn("start-time", fmt.Sprintf("%s is %.80q, want YYYYMMDDhhmmss and ±hhmm: left out", attribute, stamp))
	}
}

// perMinute is how many of a unit of time make a minute; 0 for a unit that is not known.
func perMinute(unit string) float64 {
	switch strings.ToLower(unit) {
	case "s", "sec", "secs", "second", "seconds":
		return 60
	case "min", "mins", "minute", "minutes":
		return 1
	}
	return 0
}

const timeUnits = "seconds or minutes"
