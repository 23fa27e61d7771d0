package draft

import (
	"bytes"
	"cmp"
	"encoding/csv"
	"fmt"
	"path"
	"slices"
	"strings"
	"time"

	"assaywrit/evidence/strictyaml"
)

// ordered sorts raw files by the start times that they state: those with their offset first, then those without, among themselves, then
// those without a time. Files that are alike in this are in order of their paths.
func ordered(raws []Raw) []Raw {
	raws = slices.Clone(raws)
	slices.SortFunc(raws, func(a, b Raw) int {
		ta, groupA := started(a)
		tb, groupB := started(b)
		return cmp.Or(cmp.Compare(groupA, groupB), ta.Compare(tb), cmp.Compare(a.Path, b.Path))
	})
	return raws
}

// started returns the start time that a file states, and 0 for one with its offset, 1 for one without, 2 for none.
func started(r Raw) (time.Time, int) {
	if r.File != nil {
		if t, err := strictyaml.ParseTime(r.File.StartTime); err == nil {
			return t, 0
		}
		if t, err := time.Parse("2006-01-02T15:04:05", r.File.StartTime); err == nil {
			return t, 1
		}
	}
	return time.Time{}, 2
}

// sequenceOf writes a row for each raw file, with a column of nominal amounts for each analyte, and counts the marks. A start time is
// taken over only with its offset, and where it is after that of the row before: of two runs that state the same start, one is wrong.
func sequenceOf(raws []Raw, analytes int) ([]byte, int) {
	header := []string{"injection", "file", "role", "level", "aliquot", "sample_code", "dilution", "acquired", "operator", "note"}
	rows := [][]string{append(header, marked(analytes)...)}
	ids := map[string]bool{}
	var last time.Time
	for _, r := range raws {
		acquired, code := strictyaml.Mark, strictyaml.Mark
		if t, group := started(r); group == 0 && t.After(last) {
			acquired, last = r.File.StartTime, t
		}
		if r.File != nil && usable(r.File.SampleCode) {
			code = r.File.SampleCode
		}
		row := []string{injectionID(r.Path, ids), r.Path, strictyaml.Mark, strictyaml.Mark, strictyaml.Mark, code, strictyaml.Mark, acquired, strictyaml.Mark, ""}
		rows = append(rows, append(row, marked(analytes)...))
	}
	var out bytes.Buffer
	w := csv.NewWriter(&out)
	if err := w.WriteAll(rows); err != nil {
		panic("draft: internal error: " + err.Error()) // a buffer takes everything
	}
	marks := 0
	for _, row := range rows {
		for _, field := range row {
			if strictyaml.IsMark(field) {
				marks++
			}
		}
	}
	return out.Bytes(), marks
}

func marked(n int) []string { return slices.Repeat([]string{strictyaml.Mark}, n) }

// injectionID makes an id from a file's name: without its extensions, in plain letters, and unlike all others.
func injectionID(file string, taken map[string]bool) string {
	stem := path.Base(file)
	for _, ext := range []string{".gz", path.Ext(strings.TrimSuffix(strings.ToLower(stem), ".gz"))} {
		if n := len(stem) - len(ext); n > 0 && strings.EqualFold(stem[n:], ext) {
			stem = stem[:n]
		}
	}
	stem = strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '-', r == '_', r == '.':
			return r
		}
		return '-'
	}, stem)
	id := stem
	for n := 2; taken[strings.ToLower(id)]; n++ {
		id = fmt.Sprintf("%s-%d", stem, n)
	}
	taken[strings.ToLower(id)] = true
	return id
}
