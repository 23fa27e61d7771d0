package draft

import (
	"bytes"
	"regexp"
	"strings"
)

var number = regexp.MustCompile(`^[+-]?(\d+([.,]\d*)?|[.,]\d+)([eE][+-]?\d+)?$`)

// tableRows is how many rows of numbers in a row make a text a table.
const tableRows = 3

// Delimited tells whether the beginning of a file looks like delimited text with numbers: three lines in a row with the same number of
// fields, two of them numbers at least, separated by tab, semicolon, comma or blanks. What the columns are it does not tell.
func Delimited(head []byte) bool {
	if bytes.HasPrefix(head, []byte{0xff, 0xfe}) || bytes.HasPrefix(head, []byte{0xfe, 0xff}) {
		head = bytes.ReplaceAll(head[2:], []byte{0}, nil) // UTF-16; digits and separators have a zero byte each
	}
	if bytes.IndexByte(head, 0) >= 0 {
		return false
	}
	lines := strings.FieldsFunc(string(head), func(r rune) bool { return r == '\n' || r == '\r' })
	for _, separator := range []string{"\t", ";", ",", " "} {
		rows, width := 0, 0
		for _, line := range lines {
			fields := fieldsOf(line, separator)
			if numbers(fields) < 2 {
				rows = 0
				continue
			}
			if len(fields) != width {
				rows = 0
			}
			rows, width = rows+1, len(fields)
			if rows == tableRows {
				return true
			}
		}
	}
	return false
}

func fieldsOf(line, separator string) []string {
	if separator == " " {
		return strings.Fields(line)
	}
	return strings.Split(line, separator)
}

func numbers(fields []string) int {
	n := 0
	for _, f := range fields {
		if number.MatchString(strings.TrimSpace(f)) {
			n++
		}
	}
	return n
}
