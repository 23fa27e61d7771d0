package jcamp

import (
	"bytes"
	"strings"
	"unicode/utf8"
)

var (
	byteOrderMark = []byte("\xef\xbb\xbf")
	comment       = []byte("$$")
)

// Lines are cut out of the bytes of a file. They end with LF, CR LF or CR, also mixed.
type lines struct {
	data   []byte
	at     int // of the line that comes next
	number int // of the line that comes next, counted from 1
	feed   int // of the next LF at or after at, or len(data)
}

// newLines begins at an offset, which is in the line with the number given.
func newLines(data []byte, at, number int) lines {
	l := lines{data: data, at: at, number: number, feed: -1}
	return l
}

// more tells whether there is another line.
func (l *lines) more() bool { return l.at < len(l.data) }

// next returns the next line, without its end. ended is false for a last line without an end.
func (l *lines) next() (line []byte, ended bool) {
	if l.feed < l.at { // looked for once for many lines that end in CR
		l.feed = len(l.data)
		if i := bytes.IndexByte(l.data[l.at:], '\n'); i >= 0 {
			l.feed = l.at + i
		}
	}
	l.number++
	line = l.data[l.at:l.feed]
	if i := bytes.IndexByte(line, '\r'); i >= 0 {
		line = line[:i]
		l.at += i + 1
		if l.at == l.feed && l.feed < len(l.data) {
			l.at++
		}
		return line, true
	}
	l.at = min(l.feed+1, len(l.data))
	return line, l.feed < len(l.data)
}

// startsRecord tells whether a line begins a labelled data record.
func startsRecord(line []byte) bool {
	i := 0
	for i < len(line) && blank(line[i]) {
		i++
	}
	return i+1 < len(line) && line[i] == '#' && line[i+1] == '#'
}

// upToRecord moves l to the line that begins the next record and returns where that is, or where the data end. ended tells whether the last
// line before it has an end.
func (l *lines) upToRecord() (end int, ended bool) {
	ended = true
	for l.more() {
		before := *l
		var line []byte
		if line, ended = l.next(); startsRecord(line) {
			*l = before
			return l.at, true
		}
	}
	return l.at, ended
}

func blank(c byte) bool { return c == ' ' || c == '\t' || c == '\v' || c == '\f' }

// uncommented drops a comment and blank space at the end of a line.
func uncommented(line []byte) []byte {
	if i := bytes.Index(line, comment); i >= 0 {
		line = line[:i]
	}
	for len(line) > 0 && blank(line[len(line)-1]) {
		line = line[:len(line)-1]
	}
	return line
}

// beginning skips a byte-order mark, blank space and comments. It returns the offset of what follows and its line.
func beginning(data []byte) (at, line int) {
	l := newLines(data, 0, 1)
	if bytes.HasPrefix(data, byteOrderMark) {
		l.at = len(byteOrderMark)
	}
	for l.more() {
		at, line = l.at, l.number
		text, _ := l.next()
		for i, c := range text {
			if blank(c) {
				continue
			}
			if bytes.HasPrefix(text[i:], comment) {
				break
			}
			return at + i, line
		}
	}
	return len(data), l.number
}

// text is a value without its comments and outer blank space, in UTF-8. Its lines are joined by LF. latin1 tells that the file is in
// ISO 8859-1.
func text(value []byte, latin1 bool) string {
	var b strings.Builder
	l := newLines(value, 0, 1)
	for l.more() {
		line, _ := l.next()
		line = bytes.TrimSpace(uncommented(line))
		if len(line) == 0 {
			continue
		}
		if b.Len() > 0 {
			b.WriteByte('\n')
		}
		if !latin1 {
			b.Write(line)
			continue
		}
		for _, c := range line {
			b.WriteRune(rune(c))
		}
	}
	return b.String()
}

// column is the character of a line at which byte i stands, counted from 1.
func column(line []byte, i int) int { return utf8.RuneCount(line[:i]) + 1 }
