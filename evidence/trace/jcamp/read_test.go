package jcamp

import (
	"bytes"
	"encoding/json"
	"errors"
	"math"
	"os"
	"path/filepath"
	"sort"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

const published = "../../../testdata/jcamp"

// An expectedFile is what another decoder found in a file: see testdata/SOURCES.md.
type expectedFile struct {
	DataTypes []string `json:"data_types"`
	Datasets  []struct {
		Label     string    `json:"label"`
		Form      string    `json:"form"`
		Pairs     *int      `json:"pairs"`
		Decoded   *int      `json:"npoints_decoded"`
		First     []float64 `json:"first"`
		Last      []float64 `json:"last"`
		FirstY    float64   `json:"first_y"`
		LastY     float64   `json:"last_y"`
		Sum       float64   `json:"y_sum"`
		Max       float64   `json:"y_max"`
		Min       float64   `json:"y_min"`
		XAtMax    float64   `json:"x_at_max"`
		Checks    int       `json:"y_checks"`
		FirstX    *string   `json:"firstx"`
		LastX     *string   `json:"lastx"`
		Retention *string   `json:"retention_time"`
		TIC       *string   `json:"declared_tic"`
	} `json:"datasets"`
	Tables int              `json:"n_datasets"`
	Pages  []expectedNTuple `json:"ntuples_pages"`
	AllSum float64          `json:"all_datasets_y_sum"`
}

type expectedNTuple struct {
	Form     string  `json:"form"`
	N        int     `json:"n"`
	Checks   int     `json:"y_checks"`
	Failures int     `json:"y_check_failures"`
	First    float64 `json:"first"`
	Last     float64 `json:"last"`
	RawSum   float64 `json:"raw_sum"`
}

// TestPublishedFiles compares other people's files with what another decoder found in them.
func TestPublishedFiles(t *testing.T) {
	const want = 5 + 4 + 2 + 4 // tables with one block, compressions, two pages, four pages
	if n := againstOtherDecoder(t, published); n != want {
		t.Errorf("%d tables compared, want %d", n, want)
	}
}

// againstOtherDecoder returns how many tables were compared.
func againstOtherDecoder(t *testing.T, folder string) int {
	text, err := os.ReadFile(filepath.Join(folder, "expected.json"))
	if err != nil {
		t.Fatal(err)
	}
	var files map[string]expectedFile
	if err := json.Unmarshal(text, &files); err != nil {
		t.Fatal(err)
	}
	n := 0
	for name, want := range files {
		t.Run(name, func(t *testing.T) {
			data, err := os.ReadFile(filepath.Join(folder, name))
			if err != nil {
				t.Fatal(err)
			}
			failures := 0
			for _, p := range want.Pages {
				failures += p.Failures
			}
			tables, _, err := Decode(name, bytes.NewReader(data))
			if failures > 0 {
				damagedCorpus(t, name, data, err, want)
				n += len(want.Pages)
				return
			}
			if err != nil {
				t.Fatal(err)
			}
			n += compareTables(t, tables, want)
		})
	}
	return n
}

func near(t *testing.T, what string, got, want float64) {
	t.Helper()
	if math.Abs(got-want) > 1e-9*math.Abs(want)+1e-12 { // ten digits are printed
		t.Errorf("%s: got %.12g, want %.12g", what, got, want)
	}
}

func compareTables(t *testing.T, tables []Table, want expectedFile) int {
	t.Helper()
	if len(want.DataTypes) > 0 && tables[0].DataType != want.DataTypes[0] {
		t.Errorf("data type %q, want %q", tables[0].DataType, want.DataTypes[0])
	}
	if len(want.Pages) > 0 {
		return comparePages(t, tables, want.Pages)
	}
	if len(tables) != want.Tables {
		t.Fatalf("%d tables, want %d", len(tables), want.Tables)
	}
	all := 0.0
	for i := range tables {
		for _, y := range tables[i].Y {
			all += y
		}
	}
	near(t, "sum of all tables", all, want.AllSum)
	for i, w := range want.Datasets {
		if i == len(want.Datasets)-1 { // of many, the first ones and the last are listed
			i = len(tables) - 1
		}
		tb := &tables[i]
		if squeezed(tb.Label) != w.Label || tb.Form != w.Form || tb.YChecks != w.Checks {
			t.Errorf("%s %s with %d Y-checks, want %s %s with %d", tb.Label, tb.Form, tb.YChecks, w.Label, w.Form, w.Checks)
		}
		n := len(tb.X)
		count := w.Pairs
		if count == nil {
			count = w.Decoded
		}
		if n != *count || len(tb.Y) != n {
			t.Fatalf("%d points, want %d", n, *count)
		}
		sum, top, low := 0.0, 0, 0
		for k, y := range tb.Y {
			sum += y
			if y > tb.Y[top] {
				top = k
			}
			if y < tb.Y[low] {
				low = k
			}
		}
		near(t, "sum", sum, w.Sum)
		if w.Pairs != nil {
			near(t, "first x", tb.X[0], w.First[0])
			near(t, "first y", tb.Y[0], w.First[1])
			near(t, "last x", tb.X[n-1], w.Last[0])
			near(t, "last y", tb.Y[n-1], w.Last[1])
			near(t, "x of the highest", tb.X[top], w.XAtMax)
		} else {
			near(t, "first y", tb.Y[0], w.FirstY)
			near(t, "last y", tb.Y[n-1], w.LastY)
			near(t, "highest", tb.Y[top], w.Max)
			near(t, "lowest", tb.Y[low], w.Min)
			if f, ok := whole(*w.FirstX); !ok || f.value != tb.X[0] {
				t.Errorf("first x %v, want %s", tb.X[0], *w.FirstX)
			}
			if w.LastX != nil && tb.Title != "Demo IR Spectrum" { // that file's LASTX contradicts its own lines: see TestContradictedLastX
				f, _ := whole(*w.LastX)
				near(t, "last x", tb.X[n-1], f.value)
			}
		}
		if w.Retention != nil {
			f, _ := whole(*w.Retention)
			near(t, "retention time", tb.retention.value, f.value)
			f, _ = whole(*w.TIC)
			near(t, "total ion current", tb.totalIon, f.value)
		}
	}
	return len(tables)
}

func comparePages(t *testing.T, tables []Table, want []expectedNTuple) int {
	t.Helper()
	if len(tables) != len(want) {
		t.Fatalf("%d pages, want %d", len(tables), len(want))
	}
	for i, w := range want {
		tb := &tables[i]
		if n := len(tb.Y); n != w.N || len(tb.X) != w.N || tb.YChecks != w.Checks || !strings.HasPrefix(w.Form, tb.Form) {
			t.Fatalf("page %d: %d points in %s with %d Y-checks, want %d in %s with %d", i+1, n, tb.Form, tb.YChecks, w.N, w.Form, w.Checks)
		}
		sum := 0.0
		for _, y := range tb.Y {
			sum += y / tb.YFactor
		}
		near(t, "first", tb.Y[0]/tb.YFactor, w.First)
		near(t, "last", tb.Y[w.N-1]/tb.YFactor, w.Last)
		if w.Failures == 0 {
			near(t, "sum", sum, w.RawSum)
		}
	}
	return len(want)
}

// damagedCorpus looks at a file in which somebody changed one character, which one Y-check shows. The name tells the line. With a letter
// there that makes the check hold, everything else is as the other decoder found it.
func damagedCorpus(t *testing.T, name string, data []byte, err error, want expectedFile) {
	t.Helper()
	var syntax *trace.SyntaxError
	if !errors.As(err, &syntax) || syntax.Line != 265 || !strings.Contains(err.Error(), "Y-check") {
		t.Fatalf("got %v, want a Y-check refused in line 265", err)
	}
	if _, err := Read(name, bytes.NewReader(data)); err == nil {
		t.Error("Read reads it")
	}
	rest := bytes.Clone(data)
	from := bytes.Index(rest, []byte("##PAGE= N=1"))
	second := bytes.Index(rest, []byte("##PAGE= N=2"))
	tables, _, err := Decode(name, bytes.NewReader(append(rest[:from:from], rest[second:]...)))
	if err != nil {
		t.Fatal(err)
	}
	comparePages(t, tables, want.Pages[1:])
	if repaired := repair(data); repaired == nil {
		t.Error("no other character in line 265 makes the Y-check hold")
	} else if tables, _, err := Decode(name, bytes.NewReader(repaired)); err != nil {
		t.Error(err)
	} else {
		comparePages(t, tables, want.Pages)
	}
}

// repair puts another letter for each one of line 265 until the file is read.
func repair(data []byte) []byte {
	l := newLines(data, 0, 1)
	for l.number < 265 {
		l.next()
	}
	from := l.at
	l.next()
	first := bytes.Index(data, []byte("##PAGE= N=1"))
	second := bytes.Index(data, []byte("##PAGE= N=2"))
	for i := from; i < l.at; i++ {
		if leads[data[i]].of == affn || leads[data[i]].of == none {
			continue
		}
		for _, c := range []byte("%JKLMNOPQRjklmnopqr") {
			changed := append(bytes.Clone(data[:first]), data[first:second]...)
			changed[i] = c
			if _, _, err := Decode("repaired", bytes.NewReader(append(changed, "##END=\n"...))); err == nil {
				return append(changed, data[second:]...)
			}
		}
	}
	return nil
}

// TestRead looks at what Read makes of the files: a chromatogram whose author declared it a mass spectrum over m/z stays one.
func TestRead(t *testing.T) {
	for name, want := range map[string]struct {
		scans    int
		points   int
		warnings string
		refused  string
	}{
		"ISAS_MS1.DX":   {1, 26, "", ""},
		"mass_ACD.jdx":  {1, 180, "max-y,min-y", ""},
		"chrom.jdx":     {1, 10530, "first-y,last-y,no-end", ""},
		"uv_ACD.jdx":    {refused: `uv_ACD.jdx:21:1: got data of the type "INFRARED SPECTRUM" over "1/CM", want a chromatogram or mass spectra`},
		"jcamp-256.jdx": {refused: `jcamp-256.jdx:32:1: got data of the type "NMRSPECTRUM" over "HZ", want a chromatogram or mass spectra`},
		"ntuples.jdx":   {refused: `ntuples.jdx:8:1: got data of the type "nD" over "", want a chromatogram or mass spectra`},
		"noend.jdx":     {refused: `noend.jdx:4:1: got data of the type "type 1" over "", want a chromatogram or mass spectra`},
	} {
		data, err := os.ReadFile(filepath.Join(published, name))
		if err != nil {
			t.Fatal(err)
		}
		if !Sniff(data[:min(len(data), 4096)]) {
			t.Errorf("%s is not recognised", name)
		}
		f, err := Read(name, bytes.NewReader(data))
		if want.refused != "" {
			if err == nil || err.Error() != want.refused {
				t.Errorf("got %v, want %s", err, want.refused)
			}
			if s, err := ReadSpectra(name, bytes.NewReader(data)); err != nil || len(s) == 0 || len(s[0].X) == 0 || len(s[0].Mass.MZ) > 0 {
				t.Errorf("%s as spectra: %d, %v", name, len(s), err)
			}
			continue
		}
		if err != nil {
			t.Error(err)
			continue
		}
		if f.Scans.Len() != want.scans || f.Scans.Scan(0).Points != want.points || f.Scans.Scan(0).TimeMin != 0 || len(f.Chromatograms) > 0 {
			t.Errorf("%s: %d scans, %+v", name, f.Scans.Len(), f.Scans.Scan(0))
		}
		mz, err := f.Scans.Open().MZ(0)
		if err != nil || len(mz) != want.points || !sort.Float64sAreSorted(mz) {
			t.Errorf("%s: %d m/z, %v", name, len(mz), err)
		}
		if got := codes(f.Warnings); got != want.warnings {
			t.Errorf("%s: warnings %s, want %s", name, got, want.warnings)
		}
	}
}

func codes(w []trace.Warning) string {
	var list []string
	for _, x := range w {
		list = append(list, x.Code)
	}
	sort.Strings(list)
	return strings.Join(list, ",")
}

// TestReferenceSpectrum reads a published mass spectrum with what it says of itself (the values stand in the file).
func TestReferenceSpectrum(t *testing.T) {
	data, err := os.ReadFile(filepath.Join(published, "ISAS_MS1.DX"))
	if err != nil {
		t.Fatal(err)
	}
	list, err := ReadSpectra("ISAS_MS1.DX", bytes.NewReader(data))
	if err != nil || len(list) != 1 {
		t.Fatalf("%d spectra, %v", len(list), err)
	}
	s := list[0]
	if s.Title != "2-Chlorophenol" || s.DataType != "MASS SPECTRUM" || s.XUnits != "M/Z" || s.YUnits != "RELATIVE ABUNDANCE" || s.Origin == "" || s.Owner == "" {
		t.Errorf("%+v", s)
	}
	if len(s.Mass.MZ) != 26 || s.Mass.MZ[22] != 128 || s.Mass.Intensity[22] != 100 || s.X != nil {
		t.Errorf("%+v", s.Mass)
	}
}
