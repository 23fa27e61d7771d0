package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// TestSources: testdata/SOURCES.md has a section for every folder of test data.
func TestSources(t *testing.T) {
	root := filepath.Join("..", "..", "testdata")
	text, err := os.ReadFile(filepath.Join(root, "SOURCES.md"))
	if err != nil {
		t.Fatal(err)
	}
	entries, err := os.ReadDir(root)
	if err != nil || len(entries) < 5 {
		t.Fatalf("%d entries, %v", len(entries), err)
	}
	for _, e := range entries {
		if e.IsDir() && !strings.Contains(string(text), "\n## "+e.Name()+"\n") {
			t.Errorf("testdata/%s has no section in SOURCES.md", e.Name())
		}
	}
}
