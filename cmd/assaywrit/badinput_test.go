package main

import (
	"bytes"
	"encoding/json"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// copyCase copies the demo's case folder.
func copyCase(t testing.TB) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "case")
	if err := os.CopyFS(dir, os.DirFS(filepath.Join(demoFolder(t), "case"))); err != nil {
		t.Fatal(err)
	}
	return dir
}

// edit replaces the first occurrence of old in a file of the case, which must be there.
func edit(t testing.TB, dir, name, old, replacement string) {
	t.Helper()
	path := filepath.Join(dir, filepath.FromSlash(name))
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Contains(data, []byte(old)) {
		t.Fatalf("%s does not hold %q", name, old)
	}
	if err := os.WriteFile(path, bytes.Replace(data, []byte(old), []byte(replacement), 1), 0o666); err != nil {
		t.Fatal(err)
	}
}

// A row is a line of the demo's sequence.csv, split at its commas.
func editRow(t testing.TB, dir, role string, nth int, change func(header, row []string)) {
	t.Helper()
	path := filepath.Join(dir, "sequence.csv")
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(string(data), "\n")
	header := strings.Split(strings.TrimSpace(lines[0]), ",")
	seen := 0
	for i, line := range lines[1:] {
		row := strings.Split(line, ",")
		if len(row) < 3 || row[2] != role {
			continue
		}
		if seen++; seen == nth {
			change(header, row)
			lines[i+1] = strings.Join(row, ",")
			if err := os.WriteFile(path, []byte(strings.Join(lines, "\n")), 0o666); err != nil {
				t.Fatal(err)
			}
			return
		}
	}
	t.Fatalf("sequence.csv has no row %d of role %s", nth, role)
}

func column(t testing.TB, header []string, name string) int {
	t.Helper()
	for i, h := range header {
		if strings.HasPrefix(h, name) {
			return i
		}
	}
	t.Fatalf("sequence.csv has no column %s: %v", name, header)
	return 0
}

// rawOf returns the path of the raw file of the nth injection with a role.
func rawOf(t testing.TB, dir, role string, nth int) string {
	name := ""
	editRow(t, dir, role, nth, func(_, row []string) { name = row[1] })
	return name
}

func TestBadInputIsRefused(t *testing.T) {
	tests := []struct {
		name string
		harm func(t *testing.T, dir string)
		want []string // in the messages
	}{
		{"empty folder", func(t *testing.T, dir string) {
			if err := os.RemoveAll(dir); err != nil {
				t.Fatal(err)
			}
			if err := os.Mkdir(dir, 0o777); err != nil {
				t.Fatal(err)
			}
		}, []string{"case.yaml", "assaywrit demo"}},
		{"a tab in the YAML", func(t *testing.T, dir string) { edit(t, dir, "case.yaml", "sample:\n  ", "sample:\n\t") }, []string{"case.yaml:", "tab"}},
		{"an unknown key", func(t *testing.T, dir string) { edit(t, dir, "case.yaml", "laboratory_code:", "laboratory_cod:") }, []string{"case.yaml:", "laboratory_cod", "laboratory_code"}},
		{"a trace cut in the middle of its base64", func(t *testing.T, dir string) {
			path := filepath.Join(dir, filepath.FromSlash(rawOf(t, dir, "sample", 1)))
			data, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			at := bytes.LastIndex(data, []byte("<binary>")) + 40
			if err := os.WriteFile(path, data[:at], 0o666); err != nil {
				t.Fatal(err)
			}
		}, []string{".mzML:"}},
		{"a file of the sequence is missing", func(t *testing.T, dir string) {
			if err := os.Remove(filepath.Join(dir, filepath.FromSlash(rawOf(t, dir, "control", 1)))); err != nil {
				t.Fatal(err)
			}
		}, []string{"sequence.csv:", ".mzML"}},
		{"a raw file is not in the sequence", func(t *testing.T, dir string) {
			data, err := os.ReadFile(filepath.Join(dir, filepath.FromSlash(rawOf(t, dir, "control", 1))))
			if err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(filepath.Join(dir, "raw", "spare.mzML"), data, 0o666); err != nil {
				t.Fatal(err)
			}
		}, []string{"spare.mzML"}},
		{"two injections with one file", func(t *testing.T, dir string) {
			first := rawOf(t, dir, "sample", 1)
			editRow(t, dir, "sample", 2, func(_, row []string) { row[1] = first })
		}, []string{"sequence.csv:"}},
		{"a calibrator of 0 with relative weights", func(t *testing.T, dir string) {
			editRow(t, dir, "calibrator", 1, func(header, row []string) { row[column(t, header, "nominal salbutamol")] = "0" })
		}, []string{"sequence.csv:", "1/x"}},
		{"a concentration in the wrong unit", func(t *testing.T, dir string) {
			edit(t, dir, "sequence.csv", "nominal salbutamol [ng/mL]", "nominal salbutamol [mL]")
		}, []string{"sequence.csv:1:", "mL", "ng/mL"}},
		{"an analyte that the method does not have", func(t *testing.T, dir string) {
			edit(t, dir, "case.yaml", "- salbutamol", "- salbutamoll")
		}, []string{"case.yaml:", "salbutamoll"}},
		{"a threshold that the criteria set does not have", func(t *testing.T, dir string) {
			edit(t, dir, "method.yaml", "kind: presence", "kind: threshold")
		}, []string{"threshold"}},
		{"a criteria set that does not exist", func(t *testing.T, dir string) {
			edit(t, dir, "case.yaml", "criteria: antidoping-urine-2022", "criteria: no-such-set")
		}, []string{"no-such-set"}},
		{"a transition that was not recorded", func(t *testing.T, dir string) {
			edit(t, dir, "method.yaml", "148.1", "149.9")
		}, []string{".mzML", "149.9"}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			dir := copyCase(t)
			tt.harm(t, dir)
			before := tree(t, filepath.Dir(dir))
			for _, args := range [][]string{{"check", dir}, {"build", dir, "-o", filepath.Join(filepath.Dir(dir), "out.zip")}} {
				var out, errs bytes.Buffer
				if status := run(args, nil, &out, &errs); status != exitRefused {
					t.Errorf("%s: status %d, want %d\n%s", args[0], status, exitRefused, errs.String())
				}
				for _, w := range tt.want {
					if !strings.Contains(errs.String(), w) {
						t.Errorf("%s: the messages do not say %q:\n%s", args[0], w, errs.String())
					}
				}
				if out.Len() > 0 {
					t.Errorf("%s: results were printed: %s", args[0], out.String())
				}
			}
			if after := tree(t, filepath.Dir(dir)); after != before {
				t.Errorf("something was left behind:\nbefore %s\nafter %s", before, after)
			}
		})
	}
}

// tree lists the files below a folder.
func tree(t testing.TB, dir string) string {
	t.Helper()
	var names []string
	if err := fs.WalkDir(os.DirFS(dir), ".", func(path string, d fs.DirEntry, err error) error {
		names = append(names, path)
		return err
	}); err != nil {
		t.Fatal(err)
	}
	return strings.Join(names, "\n")
}

// TestBadBatchGivesNoFinding harms the batch, not the form of its files: the case builds, and the outcome is not determined,
// with the check named.
func TestBadBatchGivesNoFinding(t *testing.T) {
	swap := func(t *testing.T, dir, roleA string, nA int, roleB string, nB int) {
		t.Helper()
		a, b := filepath.Join(dir, filepath.FromSlash(rawOf(t, dir, roleA, nA))), filepath.Join(dir, filepath.FromSlash(rawOf(t, dir, roleB, nB)))
		da, err := os.ReadFile(a)
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(b, da, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	tests := []struct {
		name string
		harm func(t *testing.T, dir string)
		want string // part of the id of a failed check
	}{
		{"the sample lies outside the calibrated range", func(t *testing.T, dir string) {
			for n := 4; n <= 7; n++ {
				editRow(t, dir, "calibrator", 4, func(header, row []string) {
					row[2], row[column(t, header, "note")] = "excluded", "left out to test the range"
					for i, h := range header {
						if strings.HasPrefix(h, "nominal") {
							row[i] = ""
						}
					}
				})
			}
		}, "range"},
		{"a blank has a peak", func(t *testing.T, dir string) { swap(t, dir, "calibrator", 5, "matrix-blank", 1) }, "blank"},
		{"a control fails", func(t *testing.T, dir string) {
			for n := 1; n <= 4; n++ {
				editRow(t, dir, "control", n, func(header, row []string) { row[column(t, header, "nominal salbutamol")] = "1999" })
			}
		}, "control"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			dir := copyCase(t)
			tt.harm(t, dir)
			a, err := assess(os.DirFS(dir), chosenCriteria)
			if err != nil {
				t.Fatal(err)
			}
			f := a.finding.Analytes[0]
			if f.Outcome != "not-determined" {
				t.Errorf("%s: outcome %s, want not-determined", f.Analyte, f.Outcome)
			}
			if !strings.Contains(strings.Join(f.Failed, " "), tt.want) {
				t.Errorf("failed checks %v do not name %q", f.Failed, tt.want)
			}
			if a.finding.Analytes[0].Limit != nil && f.Outcome == "above-limit" {
				t.Error("a firm outcome in spite of a failed check")
			}
		})
	}
}

func TestOutputIsNotOverwritten(t *testing.T) {
	dir := filepath.Join(demoFolder(t), "case")
	out := filepath.Join(t.TempDir(), "out.zip")
	if err := os.WriteFile(out, []byte("mine"), 0o666); err != nil {
		t.Fatal(err)
	}
	var stdout, stderr bytes.Buffer
	if status := run([]string{"build", dir, "-o", out}, nil, &stdout, &stderr); status != exitFailed || !strings.Contains(stderr.String(), "--force") {
		t.Errorf("status %d\n%s", status, stderr.String())
	}
	if data, _ := os.ReadFile(out); string(data) != "mine" {
		t.Error("the file was overwritten")
	}
	if status := run([]string{"build", dir, "-o", out, "--force"}, nil, &stdout, &stderr); status != exitDone {
		t.Errorf("with --force: status %d\n%s", status, stderr.String())
	}
}

// TestUnwritableOutput builds into a folder that cannot be written: a path below a file stands in for a read-only disk, whose
// permissions would not keep the administrator out.
func TestUnwritableOutput(t *testing.T) {
	dir := filepath.Join(demoFolder(t), "case")
	file := filepath.Join(t.TempDir(), "file")
	if err := os.WriteFile(file, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	var stdout, stderr bytes.Buffer
	if status := run([]string{"build", dir, "-o", filepath.Join(file, "out.zip")}, nil, &stdout, &stderr); status != exitFailed {
		t.Errorf("status %d\n%s", status, stderr.String())
	}
	if stdout.Len() > 0 {
		t.Errorf("results were printed: %s", stdout.String())
	}
}

// TestJSONOutput reads what verify --json prints.
func TestJSONOutput(t *testing.T) {
	status, out, errs := verified(t, demoBundle(t), "--json")
	if status != exitDone {
		t.Fatal(errs)
	}
	dec := json.NewDecoder(strings.NewReader(out))
	steps := map[string]bool{}
	for dec.More() {
		var o observation
		if err := dec.Decode(&o); err != nil {
			t.Fatal(err)
		}
		steps[o.Step] = true
		if !o.Holds {
			t.Errorf("%+v", o)
		}
	}
	if !steps["files"] || !steps["signatures"] || !steps["values"] {
		t.Errorf("steps %v", steps)
	}
}
