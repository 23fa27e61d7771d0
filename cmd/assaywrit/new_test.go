package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/draft"
	"assaywrit/evidence/simulate/demo"
	"assaywrit/evidence/strictyaml"
)

// folderOf makes a folder of files, each from a file of the repository.
func folderOf(t testing.TB, files map[string]string) string {
	t.Helper()
	dir := t.TempDir()
	for name, from := range files {
		data, err := os.ReadFile(filepath.FromSlash("../../testdata/" + from))
		if err != nil {
			t.Fatal(err)
		}
		putFile(t, dir, name, data)
	}
	return dir
}

func putFile(t testing.TB, dir, name string, data []byte) {
	t.Helper()
	path := filepath.Join(dir, filepath.FromSlash(name))
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, data, 0o666); err != nil {
		t.Fatal(err)
	}
}

// demoRaws is a folder with the raw files and documents of the demo, and the sequence that goes with them.
func demoRaws(t testing.TB) (dir string, sequence [][]string) {
	t.Helper()
	files, err := demo.Files()
	if err != nil {
		t.Fatal(err)
	}
	dir = t.TempDir()
	for _, f := range files {
		switch {
		case f.Path == "sequence.csv":
			if sequence, err = csv.NewReader(bytes.NewReader(f.Data)).ReadAll(); err != nil {
				t.Fatal(err)
			}
		case strings.Contains(f.Path, "/"):
			putFile(t, dir, f.Path, f.Data)
		}
	}
	return dir, sequence
}

// drafted runs new, which is to succeed, and returns what it prints.
func drafted(t testing.TB, args ...string) string {
	t.Helper()
	var stdout, stderr bytes.Buffer
	if status := run(append([]string{"new"}, args...), nil, &stdout, &stderr); status != exitDone || stderr.Len() > 0 {
		t.Fatalf("new: status %d\n%s", status, &stderr)
	}
	return stdout.String()
}

var commentInYAML = regexp.MustCompile(`(^| )#.*`)

// marksIn finds the marks of a draft by its text alone, as file:line:column. The draft's values hold no sign of a comment.
func marksIn(t testing.TB, dir string) []string {
	t.Helper()
	var places []string
	for _, name := range []string{"case.yaml", "method.yaml", "sequence.csv"} {
		data, err := os.ReadFile(filepath.Join(dir, name))
		if err != nil {
			t.Fatal(err)
		}
		for i, line := range strings.Split(string(data), "\n") {
			if strings.HasSuffix(name, ".yaml") {
				line = commentInYAML.ReplaceAllString(line, "")
			}
			for at := 0; ; at += len(strictyaml.Mark) {
				next := strings.Index(line[at:], strictyaml.Mark)
				if next < 0 {
					break
				}
				at += next
				places = append(places, fmt.Sprintf("%s:%d:%d", name, i+1, len([]rune(line[:at]))+1))
			}
		}
	}
	return places
}

var markReported = regexp.MustCompile(`^assaywrit: error: (\S+:\d+:\d+): [^ ].*: got the mark FILL-IN, want \S`)

// checkSaysMarks wants that check reports the marks of a draft, each with its key and what is wanted, and nothing else.
func checkSaysMarks(t *testing.T, dir, printed string) {
	t.Helper()
	want := marksIn(t, dir)
	var stdout, stderr bytes.Buffer
	if status := run([]string{"check", dir}, nil, &stdout, &stderr); status != exitRefused || stdout.Len() > 0 {
		t.Fatalf("check: status %d\n%s%s", status, &stdout, &stderr)
	}
	var got []string
	for _, line := range strings.Split(strings.TrimSpace(stderr.String()), "\n") {
		m := markReported.FindStringSubmatch(line)
		if m == nil {
			t.Errorf("check: %s", line)
			continue
		}
		got = append(got, m[1])
	}
	if !slices.Equal(got, want) || len(got) == 0 {
		t.Errorf("check reports %d marks, and there are %d\n%q\n%q", len(got), len(want), got, want)
	}
	if says := fmt.Sprintf("%d marks to fill in; assaywrit check %s lists them\n", len(want), dir); !strings.HasSuffix(printed, says) {
		t.Errorf("new ends with %q, want %q", printed[max(0, len(printed)-len(says)):], says)
	}
}

// TestNewOfFormats drafts folders of each format, and reads what new says of them.
func TestNewOfFormats(t *testing.T) {
	tests := []struct {
		name         string
		files        map[string]string
		says, method []string
	}{
		{"ANDI chromatography", map[string]string{"raw/1.cdf": "andi/hplc-uv-a.cdf", "raw/2.cdf": "andi/hplc-uv-a.cdf2.cdf"},
			[]string{"raw/1.cdf\nANDI chromatography 1.0, 21508 bytes", "start: 2018-10-30T17:43:05+00:00", "sample: MW-2-6-6 IC 90", "DAD1 A, Sig=254,4 Ref=360,100  absorption", "4651    0.0002    31.0002"},
			[]string{`quantifier: {trace_id: "DAD1 A, Sig=254,4 Ref=360,100"}`}},
		{"ANDI, of two kinds", map[string]string{"1.cdf": "andi/hplc-uv-a.cdf", "2.cdf": "andi/gcms-tic-a.cdf"}, []string{"MSD1 TIC, MS File"}, []string{"- trace_id: FILL-IN"}},
		{"ANDI, full scans, packed", map[string]string{"raw/deep/scan.cdf.gz": "andi/gcms-scan-a.cdf.gz"},
			[]string{"ANDI mass spectrometry 1.0.1", "instrument: Gas Chromatograph", "6401               positive  centroid"},
			[]string{"        mz: FILL-IN", "        tolerance: FILL-IN", "# The files state: Gas Chromatograph"}},
		{"JCAMP-DX", map[string]string{"chrom.jdx": "jcamp/chrom.jdx", "ms.dx": "jcamp/ISAS_MS1.DX"}, []string{"JCAMP-DX 4.24", "warning no-end:", "JCAMP-DX 5.00"}, []string{"        mz: FILL-IN"}},
		{"delimited text", map[string]string{"raw/a.txt": "table/minutes_tab.txt", "raw/b.csv": "table/minutes_comma.csv", "raw/c.csv": "table/seconds_semicolon_decimal_comma.csv"},
			[]string{"raw/a.txt\ndelimited text, layout to be declared", "raw/c.csv\ndelimited text, layout to be declared"},
			[]string{"# Delimited text: 2 of raw/*.csv", "# Delimited text: 1 of raw/*.txt", "  - files: FILL-IN  # text (Path pattern", "trace_id: FILL-IN"}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			dir := folderOf(t, tt.files)
			putFile(t, dir, ".hidden/x", []byte("x"))
			putFile(t, dir, "raw/Thumbs.db", []byte("x"))
			printed := drafted(t, dir)
			checkSaysMarks(t, dir, printed)
			method, err := os.ReadFile(filepath.Join(dir, "method.yaml"))
			if err != nil {
				t.Fatal(err)
			}
			for _, want := range tt.says {
				if !strings.Contains(printed, want) {
					t.Errorf("new does not say %q:\n%s", want, printed)
				}
			}
			for _, want := range tt.method {
				if !strings.Contains(string(method), want) {
					t.Errorf("the method does not hold %q:\n%s", want, method)
				}
			}
		})
	}
}

func TestNewOfDemo(t *testing.T) {
	dir, sequence := demoRaws(t)
	printed := drafted(t, dir)
	checkSaysMarks(t, dir, printed)
	for _, want := range []string{"raw/021.mzML\nmzML 1.1.0", "SRM 286.1 > 204.0  srm   286.1          204          positive  181", "documents/custody-form.txt: a document", "instrument: triple quadrupole, simulated, serial number SIM-0007"} {
		if !strings.Contains(printed, want) {
			t.Errorf("new does not say %q", want)
		}
	}
	fill(t, dir, func(p casefile.Problem) string { return demoValue(t, p, sequence) })
	var stdout, stderr bytes.Buffer
	if status := run([]string{"check", dir}, nil, &stdout, &stderr); status != exitDone || !strings.Contains(stdout.String(), "no problem found") {
		t.Fatalf("check of the filled draft: status %d\n%s%s", status, &stdout, &stderr)
	}
}

// fill replaces each mark of a draft by a value.
func fill(t *testing.T, dir string, value func(casefile.Problem) string) {
	t.Helper()
	_, err := casefile.Load(os.DirFS(dir))
	var problems casefile.Problems
	if !errors.As(err, &problems) {
		t.Fatal(err)
	}
	lines := map[string][]string{}
	for _, p := range slices.Backward(problems) { // the last of a line first: what is before it keeps its place
		if lines[p.File] == nil {
			data, err := os.ReadFile(filepath.Join(dir, p.File))
			if err != nil {
				t.Fatal(err)
			}
			lines[p.File] = strings.Split(string(data), "\n")
		}
		line := []rune(lines[p.File][p.Line-1])
		rest, ok := strings.CutPrefix(string(line[p.Column-1:]), strictyaml.Mark)
		if !ok {
			t.Fatalf("%v: there is no mark", &p)
		}
		lines[p.File][p.Line-1] = string(line[:p.Column-1]) + value(p) + rest
	}
	for name, list := range lines {
		putFile(t, dir, name, []byte(strings.Join(list, "\n")))
	}
}

// What a person knows of the demo's traces, in the order of the draft: every compound, the internal standards too, is an analyte here.
var demoCompounds = []struct{ id, kind, retention string }{
	{"terbutaline", "presence", "1.85 min"}, {"terbutaline-d9", "presence", "1.83 min"}, {"salbutamol", "threshold", "2.30 min"},
	{"salbutamol-d3", "presence", "2.285 min"}, {"clenbuterol", "presence", "3.62 min"}, {"clenbuterol-d9", "presence", "3.585 min"},
}

// demoValues are by key, without the numbers of items.
var demoValues = map[string]string{
	"sample.matrix": "urine", "matrix": "urine", "sample.code": "4410927", "sample.collected": "2026-03-14T16:20:00+01:00", "sample.received": "2026-03-16T09:05:00+01:00",
	"request.analytes": "salbutamol", "criteria": "antidoping-urine-2022", "deviations": "[]", "people.code": "P-03", "signatories.person": "P-03", "signatories.meaning": "authorised",
	"custody.at": "2026-03-14T16:20:00+01:00", "version": `"3"`,
	"integration.smoothing_points": "9", "integration.min_signal_to_noise": "3", "integration.min_width": "0.02 min", "integration.shared_valley": "perpendicular-drop", "integration.valley_fraction": "0",
	"identification.reference_roles": "calibrator", "identification.coelution": "0.03 min", "identification.transition_tolerance": "0.3",
	"batch.calibrator_levels": "6", "batch.aliquots": "3", "batch.internal_standard_high": "150 %",
	"internal_standards.id": "standard", "internal_standards.expected_retention": "2.285 min", "internal_standards.retention_window": "0.2 min",
	"internal_standards.transition.precursor": "243.2", "internal_standards.transition.product": "151.1",
	"analytes.internal_standard": "standard", "analytes.retention_window": "0.1 min", "analytes.unit": "ng/mL", "analytes.calibration.weighting": "1/x2",
	"analytes.qualifiers.precursor": "240.2", "analytes.qualifiers.product": "222.1",
	"analytes.uncertainty.repeatability": "aliquots", "analytes.uncertainty.components.type": "B", "analytes.uncertainty.components.relative": "4 %",
	"operator": "P-03",
}

var itemNumber = regexp.MustCompile(`\[\d+\]`)

func demoValue(t *testing.T, p casefile.Problem, sequence [][]string) string {
	key := itemNumber.ReplaceAllString(p.Key, "")
	if v, ok := demoValues[key]; ok {
		return v
	}
	var i int
	fmt.Sscanf(p.Key, "analytes[%d]", &i)
	switch {
	case key == "analytes.id":
		return demoCompounds[i].id
	case key == "analytes.kind":
		return demoCompounds[i].kind
	case key == "analytes.expected_retention":
		return demoCompounds[i].retention
	case strings.HasPrefix(key, "batch."):
		return "20 %"
	case p.File == "sequence.csv" && p.Line == 1:
		return "nominal " + demoCompounds[(p.Column-len("injection,file,role,level,aliquot,sample_code,dilution,acquired,operator,note,"))/len("FILL-IN,")].id + " [ng/mL]"
	case p.File == "sequence.csv":
		row, header := sequence[p.Line-1], sequence[0]
		if k := slices.Index(header, key); k >= 0 {
			return row[k]
		}
		return row[slices.Index(header, "nominal salbutamol [ng/mL]")]
	case p.File == casefile.CaseFile || p.File == draft.MethodFile:
		return "text"
	}
	t.Fatalf("no value for %v", &p)
	return ""
}

func TestNewAsJSON(t *testing.T) {
	dir := folderOf(t, map[string]string{"raw/1.cdf": "andi/hplc-uv-a.cdf", "raw/t.txt": "table/minutes_tab.txt", "documents/form.pdf": "SOURCES.md"})
	var got struct {
		Files []struct {
			Path, Format string
			Traces       []traceSummary
		}
		Documents []string
		Marks     int
	}
	if err := json.Unmarshal([]byte(drafted(t, dir, "--json")), &got); err != nil {
		t.Fatal(err)
	}
	if len(got.Files) != 2 || got.Files[0].Path != "raw/1.cdf" || got.Files[0].Traces[0].Points != 4651 || got.Files[1].Format != layoutToDeclare ||
		!slices.Equal(got.Documents, []string{"documents/form.pdf"}) || got.Marks != len(marksIn(t, dir)) {
		t.Errorf("%+v", got)
	}
}

// namesIn lists everything in a folder, hidden files too.
func namesIn(t testing.TB, dir string) []string {
	t.Helper()
	var names []string
	err := fs.WalkDir(os.DirFS(dir), ".", func(p string, _ fs.DirEntry, err error) error {
		names = append(names, p)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return names
}

// TestNewRefuses: all problems are told, and nothing is written or printed.
func TestNewRefuses(t *testing.T) {
	good := map[string]string{"raw/good.cdf": "andi/hplc-uv-a.cdf"}
	tests := []struct {
		name   string
		files  map[string]string
		status int
		says   []string
	}{
		{"damaged files", map[string]string{"raw/a.mzML": "damaged/cut_file.mzML", "raw/b.cdf": "damaged/cut_values.cdf", "raw/c.jdx": "damaged/fewer_points.jdx", "raw/d.gz": "damaged/cut_gzip.gz"}, exitRefused,
			[]string{"error: raw/a.mzML", "error: raw/b.cdf", "error: raw/c.jdx", "error: raw/d.gz"}},
		{"no raw data", map[string]string{"notes.md": "SOURCES.md"}, exitRefused, []string{`error: notes.md: got content that begins with`, "hint: export the run in an open format; put what is no raw data into documents/"}},
		{"a case that is there", map[string]string{"case.yaml": "SOURCES.md", "sequence.csv": "SOURCES.md"}, exitFailed, []string{"case.yaml: exists already", "sequence.csv: exists already", "new overwrites nothing"}},
		{"names that not every system can hold", map[string]string{"raw/a:b.cdf": "andi/hplc-uv-a.cdf"}, exitRefused, []string{"raw/a:b.cdf: got a name that not every system can hold"}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			dir := folderOf(t, good)
			for name, from := range tt.files {
				data, err := os.ReadFile("../../testdata/" + from)
				if err != nil {
					t.Fatal(err)
				}
				putFile(t, dir, name, data)
			}
			before := namesIn(t, dir)
			var stdout, stderr bytes.Buffer
			if status := run([]string{"new", dir}, nil, &stdout, &stderr); status != tt.status || stdout.Len() > 0 {
				t.Errorf("status %d, want %d\n%s", status, tt.status, &stdout)
			}
			for _, want := range tt.says {
				if !strings.Contains(stderr.String(), want) {
					t.Errorf("no %q in\n%s", want, &stderr)
				}
			}
			if strings.Contains(stderr.String(), "good.cdf") {
				t.Errorf("the good file is told too:\n%s", &stderr)
			}
			if after := namesIn(t, dir); !slices.Equal(before, after) {
				t.Errorf("%q became %q", before, after)
			}
		})
	}
}

// TestWriteDraftAllOrNone: a file that appears in the meantime stays as it is, and the others are taken back.
func TestWriteDraftAllOrNone(t *testing.T) {
	for _, name := range draftNames() {
		dir := t.TempDir()
		putFile(t, dir, name, []byte("mine"))
		err := writeDraft(dir, draft.Texts{Case: []byte("c"), Method: []byte("m"), Sequence: []byte("s")})
		data, readErr := os.ReadFile(filepath.Join(dir, name))
		if !errors.Is(err, fs.ErrExist) || readErr != nil || string(data) != "mine" || len(namesIn(t, dir)) != 2 {
			t.Errorf("%s: %v; %q, %v, %q", name, err, data, readErr, namesIn(t, dir))
		}
	}
	dir := t.TempDir()
	if err := writeDraft(dir, draft.Texts{Case: bytes.Repeat([]byte("c"), strictyaml.MaxBytes+1)}); err == nil || len(namesIn(t, dir)) != 1 {
		t.Errorf("%v, %q", err, namesIn(t, dir))
	}
}
