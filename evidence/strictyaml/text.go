package strictyaml

import (
	"fmt"
	"io/fs"
	"regexp"
	"slices"
	"strings"
	"time"
	"unicode/utf8"
)

// The grammars of texts with a format, in what Go's regular expressions and those of ECMA 262 have in common.
const (
	timePattern = `^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}(\.\d{1,9})?(Z|[+-]([01]\d|2[0-3]):[0-5]\d)$`
	datePattern = `^\d{4}-\d{2}-\d{2}$`
	pathPattern = `^` + pathPart + `([/\\]` + pathPart + `)*$`
	pathPart    = `([^/\\:.][^/\\:]*|\.[^/\\:.][^/\\:]*|\.\.[^/\\:]+)` // neither empty nor . nor ..
)

var timeForm = regexp.MustCompile(timePattern)

// ParseTime reads a time with its offset (RFC 3339). A time without an offset, or with an impossible day or hour, is refused.
func ParseTime(text string) (time.Time, error) {
	t, err := time.Parse(time.RFC3339, text)
	if err != nil || !timeForm.MatchString(text) {
		return time.Time{}, fmt.Errorf("got %s, want %s", Quote(text), timeWanted)
	}
	return t, nil
}

const (
	timeWanted = `a time with its offset, such as "2026-03-14T16:20:00+01:00"`
	dateWanted = `a date such as "2026-03-14"`
	pathWanted = "the path of a file inside the folder, such as raw/010.mzML"
)

// ParsePath reads the path of a file below a folder, with either slash, and returns it with forward ones. Absolute paths, drives
// and ways out of the folder are refused.
func ParsePath(text string) (string, error) {
	p := strings.ReplaceAll(text, `\`, "/")
	if !fs.ValidPath(p) || p == "." || strings.ContainsAny(p, ":\n") || Hidden(p) {
		return "", fmt.Errorf("got %s, want %s", Quote(text), pathWanted)
	}
	return p, nil
}

// checkText brings a text into the form of its field and says whether it is accepted, or gives advice. Blanks around free text are
// taken away: block texts end with a line feed.
func checkText(text string, f field) (s, hint string, ok bool) {
	s, ok = text, true
	if len(f.enum) == 0 && f.format == "" && f.pattern == nil {
		s = strings.TrimSpace(s)
	}
	switch {
	case Hidden(s):
		return s, "it holds a character that does not show, written with a backslash in this message", false
	case len(f.enum) > 0:
		return s, Suggest(s, f.enum), slices.Contains(f.enum, s)
	case f.format == "rfc3339":
		_, err := ParseTime(s)
		return s, TimeHint(s), err == nil
	case f.format == "date":
		_, err := time.Parse(time.DateOnly, s)
		return s, dateHint(s), err == nil
	case f.format == "path":
		p, err := ParsePath(s)
		return p, PathHint(s), err == nil
	case f.pattern != nil && !f.pattern.MatchString(s):
		return s, "", false
	case f.minLen > 0 || !f.optional:
		ok = utf8.RuneCountInString(s) >= max(f.minLen, 1)
	}
	return s, "", ok
}

var (
	dayOnly   = regexp.MustCompile(`^\d{4}-\d{2}-\d{2}$`)
	noOffset  = regexp.MustCompile(`^\d{4}-\d{2}-\d{2}[T ]\d{1,2}:\d{2}(:\d{2}(\.\d+)?)?$`)
	otherDate = regexp.MustCompile(`^\d{1,4}[./-]\d{1,2}[./-]\d{1,4}`)
)

// TimeHint says what is wrong with a text that is no time with its offset, or nothing where that is not clear.
func TimeHint(text string) string {
	switch {
	case timeForm.MatchString(text):
		return "there is no such day or hour"
	case dayOnly.MatchString(text):
		return "the time of day and its offset from UTC are missing"
	case noOffset.MatchString(text):
		return "a T stands between day and time, seconds are written, and the offset from UTC comes last: Z, or such as +01:00"
	case len(text) > 10 && dayOnly.MatchString(text[:10]) && text[10] == ' ':
		return "a T stands between day and time, and no blank before the offset"
	}
	return dateHint(text)
}

func dateHint(text string) string {
	switch {
	case dayOnly.MatchString(text):
		return "there is no such day"
	case otherDate.MatchString(text):
		return "write the year first, then month and day with two digits each, with hyphens"
	}
	return ""
}

// PathHint says what is wrong with a text that is no path below a folder, or nothing where that is not clear.
func PathHint(text string) string {
	p := strings.ReplaceAll(text, `\`, "/")
	switch {
	case strings.Contains(p, ":") || strings.HasPrefix(p, "/"):
		return "the path begins inside the case folder: no drive, no / in front"
	case slices.Contains(strings.Split(p, "/"), ".."):
		return "the file lies inside the case folder: copy it there"
	}
	return ""
}

// Quote quotes a text from outside for a problem; the middle of a long one is left out.
func Quote(text string) string {
	const most = 60
	if r := []rune(text); len(r) > 2*most {
		return fmt.Sprintf("%q (%d characters)", string(r[:most])+" … "+string(r[len(r)-most/3:]), len(r))
	}
	return fmt.Sprintf("%q", text)
}
