// Package strictyaml reads YAML that people write into structs, strictly, and makes the JSON Schema of the same structs.
//
// Both come from struct tags, so that what is checked and what is published cannot part:
//
//	key:"name" or key:"name,optional"   the key in the file; fields without it are not bound
//	doc:"…"                             one line for people
//	enum:"a|b|c"                        the only accepted values
//	unit:"ng/mL"                        a quantity with its unit, kept in that base unit (package units)
//	min, max, above                     limits of a number, in the base unit
//	pattern:"…"  format:"rfc3339", "date" or "path"  minlen:"1"   of a text
//	minitems:"1"                        of a list
//
// Nothing is guessed: text stays as written (lot 007 stays 007), numbers are plain decimals, unknown and doubled keys,
// anchors, aliases, tags and second documents are refused, and every problem is reported with its place, all at once.
package strictyaml

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"regexp"
	"strconv"
	"strings"
	"unicode/utf8"

	"go.yaml.in/yaml/v4"
)

// MaxBytes is the largest file that is read.
const MaxBytes = 8 << 20

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
	return Problem{d.file, 1, 1, key, got, want, hint}
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
	if err := dec.Decode(&doc); errors.Is(err, io.EOF) || (err == nil && len(doc.Content) == 0) {
		return nil, &Problem{File: file, Line: 1, Column: 1, Got: "an empty file", Want: "keys and values"}
	} else if err != nil {
		return nil, syntaxProblem(file, err)
	}
	switch err := dec.Decode(&second); {
	case err == nil:
		return nil, &Problem{File: file, Line: second.Line, Column: 1, Got: "a second document", Want: "one document only", Hint: "take out the line ---"}
	case !errors.Is(err, io.EOF):
		return nil, syntaxProblem(file, err)
	}
	return doc.Content[0], nil
}

// lexical finds what YAML parsers report badly: text that is not UTF-8, and tabs in indentation.
func lexical(file string, data []byte) *Problem {
	if !utf8.Valid(data) {
		line := 1
		rest := data
		for len(rest) > 0 {
			r, n := utf8.DecodeRune(rest)
			if r == utf8.RuneError && n == 1 {
				break
			}
			if r == '\n' {
				line++
			}
			rest = rest[n:]
		}
		return &Problem{File: file, Line: line, Got: "text that is not UTF-8", Want: "UTF-8", Hint: "save the file again with the encoding UTF-8"}
	}
	for i, text := range bytes.Split(data, []byte("\n")) {
		lead := text[:len(text)-len(bytes.TrimLeft(text, " \t"))]
		if at := bytes.IndexByte(lead, '\t'); at >= 0 && len(bytes.TrimSpace(text)) > 0 {
			return &Problem{File: file, Line: i + 1, Column: at + 1, Got: "a tab in the indentation", Want: "spaces", Hint: "replace each tab by two spaces, and let the editor insert spaces"}
		}
	}
	return nil
}

var (
	inMessage = regexp.MustCompile(`line (\d+)(?:,? column (\d+))?`)
	prefixes  = regexp.MustCompile(`^(yaml|go-yaml)[^:]*: `)
)

// syntaxProblem turns a parser's error into a problem with its place.
func syntaxProblem(file string, err error) *Problem {
	text := strings.TrimSpace(prefixes.ReplaceAllString(strings.ReplaceAll(err.Error(), "\n", " "), ""))
	p := &Problem{File: file, Got: "text that is not YAML: " + text, Want: "keys and values, indented by spaces",
		Hint: "look at the line and the one before it: a missing colon, quote or space is the usual cause"}
	if m := inMessage.FindStringSubmatch(text); m != nil {
		p.Line, _ = strconv.Atoi(m[1])
		p.Column, _ = strconv.Atoi(m[2])
	}
	return p
}
