package strictyaml

import (
	"fmt"
	"reflect"
	"strings"
)

// describe says what a field accepts.
func describe(f field) string {
	t := f.typ
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	var what string
	switch {
	case len(f.enum) > 0:
		what = "one of: " + strings.Join(f.enum, ", ")
	case f.format == "rfc3339":
		what = `a time with its offset, such as "2026-03-14T16:20:00+01:00"`
	case f.format == "date":
		what = `a date such as "2026-03-14"`
	case f.format == "path":
		what = "the path of a file inside the case folder"
	case f.family != nil:
		what = f.family.Want()
	case f.pattern != nil:
		what = "text of the form " + f.pattern.String()
	case t.Kind() == reflect.Float64 || t.Kind() == reflect.Int:
		what = limits(f)
	case t.Kind() == reflect.Bool:
		what = "true or false"
	case t.Kind() == reflect.Struct:
		what = "keys and values"
	case t.Kind() == reflect.Slice:
		what = "a list"
	default:
		what = "text"
	}
	if f.doc != "" {
		what += " (" + f.doc + ")"
	}
	return what
}

// limits says between what a number may lie, in the base unit.
func limits(f field) string {
	what := "a number"
	if f.typ.Kind() == reflect.Int {
		what = "a whole number"
	}
	unit := ""
	if f.family != nil {
		what, unit = "a quantity", " "+f.family.Base()
	}
	switch {
	case f.min != nil && f.max != nil:
		return fmt.Sprintf("%s from %g to %g%s", what, *f.min, *f.max, unit)
	case f.above != nil && f.max != nil:
		return fmt.Sprintf("%s above %g and up to %g%s", what, *f.above, *f.max, unit)
	case f.min != nil:
		return fmt.Sprintf("%s of at least %g%s", what, *f.min, unit)
	case f.above != nil:
		return fmt.Sprintf("%s above %g%s", what, *f.above, unit)
	case f.max != nil:
		return fmt.Sprintf("%s of at most %g%s", what, *f.max, unit)
	}
	return what
}

func keysOf(fields []field) string {
	names := make([]string, len(fields))
	for i, f := range fields {
		names[i] = f.key
	}
	return strings.Join(names, ", ")
}

// near suggests the key that was meant.
func near(name string, fields []field) string {
	best, bestAway := "", 3
	for _, f := range fields {
		if d := distance(name, f.key); d < bestAway {
			best, bestAway = f.key, d
		}
	}
	if best == "" {
		return ""
	}
	return fmt.Sprintf("did you mean %q?", best)
}

// distance is the number of letters to insert, delete or replace (Levenshtein).
func distance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := 1; i <= len(a); i++ {
		diagonal := row[0]
		row[0] = i
		for j := 1; j <= len(b); j++ {
			cost := diagonal
			if a[i-1] != b[j-1] {
				cost++
			}
			diagonal = row[j]
			row[j] = min(cost, row[j]+1, row[j-1]+1)
		}
	}
	return row[len(b)]
}
