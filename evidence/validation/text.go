package validation

import (
	"bytes"
	"fmt"
	"strings"
	"unicode/utf16"
	"unicode/utf8"

	"assaywrit/evidence/strictyaml"
)

// MaxBytes is the largest table that is read: a hundred thousand rows.
const MaxBytes = 8 << 20

// decoded is the text of a table: UTF-8, or UTF-16 with its byte-order mark. Line ends become line feeds.
func decoded(file string, data []byte) (string, *strictyaml.Problem) {
	if len(data) > MaxBytes {
		return "", &strictyaml.Problem{File: file, Got: fmt.Sprintf("%d bytes", len(data)), Want: fmt.Sprintf("at most %d", MaxBytes)}
	}
	if bytes.HasPrefix(data, []byte{0xff, 0xfe}) || bytes.HasPrefix(data, []byte{0xfe, 0xff}) {
		if len(data)%2 != 0 {
			return "", &strictyaml.Problem{File: file, Line: 1, Column: 1, Got: fmt.Sprintf("UTF-16 of %d bytes", len(data)), Want: "a whole number of characters, two bytes each", Hint: "save the file again: its end is missing"}
		}
		data = fromUTF16(data)
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	text := strings.ReplaceAll(strings.ReplaceAll(string(data), "\r\n", "\n"), "\r", "\n")
	if strings.TrimSpace(text) == "" {
		return "", &strictyaml.Problem{File: file, Line: 1, Column: 1, Got: "an empty file", Want: "a header line and one line for each result"}
	}
	return text, characters(file, text)
}

func fromUTF16(data []byte) []byte {
	words := make([]uint16, 0, len(data)/2)
	for i := 2; i+1 < len(data); i += 2 {
		w := uint16(data[i]) | uint16(data[i+1])<<8
		if data[0] == 0xfe {
			w = w<<8 | w>>8
		}
		words = append(words, w)
	}
	return []byte(string(utf16.Decode(words)))
}

// characters refuses what is not UTF-8, and characters that do not show.
func characters(file, text string) *strictyaml.Problem {
	line, column := 1, 1
	for i := 0; i < len(text); {
		r, n := utf8.DecodeRuneInString(text[i:])
		p := strictyaml.Problem{File: file, Line: line, Column: column}
		switch {
		case r == utf8.RuneError && n == 1:
			p.Got, p.Want = fmt.Sprintf("the byte %#02x, which is not UTF-8", text[i]), "text in UTF-8"
			p.Hint = `in the spreadsheet program, save as "CSV UTF-8": older encodings, such as Windows-1252, do not say which one they are`
			return &p
		case r == 0:
			p.Got, p.Want, p.Hint = "a zero byte", "text in UTF-8", `in the spreadsheet program, save as "CSV UTF-8": UTF-16 is read only with its byte-order mark`
			return &p
		case r == '\n':
			line, column = line+1, 0
		case r != '\t' && strictyaml.Hidden(text[i:i+n]):
			p.Got, p.Want, p.Hint = fmt.Sprintf("the character %U, which does not show or stands for one that was lost", r), "text that shows as it is", "type the field again by hand"
			return &p
		}
		i, column = i+n, column+1
	}
	return nil
}

// separatorOf is the one of comma, semicolon and tab that stands in the header line, outside of quotation marks.
func separatorOf(file, text string) (rune, *strictyaml.Problem) {
	header, _, _ := strings.Cut(text, "\n")
	var found rune
	quoted, column := false, 0
	for _, c := range header {
		column++
		switch {
		case c == '"':
			quoted = !quoted
		case quoted || c != ',' && c != ';' && c != '\t' || c == found:
		case found != 0:
			return 0, &strictyaml.Problem{File: file, Line: 1, Column: column, Got: fmt.Sprintf("both %q and %q between the names of the header", found, c), Want: "one of comma, semicolon or tab between all names"}
		default:
			found = c
		}
	}
	if found == 0 {
		return 0, &strictyaml.Problem{File: file, Line: 1, Column: 1, Got: "a header line without a separator: " + strictyaml.Quote(header), Want: "the names of the columns, with comma, semicolon or tab between them"}
	}
	return found, nil
}
