package strictyaml

import (
	"fmt"
	"reflect"
	"regexp"
	"slices"
	"strconv"
	"strings"
)

// A Template is what is known of a file that is still to be filled in. Places are given by their key paths, as problems have them,
// such as custody[2].at.
type Template struct {
	Head   []string            // comment lines above everything
	Values map[string]any      // string, int or float64, by the path of a scalar; Mark for an optional one that is wanted
	Lists  map[string]int      // number of items, by the path of a list
	Notes  map[string][]string // comment lines above a key or an item, by its path
}

// Write returns a file with the keys of a struct in their order, and the number of marks in it. A value that is not known is the
// mark, with what is wanted in a comment beside it. A list without a number of items has the least that it needs; one that may be
// empty is a mark too, as leaving it empty says something. Optional keys of which nothing is known are comments, in the first item
// of a list alone. What Bind finds wrong with the file are the marks, each once.
func (t Template) Write(of any) ([]byte, int) {
	w := &templateWriter{Template: t}
	for _, line := range t.Head {
		w.comment("", line)
	}
	w.fields(reflect.TypeOf(of), "", "", true)
	return []byte(strings.Join(w.lines, "\n") + "\n"), w.marks
}

type templateWriter struct {
	Template
	lines  []string
	marks  int
	asNote bool // inside of an optional block that becomes a comment
}

// line adds a line with what is wanted beside it.
func (w *templateWriter) line(text, beside string) {
	if beside != "" {
		text += "  # " + shown(beside)
	}
	w.lines = append(w.lines, text)
}

func (w *templateWriter) comment(indent, text string) {
	w.lines = append(w.lines, strings.TrimRight(indent+"# "+shown(text), " "))
}

// shown takes characters away that may not stand in a file, not even in a comment.
func shown(text string) string {
	return strings.Map(func(r rune) rune {
		if r == '\n' || hidden(r) {
			return '?'
		}
		return r
	}, text)
}

// known tells whether anything is known at a path or below it.
func (w *templateWriter) known(path string) bool {
	at := func(key string) bool {
		rest, ok := strings.CutPrefix(key, path)
		return ok && (rest == "" || rest[0] == '.' || rest[0] == '[')
	}
	for key := range w.Values {
		if at(key) {
			return true
		}
	}
	for key := range w.Lists {
		if at(key) {
			return true
		}
	}
	return false
}

// fields writes the keys of a struct. first tells that no list above it is past its first item.
func (w *templateWriter) fields(t reflect.Type, path, indent string, first bool) {
	fields := fieldsOf(t)
	// A block that is a comment shows what it needs; one that needs nothing shows what it may have.
	needsNone := w.asNote && !slices.ContainsFunc(fields, func(f field) bool { return !f.optional })
	for _, f := range fields {
		at := join(path, f.key)
		for _, note := range w.Notes[at] {
			w.comment(indent, note)
		}
		switch {
		case !f.optional || needsNone || w.known(at):
			w.field(f, at, indent, first)
		case first && !w.asNote:
			w.optional(indent, func() { w.field(f, at, indent, first) })
		}
	}
}

// optional writes a block as comments: without the sign, its lines stand where they belong.
func (w *templateWriter) optional(indent string, block func()) {
	from, marks := len(w.lines), w.marks
	w.asNote = true
	block()
	w.asNote, w.marks = false, marks
	for i, line := range w.lines[from:] {
		w.lines[from+i] = indent + "# " + strings.TrimPrefix(line, indent)
	}
}

func (w *templateWriter) field(f field, path, indent string, first bool) {
	head := indent + f.key + ":"
	t := f.typ
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	switch {
	case t.Kind() == reflect.Slice:
		w.list(f, t, path, indent, first)
	case t.Kind() == reflect.Struct:
		if flow, ok := w.flow(t, path); ok {
			w.line(head+" "+flow, "")
			return
		}
		w.line(head, f.doc)
		w.fields(t, path, indent+"  ", first)
	default:
		w.scalar(head, f, path)
	}
}

func (w *templateWriter) list(f field, t reflect.Type, path, indent string, first bool) {
	head := indent + f.key + ":"
	n, counted := w.Lists[path]
	if !counted {
		n = f.minItems
	}
	if w.asNote {
		n = max(n, 1)
	}
	item := f
	item.typ = t.Elem()
	switch {
	case n > 0:
		w.line(head, f.doc)
	case counted:
		w.line(head+" []", f.doc)
	default:
		w.scalar(head, f, path)
		w.optional(indent+"  ", func() { w.item(item, path+"[0]", indent+"  ", true) })
	}
	for i := range n {
		w.item(item, fmt.Sprintf("%s[%d]", path, i), indent+"  ", first && i == 0)
	}
}

// item writes one item of a list, behind its hyphen.
func (w *templateWriter) item(f field, path, indent string, first bool) {
	for _, note := range w.Notes[path] {
		w.comment(indent, note)
	}
	if f.typ.Kind() != reflect.Struct {
		w.scalar(indent+"-", f, path)
		return
	}
	if flow, ok := w.flow(f.typ, path); ok {
		w.line(indent+"- "+flow, "")
		return
	}
	from := len(w.lines)
	w.fields(f.typ, path, indent+"  ", first)
	for i := from; i < len(w.lines); i++ {
		if rest := strings.TrimPrefix(w.lines[i], indent+"  "); !strings.HasPrefix(rest, "#") {
			// The hyphen stands before the first key; comments above that one go above the hyphen.
			w.lines[i] = indent + "- " + rest
			return
		}
	}
}

// scalar writes a value, or the mark and what is wanted in its place.
func (w *templateWriter) scalar(head string, f field, path string) {
	v, ok := w.Values[path]
	if !ok || v == Mark {
		w.marks++
		w.line(head+" "+Mark, describe(f))
		return
	}
	w.line(head+" "+scalarText(v), "")
}

// flow writes a struct on one line, where all that it needs is known and no mark stands in it.
func (w *templateWriter) flow(t reflect.Type, path string) (string, bool) {
	var parts []string
	for _, f := range fieldsOf(t) {
		at := join(path, f.key)
		v, ok := w.Values[at]
		switch {
		case ok && v != Mark:
			parts = append(parts, f.key+": "+scalarText(v))
		case ok || !f.optional || w.known(at):
			return "", false
		}
	}
	return "{" + strings.Join(parts, ", ") + "}", len(parts) > 0
}

// plainText needs no quotation marks, wherever it stands.
var plainText = regexp.MustCompile(`^[A-Za-z][A-Za-z0-9._/-]*$`)

func scalarText(v any) string {
	switch v := v.(type) {
	case int:
		return strconv.Itoa(v)
	case float64:
		return strconv.FormatFloat(v, 'f', -1, 64)
	case string:
		if plainText.MatchString(v) && !slices.Contains([]string{"null", "true", "false"}, strings.ToLower(v)) {
			return v
		}
		return strconv.Quote(v)
	}
	panic(fmt.Sprintf("strictyaml: internal error: a value of type %T in a template", v))
}
