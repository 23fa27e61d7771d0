package casefile

import (
	"encoding/binary"
	"fmt"
	"math"
	"strings"
	"testing"
	"unicode/utf16"
	"unicode/utf8"
)

// utf16Text encodes as spreadsheet programs do for "Unicode text".
func utf16Text(text string, order binary.AppendByteOrder) string {
	var b []byte
	for _, w := range utf16.Encode([]rune("\ufeff" + text)) {
		b = order.AppendUint16(b, w)
	}
	return string(b)
}

// separated writes the small sequence with another separator; the one field with a comma keeps its quotes.
func separated(separator string) string {
	s := strings.ReplaceAll(smallSequence, "no spray, again", "no spray\x00 again")
	return strings.ReplaceAll(strings.ReplaceAll(s, ",", separator), "\x00", ",")
}

// TestSpreadsheetVariants: however a spreadsheet program saves the table, the folder is the same.
func TestSpreadsheetVariants(t *testing.T) {
	decimalComma := strings.NewReplacer("62.5", "62,5", "2.5;", "2,5;")
	quotedAll := func(s string) string {
		lines := strings.Split(strings.TrimSuffix(separated(";"), "\n"), "\n")
		for i, l := range lines {
			fields := strings.Split(strings.ReplaceAll(l, `"`, ""), ";")
			lines[i] = `"` + strings.Join(fields, `"`+s+`"`) + `"`
		}
		return strings.Join(lines, "\n") + "\n"
	}
	reordered := func(s string) string { // the last column first
		var out strings.Builder
		for _, l := range strings.Split(strings.TrimSuffix(s, "\n"), "\n") {
			i := strings.LastIndex(l, ";")
			out.WriteString(l[i+1:] + ";" + l[:i] + "\n")
		}
		return out.String()
	}
	variants := map[string]string{
		"as written":               smallSequence,
		"byte-order mark":          "\ufeff" + smallSequence,
		"CR LF":                    strings.ReplaceAll(smallSequence, "\n", "\r\n"),
		"CR":                       strings.ReplaceAll(smallSequence, "\n", "\r"),
		"no line feed at the end":  strings.TrimSuffix(smallSequence, "\n"),
		"semicolon":                separated(";"),
		"tab":                      separated("\t"),
		"semicolon, decimal comma": decimalComma.Replace(separated(";")),
		"all of it":                "\ufeff" + strings.ReplaceAll(decimalComma.Replace(separated(";")), "\n", ";;\r\n") + ";;;\r\n;\r\n\r\n",
		"tab, UTF-16 LE":           utf16Text(separated("\t"), binary.LittleEndian),
		"tab, UTF-16 BE, CR LF":    utf16Text(strings.ReplaceAll(separated("\t"), "\n", "\r\n"), binary.BigEndian),
		"quoted":                   quotedAll(","),
		"quoted, semicolon":        quotedAll(";"),
		"empty columns":            strings.ReplaceAll(smallSequence, "\n", ",,\n"),
		"empty rows":               smallSequence + ",,,,,,,,,,\n,,\n\n",
		"blanks around":            strings.ReplaceAll(strings.ReplaceAll(separated(";"), ";", " ; "), `" ;`, `";`),
		"capitals in the header":   strings.Replace(smallSequence, "injection,file,role", "Injection,FILE,Role", 1),
		"unit in round brackets":   strings.Replace(smallSequence, "[ng/mL]", "(ng/ml)", 1),
		"analyte with a capital":   strings.Replace(smallSequence, "nominal salbutamol", "Nominal Salbutamol", 1),
		"another order":            reordered(separated(";")),
		"backslashes":              strings.ReplaceAll(smallSequence, "raw/", `raw\`),
		"in ug/mL":                 strings.NewReplacer("[ng/mL]", "[µg/mL]", "62.5", "0.0625", ",1000", ",1", ",2500", ",2.5", ",1500", ",1.5E+00").Replace(smallSequence),
		"in ug/mL, decimal comma":  strings.NewReplacer("[ng/mL]", "[µg/mL]", "62.5", "0,0625", ";1000", ";1,000", ";2500", ";2,500", ";1500", ";1,500", ";2.5;", ";2,5;").Replace(separated(";")),
	}
	want := loaded(t, small())
	for name, text := range variants {
		got, err := Load(changed(t, change{"sequence.csv", "", ""}, change{"sequence.csv", "", text}))
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if diff := sameFolder(want, got); diff != "" {
			t.Errorf("%s: %s", name, diff)
		}
	}
}

// TestNotASequence: what is no such table gives one problem, with its place and advice.
func TestNotASequence(t *testing.T) {
	tests := []struct {
		name, text   string
		line, column int
		want         string
	}{
		{"empty", "", 1, 1, "an empty file"},
		{"blank", "\ufeff \r\n\r\n", 1, 1, "an empty file"},
		{"header alone", strings.SplitAfter(smallSequence, "\n")[0], 1, 1, "one line for each injection"},
		{"separators alone", ";;\n;;\n", 1, 1, "separators alone"},
		{"no separator", "injection\nB1\n", 1, 1, "without a separator"},
		{"two separators", strings.Replace(smallSequence, "file,role", "file;role", 1), 1, 15, `both ',' and ';'`},
		{"Windows-1252", strings.Replace(smallSequence, "low", "\xb5g", 1), 3, 27, "CSV UTF-8"},
		{"UTF-16 without its mark", utf16Text(smallSequence, binary.LittleEndian)[2:], 1, 2, "UTF-16 is read only with its byte-order mark"},
		{"UTF-16 cut short", utf16Text(smallSequence, binary.LittleEndian)[:101], 1, 1, "its end is missing"},
		{"UTF-16 with half a character", "\xff\xfei\x00,\x00\x00\xd8", 1, 3, "U+FFFD"},
		{"mark that turns text", strings.Replace(smallSequence, "low", "lo\u202ew", 1), 3, 29, "U+202E"},
		{"bare quotation mark", strings.Replace(smallSequence, "low", `lo"w`, 1), 3, 29, "quotation mark inside a field"},
		{"open quotation mark", strings.Replace(smallSequence, "low", `"low`, 1), 6, 59, "opened in line 3"},
		{"a workbook", "PK\x03\x04\x14", 1, 3, "U+0003"},
		{"too big", strings.Repeat("a", 2<<20), 0, 0, "bytes, want at most"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			_, _, problems := readSequence("sequence.csv", []byte(tt.text))
			if len(problems) != 1 {
				t.Fatalf("%v", problems)
			}
			p := problems[0]
			if p.Line != tt.line || p.Column != tt.column {
				t.Errorf("at %d:%d, want %d:%d", p.Line, p.Column, tt.line, tt.column)
			}
			if !strings.Contains(p.Error()+"\n"+p.Hint, tt.want) {
				t.Errorf("got %q with the hint %q, want %q in them", p.Error(), p.Hint, tt.want)
			}
		})
	}
}

// TestPlacesInCharacters: columns count characters, not bytes, and start at a field's quotation mark.
func TestPlacesInCharacters(t *testing.T) {
	text := "injection,file,role,acquired,operator,note\nµ1,raw/ü.mzML,\"größe\",2026-03-18T08:00:00+01:00,P-2,\"two\nlines\"\nµ2,raw/2.mzML,größe,2026-03-18T08:00:00+01:00,P-2\n"
	_, _, problems := readSequence("sequence.csv", []byte(text))
	var places []string
	for _, p := range problems {
		places = append(places, fmt.Sprintf("%d:%d", p.Line, p.Column))
	}
	if got := strings.Join(places, " "); got != "2:15 4:15" {
		t.Errorf("places %s, want 2:15 4:15:\n%v", got, problems)
	}
}

// FuzzSequence: any bytes are accepted or refused, never more; problems have places inside the file; what is accepted is whole.
func FuzzSequence(f *testing.F) {
	for _, s := range []string{smallSequence, "\ufeff" + separated(";"), separated("\t"), utf16Text(separated("\t"), binary.BigEndian), strings.ReplaceAll(separated(";"), "62.5", "1,200"), "", ";", "a,b\n\"", "\"\n\",;"} {
		f.Add([]byte(s))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		rows, header, problems := readSequence("sequence.csv", data)
		text, bad := sequenceText("sequence.csv", data)
		lines := strings.Split(text, "\n")
		for _, p := range problems {
			if p.Got == "" || p.Want == "" || p.File == "" {
				t.Errorf("a problem without words: %+v", p)
			}
			if bad == nil && (p.Line < 1 || p.Line > len(lines) || p.Column < 1 || p.Column > utf8.RuneCountInString(lines[p.Line-1])+1) {
				t.Errorf("a problem outside the file: %+v", p)
			}
		}
		if len(problems) > 0 {
			return
		}
		if len(rows) == 0 || len(header.columns) < len(requiredColumns) {
			t.Fatalf("accepted without rows or columns: %d, %v", len(rows), header.columns)
		}
		for _, r := range rows {
			if r.ID == "" || r.File == "" || r.Operator == "" || !(r.Dilution > 0) || math.IsInf(r.Dilution, 0) || r.Line < 2 || r.Line > len(lines) {
				t.Errorf("accepted: %+v", r)
			}
			for _, n := range r.Nominal {
				if !(n.NGPerML >= 0) || math.IsInf(n.NGPerML, 0) {
					t.Errorf("accepted: %+v", n)
				}
			}
			at(r.AcquiredAt) // panics unless it was checked
		}
	})
}

func BenchmarkSequence(b *testing.B) {
	var text strings.Builder
	text.WriteString(strings.SplitAfter(smallSequence, "\n")[0])
	for i := range 500 {
		fmt.Fprintf(&text, "C%d,raw/c%d.mzML,calibrator,low,,,,2026-03-18T08:10:00+01:00,P-2,,62.5\n", i, i)
	}
	b.Run("rows=500", func(b *testing.B) {
		for b.Loop() {
			if rows, _, problems := readSequence("sequence.csv", []byte(text.String())); len(rows) != 500 {
				b.Fatal(problems)
			}
		}
	})
}
