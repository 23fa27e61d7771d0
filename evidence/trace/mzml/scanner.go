package mzml

import (
	"bytes"
	"fmt"
	"strconv"
	"strings"
	"unicode/utf8"

	"assaywrit/evidence/trace"
)

// A scanner walks through XML in memory: start and end tags with their attributes, and the text between. It checks what a
// reader of evidence relies on: tags match, attributes are quoted and come once, nothing follows the root. Document types are
// refused, and with them entities that grow.
type scanner struct {
	name  string
	data  []byte
	at    int
	stack []element
	attrs []attribute
	done  bool // the root has ended

	emptied bool // the tag read last was an empty element: its end comes next
}

type element struct {
	name  string
	start int // of its tag
}

type attribute struct{ name, value string }

// kinds of events.
type event int

const (
	endOfFile event = iota
	startTag
	endTag
	textRun
)

// fail is a refusal at a place in the file.
func (s *scanner) fail(at int, got, want, hint string) error {
	line := 1 + bytes.Count(s.data[:at], []byte("\n"))
	column := 1 + utf8.RuneCount(s.data[bytes.LastIndexByte(s.data[:at], '\n')+1:at])
	return &trace.SyntaxError{File: s.name, Line: line, Column: column, Got: got, Want: want, Hint: hint}
}

const cutHint = "the file seems to be cut or damaged: export it again, and compare its SHA-256 with that of the instrument's copy"

// next returns the next event: the element's name for tags, the bytes of a text run. An empty element gives a start and an end.
func (s *scanner) next() (event, string, []byte, error) {
	if s.emptied {
		s.emptied = false
		name := s.stack[len(s.stack)-1].name
		s.pop()
		return endTag, name, nil, nil
	}
	for {
		if s.at >= len(s.data) {
			if len(s.stack) > 0 {
				open := s.stack[len(s.stack)-1]
				return 0, "", nil, s.fail(open.start, fmt.Sprintf("the element %q, which has no end", open.name), fmt.Sprintf("</%s> before the file ends", open.name), cutHint)
			}
			if !s.done {
				return 0, "", nil, s.fail(0, "a file without an element", "mzML", "")
			}
			return endOfFile, "", nil, nil
		}
		if s.data[s.at] != '<' {
			run := s.data[s.at:]
			if i := bytes.IndexByte(run, '<'); i >= 0 {
				run = run[:i]
			}
			from := s.at
			s.at += len(run)
			if len(s.stack) == 0 {
				if blank := bytes.TrimSpace(bytes.TrimPrefix(run, []byte("\xef\xbb\xbf"))); len(blank) > 0 {
					return 0, "", nil, s.fail(from, fmt.Sprintf("text outside the root element (%.20q)", blank), "nothing", cutHint)
				}
				continue
			}
			return textRun, "", run, nil
		}
		switch rest := s.data[s.at:]; {
		case bytes.HasPrefix(rest, []byte("<?")):
			if err := s.skip("?>"); err != nil {
				return 0, "", nil, err
			}
		case bytes.HasPrefix(rest, []byte("<!--")):
			if err := s.skip("-->"); err != nil {
				return 0, "", nil, err
			}
		case bytes.HasPrefix(rest, []byte("<!")):
			return 0, "", nil, s.fail(s.at, fmt.Sprintf("%.12q", rest), "elements only", "document types and entities are not read: they can hide what a file holds")
		case bytes.HasPrefix(rest, []byte("</")):
			name, err := s.endTag()
			return endTag, name, nil, err
		default:
			name, err := s.startTag()
			return startTag, name, nil, err
		}
	}
}

func (s *scanner) skip(until string) error {
	i := bytes.Index(s.data[s.at:], []byte(until))
	if i < 0 {
		return s.fail(s.at, fmt.Sprintf("%.12q without its end", s.data[s.at:]), until, cutHint)
	}
	s.at += i + len(until)
	return nil
}

func (s *scanner) endTag() (string, error) {
	from := s.at
	i := bytes.IndexByte(s.data[s.at:], '>')
	if i < 0 {
		return "", s.fail(from, "a tag that is cut", ">", cutHint)
	}
	name := strings.TrimRight(string(s.data[s.at+2:s.at+i]), " \t\r\n")
	if len(s.stack) == 0 || s.stack[len(s.stack)-1].name != name {
		want := "no end tag"
		if len(s.stack) > 0 {
			want = "</" + s.stack[len(s.stack)-1].name + ">"
		}
		return "", s.fail(from, fmt.Sprintf("</%.40s>", name), want, cutHint)
	}
	s.pop()
	s.at += i + 1
	return name, nil
}

func (s *scanner) pop() {
	s.stack = s.stack[:len(s.stack)-1]
	s.done = len(s.stack) == 0
}

func isSpace(c byte) bool { return c == ' ' || c == '\t' || c == '\n' || c == '\r' }

func isName(c byte) bool {
	return c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c >= '0' && c <= '9' || c == ':' || c == '_' || c == '-' || c == '.' || c >= 0x80
}

const maxDepth = 64

// startTag reads a start tag with its attributes into s.attrs. The end of an empty element comes as the next event.
func (s *scanner) startTag() (string, error) {
	from := s.at
	if s.done {
		return "", s.fail(from, "a second root element", "the end of the file", cutHint)
	}
	if len(s.stack) >= maxDepth {
		return "", s.fail(from, "nesting that goes too deep", fmt.Sprintf("at most %d levels", maxDepth), "")
	}
	s.at++
	name := s.word()
	if name == "" {
		return "", s.fail(from, fmt.Sprintf("%.12q", s.data[from:]), "a tag", cutHint)
	}
	s.attrs = s.attrs[:0]
	for {
		spaced := s.spaces()
		if s.at >= len(s.data) {
			return "", s.fail(from, fmt.Sprintf("the tag %q, which is cut", name), ">", cutHint)
		}
		switch c := s.data[s.at]; {
		case c == '>':
			s.at++
			s.stack = append(s.stack, element{name, from})
			return name, nil
		case c == '/' && s.at+1 < len(s.data) && s.data[s.at+1] == '>':
			s.stack = append(s.stack, element{name, from})
			s.at += 2
			s.emptied = true
			return name, nil
		case !spaced || !isName(c):
			return "", s.fail(s.at, fmt.Sprintf("%.12q in the tag %q", s.data[s.at:], name), "an attribute, or >", cutHint)
		}
		if err := s.attribute(name); err != nil {
			return "", err
		}
	}
}

func (s *scanner) word() string {
	from := s.at
	for s.at < len(s.data) && isName(s.data[s.at]) {
		s.at++
	}
	return string(s.data[from:s.at])
}

func (s *scanner) spaces() bool {
	from := s.at
	for s.at < len(s.data) && isSpace(s.data[s.at]) {
		s.at++
	}
	return s.at > from
}

func (s *scanner) attribute(element string) error {
	from := s.at
	key := s.word()
	s.spaces()
	if s.at >= len(s.data) || s.data[s.at] != '=' {
		return s.fail(from, fmt.Sprintf("the attribute %q without a value", key), "a quoted value", cutHint)
	}
	s.at++
	s.spaces()
	if s.at >= len(s.data) || s.data[s.at] != '"' && s.data[s.at] != '\'' {
		return s.fail(from, fmt.Sprintf("the attribute %q without quotes", key), "a quoted value", cutHint)
	}
	quote := s.data[s.at]
	s.at++
	i := bytes.IndexByte(s.data[s.at:], quote)
	if i < 0 {
		return s.fail(from, fmt.Sprintf("the attribute %q, which is cut", key), "its closing quote", cutHint)
	}
	raw := s.data[s.at : s.at+i]
	s.at += i + 1
	if bytes.IndexByte(raw, '<') >= 0 {
		return s.fail(from, fmt.Sprintf("< in the attribute %q", key), "&lt;", cutHint)
	}
	for _, a := range s.attrs {
		if a.name == key {
			return s.fail(from, fmt.Sprintf("the attribute %q a second time in %q", key, element), "each once", "")
		}
	}
	value, ok := unescape(raw)
	if !ok {
		return s.fail(from, fmt.Sprintf("an unknown entity or bad text in the attribute %q", key), "&amp; &lt; &gt; &quot; &apos; or a character number", "")
	}
	s.attrs = append(s.attrs, attribute{key, value})
	return nil
}

// unescape replaces the five predefined entities and character numbers; there are no others without a document type.
func unescape(raw []byte) (string, bool) {
	if bytes.IndexByte(raw, '&') < 0 {
		return string(raw), utf8.Valid(raw)
	}
	var b strings.Builder
	text := string(raw)
	for {
		before, after, found := strings.Cut(text, "&")
		b.WriteString(before)
		if !found {
			return b.String(), utf8.ValidString(b.String())
		}
		entity, rest, closed := strings.Cut(after, ";")
		r, ok := entityRune(entity)
		if !closed || !ok {
			return "", false
		}
		b.WriteRune(r)
		text = rest
	}
}

func entityRune(entity string) (rune, bool) {
	switch entity {
	case "amp":
		return '&', true
	case "lt":
		return '<', true
	case "gt":
		return '>', true
	case "quot":
		return '"', true
	case "apos":
		return '\'', true
	}
	digits, base := strings.TrimPrefix(entity, "#"), 10
	if digits == entity {
		return 0, false
	}
	if hex := strings.TrimPrefix(digits, "x"); hex != digits {
		digits, base = hex, 16
	}
	n, err := strconv.ParseUint(digits, base, 21)
	return rune(n), err == nil && utf8.ValidRune(rune(n))
}

// attr returns an attribute of the start tag read last, or "".
func (s *scanner) attr(name string) string {
	for _, a := range s.attrs {
		if a.name == name {
			return a.value
		}
	}
	return ""
}

func (s *scanner) has(name string) bool {
	for _, a := range s.attrs {
		if a.name == name {
			return true
		}
	}
	return false
}
