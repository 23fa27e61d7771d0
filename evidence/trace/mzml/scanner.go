package mzml

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"strings"

	"assaywrit/evidence/trace"
)

// A scanner walks through XML: start and end tags with their attributes, and the text between. It holds a window of the file that
// moves on, so that a large file needs little memory. It checks what a reader of evidence relies on: tags match, attributes are
// quoted and come once, text stands where numbers belong and nowhere else, nothing follows the root. Document types are refused,
// and with them entities that grow.
type scanner struct {
	name   string
	src    trace.Source
	data   []byte // the window
	base   int    // where the window begins in the file
	at     int    // in the window
	whole  bool   // the window reaches to the end of the file
	stack  []element
	attrs  []attribute
	latin1 bool // ISO-8859-1 instead of UTF-8
	done   bool // the root has ended

	recent    [256]string       // some of them, found without a search
	tentative bool              // inside a tag that is read again, with a larger window, where it fails
	emptied   bool              // the tag read last was an empty element: its end comes next
	names     map[string]string // short texts that come again and again, each once
	passText  bool              // the next text that counts is passed over: only its place is told
	runAt     int               // where the text told last begins in the file
	runBytes  int               // and how long it is
}

type element struct {
	name  string
	start int // of its tag, in the file
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
	maxNames      = 2000

	window  = 1 << 19 // bytes read at a time
	reserve = 1 << 15 // bytes in the window when a tag begins; a longer one is tried again with more
	maxTag  = 1 << 24
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
func newScanner(name string, src trace.Source) (*scanner, error) {
	s := &scanner{name: name, src: src, names: map[string]string{}}
	if src.Size() < 0 || src.Size() > maxFile {
		return nil, fmt.Errorf("%s: a size of %d bytes: want at most %d", name, src.Size(), int64(maxFile))
	}
	if err := s.reach(reserve); err != nil {
		return nil, err
	}
	if bytes.HasPrefix(s.data, byteOrderMark) {
		s.at = len(byteOrderMark)
	}
	if bytes.HasPrefix(s.data, []byte("\xff\xfe")) || bytes.HasPrefix(s.data, []byte("\xfe\xff")) {
		return nil, s.fail(0, "text in UTF-16", "UTF-8 or ISO-8859-1", "")
	}
	return s, s.declaration()
}

// reach moves the window on until n bytes from here are in it, or all that there are.
func (s *scanner) reach(n int) error {
	if s.whole || len(s.data)-s.at >= n {
		return nil
	}
	kept := copy(s.data, s.data[s.at:])
	s.base, s.at = s.base+s.at, 0
	size := int(s.src.Size()) - s.base
	if size > max(window, n) {
		size = max(window, n)
	} else {
		s.whole = true
	}
	if cap(s.data) < size {
		grown := make([]byte, size, max(size, min(2*cap(s.data), int(s.src.Size()))))
		copy(grown, s.data[:kept])
		s.data = grown
	}
	s.data = s.data[:size]
	k, err := s.src.ReadAt(s.data[kept:], int64(s.base+kept))
	if kept+k == size {
		return nil
	}
	if err == nil || err == io.EOF {
		err = io.ErrUnexpectedEOF
	}
	return fmt.Errorf("%s: %w", s.name, err)
}

// pos is where we are in the file.
func (s *scanner) pos() int { return s.base + s.at }

// fail is a refusal at a place in the file.
func (s *scanner) fail(at int, got, want, hint string) error {
	if s.tentative {
		return errShort
	}
	line, column, err := place(s.src, at, s.latin1)
	if err != nil {
		return fmt.Errorf("%s: %w", s.name, err)
	}
	return &trace.SyntaxError{File: s.name, Line: line, Column: column, Got: got, Want: want, Hint: hint}
}

// place counts the lines, and the characters in the last one, before a byte of the file.
func place(src trace.Source, at int, latin1 bool) (line, column int, err error) {
	line, column = 1, 1
	buf := make([]byte, min(window, at))
	for from := 0; from < at; from += len(buf) {
		buf = buf[:min(len(buf), at-from)]
		if n, err := src.ReadAt(buf, int64(from)); n < len(buf) {
			return 0, 0, err
		}
		rest := buf
		if from == 0 {
			rest = bytes.TrimPrefix(rest, byteOrderMark)
		}
		if i := bytes.LastIndexByte(rest, '\n'); i >= 0 {
			line += bytes.Count(rest, []byte("\n"))
			column, rest = 1, rest[i+1:]
		}
		for _, c := range rest {
			if latin1 || c&0xc0 != 0x80 { // in UTF-8 these bytes begin no character
				column++
			}
		}
	}
	return line, column, nil
}

// next returns the next event: the element's name for tags, the bytes of a text run. An empty element gives a start and an end.
// What it returns is valid until the next call.
func (s *scanner) next() (event, string, []byte, error) {
	if s.emptied {
		s.emptied = false
		return endTag, s.pop(), nil, nil
	}
	for {
		if err := s.reach(reserve); err != nil {
			return 0, "", nil, err
		}
		if s.at == len(s.data) {
			return s.atEnd()
		}
		if s.data[s.at] != '<' {
			run, counts, err := s.text()
			if err != nil {
				return 0, "", nil, err
			}
			if counts {
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
			return 0, "", nil, s.fail(s.pos(), fmt.Sprintf("%q", rest[:min(9, len(rest))]), "elements only", "document types, entities and literal sections are not read: they can hide what a file holds")
		default:
			return s.tag()
		}
	}
}

// errShort is a failure inside a tag that may only be longer than the window.
var errShort = errors.New("a tag beyond the window")

// tag reads a start or end tag. Where that fails it is tried again with more of the file, up to a limit.
func (s *scanner) tag() (event, string, []byte, error) {
	kind, read := startTag, s.startTag
	if bytes.HasPrefix(s.data[s.at:], []byte("</")) {
		kind, read = endTag, s.endTag
	}
	from := s.pos()
	for n := 4 * reserve; ; n *= 4 {
		s.tentative = !s.whole && n <= maxTag
		name, err := read()
		s.tentative = false
		if err != errShort {
			return kind, name, nil, err
		}
		s.at = from - s.base
		if err := s.reach(n); err != nil {
			return 0, "", nil, err
		}
	}
}

func (s *scanner) atEnd() (event, string, []byte, error) {
	if len(s.stack) > 0 {
		open := s.stack[len(s.stack)-1]
		return 0, "", nil, s.fail(open.start, fmt.Sprintf("the element %q, which has no end", open.name), fmt.Sprintf("</%s> before the file ends", open.name), cutHint)
	}
	if !s.done {
		return 0, "", nil, s.fail(0, "a file without an element", "mzML", "")
	}
	return endOfFile, "", nil, nil
}

// text passes the text up to the next tag. It counts inside the elements that hold some; elsewhere it must be blank.
func (s *scanner) text() (run []byte, counts bool, err error) {
	counts = len(s.stack) > 0 && withText[s.stack[len(s.stack)-1].name]
	if counts && !s.passText {
		return s.heldText()
	}
	s.passText = false
	s.runAt = s.pos()
	for {
		piece := s.data[s.at:]
		i := bytes.IndexByte(piece, '<')
		if i >= 0 {
			piece = piece[:i]
		}
		if !counts {
			if err := s.blank(piece); err != nil {
				return nil, false, err
			}
		}
		s.at += len(piece)
		s.runBytes = s.pos() - s.runAt
		if i >= 0 || s.whole {
			return nil, counts, nil
		}
		if err := s.reach(window); err != nil {
			return nil, false, err
		}
	}
}

// heldText has the whole text in the window.
func (s *scanner) heldText() ([]byte, bool, error) {
	from, seen := s.pos(), 0
	for {
		i := bytes.IndexByte(s.data[s.at+seen:], '<')
		if i < 0 && !s.whole {
			seen = len(s.data) - s.at
			if err := s.reach(seen + seen/2 + window); err != nil {
				return nil, false, err
			}
			continue
		}
		end := len(s.data)
		if i >= 0 {
			end = s.at + seen + i
		}
		run := s.data[s.at:end]
		if k := bytes.IndexByte(run, '&'); k >= 0 {
			return nil, false, s.fail(from+k, "an entity in the text", "digits or base64, which need none", cutHint)
		}
		s.at, s.runAt, s.runBytes = end, from, len(run)
		return run, true, nil
	}
}

// blank refuses text where there must be none.
func (s *scanner) blank(run []byte) error {
	for i, c := range run {
		if isSpace(c) {
			continue
		}
		shown := run[i:min(i+20, len(run))]
		if len(s.stack) == 0 {
			return s.fail(s.pos()+i, fmt.Sprintf("text outside the root element (%q)", shown), "nothing", cutHint)
		}
		return s.fail(s.pos()+i, fmt.Sprintf("text in the element %q (%q)", s.stack[len(s.stack)-1].name, shown), "elements only", cutHint)
	}
	return nil
}

// skip passes everything up to and with until.
func (s *scanner) skip(until string) error {
	from, begin := s.pos(), string(s.data[s.at:min(s.at+4, len(s.data))])
	for {
		if i := bytes.Index(s.data[s.at:], []byte(until)); i >= 0 {
			s.at += i + len(until)
			return nil
		}
		if s.whole {
			return s.fail(from, fmt.Sprintf("%q without its end", begin), until, cutHint)
		}
		s.at = len(s.data) - len(until) + 1
		if err := s.reach(window); err != nil {
			return err
		}
	}
}

// startTag reads a start tag with its attributes into s.attrs. The end of an empty element comes as the next event.
func (s *scanner) startTag() (string, error) {
	from := s.pos()
	if s.done {
		return "", s.fail(from, "a second root element", "the end of the file", cutHint)
	}
	if len(s.stack) >= maxDepth {
		return "", s.fail(from, "nesting that goes too deep", fmt.Sprintf("at most %d levels", maxDepth), "")
	}
	s.at++
	name, ok := s.word()
	if !ok {
		return "", s.fail(from, fmt.Sprintf("%q", s.data[s.at-1:min(s.at+11, len(s.data))]), "a tag", cutHint)
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
			return "", s.fail(s.pos(), fmt.Sprintf("%q in the tag %q", s.data[s.at:min(s.at+12, len(s.data))], name), "an attribute, or >", cutHint)
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
		return "", s.fail(s.base+from, "a tag that is cut", ">", cutHint)
	}
	name := bytes.TrimRight(s.data[from+2:from+i], " \t\r\n")
	if len(s.stack) == 0 || s.stack[len(s.stack)-1].name != string(name) {
		want := "no end tag"
		if len(s.stack) > 0 {
			want = "</" + s.stack[len(s.stack)-1].name + ">"
		}
		return "", s.fail(s.base+from, fmt.Sprintf("%q", s.data[from:from+min(i+1, 60)]), want, cutHint)
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

// word reads a name.
func (s *scanner) word() (string, bool) {
	from := s.at
	for s.at < len(s.data) && isName(s.data[s.at]) {
		s.at++
	}
	raw := s.data[from:s.at]
	if len(raw) == 0 || strings.IndexByte("0123456789-.", raw[0]) >= 0 {
		return "", false
	}
	return s.intern(raw), true
}

// intern gives the same string for the same bytes, so that a large file needs few.
func (s *scanner) intern(raw []byte) string {
	if len(raw) == 0 {
		return ""
	}
	slot := &s.recent[(int(raw[0])*7+int(raw[len(raw)-1])*31+len(raw)*5)%len(s.recent)]
	if *slot == string(raw) { // no memory is taken to compare
		return *slot
	}
	*slot = s.known(raw)
	return *slot
}

func (s *scanner) known(raw []byte) string {
	if text, seen := s.names[string(raw)]; seen {
		return text
	}
	text := string(raw)
	if len(s.names) < maxNames && len(text) <= 64 {
		s.names[text] = text
	}
	return text
}

func (s *scanner) spaces() bool {
	from := s.at
	for s.at < len(s.data) && isSpace(s.data[s.at]) {
		s.at++
	}
	return s.at > from
}
