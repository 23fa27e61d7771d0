package main

import (
	"archive/zip"
	"bytes"
	"encoding/json"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/rogpeppe/go-internal/testscript"

	"assaywrit/evidence"
)

// demoDir is a demo made once for all tests, in a folder that lasts as long as they do.
var demoDir string

var makeDemo = sync.OnceValues(func() (string, error) {
	var out, errs bytes.Buffer
	s := streams{nil, &out, &errs}
	if err := runDemo(s, demoDir, false, time.Now()); err != nil {
		return "", err
	}
	return out.String() + errs.String(), nil
})

// TestMain also lets test scripts run this binary as the command assaywrit.
func TestMain(m *testing.M) {
	testscript.Main(withDemoFolder{m}, map[string]func(){"assaywrit": main})
}

type withDemoFolder struct{ *testing.M }

func (m withDemoFolder) Run() int {
	dir, err := os.MkdirTemp("", "assaywrit")
	if err != nil {
		panic(err)
	}
	defer os.RemoveAll(dir)
	demoDir = filepath.Join(dir, "demo")
	return m.M.Run()
}

// demoFolder returns a folder in which the demo has run.
func demoFolder(t testing.TB) string {
	t.Helper()
	if _, err := makeDemo(); err != nil {
		t.Fatal(err)
	}
	return demoDir
}

// demoBundle returns the bytes of the signed demo bundle.
func demoBundle(t testing.TB) []byte {
	t.Helper()
	matches, err := filepath.Glob(filepath.Join(demoFolder(t), "*.zip"))
	if err != nil || len(matches) != 1 {
		t.Fatalf("want one bundle in the demo, got %v (%v)", matches, err)
	}
	data, err := os.ReadFile(matches[0])
	if err != nil {
		t.Fatal(err)
	}
	return data
}

var assessDemo = sync.OnceValues(func() (*assessment, error) {
	return assess(os.DirFS(filepath.Join(demoDir, "case")), chosenCriteria)
})

func demoAssessment(t testing.TB) *assessment {
	t.Helper()
	demoFolder(t)
	a, err := assessDemo()
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// builtRecord builds the case in dir, sees the bundle verified, and returns its record and its files.
func builtRecord(t testing.TB, dir string) (*evidence.Record, map[string][]byte) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "b.zip")
	var out, errs bytes.Buffer
	if status := run([]string{"build", dir, "--output", path}, nil, &out, &errs); status != exitDone {
		t.Fatalf("status %d: %s", status, &errs)
	}
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if _, so, _ := verified(t, data); !strings.Contains(so, "every recorded value and decision is the same") {
		t.Errorf("verify: %s", so)
	}
	_, content := unzipped(t, data)
	var rec evidence.Record
	if err := json.Unmarshal(content["data/evidence/evidence.json"], &rec); err != nil {
		t.Fatal(err)
	}
	return &rec, content
}

// unzipped reads all entries of a zip, in order.
func unzipped(t testing.TB, data []byte) (names []string, content map[string][]byte) {
	t.Helper()
	r, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	content = map[string][]byte{}
	for _, f := range r.File {
		rc, err := f.Open()
		if err != nil {
			t.Fatal(err)
		}
		body, err := io.ReadAll(rc)
		rc.Close()
		if err != nil {
			t.Fatal(err)
		}
		names = append(names, f.Name)
		content[f.Name] = body
	}
	return names, content
}

func TestDemoSaysWhatWasFound(t *testing.T) {
	demoFolder(t)
	out, _ := makeDemo()
	for _, want := range []string{"above-limit", "identified", "not-identified", "DEMONSTRATION, NOT VALID", "holds", "finding.pdf", "package.pdf"} {
		if !strings.Contains(out, want) {
			t.Errorf("the demo does not say %q:\n%s", want, out)
		}
	}
}

func TestTwoBuildsGiveTheSameBytes(t *testing.T) {
	folder := demoFolder(t)
	var first []byte
	for range 2 {
		fsys := os.DirFS(filepath.Join(folder, "case"))
		a, err := assess(fsys, chosenCriteria)
		if err != nil {
			t.Fatal(err)
		}
		data, _, err := a.seal(fsys)
		if err != nil {
			t.Fatal(err)
		}
		if first == nil {
			first = data
		} else if !bytes.Equal(first, data) {
			t.Error("two builds of one folder differ")
		}
	}
}

func TestDemoFilesAreThere(t *testing.T) {
	folder := demoFolder(t)
	for _, name := range []string{"root.pem", "finding.pdf", "package.pdf", "case/case.yaml", "case/method.yaml", "case/sequence.csv"} {
		if _, err := os.Stat(filepath.Join(folder, name)); err != nil {
			t.Error(err)
		}
	}
	raws, err := fs.Glob(os.DirFS(folder), "case/raw/*.mzML")
	if err != nil || len(raws) < 15 {
		t.Errorf("%d raw files, %v", len(raws), err)
	}
}
