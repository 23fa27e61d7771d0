package jcamp

import (
	"bytes"
	"errors"
	"math"
	"os"
	"path/filepath"
	"testing"

	"assaywrit/evidence/trace"
)

// FuzzRead: whatever the bytes, a file is read whole or refused with a reason, and what is read keeps its promises.
func FuzzRead(f *testing.F) {
	seeds := 0
	for _, pattern := range []string{filepath.Join(damagedFolder, "*.jdx"), filepath.Join(published, "*.*[xX]"), filepath.Join(published, "*", "*.dx")} {
		paths, err := filepath.Glob(pattern)
		if err != nil {
			f.Fatal(err)
		}
		for _, path := range paths {
			data, err := os.ReadFile(path)
			if err != nil {
				f.Fatal(err)
			}
			if len(data) < 10000 {
				f.Add(data)
				seeds++
			}
		}
	}
	if seeds < 60 {
		f.Fatalf("only %d seed files", seeds)
	}
	f.Add([]byte(whole1))
	f.Add([]byte(run("", "1", "2 MIN")))
	f.Fuzz(func(t *testing.T, data []byte) {
		refusal := func(err error) {
			var syntax *trace.SyntaxError
			if !errors.As(err, &syntax) || syntax.Line < 1 || syntax.Got == "" || syntax.Want == "" {
				t.Fatalf("a refusal without place or reason: %#v", err)
			}
		}
		tables, _, err := Decode("fuzz", bytes.NewReader(data))
		if err != nil {
			refusal(err)
		}
		points := 0
		for _, table := range tables {
			if len(table.X) != len(table.Y) {
				t.Fatal("unequal lengths")
			}
			points += len(table.X)
			for i := range table.X {
				if s := table.X[i] + table.Y[i]; math.IsNaN(s) || math.IsInf(table.X[i], 0) || math.IsInf(table.Y[i], 0) {
					t.Fatal("a number that is none")
				}
			}
		}
		if points > freePoints+len(data)/2 {
			t.Fatalf("%d points out of %d bytes", points, len(data))
		}
		if _, err := ReadSpectra("fuzz", bytes.NewReader(data)); err != nil {
			refusal(err)
		}
		file, err := Read("fuzz", bytes.NewReader(data))
		if err != nil {
			refusal(err)
			return
		}
		ids := map[string]bool{}
		for _, c := range file.Chromatograms {
			if b := c.Check(); b != nil || ids[c.ID] || len(c.TimeMin) == 0 {
				t.Fatalf("%q: %v", c.ID, b)
			}
			ids[c.ID] = true
		}
		if file.Scans == nil {
			return
		}
		r := file.Scans.Open()
		for i := range file.Scans.Len() {
			mz, _ := r.MZ(i)
			s := file.Scans.Scan(i)
			if i > 0 && s.TimeMin < file.Scans.Scan(i-1).TimeMin || len(mz) != s.Points {
				t.Fatalf("scan %d: %+v", i, s)
			}
			for k := range mz {
				if k > 0 && mz[k] < mz[k-1] {
					t.Fatal("m/z go back")
				}
			}
		}
	})
}
