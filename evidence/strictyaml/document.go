// Package strictyaml reads YAML that people write into structs, strictly, and makes the JSON Schema of the same structs.
//
// Both come from struct tags, so that what is checked and what is published cannot part:
//
//	key:"name" or key:"name,optional"   the key in the file; fields without it are not bound
//	doc:"…"                             one line for people
//	enum:"a|b|c"                        the only accepted values
//	unit:"ng/mL"                        a quantity with its unit, kept in that base unit (package units)
//	min, max, above                     limits of a number, in the base unit
//	pattern:"…"                         a regular expression for a text
//	format:"rfc3339", "date" or "path"  a time with its offset, a day, the path of a file below a folder
//	minlen:"1"                          of a text, in characters; a text that is not optional has at least one
//	minitems:"1"                        of a list
//
// Fields are string, bool, int, float64 (and types made from them), structs, pointers to and slices of these; the fields of an
// embedded struct without a key of its own count as the outer struct's.
//
// Nothing is guessed: text stays as written (lot 007 stays 007), numbers are plain decimals without quotes, unknown and doubled
// keys, empty values, anchors, aliases, merge keys, tags, second documents and characters that do not show are refused, and every
// problem is reported with its place, all at once. What Bind accepts, the schema accepts too; limits of quantities, days of the
// calendar and rules between keys are beyond the schema.
//
// A file may be begun with Mark in the place of what is still to be filled in; Template writes such a file.
package strictyaml

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"strings"

	"go.yaml.in/yaml/v4"
)

// MaxBytes is the largest file that is read.
const MaxBytes = 1 << 20

// A Document knows where each key of a file stands, for problems that are found later.
type Document struct {
	file   string
	places map[string]place
}

type place struct{ line, column int }

// Problem makes a problem at a key, given by its path, or at the nearest key above it that the file has.
func (d *Document) Problem(key, got, want, hint string) Problem {
	at := key
	for {
		if p, ok := d.places[at]; ok {
			return Problem{d.file, p.line, p.column, key, got, want, hint}
		}
		cut := strings.LastIndexAny(at, ".[")
		if cut < 0 {
			break
		}
		at = at[:cut]
	}
	p, ok := d.places[""]
	if !ok {
		p = place{1, 1}
	}
	return Problem{d.file, p.line, p.column, key, got, want, hint}
}

// parse gives the root node of the one document in data.
func parse(file string, data []byte) (*yaml.Node, *Problem) {
	if len(data) > MaxBytes {
		return nil, &Problem{File: file, Got: fmt.Sprintf("%d bytes", len(data)), Want: fmt.Sprintf("at most %d", MaxBytes)}
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	if p := lexical(file, data); p != nil {
		return nil, p
	}
	dec := yaml.NewDecoder(bytes.NewReader(data))
	var doc, second yaml.Node
	err := dec.Decode(&doc)
	switch {
	case errors.Is(err, io.EOF), err == nil && len(doc.Content) == 0:
		return nil, &Problem{File: file, Line: 1, Column: 1, Got: "an empty file", Want: "keys and values"}
	case err != nil:
		return nil, syntaxProblem(file, err)
	}
	switch err := dec.Decode(&second); {
	case err == nil:
		return nil, &Problem{File: file, Line: second.Line, Column: 1, Got: "a second document", Want: "one document only", Hint: "take out the line --- or ... between them"}
	case !errors.Is(err, io.EOF):
		return nil, syntaxProblem(file, err)
	}
	return doc.Content[0], nil
}
