package table

import (
	"bytes"
	"encoding/binary"
	"unicode/utf16"
	"unicode/utf8"
)

var littleMark, bigMark = []byte("\xff\xfe"), []byte("\xfe\xff")

// decode makes UTF-8 of the text, without its byte-order mark. That what is declared as UTF-8 is UTF-8 is seen line by line.
func (r *reader) decode(data []byte) ([]byte, error) {
	r.line = 1
	defer func() { r.line = 0 }()
	wide := bytes.HasPrefix(data, littleMark) || bytes.HasPrefix(data, bigMark)
	const hint = "declare the encoding of the file in the method's tables, or export the text again as UTF-8"
	switch r.layout.Encoding {
	case "latin-1":
		if wide || bytes.HasPrefix(data, byteOrderMark) {
			return nil, r.fail(1, "a byte-order mark", "text in latin-1, as declared", hint)
		}
		out := make([]byte, 0, len(data)+len(data)/8)
		for _, c := range data {
			out = utf8.AppendRune(out, rune(c))
		}
		return out, nil
	case "utf-16":
		if !wide {
			return nil, r.fail(1, "text without a byte-order mark", "UTF-16 with its mark, as declared", hint)
		}
		return r.decode16(data)
	}
	if wide {
		return nil, r.fail(1, "text in UTF-16", "UTF-8", hint)
	}
	return bytes.TrimPrefix(data, byteOrderMark), nil
}

// decode16 decodes UTF-16 after its mark. Half a character, or half a pair, is refused.
func (r *reader) decode16(data []byte) ([]byte, error) {
	var order binary.ByteOrder = binary.LittleEndian
	if bytes.HasPrefix(data, bigMark) {
		order = binary.BigEndian
	}
	data = data[2:]
	out := make([]byte, 0, len(data)*3/4)
	column := 1
	for len(data) > 0 {
		if len(data) == 1 {
			return nil, r.fail(column, "half a character at the end", "whole UTF-16", "the file seems to be cut: export it again")
		}
		c := rune(order.Uint16(data))
		data = data[2:]
		if utf16.IsSurrogate(c) {
			second := rune(0)
			if len(data) >= 2 {
				second = rune(order.Uint16(data))
				data = data[2:]
			}
			if c = utf16.DecodeRune(c, second); c == utf8.RuneError {
				return nil, r.fail(column, "half a pair of UTF-16", "whole UTF-16", "")
			}
		}
		column++
		if c == '\n' {
			r.line++
			column = 1
		}
		out = utf8.AppendRune(out, c)
	}
	return out, nil
}
