package demo

import (
	"io/fs"
	"testing"
	"testing/fstest"

	"assaywrit/evidence/casefile"
)

func folder(t testing.TB) fs.FS {
	t.Helper()
	files, err := Files()
	if err != nil {
		t.Fatal(err)
	}
	m := fstest.MapFS{}
	for _, f := range files {
		m[f.Path] = &fstest.MapFile{Data: f.Data}
	}
	return m
}

// TestCaseLoads reads the example as any case is read: without a problem.
func TestCaseLoads(t *testing.T) {
	if _, err := casefile.Load(folder(t)); err != nil {
		t.Fatal(err)
	}
}
