package mzml

import (
	"bytes"
	"fmt"
	"strings"
	"unicode/utf8"

	"assaywrit/evidence/trace"
)

// A scanner walks through XML in memory: start and end tags with their attributes, and the text between. It checks what a
// reader of evidence relies on: tags match, attributes are quoted and come once, text stands where numbers belong and nowhere
// else, nothing follows the root. Document types are refused, and with them entities that grow.
type scanner struct {
	name   string
	data   []byte
	at     int
	stack  []element
	attrs  []attribute
	latin1 bool // ISO-8859-1 instead of UTF-8
	done   bool // the root has ended

	emptied bool              // the tag read last was an empty element: its end comes next
	names   map[string]string // each name of a tag or attribute once
}

type element struct {
	name  string
	start int // of its tag
}

// kinds of events.
type event int

const (
	endOfFile event = iota
	startTag
	endTag
	textRun
)

const (
	maxDepth      = 64 // levels of elements; mzML has 12
	maxAttributes = 64 // of one tag; mzML has 12
	maxNames      = 1000
)

// Hints that several refusals share.
const (
	cutHint    = "the file seems to be cut or damaged: export it again, and compare its SHA-256 with that of the instrument's copy"
	exportHint = "points must be whole and in acquisition order: export the run again and compare its SHA-256"
)

// withText are the elements whose text counts; elsewhere there is only blank space.
var withText = map[string]bool{"binary": true, "offset": true, "indexListOffset": true, "fileChecksum": true}

var byteOrderMark = []byte("\xef\xbb\xbf")

// newScanner begins a file: the byte-order mark is skipped and the XML declaration read.
func newScanner(name string, data []byte) (*scanner, error) {
	s := &scanner{name: name, data: data, names: map[string]string{}}
	if bytes.HasPrefix(data, byteOrderMark) {
		s.at = len(byteOrderMark)
	}
	if bytes.HasPrefix(data, []byte("\xff\xfe")) || bytes.HasPrefix(data, []byte("\xfe\xff")) {
		return nil, s.fail(0, "text in UTF-16", "UTF-8 or ISO-8859-1", "")
	}
	return s, s.declaration()
}

// fail is a refusal at a place in the file.
func (s *scanner) fail(at int, got, want, hint string) error {
	start := bytes.LastIndexByte(s.data[:at], '\n') + 1
	before := s.data[start:at]
	if start == 0 {
		before = bytes.TrimPrefix(before, byteOrderMark)
	}
	column := 1 + len(before)
	if !s.latin1 {
		column = 1 + utf8.RuneCount(before)
	}
	line := 1 + bytes.Count(s.data[:at], []byte("\n"))
	return &trace.SyntaxError{File: s.name, Line: line, Column: column, Got: got, Want: want, Hint: hint}
}

// next returns the next event: the element's name for tags, the bytes of a text run. An empty element gives a start and an end.
func (s *scanner) next() (event, string, []byte, error) {
	if s.emptied {
		s.emptied = false
		return endTag, s.pop(), nil, nil
	}
	for s.at < len(s.data) {
		if s.data[s.at] != '<' {
			run, err := s.text()
			if err != nil {
				return 0, "", nil, err
			}
			if run != nil {
				return textRun, s.stack[len(s.stack)-1].name, run, nil
			}
			continue
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
			return 0, "", nil, s.fail(s.at, fmt.Sprintf("%q", rest[:min(9, len(rest))]), "elements only", "document types, entities and literal sections are not read: they can hide what a file holds")
		case bytes.HasPrefix(rest, []byte("</")):
			name, err := s.endTag()
			return endTag, name, nil, err
		default:
			name, err := s.startTag()
			return startTag, name, nil, err
		}
	}
	if len(s.stack) > 0 {
		open := s.stack[len(s.stack)-1]
		return 0, "", nil, s.fail(open.start, fmt.Sprintf("the element %q, which has no end", open.name), fmt.Sprintf("</%s> before the file ends", open.name), cutHint)
	}
	if !s.done {
		return 0, "", nil, s.fail(0, "a file without an element", "mzML", "")
	}
	return endOfFile, "", nil, nil
}

// text passes the text up to the next tag. It returns nothing for the blank space between elements.
func (s *scanner) text() ([]byte, error) {
	from, run := s.at, s.data[s.at:]
	if i := bytes.IndexByte(run, '<'); i >= 0 {
		run = run[:i]
	}
	s.at += len(run)
	counts := len(s.stack) > 0 && withText[s.stack[len(s.stack)-1].name]
	if i := bytes.IndexByte(run, '&'); counts && i >= 0 {
		return nil, s.fail(from+i, "an entity in the text", "digits or base64, which need none", cutHint)
	}
	if counts {
		return run, nil
	}
	for i, c := range run {
		if isSpace(c) {
			continue
		}
		shown := run[i:min(i+20, len(run))]
		if len(s.stack) == 0 {
			return nil, s.fail(from+i, fmt.Sprintf("text outside the root element (%q)", shown), "nothing", cutHint)
		}
		return nil, s.fail(from+i, fmt.Sprintf("text in the element %q (%q)", s.stack[len(s.stack)-1].name, shown), "elements only", cutHint)
	}
	return nil, nil
}

func (s *scanner) skip(until string) error {
	i := bytes.Index(s.data[s.at:], []byte(until))
	if i < 0 {
		return s.fail(s.at, fmt.Sprintf("%q without its end", s.data[s.at:min(s.at+4, len(s.data))]), until, cutHint)
	}
	s.at += i + len(until)
	return nil
}

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
	name, ok := s.word()
	if !ok {
		return "", s.fail(from, fmt.Sprintf("%q", s.data[from:min(from+12, len(s.data))]), "a tag", cutHint)
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
			s.at += 2
			s.stack = append(s.stack, element{name, from})
			s.emptied = true
			return name, nil
		case !spaced || !isName(c):
			return "", s.fail(s.at, fmt.Sprintf("%q in the tag %q", s.data[s.at:min(s.at+12, len(s.data))], name), "an attribute, or >", cutHint)
		}
		if err := s.attribute(name); err != nil {
			return "", err
		}
	}
}

func (s *scanner) endTag() (string, error) {
	from := s.at
	i := bytes.IndexByte(s.data[from:], '>')
	if i < 0 {
		return "", s.fail(from, "a tag that is cut", ">", cutHint)
	}
	name := bytes.TrimRight(s.data[from+2:from+i], " \t\r\n")
	if len(s.stack) == 0 || s.stack[len(s.stack)-1].name != string(name) {
		want := "no end tag"
		if len(s.stack) > 0 {
			want = "</" + s.stack[len(s.stack)-1].name + ">"
		}
		return "", s.fail(from, fmt.Sprintf("%q", s.data[from:from+min(i+1, 60)]), want, cutHint)
	}
	s.at += i + 1
	return s.pop(), nil
}

func (s *scanner) pop() string {
	name := s.stack[len(s.stack)-1].name
	s.stack = s.stack[:len(s.stack)-1]
	s.done = len(s.stack) == 0
	return name
}

func isSpace(c byte) bool { return c == ' ' || c == '\t' || c == '\n' || c == '\r' }

// isName tells whether c may stand in a name. mzML's own names are ASCII.
func isName(c byte) bool {
	return c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c >= '0' && c <= '9' || c == ':' || c == '_' || c == '-' || c == '.'
}

// word reads a name. The same name gives the same string, so that a large file needs few.
func (s *scanner) word() (string, bool) {
	from := s.at
	for s.at < len(s.data) && isName(s.data[s.at]) {
		s.at++
	}
	raw := s.data[from:s.at]
	if len(raw) == 0 || strings.IndexByte("0123456789-.", raw[0]) >= 0 {
		return "", false
	}
	if name, seen := s.names[string(raw)]; seen {
		return name, true
	}
	name := string(raw)
	if len(s.names) < maxNames {
		s.names[name] = name
	}
	return name, true
}

func (s *scanner) spaces() bool {
	from := s.at
	for s.at < len(s.data) && isSpace(s.data[s.at]) {
		s.at++
	}
	return s.at > from
}
