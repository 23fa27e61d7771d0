package render_test

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"sync"
	"testing"
	"testing/fstest"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/canonical"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/simulate/demo"
	"assaywrit/render"
	"assaywrit/templates"
)

// program finds an outside program; where it is absent the test is skipped, except in continuous integration.
func program(t testing.TB, name string) string {
	t.Helper()
	path, err := exec.LookPath(name)
	if err != nil {
		if os.Getenv("CI") != "" {
			t.Fatalf("%s is not installed, and nothing may be skipped here", name)
		}
		t.Skipf("%s is not installed: this check was not made", name)
	}
	return path
}

// load works through the example case, after change had its way with the folder's files.
func load(t testing.TB, change func(files fstest.MapFS)) render.Input {
	t.Helper()
	files, err := demo.Files()
	if err != nil {
		t.Fatal(err)
	}
	m := fstest.MapFS{}
	for _, f := range files {
		m[f.Path] = &fstest.MapFile{Data: f.Data}
	}
	if change != nil {
		change(m)
	}
	folder, err := casefile.Load(m)
	if err != nil {
		t.Fatal(err)
	}
	ev, err := evidence.Evaluate(m, folder, evidence.Engine{Name: "assaywrit", Version: "test"})
	if err != nil {
		t.Fatal(err)
	}
	data, ok := decision.BuiltIn(folder.Case.Criteria)
	if !ok {
		t.Fatal("no criteria")
	}
	set, err := decision.Parse("criteria.yaml", data)
	if err != nil {
		t.Fatal(err)
	}
	record, err := canonical.Marshal(ev.Record)
	if err != nil {
		t.Fatal(err)
	}
	sum := sha256.Sum256(record)
	f, err := decision.Decide(ev.Record, hex.EncodeToString(sum[:]), set, strings.Repeat("0", 64))
	if err != nil {
		t.Fatal(err)
	}
	in := render.Input{Record: ev.Record, Finding: f, Traces: ev, Criteria: set, EvidenceSHA256: hex.EncodeToString(sum[:]), FindingSHA256: strings.Repeat("1", 64)}
	for _, i := range ev.Record.Inputs {
		in.Files = append(in.Files, render.File{Path: "data/inputs/case/" + i.Path, Bytes: i.Bytes, SHA256: i.SHA256})
	}
	return in
}

func replace(t testing.TB, files fstest.MapFS, name, old, replacement string) {
	t.Helper()
	if !bytes.Contains(files[name].Data, []byte(old)) {
		t.Fatalf("%s does not hold %q", name, old)
	}
	files[name] = &fstest.MapFile{Data: bytes.Replace(files[name].Data, []byte(old), []byte(replacement), 1)}
}

var example = sync.OnceValue(func() render.Input { return load(&testing.B{}, nil) })

type drawn struct {
	name  string
	data  []byte
	pages int
}

func draw(t testing.TB, in render.Input) []drawn {
	t.Helper()
	var list []drawn
	for _, d := range []struct {
		name string
		draw func(*bytes.Buffer) (int, error)
	}{
		{"package", func(b *bytes.Buffer) (int, error) { return render.Package(b, in) }},
		{"finding", func(b *bytes.Buffer) (int, error) { return render.Finding(b, in) }},
	} {
		var b bytes.Buffer
		n, err := d.draw(&b)
		if err != nil {
			t.Fatalf("%s: %v", d.name, err)
		}
		list = append(list, drawn{d.name, b.Bytes(), n})
	}
	return list
}

// pages returns the text of each page, by poppler.
func pages(t testing.TB, data []byte) []string {
	t.Helper()
	tool := program(t, "pdftotext")
	path := filepath.Join(t.TempDir(), "x.pdf")
	if err := os.WriteFile(path, data, 0o600); err != nil {
		t.Fatal(err)
	}
	out, err := exec.Command(tool, "-layout", path, "-").Output()
	if err != nil {
		t.Fatal(err)
	}
	return strings.Split(strings.TrimSuffix(string(out), "\f"), "\f")
}

// squeezed takes out white space, so that text is found across the line breaks of a table's cell.
func squeezed(s string) string { return strings.Join(strings.Fields(s), "") }

func TestEveryPageCarriesItsMarks(t *testing.T) {
	in := example()
	for _, d := range draw(t, in) {
		list := pages(t, d.data)
		if len(list) != d.pages {
			t.Errorf("%s: %d pages of text, %d reported", d.name, len(list), d.pages)
		}
		for i, p := range list {
			for _, want := range []string{"case " + in.Record.Case.Number, "sample " + in.Record.Case.Sample.Code, fmt.Sprintf("page %d of %d", i+1, len(list)), "evidence " + in.EvidenceSHA256[:16], "DEMONSTRATION, NOT VALID"} {
				if !strings.Contains(p, want) {
					t.Errorf("%s, page %d does not say %q", d.name, i+1, want)
				}
			}
		}
	}
	if n := draw(t, in)[1].pages; n > 2 {
		t.Errorf("the finding has %d pages, want one or two", n)
	}
}

func TestMarkOfADemonstrationOnlyThere(t *testing.T) {
	in := load(t, func(f fstest.MapFS) { replace(t, f, "case.yaml", "demonstration: true\n", "") })
	for _, d := range draw(t, in) {
		if strings.Contains(strings.Join(pages(t, d.data), ""), "NOT VALID") {
			t.Errorf("%s: a case that is no demonstration is marked as one", d.name)
		}
	}
}

// TestPackageIsComplete looks for every check, file, injection and signature command of the case in the text.
func TestPackageIsComplete(t *testing.T) {
	in := example()
	text := squeezed(strings.Join(pages(t, draw(t, in)[0].data), " "))
	find := func(what, s string) {
		t.Helper()
		if !strings.Contains(text, squeezed(s)) {
			t.Errorf("the package does not show the %s %q", what, s)
		}
	}
	checks := append([]decision.Check{}, in.Finding.Batch...)
	for _, a := range in.Finding.Analytes {
		find("sentence", a.Sentence)
		find("label", a.Label)
		checks = append(checks, a.Checks...)
	}
	for _, c := range checks {
		// Cells of one row are read line by line across the columns: an id is looked for by its first part.
		id := c.ID
		if len(id) > 18 {
			id = id[:18]
		}
		find("check", id)
	}
	for _, f := range in.Files {
		find("hash of "+f.Path, f.SHA256)
	}
	for _, inj := range in.Record.Injections {
		find("injection", "Injection "+inj.ID+":")
	}
	for _, c := range in.Finding.Cautions {
		find("caution", c)
	}
	for _, s := range []string{"sha256sum -c manifest-sha256.txt", "openssl cms -verify", "P-05-authorised.p7s", "±", "→", "End of the package"} {
		find("text", s)
	}
}

var never = regexp.MustCompile(`(?i)\b(guilty|cheat(er|ed|ing)?|offender|innocent|clean)\b`)

func TestWordsThatNeverAppear(t *testing.T) {
	for _, lang := range templates.Languages() {
		words, err := templates.Load(lang)
		if err != nil {
			t.Fatal(err)
		}
		for key, text := range words {
			if w := never.FindString(text); w != "" {
				t.Errorf("%s, %s: %q", lang, key, w)
			}
		}
	}
	for _, d := range draw(t, example()) {
		if w := never.FindString(strings.Join(pages(t, d.data), " ")); w != "" {
			t.Errorf("%s says %q", d.name, w)
		}
	}
}

func TestSameBytesTwice(t *testing.T) {
	first, second := draw(t, load(t, nil)), draw(t, load(t, nil))
	for i := range first {
		if !bytes.Equal(first[i].data, second[i].data) {
			t.Errorf("%s: two runs differ", first[i].name)
		}
	}
}

// TestStructure lets qpdf check the files: objects, links and bookmarks.
func TestStructure(t *testing.T) {
	tool := program(t, "qpdf")
	for _, d := range draw(t, example()) {
		path := filepath.Join(t.TempDir(), d.name+".pdf")
		if err := os.WriteFile(path, d.data, 0o600); err != nil {
			t.Fatal(err)
		}
		if out, err := exec.Command(tool, "--check", path).CombinedOutput(); err != nil || bytes.Contains(out, []byte("WARNING")) {
			t.Errorf("%s: %v\n%s", d.name, err, out)
		}
	}
}

// TestOtherCases draws cases that look otherwise: no result, manual integration, long and odd text, nothing optional.
func TestOtherCases(t *testing.T) {
	long := strings.Repeat("a long text that goes on ", 60)
	tests := []struct {
		name   string
		change func(f fstest.MapFS)
		want   []string
	}{
		{"a control that fails", func(f fstest.MapFS) {
			data := string(f["sequence.csv"].Data)
			f["sequence.csv"] = &fstest.MapFile{Data: []byte(strings.ReplaceAll(data, ",150,", ",390,"))}
		}, []string{"No finding", "✗ failed"}},
		{"a manual integration", func(f fstest.MapFS) {
			replace(t, f, "case.yaml", "deviations: []", "deviations: []\nmanual_integrations:\n  - {injection: \"016\", compound: salbutamol, trace: quantifier, start: 2.20 min, end: 2.38 min, by: P-03, at: \"2026-03-19T10:00:00+01:00\", reason: neighbour, approved_by: P-04}")
		}, []string{"set by hand", "neighbour", "Approved by P-04"}},
		{"long and odd text", func(f fstest.MapFS) {
			replace(t, f, "case.yaml", "deviations: []", "deviations:\n  - {text: \""+long+" 漢字 "+strings.Repeat("x", 300)+"\", approved_by: P-05}")
		}, []string{"[U+6F22]", "goes on"}},
		{"nothing optional", func(f fstest.MapFS) {
			for _, line := range []string{"  ph: 6.1\n", "  appearance: clear, pale yellow\n", "  volume: 92 mL\n"} {
				replace(t, f, "case.yaml", line, "")
			}
		}, []string{"not stated"}},
		{"no specific gravity", func(f fstest.MapFS) { replace(t, f, "case.yaml", "  specific_gravity: 1.012\n", "") }, []string{"No finding", "specific gravity"}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			text := squeezed(strings.Join(pages(t, draw(t, load(t, tt.change))[0].data), " "))
			for _, w := range tt.want {
				if !strings.Contains(text, squeezed(w)) {
					t.Errorf("the package does not say %q", w)
				}
			}
		})
	}
}

func BenchmarkPackage(b *testing.B) {
	in := load(b, nil)
	b.Run("injections=21/traces=252", func(b *testing.B) {
		for b.Loop() {
			var out bytes.Buffer
			if _, err := render.Package(&out, in); err != nil {
				b.Fatal(err)
			}
		}
	})
}

func BenchmarkFinding(b *testing.B) {
	in := load(b, nil)
	b.Run("analytes=3", func(b *testing.B) {
		for b.Loop() {
			var out bytes.Buffer
			if _, err := render.Finding(&out, in); err != nil {
				b.Fatal(err)
			}
		}
	})
}
