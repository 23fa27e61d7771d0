package mzml

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"testing"

	"assaywrit/evidence/trace"
)

// FuzzRead: whatever the bytes, a file is read whole or refused with a place, never with a panic, and never grows beyond what its
// bytes can hold.
func FuzzRead(f *testing.F) {
	seeds := 0
	for _, pattern := range []string{filepath.Join(damagedFolder, "*.mzML"), filepath.Join(published, "tiny*.mzML"), filepath.Join(published, "mini*.mzML")} {
		paths, err := filepath.Glob(pattern)
		if err != nil {
			f.Fatal(err)
		}
		for _, path := range paths {
			data, err := os.ReadFile(path)
			if err != nil {
				f.Fatal(err)
			}
			f.Add(data)
			seeds++
		}
	}
	if seeds < 60 {
		f.Fatalf("only %d seed files", seeds)
	}
	f.Add([]byte(whole(f)))
	f.Add([]byte(wholeScans(f)))
	f.Add([]byte(pressedFile(f, linearTimes())))
	f.Fuzz(func(t *testing.T, data []byte) {
		file, err := Read("fuzz.mzML", bytes.NewReader(data))
		if err != nil {
			var syntax *trace.SyntaxError
			if !errors.As(err, &syntax) || syntax.Line < 1 || syntax.Column < 1 || syntax.Got == "" || syntax.Want == "" {
				t.Fatalf("a refusal without place or reason: %#v", err)
			}
			return
		}
		ids, points := map[string]bool{}, 0
		for _, c := range file.Chromatograms {
			if b := c.Check(); b != nil || c.ID == "" || ids[c.ID] {
				t.Fatalf("chromatogram %q: %v", c.ID, b)
			}
			ids[c.ID] = true
			points += len(c.TimeMin)
		}
		if int64(16*points) > 2*trace.Budget(bytes.NewReader(data)) {
			t.Fatalf("%d points from %d bytes", points, len(data))
		}
		var syntax *trace.SyntaxError
		if err := readEverything("fuzz.mzML", data); err != nil && !errors.As(err, &syntax) {
			t.Fatal(err)
		}
	})
}
