package casefile

import (
	"errors"
	"fmt"
	"io/fs"
	"reflect"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

func loaded(t testing.TB, fsys fs.FS) *Folder {
	t.Helper()
	f, err := Load(fsys)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// TestLoad reads the small case and looks at what was converted or left as written.
func TestLoad(t *testing.T) {
	f := loaded(t, small())
	value := func(v float64) *float64 { return &v }
	for _, tt := range []struct {
		name      string
		got, want any
	}{
		{"sample code stays text", f.Case.Sample.Code, "4410"},
		{"lot stays text", f.Case.Materials[0].Lot, "007"},
		{"version stays text", f.Method.Version, "3"},
		{"volume", f.Case.Sample.VolumeML, value(92)},
		{"appearance is absent", f.Case.Sample.Appearance, ""},
		{"void time", f.Method.Instrument.VoidTimeMin, value(0.5)},
		{"flow is absent", f.Method.Instrument.FlowMLPerMin, (*float64)(nil)},
		{"integration", f.Method.Integration.Parameters, peak.Parameters{SmoothingPoints: 9, MinSN: 3, MinWidthMin: 0.02, Shared: peak.Drop}},
		{"quantifier", f.Method.Analytes[0].Quantifier, Transition{Transition: trace.Transition{PrecursorMZ: 240.2, ProductMZ: 148.1}}},
		{"component", f.Method.Analytes[0].Uncertainty.Components[0].Relative, value(0.04)},
		{"limit", f.Method.Batch.InternalStandardHigh, 1.5},
		{"roles", f.Method.Identification.ReferenceRoles, []Role{Calibrator}},
		{"injections", len(f.Injections), 7},
		{"nominal", f.Injections[1].Nominal, []Nominal{{"salbutamol", 62.5}}},
		{"no nominal", f.Injections[0].Nominal, []Nominal(nil)},
		{"dilution", f.Injections[6].Dilution, 2.5},
		{"no dilution", f.Injections[0].Dilution, 1.0},
		{"quoted note", f.Injections[4].Note, "no spray, again"},
		{"line", f.Injections[6].Line, 8},
		{"manual", f.Case.Manual[0].StartMin, 2.2},
	} {
		if !reflect.DeepEqual(tt.got, tt.want) {
			t.Errorf("%s: %v, want %v", tt.name, tt.got, tt.want)
		}
	}
}

// TestAccepted: what people may also write.
func TestAccepted(t *testing.T) {
	tests := []struct {
		name    string
		changes []change
	}{
		{"other units", []change{{"case.yaml", "92 mL", "0.092 L"}, {"method.yaml", "0.5 min", "30 s"}}},
		{"backslashes", []change{{"sequence.csv", "raw/c1.mzML", `raw\c1.mzML`}, {"case.yaml", "documents/form.pdf", `documents\form.pdf`}}},
		{"hidden files", []change{{".DS_Store", "", "x"}, {"raw/.~lock.b1.mzML#", "", "x"}, {".git/config", "", "x"}, {"raw/Thumbs.db", "", "x"}, {"desktop.ini", "", "x"}}},
		{"criteria in the folder", []change{{"case.yaml", "built-in-set", "criteria/own.yaml"}, {"criteria/own.yaml", "", "x"}}},
		{"criteria with a backslash", []change{{"case.yaml", "built-in-set", `criteria\own.yaml`}, {"criteria/own.yaml", "", "x"}}},
		{"criteria without a folder", []change{{"case.yaml", "built-in-set", "own.yaml"}, {"own.yaml", "", "x"}}},
		{"method in another place", []change{{"case.yaml", "method.yaml", "method/m1.yaml"}, {"method.yaml", "", ""}, {"method/m1.yaml", "", smallMethod}}},
		{"zero in a blank", []change{{"sequence.csv", "matrix-blank,,,,,2026-03-18T08:00:00+01:00,P-2,,", "matrix-blank,,,,,2026-03-18T08:00:00+01:00,P-2,,0"}}},
		{"zero calibrator without weights", []change{{"sequence.csv", "62.5", "0"}, {"method.yaml", "1/x2", "none"}}},
		{"control of zero", []change{{"sequence.csv", "1500", "0"}}},
		{"excluded calibrator keeps its amount", []change{{"sequence.csv", `"no spray, again",`, `"no spray, again",500`}}},
		{"same time in custody", []change{{"case.yaml", "2026-03-18T07:10:00", "2026-03-18T07:00:00"}}},
		{"two items of one person", []change{{"case.yaml", "item: aliquot A1, event: taken, to: P-2", "item: aliquot A1, event: taken, from: P-2, to: P-3"}}},
		{"from the store", []change{{"case.yaml", "item: aliquot A1, event: taken, to: P-2", "item: A bottle, event: taken out, to: P-3"}}},
		{"no manual integration", []change{{"case.yaml", smallCase[strings.Index(smallCase, "manual_integrations"):strings.Index(smallCase, "documents:")], ""}}},
		{"no deviation", []change{{"case.yaml", "deviations:\n  - {text: column changed, approved_by: P-3}", "deviations: []"}}},
		{"material past its date", []change{{"case.yaml", "2027-06-30", "2025-06-30"}}}, // part of the finding, not of the form
		{"times in another zone", []change{{"sequence.csv", "2026-03-18T08:10:00+01:00", "2026-03-18T07:10:00Z"}}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) { loaded(t, changed(t, tt.changes...)) })
	}
}

// TestEmptyFolder: one problem, with a way on.
func TestEmptyFolder(t *testing.T) {
	tests := []struct {
		name string
		fsys fstest.MapFS
		hint string
	}{
		{"nothing", fstest.MapFS{}, "assaywrit demo writes an example"},
		{"all but the case", changed(t, change{"case.yaml", "", ""}), "assaywrit demo writes an example"},
		{"other spelling", fstest.MapFS{"Case.yaml": &fstest.MapFile{}}, "there is Case.yaml: name it case.yaml"},
		{"other ending", fstest.MapFS{"case.yml": &fstest.MapFile{}}, "there is case.yml: name it case.yaml"},
		{"one folder too high", fstest.MapFS{"case/case.yaml": &fstest.MapFile{}}, "there is one in case/"},
	}
	for _, tt := range tests {
		problems := problemsOf(t, tt.fsys)
		if len(problems) != 1 || problems[0].File != CaseFile || !strings.Contains(problems[0].Hint, tt.hint) {
			t.Errorf("%s: %v, hint %q", tt.name, problems, problems[0].Hint)
		}
	}
}

// TestManyProblemsAtOnce: all files are looked at, and the list is in their order.
func TestManyProblemsAtOnce(t *testing.T) {
	fsys := changed(t,
		change{"case.yaml", "6.1", "16.1"}, change{"case.yaml", "code: P-1,", "cod: P-1,"}, change{"method.yaml", "2.3 min", "2,3 min"}, change{"method.yaml", "kind: threshold", "kind: limit"},
		change{"sequence.csv", "calibrator,low", "calibratr,low"}, change{"sequence.csv", "C2,raw/c2.mzML", ",raw/c2.mzML"}, change{"documents/form.pdf", "", ""}, change{"raw/s1.mzML", "", ""})
	problems := problemsOf(t, fsys)
	var got []string
	for _, p := range problems {
		got = append(got, fmt.Sprintf("%s:%d %s", p.File, p.Line, p.Key))
	}
	want := []string{"case.yaml:14 sample.ph", "case.yaml:23 people[0].code", "case.yaml:23 people[0].cod", "case.yaml:41 documents[0].file",
		"method.yaml:44 analytes[0].kind", "method.yaml:46 analytes[0].expected_retention", "sequence.csv:3 role", "sequence.csv:4 injection", "sequence.csv:8 file"}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Error(diff)
	}
}

// TestChecksDoNotWait: a fault in one file does not hide what the others say about each other.
func TestChecksDoNotWait(t *testing.T) {
	for _, broken := range []string{"case.yaml", "method.yaml", "sequence.csv"} {
		changes := map[string]change{
			"case.yaml":    {"case.yaml", "received: 2026-03-16", "received: 2026-03-13"}, // before it was collected
			"method.yaml":  {"method.yaml", "internal_standard: salbutamol-d3", "internal_standard: other"},
			"sequence.csv": {"sequence.csv", "X1,", "C3,"}, // an id twice
		}
		changes[broken] = map[string]change{
			"case.yaml": {"case.yaml", "ph: 6.1", "ph: six"}, "method.yaml": {"method.yaml", "aliquots: 1", "aliquots: one"}, "sequence.csv": {"sequence.csv", ",2.5,", ",two,"},
		}[broken]
		files := map[string]bool{}
		for _, p := range problemsOf(t, changed(t, changes["case.yaml"], changes["method.yaml"], changes["sequence.csv"])) {
			files[p.File] = true
		}
		if len(files) != 3 {
			t.Errorf("with a broken %s, problems in %v alone", broken, files)
		}
	}
}

// TestReadError: what keeps a file from being read is no problem of the case.
func TestReadError(t *testing.T) {
	for _, name := range []string{"case.yaml", "method.yaml", "sequence.csv"} {
		_, err := Load(failing{small(), name})
		var problems Problems
		if !errors.Is(err, fs.ErrPermission) || errors.As(err, &problems) {
			t.Errorf("%s: %v", name, err)
		}
	}
	if _, err := (&Folder{}).Files(failing{small(), "."}); !errors.Is(err, fs.ErrPermission) {
		t.Error(err)
	}
}

// failing is a folder of which one name cannot be opened.
type failing struct {
	fs.FS
	name string
}

func (f failing) Open(name string) (fs.File, error) {
	if name == f.name {
		return nil, &fs.PathError{Op: "open", Path: name, Err: fs.ErrPermission}
	}
	return f.FS.Open(name)
}

func TestFiles(t *testing.T) {
	fsys := changed(t, change{".hidden", "", "x"}, change{"raw/.hidden/a", "", "x"}, change{"documents/THUMBS.DB", "", "x"}, change{"notes.txt", "", "x"})
	got, err := loaded(t, small()).Files(fsys)
	if err != nil {
		t.Fatal(err)
	}
	want := []string{"case.yaml", "documents/form.pdf", "method.yaml", "notes.txt", "raw/b1.mzML", "raw/c1.mzML", "raw/c2.mzML", "raw/c3.mzML", "raw/q1.mzML", "raw/s1.mzML", "raw/x1.mzML", "sequence.csv"}
	if diff := cmp.Diff(want, got); diff != "" {
		t.Error(diff)
	}
	fsys["raw/link.mzML"] = &fstest.MapFile{Data: []byte("b1.mzML"), Mode: fs.ModeSymlink}
	var problems Problems
	if _, err := (&Folder{}).Files(fsys); !errors.As(err, &problems) || problems[0].File != "raw/link.mzML" {
		t.Errorf("a link: %v", err)
	}
}

// FuzzLoad: whatever the three files hold, the folder is accepted or refused, never more.
func FuzzLoad(f *testing.F) {
	f.Add(smallCase, smallMethod, smallSequence)
	f.Add(strings.ReplaceAll(smallCase, "method.yaml", "case.yaml"), smallMethod, separated(";"))
	f.Add(strings.ReplaceAll(smallCase, "P-2", "P-1"), strings.ReplaceAll(smallMethod, "salbutamol", "x"), strings.ReplaceAll(smallSequence, "raw/", "../"))
	f.Fuzz(func(t *testing.T, c, m, s string) {
		fsys := small()
		put(fsys, "case.yaml", c)
		put(fsys, "method.yaml", m)
		put(fsys, "sequence.csv", s)
		folder, err := Load(fsys)
		var problems Problems
		if (folder == nil) != (err != nil) || (err != nil && !errors.As(err, &problems)) {
			t.Errorf("folder %v, error %v", folder, err)
		}
		for _, p := range problems {
			if p.File == "" || p.Got == "" || p.Want == "" {
				t.Errorf("a problem without words: %+v", p)
			}
		}
	})
}

// sameFolder compares folders without the places of fields.
func sameFolder(a, b *Folder) string {
	return cmp.Diff(a, b, cmpopts.IgnoreUnexported(Injection{}))
}

func ExampleLoad() {
	fsys := small()
	folder, err := Load(fsys)
	fmt.Println(folder.Case.Number, len(folder.Injections), err)

	put(fsys, "case.yaml", strings.Replace(smallCase, "analytes: [salbutamol]", "analytes: [salbutamoll]", 1))
	delete(fsys, "raw/q1.mzML")
	_, err = Load(fsys)
	fmt.Println(err)
	// Output:
	// T-1 7 <nil>
	// case.yaml:18:14: request.analytes[0]: got "salbutamoll", want an analyte of the method: salbutamol
	// sequence.csv:7:4: file: got "raw/q1.mzML", which is not there, want the path of a file in the case folder
}
