package strictyaml

import (
	"fmt"
	"io/fs"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"time"

	"go.yaml.in/yaml/v4"

	"assaywrit/evidence/units"
)

// maxDepth bounds how deep a file may be nested.
const maxDepth = 24

// Bind reads data into the struct that into points to, by its tags. The problems list everything that is wrong; then what into
// holds is not to be used. The document tells the places of keys and is nil only where data is no YAML at all.
func Bind(file string, data []byte, into any) (*Document, Problems) {
	root, problem := parse(file, data)
	if problem != nil {
		return nil, Problems{*problem}
	}
	b := &binder{doc: &Document{file: file, places: map[string]place{}}}
	b.value(root, "", field{typ: reflect.TypeOf(into).Elem()}, reflect.ValueOf(into).Elem(), 0)
	b.problems.Sort()
	return b.doc, b.problems
}

type binder struct {
	doc      *Document
	problems Problems
}

func (b *binder) report(n *yaml.Node, key, got, want, hint string) {
	b.problems = append(b.problems, Problem{b.doc.file, n.Line, n.Column, key, got, want, hint})
}

// value binds one node to one Go value.
func (b *binder) value(n *yaml.Node, key string, f field, v reflect.Value, depth int) {
	b.doc.places[key] = place{n.Line, n.Column}
	switch {
	case depth > maxDepth:
		b.report(n, key, "nesting that goes too deep", fmt.Sprintf("at most %d levels", maxDepth), "")
		return
	case n.Kind == yaml.AliasNode || n.Anchor != "":
		b.report(n, key, "an anchor or alias", "the value itself", "write the value out in both places")
		return
	case n.Style&yaml.TaggedStyle != 0:
		b.report(n, key, "the tag "+n.Tag, "a value without a tag", "")
		return
	}
	if v.Kind() == reflect.Pointer {
		v.Set(reflect.New(v.Type().Elem()))
		v = v.Elem()
	}
	switch v.Kind() {
	case reflect.Struct:
		b.mapping(n, key, v, depth)
	case reflect.Slice:
		b.list(n, key, f, v, depth)
	default:
		b.scalar(n, key, f, v)
	}
}

func (b *binder) mapping(n *yaml.Node, key string, v reflect.Value, depth int) {
	if n.Kind != yaml.MappingNode {
		b.report(n, key, kindOf(n), "keys and values", "")
		return
	}
	fields := fieldsOf(v.Type())
	seen := map[string]bool{}
	for i := 0; i+1 < len(n.Content); i += 2 {
		name, inner := n.Content[i], n.Content[i+1]
		at := join(key, name.Value)
		k := slices.IndexFunc(fields, func(f field) bool { return f.key == name.Value })
		switch {
		case name.Kind != yaml.ScalarNode || k < 0:
			b.report(name, at, fmt.Sprintf("unknown key %q", name.Value), "one of: "+keysOf(fields), near(name.Value, fields))
			continue
		case seen[name.Value]:
			b.report(name, at, fmt.Sprintf("the key %q a second time", name.Value), "each key once", "")
			continue
		}
		seen[name.Value] = true
		b.value(inner, at, fields[k], v.FieldByIndex(fields[k].index), depth+1)
		b.doc.places[at] = place{inner.Line, inner.Column}
	}
	for _, f := range fields {
		if !f.optional && !seen[f.key] {
			b.report(n, join(key, f.key), "no such key", fmt.Sprintf("%q: %s", f.key, describe(f)), "")
		}
	}
}

func (b *binder) list(n *yaml.Node, key string, f field, v reflect.Value, depth int) {
	if n.Kind != yaml.SequenceNode {
		b.report(n, key, kindOf(n), "a list: "+describe(f), "a list is written [a, b], or one \"- item\" a line; an empty one is []")
		return
	}
	if len(n.Content) < f.minItems {
		b.report(n, key, fmt.Sprintf("a list of %d", len(n.Content)), fmt.Sprintf("at least %d", f.minItems), "")
	}
	v.Set(reflect.MakeSlice(v.Type(), len(n.Content), len(n.Content)))
	item := f
	item.typ = v.Type().Elem()
	for i, inner := range n.Content {
		b.value(inner, fmt.Sprintf("%s[%d]", key, i), item, v.Index(i), depth+1)
	}
}

func (b *binder) scalar(n *yaml.Node, key string, f field, v reflect.Value) {
	if n.Kind != yaml.ScalarNode {
		b.report(n, key, kindOf(n), describe(f), "")
		return
	}
	if n.Tag == "!!null" {
		b.report(n, key, "nothing", describe(f), "take the key out if there is no value")
		return
	}
	switch v.Kind() {
	case reflect.String:
		b.text(n, key, f, v)
	case reflect.Bool:
		if n.Value != "true" && n.Value != "false" {
			b.report(n, key, quoted(n), "true or false", "")
			return
		}
		v.SetBool(n.Value == "true")
	case reflect.Int:
		i, err := strconv.Atoi(n.Value)
		if err != nil || strconv.Itoa(i) != n.Value {
			b.report(n, key, quoted(n), "a whole number", "")
			return
		}
		if b.inLimits(n, key, f, float64(i)) {
			v.SetInt(int64(i))
		}
	case reflect.Float64:
		b.number(n, key, f, v)
	default:
		panic("strictyaml: internal error: cannot bind a " + v.Kind().String())
	}
}

func (b *binder) number(n *yaml.Node, key string, f field, v reflect.Value) {
	var x float64
	var err error
	if f.family != nil {
		x, err = f.family.Parse(n.Value)
		if err != nil {
			b.report(n, key, quoted(n), f.family.Want(), commaHint(n.Value))
			return
		}
	} else if x, err = units.ParseNumber(n.Value); err != nil {
		b.report(n, key, quoted(n), "a number", commaHint(n.Value))
		return
	}
	if b.inLimits(n, key, f, x) {
		v.SetFloat(x)
	}
}

func (b *binder) inLimits(n *yaml.Node, key string, f field, x float64) bool {
	if (f.min != nil && x < *f.min) || (f.max != nil && x > *f.max) || (f.above != nil && x <= *f.above) {
		b.report(n, key, quoted(n), limits(f), "")
		return false
	}
	return true
}

func (b *binder) text(n *yaml.Node, key string, f field, v reflect.Value) {
	s := strings.TrimSpace(n.Value)
	if f.format == "path" {
		s = strings.ReplaceAll(s, `\`, "/")
	}
	ok := true
	switch {
	case len(f.enum) > 0:
		ok = slices.Contains(f.enum, s)
	case f.format == "rfc3339":
		_, err := time.Parse(time.RFC3339, s)
		ok = err == nil
	case f.format == "date":
		_, err := time.Parse(time.DateOnly, s)
		ok = err == nil
	case f.format == "path":
		ok = fs.ValidPath(s) && s != "." && !strings.Contains(s, ":")
	}
	if ok && f.pattern != nil {
		ok = f.pattern.MatchString(s)
	}
	if ok && (f.minLen > 0 || !f.optional) {
		ok = len(s) >= max(f.minLen, 1)
	}
	if !ok {
		b.report(n, key, quoted(n), describe(f), "")
		return
	}
	v.SetString(s)
}

func quoted(n *yaml.Node) string { return fmt.Sprintf("%q", n.Value) }

func join(key, name string) string {
	if key == "" {
		return name
	}
	return key + "." + name
}

func kindOf(n *yaml.Node) string {
	switch n.Kind {
	case yaml.MappingNode:
		return "keys and values"
	case yaml.SequenceNode:
		return "a list"
	}
	if n.Tag == "!!null" {
		return "nothing"
	}
	return quoted(n)
}

func commaHint(text string) string {
	if strings.Contains(text, ",") {
		return "write a decimal point, and no separators of thousands"
	}
	return ""
}
