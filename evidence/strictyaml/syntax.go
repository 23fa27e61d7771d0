package strictyaml

import (
	"bytes"
	"errors"
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"go.yaml.in/yaml/v4"
)

// lexical finds what YAML parsers report badly or not at all: text that is not UTF-8, characters that do not show, and tabs in
// indentation.
func lexical(file string, data []byte) *Problem {
	line, column, lead := 1, 1, true
	for i := 0; i < len(data); {
		r, n := utf8.DecodeRune(data[i:])
		switch {
		case r == utf8.RuneError && n == 1:
			return &Problem{File: file, Line: line, Column: column, Got: fmt.Sprintf("the byte %#02x, which is not UTF-8", data[i]), Want: "text in UTF-8",
				Hint: "save the file again with the encoding UTF-8"}
		case r == '\n' || r == '\r' && !bytes.HasPrefix(data[i+1:], []byte("\n")):
			line, column, lead, i = line+1, 1, true, i+n
			continue
		case r == '\t' && lead && !blankLine(data[i:]):
			return &Problem{File: file, Line: line, Column: column, Got: "a tab in the indentation", Want: "spaces",
				Hint: "replace each tab by two spaces, and let the editor insert spaces"}
		case r != '\t' && r != '\r' && hidden(r):
			return &Problem{File: file, Line: line, Column: column, Got: fmt.Sprintf("the character %U, which does not show or stands for one that was lost", r), Want: "text that shows as it is",
				Hint: "type the line again by hand"}
		}
		lead = lead && (r == ' ' || r == '\t')
		column, i = column+1, i+n
	}
	return nil
}

func blankLine(data []byte) bool {
	if end := bytes.IndexAny(data, "\r\n"); end >= 0 {
		data = data[:end]
	}
	return len(bytes.TrimSpace(data)) == 0
}

// hidden tells of characters that change what a reader sees without being seen: controls, line separators, marks that turn the
// direction of writing, zero-width ones, the byte-order mark, the mark of a lost character, and what is no character at all.
func hidden(r rune) bool {
	switch {
	case unicode.IsControl(r) && r != '\n', r == '\u2028', r == '\u2029', unicode.Is(unicode.Bidi_Control, r):
		return true
	case r == '\u200b', r == '\u2060', r == '\ufeff', r == utf8.RuneError, unicode.Is(unicode.Noncharacter_Code_Point, r):
		return true
	}
	return false
}

// Hidden tells whether a text holds a character that does not show; line feeds are not counted.
func Hidden(text string) bool { return strings.ContainsFunc(text, hidden) }

// advice for what the parser says, by words in its message.
var advice = []struct{ words, hint string }{
	{"mapping values are not allowed", `put a value that holds ": " in quotes; or the line is indented further than the one above`},
	{"unexpected end of stream", "a quotation mark is opened and not closed"},
	{"did not find expected ',' or", "a bracket is opened and not closed, or a comma is missing"},
	{"did not find expected '-' indicator", "every item of the list begins with - in the same column"},
	{"did not find expected key", "the keys that belong together begin in the same column; nothing follows a closing quotation mark"},
	{"cannot start any token", "put a value that begins with @, ` or % in quotes"},
	{"block sequence entries are not allowed", "a list begins on the line below its key, each item after -"},
	{"unknown anchor", "put a value that begins with * in quotes"},
	{"escape", `in double quotes \ has a meaning of its own: use single quotes, or /`},
	{"could not find expected ':'", "a colon and a space follow each key"},
	{"tab character", "use spaces, not tabs"},
	{"directive", "take out the line that begins with %"},
	{"incompatible YAML document", "take out the line that begins with %"},
}

// syntaxProblem turns a parser's error into a problem with its place.
func syntaxProblem(file string, err error) *Problem {
	p := &Problem{File: file, Want: "keys and values, indented by spaces",
		Hint: "look at the line and the one before it: a missing colon, quotation mark or space is the usual cause"}
	text := err.Error()
	var load *yaml.LoadError
	if errors.As(err, &load) {
		text, p.Line, p.Column = load.Message, load.Mark.Line, load.Mark.Column
		begins := strings.Contains(text, "unexpected end of stream") || strings.Contains(text, "could not find expected ':'")
		if begins && load.ContextMark.Line > 0 {
			p.Line, p.Column = load.ContextMark.Line, load.ContextMark.Column // where the quotation mark, or the key, stands
		}
	}
	text = strings.Join(strings.Fields(text), " ")
	p.Got = "text that is not YAML (" + text + ")"
	for _, a := range advice {
		if strings.Contains(text, a.words) {
			p.Hint = a.hint
			break
		}
	}
	return p
}
