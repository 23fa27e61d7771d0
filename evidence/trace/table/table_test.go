package table

import (
	"bytes"
	"errors"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/mzml"
)

var update = flag.Bool("update", false, "write the damaged files anew")

const (
	tables  = "../../../testdata/table"
	damaged = "../../../testdata/damaged"
)

// layouts of the files in testdata/table. The columns are named by the transition's place in the mzML file that they were made from.
var layouts = map[string]Layout{
	"minutes_comma.csv": {Separator: ',', DecimalMark: '.', HeaderLines: 2, TimeColumn: 1, TimeUnit: "min",
		Columns: []Column{{Column: 2, ID: "0", Transition: trace.Transition{PrecursorMZ: 124.1, ProductMZ: 51.1, Polarity: trace.Positive}}, {Column: 3, ID: "1"}, {Column: 4, ID: "2"}}},
	"seconds_semicolon_decimal_comma.csv": {Separator: ';', DecimalMark: ',', HeaderLines: 1, TimeColumn: 3, TimeUnit: "s",
		Columns: []Column{{Column: 4, ID: "0"}, {Column: 2, ID: "2"}}},
	"minutes_tab.txt": {Separator: '\t', DecimalMark: '.', TimeColumn: 1, TimeUnit: "min", Columns: []Column{{Column: 3, ID: "1"}}},
}

// TestSameAsMzML reads the files that were made from an mzML file by a script, and compares with the mzML file.
func TestSameAsMzML(t *testing.T) {
	data, err := os.ReadFile("../../../testdata/mzml/mrm-metabolite-assay-part1.mzML")
	if err != nil {
		t.Fatal(err)
	}
	original, err := mzml.Read("mrm", bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	for name, layout := range layouts {
		data, err := os.ReadFile(filepath.Join(tables, name))
		if err != nil {
			t.Fatal(err)
		}
		f, err := Read(name, bytes.NewReader(data), layout)
		if err != nil {
			t.Fatal(err)
		}
		if f.Format != "delimited text" || len(f.Chromatograms) != len(layout.Columns) {
			t.Errorf("%s: %q, %d chromatograms", name, f.Format, len(f.Chromatograms))
		}
		for i, c := range f.Chromatograms {
			want := original.Chromatograms[c.ID[0]-'0']
			if len(c.TimeMin) != len(want.TimeMin) || c.Transition != layout.Columns[i].Transition {
				t.Fatalf("%s: %d points of %v", name, len(c.TimeMin), c.Transition)
			}
			for k := range c.TimeMin {
				late := math.Abs(c.TimeMin[k] - want.TimeMin[k])
				if late > 0 && layout.TimeUnit == "min" || late > 1e-15 || c.Intensity[k] != want.Intensity[k] {
					t.Fatalf("%s, trace %s, point %d: got %v at %v, want %v at %v", name, c.ID, k+1, c.Intensity[k], c.TimeMin[k], want.Intensity[k], want.TimeMin[k])
				}
			}
		}
	}
}

// simple is time in minutes and one trace.
var simple = Layout{Separator: ',', DecimalMark: '.', HeaderLines: 1, TimeColumn: 1, TimeUnit: "min", Columns: []Column{{Column: 2, ID: "quantifier"}}}

func TestDamaged(t *testing.T) {
	const good = "time,counts\n4.2800,12\n4.2817,15\n4.2834,11\n"
	semicolon, seconds := simple, simple
	semicolon.Separator, semicolon.DecimalMark = ';', ','
	seconds.TimeUnit = "s"
	list := []struct {
		name   string
		layout Layout
		data   string
		want   string // after the file's name
	}{
		{"backwards_time", simple, strings.Replace(good, "4.2834", "4.2810", 1), `4:1: got "4.2810", want a time after 4.2817 min`},
		{"repeated_time", simple, strings.Replace(good, "4.2834", "4.2817", 1), `4:1: got "4.2817", want a time after 4.2817 min`},
		{"backwards_time_seconds", seconds, strings.Replace(good, "4.2834", "4.2", 1), `4:1: got "4.2", want a time after 4.2817 s`},
		{"cut_line", simple, good[:len(good)-4], `4:1: got a line of 1 fields, want at least 2`},
		{"more_fields", simple, strings.Replace(good, "15", "15,3", 1), `3:11: got a line of 3 fields, want 2, as in the first point`},
		{"nan_intensity", simple, strings.Replace(good, "15", "NaN", 1), `3:8: got "NaN", want a decimal number`},
		{"infinite_intensity", simple, strings.Replace(good, "15", "-inf", 1), `3:8: got "-inf", want a decimal number`},
		{"overflowing_intensity", simple, strings.Replace(good, "15", "1e999", 1), `3:8: got "1e999", want a decimal number`},
		{"hexadecimal_intensity", simple, strings.Replace(good, "15", "0x0F", 1), `3:8: got "0x0F", want a decimal number`},
		{"underscore_in_intensity", simple, strings.Replace(good, "15", "1_5", 1), `3:8: got "1_5", want a decimal number`},
		{"empty_intensity", simple, strings.Replace(good, "15", "", 1), `3:8: got "", want a decimal number`},
		{"quoted_field", simple, strings.Replace(good, "15", `"15"`, 1), `3:8: got "\"15\"", want a decimal number`},
		{"words_among_points", simple, strings.Replace(good, "4.2817", "paused at 4.28", 1), `3:1: got "paused at 4.28", want a decimal number`},
		{"empty_line_between", simple, strings.Replace(good, "4.2817", "\n4.2817", 1), `4:1: got a point after the empty line 3, want points without gaps`},
		{"no_points", simple, "time,counts\n", `2:1: got the end of the file, want points after 1 header lines`},
		{"not_utf8", simple, strings.Replace(good, "counts", "counts \xb5V", 1), `1:13: got text that is not UTF-8, want UTF-8`},
		{"utf16", simple, "\xff\xfet\x00,\x00c\x00\n\x00", `1:1: got text in UTF-16, want UTF-8`},
		{"other_separator", simple, strings.ReplaceAll(good, ",", ";"), `2:1: got a line of 1 fields, want at least 2`},
		{"decimal_point_for_comma", semicolon, "Zeit;µV\n4,2800;12\n4.2817;15\n", `3:1: got "4.2817", want a decimal number with a comma`},
		{"thousands_point", semicolon, "Zeit;µV\n4,2800;1.200,5\n", `2:8: got "1.200,5", want a decimal number with a comma`},
		{"header_too_long", simple, "run 7\n" + good, `2:1: got "time", want a decimal number`},
	}
	if _, err := Read("good.csv", strings.NewReader(good), simple); err != nil {
		t.Fatalf("the file without damage: %v", err)
	}
	listed := map[string]bool{}
	for _, tt := range list {
		name := tt.name + ".csv"
		listed[name] = true
		path := filepath.Join(damaged, name)
		if *update {
			if err := os.WriteFile(path, []byte(tt.data), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		t.Run(tt.name, func(t *testing.T) {
			data, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			if string(data) != tt.data {
				t.Error("the file is not what its generator makes: run go test -update and look at the difference")
			}
			_, err = Read(name, bytes.NewReader(data), tt.layout)
			var syntax *trace.SyntaxError
			if !errors.As(err, &syntax) || err.Error() != name+":"+tt.want {
				t.Errorf("got %v, want %s:%s", err, name, tt.want)
			}
		})
	}
	files, err := filepath.Glob(filepath.Join(damaged, "*.csv"))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		if !listed[filepath.Base(f)] {
			t.Errorf("%s is not in the list", f)
		}
	}
}

// TestColumnInCharacters counts characters, not bytes.
func TestColumnInCharacters(t *testing.T) {
	layout := simple
	layout.TimeColumn, layout.Columns = 2, []Column{{Column: 3, ID: "x"}}
	_, err := Read("f", strings.NewReader("h\nµµµ,1,2\nµµµ, 1 ,2\n"), layout)
	if err == nil || err.Error() != `f:3:5: got "1", want a time after 1 min` {
		t.Errorf("got %v", err)
	}
}

func TestLineEnds(t *testing.T) {
	var first string
	for text, warned := range map[string]bool{
		"h\n1,2\n3,4\n": false, "h\r\n1,2\r\n3,4\r\n": false, "\xef\xbb\xbfh\n1,2\n3,4": true, "h\n1,2\n3,4\n\n \n\r\n": false, "h\n 1\t, 2 \n3,4\n ": false,
	} {
		f, err := Read("f", strings.NewReader(text), simple)
		if err != nil {
			t.Errorf("%q: %v", text, err)
			continue
		}
		// A last line without its end may have lost digits: 4 instead of 47.
		if (len(f.Warnings) == 1 && f.Warnings[0].Code == "unfinished-line") != warned {
			t.Errorf("%q: warnings %v", text, f.Warnings)
		}
		got := fmt.Sprint(f.Chromatograms)
		if first == "" {
			first = got
		}
		if got != first {
			t.Errorf("%q: got %s, want %s", text, got, first)
		}
	}
}

// TestTracesDoNotShare changes one trace's times and looks at the other's.
func TestTracesDoNotShare(t *testing.T) {
	layout := simple
	layout.Columns = append(layout.Columns, Column{Column: 3, ID: "qualifier"})
	f, err := Read("f", strings.NewReader("h\n1,2,3\n"), layout)
	if err != nil {
		t.Fatal(err)
	}
	f.Chromatograms[0].TimeMin[0] = 9
	if f.Chromatograms[1].TimeMin[0] != 1 {
		t.Error("two traces share their times")
	}
}

func TestKinds(t *testing.T) {
	for want, ions := range map[trace.Kind]trace.Transition{trace.SRM: {PrecursorMZ: 300, ProductMZ: 91}, trace.SIM: {PrecursorMZ: 300}, trace.Other: {}} {
		layout := simple
		layout.Columns = []Column{{Column: 2, ID: "x", Transition: ions}}
		f, err := Read("f", strings.NewReader("h\n1,2\n"), layout)
		if err != nil || f.Chromatograms[0].Kind != want {
			t.Errorf("%v: got %v, %v, want %s", ions, f, err, want)
		}
	}
}

func TestLayoutRefused(t *testing.T) {
	for name, change := range map[string]func(l *Layout){
		"separator":          func(l *Layout) { l.Separator = '|' },
		"decimal mark":       func(l *Layout) { l.DecimalMark = '\'' },
		"comma twice":        func(l *Layout) { l.DecimalMark = ',' },
		"header lines":       func(l *Layout) { l.HeaderLines = -1 },
		"time unit":          func(l *Layout) { l.TimeUnit = "" },
		"time column":        func(l *Layout) { l.TimeColumn = 0 },
		"no columns":         func(l *Layout) { l.Columns = nil },
		"column of the time": func(l *Layout) { l.Columns = []Column{{Column: 1, ID: "x"}} },
		"column 0":           func(l *Layout) { l.Columns = []Column{{Column: 0, ID: "x"}} },
		"no id":              func(l *Layout) { l.Columns = []Column{{Column: 2}} },
		"same id":            func(l *Layout) { l.Columns = []Column{{Column: 2, ID: "x"}, {Column: 3, ID: "x"}} },
		"same column":        func(l *Layout) { l.Columns = []Column{{Column: 2, ID: "x"}, {Column: 2, ID: "y"}} },
	} {
		layout := simple
		change(&layout)
		if _, err := Read("f", strings.NewReader("h\n1,2,3\n"), layout); err == nil {
			t.Errorf("%s: accepted", name)
		}
	}
}
