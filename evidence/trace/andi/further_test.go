//go:build corpus

package andi

import (
	"os"
	"testing"
)

// TestCorpus does the same as TestPublishedFiles with a folder of more files and their expected.json, which may not be copied into
// this repository:
//
//	ASSAYWRIT_CORPUS=FOLDER go test -tags corpus ./evidence/trace/andi
func TestCorpus(t *testing.T) {
	folder := os.Getenv("ASSAYWRIT_CORPUS")
	if folder == "" {
		t.Fatal("ASSAYWRIT_CORPUS names no folder")
	}
	n := againstOtherReader(t, folder)
	if n == 0 {
		t.Error("no file compared")
	}
	t.Logf("%d files compared", n)
}
