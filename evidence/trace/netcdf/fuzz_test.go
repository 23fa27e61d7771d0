package netcdf

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"testing"

	"assaywrit/evidence/trace"
)

// FuzzOpen: whatever the bytes, a file is opened or refused with a reason, never with a panic; no more values come out than the file
// has bytes; and reading in pieces gives the same.
func FuzzOpen(f *testing.F) {
	seeds := 0
	for _, pattern := range []string{filepath.Join(folder, "*.nc"), filepath.Join(folder, "hplc*.cdf"), "../../../testdata/damaged/*.cdf"} {
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
	if seeds < 30 {
		f.Fatalf("only %d seed files", seeds)
	}
	f.Add(bytesOf(f, everything(3)))
	f.Fuzz(func(t *testing.T, data []byte) {
		file, err := Open("fuzz", bytes.NewReader(data))
		if err != nil {
			refusal(t, err)
			return
		}
		total := int64(0)
		for i := range file.Variables {
			v := &file.Variables[i]
			total += v.Len()
			if total > int64(len(data)) {
				t.Fatalf("%d values in %d bytes", total, len(data))
			}
			if v.Type == Char {
				rows, err := file.Text(v.Name)
				if err != nil || int64(len(rows)) > v.Len() {
					t.Fatalf("%d rows, %v", len(rows), err)
				}
				continue
			}
			all, err := file.Floats(v.Name)
			if err != nil {
				refusal(t, err)
				continue
			}
			half := v.Len() / 2
			part, err := file.FloatsRange(v.Name, half, v.Len()-half)
			if err != nil {
				t.Fatal(err)
			}
			for k, y := range part {
				if all[int(half)+k] != y || y-y != 0 {
					t.Fatalf("value %d of %s is %v", k, v.Name, y)
				}
			}
		}
	})
}

func refusal(t *testing.T, err error) {
	t.Helper()
	var syntax *trace.SyntaxError
	if !errors.As(err, &syntax) || syntax.Got == "" || syntax.Want == "" || syntax.Line != 0 {
		t.Fatalf("a refusal without a reason: %#v", err)
	}
}
