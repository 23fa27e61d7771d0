package strictyaml

import (
	"fmt"
	"reflect"
	"strings"

	"assaywrit/evidence/units"
)

// describe says what a field accepts.
func describe(f field) string {
	what := kindWanted(f)
	if f.doc != "" {
		what += " (" + strings.TrimSuffix(f.doc, ".") + ")"
	}
	return what
}

func kindWanted(f field) string {
	t := f.typ
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	switch {
	case t.Kind() == reflect.Slice:
		return "a list"
	case t.Kind() == reflect.Struct:
		return "keys and values"
	case len(f.enum) == 1:
		return f.enum[0]
	case len(f.enum) > 0:
		return "one of: " + strings.Join(f.enum, ", ")
	case f.format == "rfc3339":
		return timeWanted
	case f.format == "date":
		return dateWanted
	case f.format == "path":
		return pathWanted
	case f.family != nil:
		return f.family.Want() + limits(f)
	case f.pattern != nil:
		return "text of the form " + f.pattern.String()
	case t.Kind() == reflect.Int:
		return "a whole number" + limits(f)
	case t.Kind() == reflect.Float64:
		return "a number" + limits(f)
	case t.Kind() == reflect.Bool:
		return "true or false"
	case f.minLen > 1:
		return fmt.Sprintf("text of at least %d characters", f.minLen)
	}
	return "text"
}

// limits says between what a number may lie, for the end of a phrase.
func limits(f field) string {
	switch {
	case f.min != nil && f.max != nil:
		return ", from " + show(f, *f.min) + " to " + show(f, *f.max)
	case f.above != nil && f.max != nil:
		return ", above " + show(f, *f.above) + " and up to " + show(f, *f.max)
	case f.min != nil:
		return ", at least " + show(f, *f.min)
	case f.above != nil:
		return ", above " + show(f, *f.above)
	case f.max != nil:
		return ", at most " + show(f, *f.max)
	}
	return ""
}

// show writes a limit as people would write the value.
func show(f field, limit float64) string {
	if f.family == nil {
		return fmt.Sprintf("%g", limit)
	}
	symbol := f.family.Base()
	if f.family.Base() == units.Fraction.Base() {
		symbol = "%"
	}
	text, err := f.family.Format(limit, symbol)
	if err != nil {
		panic("strictyaml: internal error: limit of " + f.name + ": " + err.Error())
	}
	return text
}

func keysOf(fields []field) string {
	names := make([]string, len(fields))
	for i, f := range fields {
		names[i] = f.key
	}
	return strings.Join(names, ", ")
}
