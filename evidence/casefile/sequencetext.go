package casefile

import (
	"bytes"
	"fmt"
	"strings"
	"unicode/utf16"
	"unicode/utf8"

	"assaywrit/evidence/strictyaml"
)

// sequenceText decodes the file: UTF-8, or UTF-16 with its byte-order mark, as spreadsheet programs write "Unicode text". Line ends
// become line feeds.
func sequenceText(file string, data []byte) (string, *Problem) {
	if len(data) > strictyaml.MaxBytes {
		return "", &Problem{File: file, Got: fmt.Sprintf("%d bytes", len(data)), Want: fmt.Sprintf("at most %d", strictyaml.MaxBytes)}
	}
	if bytes.HasPrefix(data, []byte{0xff, 0xfe}) || bytes.HasPrefix(data, []byte{0xfe, 0xff}) {
		if len(data)%2 != 0 {
			return "", &Problem{File: file, Line: 1, Column: 1, Got: fmt.Sprintf("UTF-16 of %d bytes", len(data)), Want: "a whole number of characters, two bytes each", Hint: "save the file again: its end is missing"}
		}
		data = fromUTF16(data)
	}
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	text := strings.ReplaceAll(strings.ReplaceAll(string(data), "\r\n", "\n"), "\r", "\n")
	if strings.TrimSpace(text) == "" {
		return "", &Problem{File: file, Line: 1, Column: 1, Got: "an empty file", Want: "a header line and one line for each injection"}
	}
	return text, sequenceCharacters(file, text)
}

func fromUTF16(data []byte) []byte {
	big := data[0] == 0xfe
	words := make([]uint16, 0, len(data)/2)
	for i := 2; i+1 < len(data); i += 2 {
		w := uint16(data[i]) | uint16(data[i+1])<<8
		if big {
			w = w<<8 | w>>8
		}
		words = append(words, w)
	}
	return []byte(string(utf16.Decode(words)))
}

// sequenceCharacters refuses what is not UTF-8, and characters that do not show.
func sequenceCharacters(file, text string) *Problem {
	line, column := 1, 1
	for i := 0; i < len(text); {
		r, n := utf8.DecodeRuneInString(text[i:])
		switch {
		case r == utf8.RuneError && n == 1:
			return &Problem{File: file, Line: line, Column: column, Got: fmt.Sprintf("the byte %#02x, which is not UTF-8", text[i]), Want: "text in UTF-8",
				Hint: `in the spreadsheet program, save as "CSV UTF-8": the older encodings, such as Windows-1252, do not say which one they are`}
		case r == 0:
			return &Problem{File: file, Line: line, Column: column, Got: "a zero byte", Want: "text in UTF-8",
				Hint: `in the spreadsheet program, save as "CSV UTF-8": UTF-16 is read only with its byte-order mark`}
		case r == '\n':
			line, column = line+1, 0
		case r != '\t' && strictyaml.Hidden(text[i:i+n]):
			return &Problem{File: file, Line: line, Column: column, Got: fmt.Sprintf("the character %U, which does not show or stands for one that was lost", r), Want: "text that shows as it is",
				Hint: "type the field again by hand"}
		}
		i, column = i+n, column+1
	}
	return nil
}

// separatorOf finds the separator from the header line: the one of the three that stands in it, outside of quotes.
func separatorOf(file, text string) (rune, *Problem) {
	header, _, _ := strings.Cut(text, "\n")
	var found []rune
	quoted, column := false, 0
	for _, c := range header {
		column++
		if c == '"' {
			quoted = !quoted
		}
		if quoted || (c != ',' && c != ';' && c != '\t') || (len(found) > 0 && found[0] == c) {
			continue
		}
		if found = append(found, c); len(found) > 1 {
			return 0, &Problem{File: file, Line: 1, Column: column, Got: fmt.Sprintf("both %q and %q between the names of the header", found[0], found[1]), Want: "one of comma, semicolon or tab between all names"}
		}
	}
	if len(found) == 0 {
		return 0, &Problem{File: file, Line: 1, Column: 1, Got: "a header line without a separator: " + quote(header), Want: "the names of the columns, with comma, semicolon or tab between them",
			Hint: "the first line begins with injection,file,role"}
	}
	return found[0], nil
}
