package jcamp

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

func TestSniff(t *testing.T) {
	for text, want := range map[string]bool{
		"##TITLE= x": true, "##title=": true, "## T-I_T/L E =x": true, "\xef\xbb\xbf##TITLE=\n": true, "\r\n \t$$ note\n$$\n  ##TITLE= x": true,
		"": false, "##": false, "##TITLE": false, "##JCAMP-DX=": false, "$$ ##TITLE=": false, "#TITLE=": false, "TITLE=": false,
		"##TITLE\n=": false, "<mzML>": false, "\xef\xbb\xbf": false, "##TITLES=": false, "##" + strings.Repeat("T", 99) + "=": false,
	} {
		if got := Sniff([]byte(text)); got != want {
			t.Errorf("%q: got %t", text, got)
		}
	}
}

// TestSameFile writes one file in several ways, all of which are the same.
func TestSameFile(t *testing.T) {
	want, err := Read("f", strings.NewReader(whole1))
	if err != nil {
		t.Fatal(err)
	}
	if want.Format != "JCAMP-DX" || want.FormatVersion != "5.01" || want.SampleCode != "C-0001" || want.Instrument != "model, 1" || want.StartTime != "2026-01-02T03:04:05" || len(want.Warnings) > 0 {
		t.Errorf("%+v", want)
	}
	c := want.Chromatograms[0]
	if c.ID != "made-up trace" || c.Unit != "counts" || c.Kind != trace.Other || c.TimeMin[0] != 1 || fmt.Sprint(c.Intensity) != fmt.Sprint(someInts) {
		t.Errorf("%+v", c)
	}
	for i, k := range c.TimeMin {
		if d := k - (1 + float64(i)/100); d > 1e-15 || d < -1e-15 {
			t.Errorf("point %d at %v min", i+1, k)
		}
	}
	seconds := strings.NewReplacer("MINUTES", "SECONDS", "1.00", "60", "1.09", "65.4", "XFACTOR= 0.01", "XFACTOR= 0.6").Replace(whole1)
	for name, text := range map[string]string{
		"CR LF":         strings.ReplaceAll(whole1, "\n", "\r\n"),
		"CR":            strings.ReplaceAll(whole1, "\n", "\r"),
		"mixed":         strings.Replace(strings.Replace(whole1, "\n", "\r", 5), "\n", "\r\n", 3),
		"mark":          "\xef\xbb\xbf" + whole1,
		"comments":      "$$ first\n" + strings.ReplaceAll(whole1, "\n", "$$ note\n\n$$ ##END=\n"),
		"other labels":  strings.NewReplacer("DATA TYPE", "data_type", "NPOINTS", "N Points", "XYDATA", "xy-data", "JCAMP-DX", "JCAMPDX").Replace(whole1),
		"private label": strings.Replace(whole1, "##XUNITS", "##$NPOINTS= 7\n##.OBSERVE= x\nmore\n##XUNITS", 1),
		"LINK":          "##TITLE= outer\n##JCAMP-DX= 5.01\n##DATA TYPE= LINK\n##BLOCKS= 1\n" + whole1 + "##END=\n",
		"seconds":       seconds,
		"no end of END": strings.TrimSuffix(whole1, "\n"),
	} {
		got, err := Read("f", strings.NewReader(text))
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if name == "seconds" { // rounding only
			for i, m := range got.Chromatograms[0].TimeMin {
				near(t, "minutes", m, c.TimeMin[i])
			}
			continue
		}
		if fmt.Sprintf("%+v", got) != fmt.Sprintf("%+v", want) {
			t.Errorf("%s: got %+v, want %+v", name, got, want)
		}
	}
}

func TestText(t *testing.T) {
	for title, want := range map[string]string{"caf\xe9 \xb5V": "café µV", "café µV": "café µV", "two\n  lines $$ not this\n": "two\nlines"} {
		s, err := ReadSpectra("f", strings.NewReader(strings.Replace(whole1, "made-up trace", title, 1)))
		if err != nil || s[0].Title != want {
			t.Errorf("got %q, %v, want %q", s[0].Title, err, want)
		}
	}
}

func TestRunOfPages(t *testing.T) {
	for unit, want := range map[string]string{"SECONDS": "0.5 1.5", "MINUTES": "30 90", "": "0.5 1.5"} {
		f, err := Read("f", strings.NewReader(run(unit, "30", "90")))
		if err != nil {
			t.Errorf("%s: %v", unit, err)
			continue
		}
		s := f.Scans
		if got := fmt.Sprint(s.Scan(0).TimeMin, s.Scan(1).TimeMin); s.Len() != 2 || got != want || s.Scan(0).Polarity != trace.Positive {
			t.Errorf("%s: got %s, want %s", unit, got, want)
		}
		mz, _ := s.Open().MZ(1)
		y, _ := s.Open().Intensity(1)
		if fmt.Sprint(mz, y) != "[65.2 91.1] [20 101]" {
			t.Errorf("got %v %v", mz, y)
		}
		if got := codes(f.Warnings); got != "mz-order" && (unit != "" || got != "mz-order,time-unit") {
			t.Errorf("%q: warnings %v", unit, f.Warnings)
		}
	}
}

// TestTracesInPages reads two detectors' traces from the pages of NTUPLES.
func TestTracesInPages(t *testing.T) {
	f, err := Read("f", strings.NewReader(`##TITLE= two detectors
##JCAMP-DX= 5.01
##DATA TYPE= LC CHROMATOGRAM
##NTUPLES= LC CHROMATOGRAM
##VAR_NAME= TIME, UV 254, FLUORESCENCE, PAGE NUMBER
##SYMBOL= T, A, B, N
##VAR_DIM= 3, 3, 3, 2
##UNITS= SECONDS, mAU, counts,
##FACTOR= 0.5, 0.1, 1, 1
##FIRST= 30, 0.1, 7, 1
##LAST= 31, 0.3, 9, 2
##PAGE= N=1
##DATA TABLE= (T++(A..A)), XYDATA
60AJJ
62C
##PAGE= N=2
##DATA TABLE= (T++(B..B)), XYDATA
60 7 8 9
##END NTUPLES=
##END=
`))
	if err != nil || len(f.Warnings) > 0 || len(f.Chromatograms) != 2 {
		t.Fatalf("%+v, %v", f, err)
	}
	a, b := f.Chromatograms[0], f.Chromatograms[1]
	if a.ID != "UV 254" || a.Kind != trace.Absorption || a.Unit != "mAU" || b.ID != "FLUORESCENCE" || fmt.Sprint(b.Intensity) != "[7 8 9]" {
		t.Errorf("%+v, %+v", a, b)
	}
	if len(a.TimeMin) != 3 || a.TimeMin[0] != 0.5 || a.TimeMin[2] != 31./60 || a.Intensity[0] != 0.1 || math.Abs(a.Intensity[2]-0.3) > 1e-15 {
		t.Errorf("%+v", a)
	}
}

func TestPairs(t *testing.T) {
	const want = "[1 2 3.5] [10 -20 3000]"
	for list, of := range map[string]string{
		"1,10 2,-20 3.5,3e3\n":                               "XYDATA= (XY..XY)",
		"1, 10; 2, -20; 3.5, 3.0E+03;\n":                     "XYPOINTS= (XY..XY)",
		"1 10\n2 -20\n3.5\t3000\n":                           "PEAK TABLE= ( XY .. XY )",
		"1 10; 2 -20\n\n3.5 , 3000":                          "PEAKTABLE= (xy..xy) $$ note",
		"1 10, 2 -20, 3.5 3000\n":                            "PEAK-TABLE= (XY..XY)",
		"(1, 10, <a> )(2,-20,<b\nc)>)\n( 3.5 3000, S, <>)\n": "PEAK ASSIGNMENTS= (XYMA)",
	} {
		tables, _, err := Decode("f", strings.NewReader("##TITLE=t\n##NPOINTS= 3\n##"+of+"\n"+list+"\n##END=\n"))
		if err != nil || fmt.Sprint(tables[0].X, tables[0].Y) != want {
			t.Errorf("%q: got %v, %v, want %s", list, tables, err, want)
		}
	}
}

// TestFactorsOfPeakTable: factors that were stated for an earlier table of the block are not those of a peak table.
func TestFactorsOfPeakTable(t *testing.T) {
	const text = "##TITLE=t\n##XFACTOR= 2\n##YFACTOR= 3\n##DELTAX= 2\n##XYDATA= (X++(Y..Y))\n5 1 2\n##PEAK TABLE= (XY..XY)\n10 3\n##END=\n"
	tables, warned, err := Decode("f", strings.NewReader(text))
	if err != nil || len(tables) != 2 || fmt.Sprint(tables[0].X, tables[0].Y, tables[1].X, tables[1].Y) != "[10 12] [3 6] [10] [3]" || len(warned) > 0 {
		t.Errorf("%v, %v, %v", tables, warned, err)
	}
}

func TestWarnings(t *testing.T) {
	for change, want := range map[[2]string]string{
		{"FIRSTY= 12", "FIRSTY= 120"}:                 "first-y",
		{"##FIRSTY= 12", "##LASTY= 99"}:               "last-y",
		{"MAXY= 2620", "MAXY= 2000"}:                  "max-y",
		{"MINY= 9", "MINY= 0"}:                        "min-y",
		{"##FIRSTY= 12", "##DELTAX= 0.020"}:           "delta-x",
		{"LASTX= 1.09", "LASTX= 2.09\n##DELTAX= .01"}: "last-x",
		{"109I\n", ""}:                                "no-last-y-check",
		{"##END=\n", ""}:                              "no-end",
		{"##MINY= 9\n", "##$MINE\n"}:                  "label-without-value",
		{"2026/01/02 03:04:05", "26/01/02"}:           "start-time",
	} {
		f, err := Read("f", strings.NewReader(replaced(t, whole1, change[0], change[1])))
		if err != nil || codes(f.Warnings) != want || fmt.Sprint(f.Chromatograms[0].Intensity) != fmt.Sprint(someInts) {
			t.Errorf("%q: got %+v, %v, want %s", change[1], f, err, want)
		}
	}
}

func TestMoment(t *testing.T) {
	for text, want := range map[string]string{
		"2016/11/22 10:13:19": "2016-11-22T10:13:19", "2016/11/22  10:13:19.25 -0500": "2016-11-22T10:13:19.25-05:00", "20 Mar 2009 10:21:02": "2009-03-20T10:21:02",
		"2019-02-08 16:11:00": "2019-02-08T16:11:00", "2019-02-08 16:11": "", "09/02/08 16:11:00": "", "01/02/2003 10:00:00": "", "2016/11/22": "", "2016/13/22 10:13:19": "",
		"2016/11/22 10:13:19 +0000": "2016-11-22T10:13:19Z", "": "",
	} {
		if got := moment(text); got != want {
			t.Errorf("%q: got %q, want %q", text, got, want)
		}
	}
}
