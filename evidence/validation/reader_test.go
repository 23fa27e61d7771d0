package validation

import (
	"encoding/binary"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
	"unicode/utf16"
	"unicode/utf8"

	"assaywrit/evidence/strictyaml"
)

const small = `kind,run,level,replicate,nominal [ng/mL],found [ng/mL],note
precision,day 1,low,1,100,98.25,
precision,day 1,low,2,100,101.5,"a, b"
blank,,,,,-0.5,
`

func inUTF16(text string, order binary.AppendByteOrder) []byte {
	var out []byte
	for _, w := range utf16.Encode([]rune("\ufeff" + text)) {
		out = order.AppendUint16(out, w)
	}
	return out
}

// TestReadVariants: the same table as spreadsheet programs save it.
func TestReadVariants(t *testing.T) {
	want, problems := Read("v.csv", []byte(small))
	if problems != nil || len(want) != 3 || *want[0].Found != 98.25 || *want[2].Found != -0.5 || want[2].Nominal != nil || want[1].Note != "a, b" {
		t.Fatalf("%+v, %v", want, problems)
	}
	semicolon := strings.NewReplacer(`"a, b"`, `"a, b"`, ",", ";").Replace(small)
	comma := strings.NewReplacer("98.25", "98,25", "101.5", "101,5", "-0.5", "-0,5").Replace(semicolon)
	tab := strings.ReplaceAll(comma, ";", "\t")
	for name, data := range map[string][]byte{
		"semicolon": []byte(semicolon), "decimal comma": []byte(comma), "tab": []byte(tab), "mark and CRLF": []byte("\ufeff" + strings.ReplaceAll(small, "\n", "\r\n")),
		"UTF-16 LE": inUTF16(tab, binary.LittleEndian), "UTF-16 BE": inUTF16(comma, binary.BigEndian),
		"empty rows and columns": []byte(strings.ReplaceAll(small, "\n", ",,\n") + ",,,,,,,\n\n"),
		"capitals":               []byte(strings.Replace(small, "found [ng/mL]", "Found (ug/L)", 1)),
	} {
		got, problems := Read("v.csv", data)
		if problems != nil || !reflect.DeepEqual(got, want) {
			t.Errorf("%s: %+v, %v", name, got, problems)
		}
	}
	micro, problems := Read("v.csv", []byte(strings.Replace(small, "found [ng/mL]", "found [ug/mL]", 1)))
	if problems != nil || *micro[0].Found != 98250 {
		t.Errorf("%+v, %v", micro, problems)
	}
}

// TestDamagedTables: one file for each kind of damage, each with its own problem.
func TestDamagedTables(t *testing.T) {
	tests := map[string]struct {
		place string
		want  string // in the problem or its hint
	}{
		"ambiguous_decimals.csv":       {"2:27", "two ways"},
		"contradictory_nominal.csv":    {"3:21", "has another value"},
		"decimal_comma_in_commas.csv":  {"2:25", "decimal point"},
		"doubled_column.csv":           {"1:16", "a second column"},
		"doubled_replicate.csv":        {"3:21", "as in line 2"},
		"empty.csv":                    {"1:1", "an empty file"},
		"field_of_another_kind.csv":    {"2:7", "nothing in a row of the kind blank"},
		"fields_beyond_header.csv":     {"2:23", "5 fields"},
		"header_alone.csv":             {"1:1", "one line for each result"},
		"hidden_character.csv":         {"2:7", "U+202E"},
		"missing_found.csv":            {"2:21", "a number"},
		"missing_kind_column.csv":      {"1:1", "a column kind"},
		"missing_run.csv":              {"2:11", "a run"},
		"mixed_marks.csv":              {"3:21", "other numbers"},
		"negative_nominal.csv":         {"2:21", "above zero"},
		"not_utf8.csv":                 {"2:7", "CSV UTF-8"},
		"open_quotation_mark.csv":      {"2:25", "not closed"},
		"separators_mixed.csv":         {"1:9", "both"},
		"thousands.csv":                {"2:25", "separators of thousands"},
		"unit_missing.csv":             {"1:16", "found [ng/mL]"},
		"unit_of_another_quantity.csv": {"1:16", "mass concentration"},
		"unknown_column.csv":           {"1:6", "replicate"},
		"unknown_kind.csv":             {"2:1", "precision"},
		"word_for_number.csv":          {"2:21", "a number"},
	}
	files, err := filepath.Glob(filepath.Join("..", "..", "testdata", "validation", "damaged", "*.csv"))
	if err != nil || len(files) == 0 {
		t.Fatalf("no damaged tables: %v", err)
	}
	messages := map[string]string{}
	for _, file := range files {
		name := filepath.Base(file)
		tt, ok := tests[name]
		if !ok {
			t.Errorf("%s has no expectation", name)
			continue
		}
		delete(tests, name)
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		rows, problems := Read(name, data)
		if len(problems) != 1 || rows != nil {
			t.Errorf("%s: want one problem, got %v", name, problems)
			continue
		}
		p := problems[0]
		if place := fmt.Sprintf("%d:%d", p.Line, p.Column); place != tt.place || !strings.Contains(p.Error()+"\n"+p.Hint, tt.want) {
			t.Errorf("%s: at %s %s (%s); want %q at %s", name, place, p.Error(), p.Hint, tt.want, tt.place)
		}
		message := p.Got + p.Want + p.Hint
		if other, twice := messages[message]; twice {
			t.Errorf("%s has the message of %s", name, other)
		}
		messages[message] = name
	}
	for name := range tests {
		t.Errorf("%s is missing", name)
	}
}

// TestAllProblems: everything that is wrong, in the order of its places.
func TestAllProblems(t *testing.T) {
	_, problems := Read("v.csv", []byte(`kind,run,level,nominal [ng/mL],found [ng/mL],response
precision,,low,0,x,
presicion,1,low,,1,
stability,,low,,,3
carry-over,,,,1,
`))
	var got []string
	for _, p := range problems {
		got = append(got, fmt.Sprintf("%d:%d %s", p.Line, p.Column, p.Key))
	}
	// The column condition is not in the table: its place is the start of the line.
	if want := "2:11 run|2:16 nominal|2:18 found|3:1 kind|4:1 condition|4:17 found|4:18 response|5:14 nominal"; strings.Join(got, "|") != want {
		t.Errorf("got  %s\nwant %s\n%v", strings.Join(got, "|"), want, problems)
	}
	if problems[3].Hint == "" {
		t.Error("no hint for a misspelled kind")
	}
}

func TestHistoryProblems(t *testing.T) {
	_, problems := ReadHistory("h.csv", []byte(`batch,measured,level,found [ng/mL],excluded
B1,2026-03-18T08:00:00Z,low,1,
B2,2026-03-18T07:00:00Z,low,2,
B1,2026-03-19T07:00:00Z,low,3,why
,yesterday,,,
`))
	var got []string
	for _, p := range problems {
		got = append(got, fmt.Sprintf("%d:%d %s", p.Line, p.Column, p.Key))
	}
	if want := "3:4 measured|4:1 batch|5:1 batch|5:2 measured|5:12 level|5:13 found"; strings.Join(got, "|") != want {
		t.Errorf("got  %s\nwant %s\n%v", strings.Join(got, "|"), want, problems)
	}
	rows, problems := ReadHistory("h.csv", []byte("batch;level;found [ng/mL];excluded\nB1;low;1,5;\nB1;low;2,5;bubble\n"))
	if problems != nil || len(rows) != 2 || rows[1].Found != 2.5 || rows[1].Excluded != "bubble" {
		t.Errorf("%+v, %v", rows, problems)
	}
}

// seeds are the test files, which must be there.
func seeds(f *testing.F) {
	files, err := filepath.Glob(filepath.Join("..", "..", "testdata", "validation", "*", "*.csv"))
	if err != nil || len(files) == 0 {
		f.Fatalf("no seeds: %v", err)
	}
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	for _, s := range []string{small, wholeTable, "batch,level,found [ng/mL]\nB-1,low,98.2\nB-2,low,1\nB-3,low,1e300\n", ";", "a,b\n\"", "\"\n\",;"} {
		f.Add([]byte(s))
	}
}

func checkPlaces(t *testing.T, data []byte, problems strictyaml.Problems) {
	t.Helper()
	text, bad := decoded("v.csv", data)
	lines := strings.Split(text, "\n")
	for _, p := range problems {
		if p.Got == "" || p.Want == "" || p.File == "" {
			t.Errorf("a problem without words: %+v", p)
		}
		if bad == nil && (p.Line < 1 || p.Line > len(lines) || p.Column < 1 || p.Column > utf8.RuneCountInString(lines[p.Line-1])+1) {
			t.Errorf("a problem outside the file: %+v", p)
		}
	}
}

// FuzzRead: any bytes are accepted or refused; what is accepted is appraised or refused, and written as JSON without NaN or infinity.
func FuzzRead(f *testing.F) {
	seeds(f)
	f.Fuzz(func(t *testing.T, data []byte) {
		rows, problems := Read("v.csv", data)
		checkPlaces(t, data, problems)
		if len(problems) > 0 {
			return
		}
		if len(rows) == 0 {
			t.Fatal("accepted without rows")
		}
		figures, err := Appraise(rows, Options{})
		if err != nil {
			return
		}
		if _, err := json.Marshal(figures); err != nil {
			t.Error(err)
		}
	})
}

// FuzzHistory likewise.
func FuzzHistory(f *testing.F) {
	seeds(f)
	f.Fuzz(func(t *testing.T, data []byte) {
		rows, problems := ReadHistory("v.csv", data)
		checkPlaces(t, data, problems)
		if len(problems) > 0 {
			return
		}
		charts, err := Charts(rows, UsualDrift())
		if err != nil {
			return
		}
		if _, err := json.Marshal(charts); err != nil {
			t.Error(err)
		}
		last := rows[len(rows)-1]
		last.Batch += " new"
		if j, err := Judge(charts, []Control{last}); err == nil {
			if _, err := json.Marshal(j); err != nil {
				t.Error(err)
			}
		}
	})
}
