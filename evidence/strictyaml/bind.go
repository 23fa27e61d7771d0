package strictyaml

import (
	"fmt"
	"reflect"
	"slices"
	"strconv"
	"strings"

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

// plain refuses what YAML has beyond keys, lists and values.
func (b *binder) plain(n *yaml.Node, key string) bool {
	const quote = "put a text that begins with &, * or ! in quotes"
	switch {
	case n.Kind == yaml.AliasNode:
		b.report(n, key, "the alias *"+n.Value, "the value itself", "write the value out in both places; "+quote)
	case n.Anchor != "":
		b.report(n, key, "the anchor &"+n.Anchor, "a value without an anchor", "write the value out in both places; "+quote)
	case n.Style&yaml.TaggedStyle != 0 || n.Tag == "!":
		b.report(n, key, "the tag "+n.Tag, "a value without a tag", quote)
	default:
		return true
	}
	return false
}

// value binds one node to one Go value.
func (b *binder) value(n *yaml.Node, key string, f field, v reflect.Value, depth int) {
	b.doc.places[key] = place{n.Line, n.Column}
	if depth > maxDepth {
		b.report(n, key, "nesting that goes too deep", fmt.Sprintf("at most %d levels", maxDepth), "")
		return
	}
	if !b.plain(n, key) {
		return
	}
	if n.Kind == yaml.ScalarNode && IsMark(n.Value) {
		b.report(n, key, MarkFound, describe(f), "")
		return
	}
	if v.Kind() == reflect.Pointer {
		v.Set(reflect.New(v.Type().Elem()))
		v = v.Elem()
	}
	switch v.Kind() {
	case reflect.Struct:
		b.mapping(n, key, f, v, depth)
	case reflect.Slice:
		b.list(n, key, f, v, depth)
	default:
		b.scalar(n, key, f, v)
	}
}

func (b *binder) mapping(n *yaml.Node, key string, f field, v reflect.Value, depth int) {
	fields := fieldsOf(v.Type())
	if n.Kind != yaml.MappingNode {
		hint := ""
		if n.Kind == yaml.ScalarNode && strings.Contains(n.Value, ":") {
			hint = "a space follows the colon after a key"
		}
		b.report(n, key, kindOf(n), describe(f)+": "+keysOf(fields), hint)
		return
	}
	seen := map[string]bool{}
	for i := 0; i+1 < len(n.Content); i += 2 {
		name, inner := n.Content[i], n.Content[i+1]
		if !b.plain(name, key) {
			continue
		}
		at := join(key, name.Value)
		k := slices.IndexFunc(fields, func(f field) bool { return f.key == name.Value })
		switch {
		case name.Kind != yaml.ScalarNode:
			b.report(name, key, kindOf(name)+" as a key", "a name: "+keysOf(fields), "")
		case name.Tag == "!!merge":
			b.report(name, at, "a merge key", "the keys themselves", "write the keys out in both places")
		case k < 0:
			b.report(name, at, "the unknown key "+Quote(name.Value), "one of: "+keysOf(fields), nearKey(name.Value, fields))
		case seen[name.Value]:
			b.report(name, at, "the key "+Quote(name.Value)+" a second time", "each key once", "")
		default:
			seen[name.Value] = true
			b.value(inner, at, fields[k], v.FieldByIndex(fields[k].index), depth+1)
		}
	}
	for _, f := range fields {
		if !f.optional && !seen[f.key] {
			b.report(n, join(key, f.key), "no such key", describe(f), "")
		}
	}
}

func (b *binder) list(n *yaml.Node, key string, f field, v reflect.Value, depth int) {
	if n.Kind != yaml.SequenceNode {
		b.report(n, key, kindOf(n), describe(f), `a list is written [a, b], or one "- item" a line; an empty one is []`)
		return
	}
	if len(n.Content) < f.minItems {
		b.report(n, key, fmt.Sprintf("a list of %d", len(n.Content)), fmt.Sprintf("at least %d: %s", f.minItems, describe(f)), "")
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
		b.report(n, key, "nothing", describe(f), "take the key out if there is no value and it is optional; put the word null in quotes if it is meant")
		return
	}
	bare := n.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle|yaml.LiteralStyle|yaml.FoldedStyle) == 0
	if !bare && v.Kind() != reflect.String && f.family == nil {
		b.report(n, key, "the text "+Quote(n.Value), describe(f), "take the quotation marks away")
		return
	}
	switch v.Kind() {
	case reflect.String:
		b.text(n, key, f, v)
	case reflect.Bool:
		if n.Value != "true" && n.Value != "false" {
			b.report(n, key, Quote(n.Value), describe(f), "")
			return
		}
		v.SetBool(n.Value == "true")
	case reflect.Int:
		i, err := strconv.Atoi(n.Value)
		if err != nil || strconv.Itoa(i) != n.Value {
			b.report(n, key, Quote(n.Value), describe(f), units.NumberHint(n.Value))
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
	parse, hint := units.ParseNumber, units.NumberHint
	if f.family != nil {
		parse, hint = f.family.Parse, f.family.Hint
	}
	x, err := parse(n.Value)
	if err != nil {
		b.report(n, key, Quote(n.Value), describe(f), hint(n.Value))
		return
	}
	if b.inLimits(n, key, f, x) {
		v.SetFloat(x)
	}
}

func (b *binder) inLimits(n *yaml.Node, key string, f field, x float64) bool {
	if (f.min != nil && x < *f.min) || (f.max != nil && x > *f.max) || (f.above != nil && x <= *f.above) {
		b.report(n, key, Quote(n.Value), describe(f), "")
		return false
	}
	return true
}

func (b *binder) text(n *yaml.Node, key string, f field, v reflect.Value) {
	s, hint, ok := checkText(n.Value, f)
	if !ok {
		b.report(n, key, Quote(n.Value), describe(f), hint)
		return
	}
	v.SetString(s)
}

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
	case yaml.AliasNode:
		return "an alias"
	}
	if n.Tag == "!!null" {
		return "nothing"
	}
	return Quote(n.Value)
}
