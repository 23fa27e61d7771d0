package draft_test

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"slices"
	"strings"
	"testing"
	"testing/fstest"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/draft"
	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/trace"
)

func srm(precursor, product, height float64, p trace.Polarity) trace.Chromatogram {
	return trace.Chromatogram{
		ID: fmt.Sprintf("%g > %g", precursor, product), Kind: trace.SRM, Transition: trace.Transition{PrecursorMZ: precursor, ProductMZ: product, Polarity: p},
		TimeMin: []float64{1, 2, 3}, Intensity: []float64{1, height, 1},
	}
}

func named(id string, kind trace.Kind) trace.Chromatogram {
	return trace.Chromatogram{ID: id, Kind: kind, TimeMin: []float64{1, 2}, Intensity: []float64{1, 2}}
}

func file(start, code string, traces ...trace.Chromatogram) *trace.File {
	return &trace.File{Format: "mzML", StartTime: start, SampleCode: code, Chromatograms: traces}
}

// loaded wants that a draft, in a folder with its raw files and documents, has no problems but its marks.
func loaded(t *testing.T, texts draft.Texts, raws []draft.Raw, documents ...string) {
	t.Helper()
	fsys := fstest.MapFS{casefile.CaseFile: {Data: texts.Case}, draft.MethodFile: {Data: texts.Method}, draft.SequenceFile: {Data: texts.Sequence}}
	for _, r := range raws {
		fsys[r.Path] = &fstest.MapFile{}
	}
	for _, d := range documents {
		fsys[d] = &fstest.MapFile{}
	}
	_, err := casefile.Load(fsys)
	problems, ok := err.(casefile.Problems)
	if !ok || len(problems) != texts.Marks {
		t.Errorf("%d problems, want %d: %v", len(problems), texts.Marks, err)
	}
	for _, p := range problems {
		if p.Got != strictyaml.MarkFound {
			t.Error(&p)
		}
	}
}

func rows(t *testing.T, texts draft.Texts) [][]string {
	t.Helper()
	all, err := csv.NewReader(bytes.NewReader(texts.Sequence)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return all[1:]
}

func TestReactions(t *testing.T) {
	raws := []draft.Raw{
		{"raw/a.mzML", file("2026-03-18T08:00:00+01:00", "", srm(240.2, 148.1, 10, "positive"), srm(240.4, 222.1, 90, "positive"), srm(240.2, 166.1, 20, "positive"), srm(240.2, 148.1, 5, "negative"), srm(300, 100, 5, ""), named("TIC", trace.TIC))},
		{"raw/b.mzML", file("2026-03-18T09:00:00+01:00", "", named("TIC", trace.TIC), srm(240.2, 166.1, 25, "positive"), srm(240.3, 148.2, 50, "positive"), srm(240.2, 222.1, 90, "positive"), srm(240.2, 148.1, 5, "negative"), srm(500, 100, 1, ""))},
	}
	texts := draft.Write(raws, nil, nil)
	loaded(t, texts, raws)
	method := string(texts.Method)
	for _, want := range []string{
		"quantifier: {precursor: 240.4, product: 222.1, polarity: positive}\n    qualifiers:  # The transitions that confirm the identity.\n      - {precursor: 240.2, product: 148.1, polarity: positive}\n      - {precursor: 240.2, product: 166.1, polarity: positive}\n",
		"quantifier: {precursor: 240.2, product: 148.1, polarity: negative}\n    qualifiers:  # The transitions that confirm the identity.\n      - precursor: FILL-IN",
		"# Not recorded in all files, and left out: 300 > 100\n", "# Not recorded in all files, and left out: 500 > 100\n",
		"# Precursor 240.4 positive: highest at 2.00 min (90 in raw/a.mzML)\n",
	} {
		if !strings.Contains(method, want) {
			t.Errorf("no %q in\n%s", want, method)
		}
	}
	if n := strings.Count(method, "  - id: FILL-IN"); n != 3 {
		t.Errorf("%d compounds with the internal standard, want 3", n)
	}
	again := draft.Write([]draft.Raw{raws[1], raws[0]}, nil, nil)
	if !bytes.Equal(texts.Method, again.Method) || !bytes.Equal(texts.Sequence, again.Sequence) {
		t.Error("the order in which the files come makes a difference")
	}
}

// TestForms: how traces are told apart follows from what the files hold.
func TestForms(t *testing.T) {
	scans := &trace.HeldScans{Headers: []trace.Scan{{ID: "1"}}, Spectra: []trace.Spectrum{{}}}
	full := file("", "", named("TIC", trace.TIC), named("base peak", trace.Other))
	full.Scans = scans
	tests := []struct {
		name  string
		files []*trace.File
		want  []string
	}{
		{"wavelengths", []*trace.File{file("", "", named("UV 254, \"a\"", trace.Absorption), named("UV 280", trace.Absorption)), file("", "", named("UV 280", trace.Absorption), named("UV 254, \"a\"", trace.Absorption))},
			[]string{`quantifier: {trace_id: "UV 254, \"a\""}`, `quantifier: {trace_id: "UV 280"}`, "- trace_id: FILL-IN", "transition:  # What is monitored for it.\n      # precursor: FILL-IN"}},
		{"names in one file alone", []*trace.File{file("", "", named("UV 254", trace.Absorption)), file("", "", named("UV 280", trace.Absorption))}, []string{"    quantifier:  # The transition that is measured."}},
		{"full scans", []*trace.File{full, full}, []string{"      ion:  # An ion trace, taken from the spectra of full-scan data.\n        mz: FILL-IN", "          tolerance: FILL-IN", "          combine: FILL-IN"}},
		{"another detector", []*trace.File{file("", "", named("signal", trace.Other), named("TIC", trace.TIC))}, []string{"quantifier: {trace_id: signal}"}},
		{"total ion current", []*trace.File{file("", "", named("TIC", trace.TIC))}, []string{"quantifier: {trace_id: TIC}"}},
		{"a name that does not show", []*trace.File{file("", "", named("a\u200b", trace.Absorption), named(" b", trace.Absorption), named("", trace.Absorption))}, []string{"trace_id: FILL-IN"}},
		{"no traces", []*trace.File{file("", "")}, []string{"trace_id: FILL-IN"}},
		{"text", []*trace.File{nil, nil}, []string{"# Delimited text: 2 of raw/*.x, say.", "  - files: FILL-IN", "      - column: FILL-IN", "trace_id: FILL-IN"}},
		{"text and reactions", []*trace.File{nil, file("", "", srm(1, 2, 3, ""))}, []string{"  - files: FILL-IN", "quantifier: {precursor: 1, product: 2}"}},
	}
	for _, tt := range tests {
		var raws []draft.Raw
		for i, f := range tt.files {
			raws = append(raws, draft.Raw{Path: fmt.Sprintf("raw/%d.x", i), File: f})
		}
		texts := draft.Write(raws, nil, nil)
		t.Run(tt.name, func(t *testing.T) {
			loaded(t, texts, raws)
			for _, want := range tt.want {
				if !strings.Contains(string(texts.Method), want) {
					t.Errorf("no %q in\n%s", want, texts.Method)
				}
			}
		})
	}
}

// TestSequence: rows in order of time, ids from the names, and nothing from a file that does not state it.
func TestSequence(t *testing.T) {
	raws := []draft.Raw{
		{"raw/none2.mzML", file("", "")},
		{"raw/text.csv", nil},
		{"raw/local-b.mzML", file("2026-03-18T07:00:00", "")},
		{"raw/local-a.mzML", file("2026-03-18T08:00:00", "")},
		{"raw/Zürich 1, b.mzML.gz", file("2026-03-18T09:00:00+01:00", " 44 ")},
		{"raw/second.mzML", file("2026-03-18T07:30:00Z", "44,1")},
		{"other/second.cdf", file("2026-03-18T07:30:00Z", "a\u202eb")},
		{"raw/wrong.mzML", file("2026-02-30T07:30:00Z", "a\nb")},
	}
	texts := draft.Write(raws, nil, nil)
	loaded(t, texts, raws)
	want := [][]string{ // id, file, sample code, start
		{"second", "other/second.cdf", "FILL-IN", "2026-03-18T07:30:00Z"},
		{"second-2", "raw/second.mzML", "44,1", "FILL-IN"}, // two files state the same start
		{"Z-rich-1--b", "raw/Zürich 1, b.mzML.gz", "FILL-IN", "2026-03-18T09:00:00+01:00"},
		{"local-b", "raw/local-b.mzML", "FILL-IN", "FILL-IN"},
		{"local-a", "raw/local-a.mzML", "FILL-IN", "FILL-IN"},
		{"none2", "raw/none2.mzML", "FILL-IN", "FILL-IN"},
		{"text", "raw/text.csv", "FILL-IN", "FILL-IN"},
		{"wrong", "raw/wrong.mzML", "FILL-IN", "FILL-IN"},
	}
	for i, row := range rows(t, texts) {
		if got := []string{row[0], row[1], row[5], row[7]}; !slices.Equal(got, want[i]) {
			t.Errorf("row %d: %q, want %q", i+1, got, want[i])
		}
		if row[2] != "FILL-IN" || row[6] != "FILL-IN" || row[8] != "FILL-IN" || row[9] != "" {
			t.Errorf("row %d: %q", i+1, row)
		}
	}
}

func TestDocumentsAndCriteria(t *testing.T) {
	raws := []draft.Raw{{"a.mzML", file("", "")}}
	texts := draft.Write(raws, []string{"documents/b: form.pdf", "documents/a.pdf"}, []string{"set-a", "set-b"})
	for _, want := range []string{"documents/a.pdf\n    title: FILL-IN", `file: "documents/b: form.pdf"`, "# sets that are built in: set-a, set-b\ncriteria: FILL-IN"} {
		if !strings.Contains(string(texts.Case), want) {
			t.Errorf("no %q in\n%s", want, texts.Case)
		}
	}
	texts = draft.Write(raws, []string{"documents/ü (1).pdf", "documents/a.pdf"}, nil)
	loaded(t, texts, raws, "documents/a.pdf", "documents/ü (1).pdf")
}

func TestDelimited(t *testing.T) {
	yes := []string{"a b\n1,2\n2,3\n3,4\n", "1;2,5\r\n2;3,5\r\n3;4,5", "x\ty\n.5\t1E3\tq\n1\t2\tq\n2\t-3\tq\n", "1  2\n2 3\n3   4", "\xff\xfe1\x00;\x002\x00\n\x002\x00;\x002\x00\n\x003\x00;\x002\x00\n\x00"}
	no := []string{"", "1,2\n2,3\n", "%PDF-1.4\n1 0 obj\n<</Type/Catalog>>\n", "a,b\nc,d\ne,f\n", "1,2\n1,2,3\n1,2\n1,2,3\n", "1,2\x00\n2,3\n3,4\n", "format: a\nx: 1\ny: 2\n"}
	for _, text := range yes {
		if !draft.Delimited([]byte(text)) {
			t.Errorf("%q is not taken for a table", text)
		}
	}
	for _, text := range no {
		if draft.Delimited([]byte(text)) {
			t.Errorf("%q is taken for a table", text)
		}
	}
}

func ExampleWrite() {
	f := &trace.File{StartTime: "2026-03-18T08:00:00+01:00", SampleCode: "4410", Chromatograms: []trace.Chromatogram{
		{ID: "UV 254", Kind: trace.Absorption, TimeMin: []float64{0, 1}, Intensity: []float64{3, 4}},
	}}
	texts := draft.Write([]draft.Raw{{Path: "raw/010.cdf", File: f}}, nil, nil)
	fmt.Printf("%s", texts.Sequence)
	// Output:
	// injection,file,role,level,aliquot,sample_code,dilution,acquired,operator,note,FILL-IN
	// 010,raw/010.cdf,FILL-IN,FILL-IN,FILL-IN,4410,FILL-IN,2026-03-18T08:00:00+01:00,FILL-IN,,FILL-IN
}

// FuzzNames: whatever a file states, the draft has no problems but its marks.
func FuzzNames(f *testing.F) {
	f.Add("UV 254", "4410", "2026-03-18T08:00:00+01:00", "model", "a")
	f.Add("FILL-IN", "FILL-IN", "FILL-IN", "FILL-IN\n\u2028", "FILL-IN")
	f.Add("a: b # c", "- 'x'", "x", "\ufffd\xff", "{[,]}")
	f.Fuzz(func(t *testing.T, id, code, start, instrument, name string) {
		path := "raw/" + name
		if p, err := strictyaml.ParsePath(path); err != nil || p != path || strings.ContainsAny(name, "/\"") || name != strings.TrimSpace(name) {
			t.Skip()
		}
		x := file(start, code, named(id, trace.Absorption))
		x.Instrument = instrument
		raws := []draft.Raw{{path, x}, {"raw/b", x}}
		if strings.EqualFold(name, "b") || name[0] == '.' || strings.EqualFold(name, "thumbs.db") || strings.EqualFold(name, "desktop.ini") {
			t.Skip() // no file of a case
		}
		texts := draft.Write(raws, nil, nil)
		fsys := fstest.MapFS{casefile.CaseFile: {Data: texts.Case}, draft.MethodFile: {Data: texts.Method}, draft.SequenceFile: {Data: texts.Sequence}, path: {}, "raw/b": {}}
		_, err := casefile.Load(fsys)
		for _, p := range err.(casefile.Problems) {
			if p.Got != strictyaml.MarkFound && p.File != path {
				t.Error(&p)
			}
		}
	})
}
