//go:build corpus

package mzml

import (
	"os"
	"testing"
)

// TestCorpus does the same as TestPublishedFiles with a folder of more files and their expected.json, which may not be copied into
// this repository:
//
//	ASSAYWRIT_CORPUS=FOLDER go test -tags corpus ./evidence/trace/mzml
func TestCorpus(t *testing.T) {
	folder := os.Getenv("ASSAYWRIT_CORPUS")
	if folder == "" {
		t.Fatal("ASSAYWRIT_CORPUS names no folder")
	}
	n := againstOtherDecoder(t, folder)
	if n == 0 {
		t.Error("no chromatogram compared")
	}
	t.Logf("%d chromatograms compared", n)
}
