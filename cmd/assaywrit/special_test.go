package main

import (
	"bytes"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
)

// TestSpecialFiles: a folder, a link or a device in the place of a file is refused by name, at once.
func TestSpecialFiles(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("Windows has no device files, and links need rights")
	}
	of := func(status int, want string, args ...string) {
		t.Helper()
		var out, errs bytes.Buffer
		if got := run(args, nil, &out, &errs); got != status || !strings.Contains(errs.String(), want) || out.Len() > 0 {
			t.Errorf("%v: status %d, %s%s", args, got, &out, &errs)
		}
	}
	of(exitRefused, "is a device or a pipe, want a plain file", "show", os.DevNull)
	of(exitUsage, "is a folder, want a bundle or a raw file", "show", t.TempDir())
	of(exitRefused, "is a file, want a case folder", "check", filepath.Join(demoFolder(t), "finding.pdf"))
	for name, make := range map[string]func(path string) error{
		"got a link or special file": func(path string) error { return os.Symlink("/dev/zero", path) },
		"a folder":                   func(path string) error { return os.CopyFS(path, os.DirFS("testdata/andi-case")) },
	} {
		dir := copyCase(t)
		path := filepath.Join(dir, filepath.FromSlash(rawOf(t, dir, "calibrator", 1)))
		if err := os.Remove(path); err != nil {
			t.Fatal(err)
		}
		if err := make(path); err != nil {
			t.Fatal(err)
		}
		of(exitRefused, name, "check", dir)
	}
}
