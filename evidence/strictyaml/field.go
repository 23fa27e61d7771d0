package strictyaml

import (
	"reflect"
	"regexp"
	"strconv"
	"strings"

	"assaywrit/evidence/units"
)

// A field is what the tags of a struct field say.
type field struct {
	index    []int
	name     string // in Go
	key      string // in the file
	optional bool
	doc      string
	enum     []string
	family   *units.Family
	min, max *float64
	above    *float64
	pattern  *regexp.Regexp
	format   string
	minLen   int
	minItems int
	typ      reflect.Type
}

// fieldsOf lists the bound fields of a struct type in their order, embedded structs flattened. A tag that cannot be
// understood is a fault of ours.
func fieldsOf(t reflect.Type) []field {
	var list []field
	for i := range t.NumField() {
		f := t.Field(i)
		if f.Anonymous && f.Type.Kind() == reflect.Struct && f.Tag.Get("key") == "" {
			for _, inner := range fieldsOf(f.Type) {
				inner.index = append([]int{i}, inner.index...)
				list = append(list, inner)
			}
			continue
		}
		if key, ok := f.Tag.Lookup("key"); ok {
			list = append(list, fieldOf(f, i, key))
		}
	}
	return list
}

func fieldOf(f reflect.StructField, i int, key string) field {
	out := field{index: []int{i}, name: f.Name, doc: f.Tag.Get("doc"), format: f.Tag.Get("format"), typ: f.Type}
	out.key, out.optional = strings.CutSuffix(key, ",optional")
	if e := f.Tag.Get("enum"); e != "" {
		out.enum = strings.Split(e, "|")
	}
	if u := f.Tag.Get("unit"); u != "" {
		family, ok := units.ForTag(u)
		if !ok {
			panic("strictyaml: internal error: unit " + u + " of " + f.Name)
		}
		out.family = &family
	}
	out.min, out.max, out.above = number(f, "min"), number(f, "max"), number(f, "above")
	if p := f.Tag.Get("pattern"); p != "" {
		out.pattern = regexp.MustCompile(p)
	}
	if n := number(f, "minlen"); n != nil {
		out.minLen = int(*n)
	}
	if n := number(f, "minitems"); n != nil {
		out.minItems = int(*n)
	}
	return out
}

func number(f reflect.StructField, tag string) *float64 {
	text := f.Tag.Get(tag)
	if text == "" {
		return nil
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		panic("strictyaml: internal error: tag " + tag + " of " + f.Name)
	}
	return &v
}
