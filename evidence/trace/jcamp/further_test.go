//go:build corpus

package jcamp

import (
	"bytes"
	"os"
	"path/filepath"
	"testing"
)

// TestCorpus does the same as TestPublishedFiles with a folder of more files and their expected.json, which may not be copied into
// this repository:
//
//	ASSAYWRIT_CORPUS=FOLDER go test -tags corpus ./evidence/trace/jcamp
func TestCorpus(t *testing.T) {
	folder := os.Getenv("ASSAYWRIT_CORPUS")
	if folder == "" {
		t.Fatal("ASSAYWRIT_CORPUS names no folder")
	}
	n := againstOtherDecoder(t, folder)
	if n == 0 {
		t.Error("no table compared")
	}
	t.Logf("%d tables compared", n)
}

// TestCorpusRun reads a run of mass spectra that states neither its kind nor its unit of time. Its ##FIRST= and ##LAST= hold the times of the
// first and last page in minutes, which shows that those of the pages are seconds.
func TestCorpusRun(t *testing.T) {
	data, err := os.ReadFile(filepath.Join(os.Getenv("ASSAYWRIT_CORPUS"), "GECO_4_SUBTRACT.JDX"))
	if err != nil {
		t.Fatal(err)
	}
	f, err := Read("run", bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	if got := codes(f.Warnings); got != "no-data-type,no-end,start-time,time-unit" {
		t.Errorf("warnings %s", got)
	}
	n := f.Scans.Len()
	if n != 2103 {
		t.Errorf("%d scans", n)
	}
	near(t, "first time", f.Scans.Scan(0).TimeMin, 0.0175333339721)
	near(t, "last time", f.Scans.Scan(n-1).TimeMin, 37.0127334595)
}

// TestContradictedLastX reads a file whose ##LASTX= does not fit its lines; ##DELTAX= does.
func TestContradictedLastX(t *testing.T) {
	data, err := os.ReadFile(filepath.Join(os.Getenv("ASSAYWRIT_CORPUS"), "MiniDIFDUP.JDX"))
	if err != nil {
		t.Fatal(err)
	}
	tables, warned, err := Decode("file", bytes.NewReader(data))
	if err != nil || codes(warned) != "last-x,max-y,min-y,no-last-y-check" {
		t.Fatalf("%v, warnings %v", err, warned)
	}
	x := tables[0].X
	near(t, "step", (x[len(x)-1]-x[0])/float64(len(x)-1), -9.64245605e-1)
}
