package table

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"testing"

	"assaywrit/evidence/trace"
)

// FuzzRead: whatever the bytes and the layout, a file is read whole or refused with a reason, and points are no more than lines.
func FuzzRead(f *testing.F) {
	seeds := 0
	for _, pattern := range []string{filepath.Join(damaged, "*.csv"), filepath.Join(tables, "*.csv"), filepath.Join(tables, "*.txt")} {
		paths, err := filepath.Glob(pattern)
		if err != nil {
			f.Fatal(err)
		}
		for _, path := range paths {
			data, err := os.ReadFile(path)
			if err != nil {
				f.Fatal(err)
			}
			f.Add(data, byte(','), byte('.'), 1, 1, 2)
			f.Add(data, byte(';'), byte(','), 1, 3, 4)
			seeds++
		}
	}
	if seeds < 20 {
		f.Fatalf("only %d seed files", seeds)
	}
	f.Fuzz(func(t *testing.T, data []byte, separator, mark byte, header, time, column int) {
		layout := Layout{Separator: separator, DecimalMark: mark, HeaderLines: header, TimeColumn: time, TimeUnit: "s", Columns: []Column{{Column: column, ID: "x"}}}
		file, err := Read("fuzz.csv", bytes.NewReader(data), layout)
		var syntax *trace.SyntaxError
		switch {
		case errors.As(err, &syntax):
			if syntax.Line < 1 || syntax.Got == "" || syntax.Want == "" {
				t.Fatalf("a refusal without place or reason: %#v", err)
			}
		case err != nil:
			if layout.check() == nil {
				t.Fatalf("refused without a place: %v", err)
			}
		default:
			c := file.Chromatograms[0]
			if b := c.Check(); b != nil || len(c.TimeMin) == 0 || len(c.TimeMin) > 1+bytes.Count(data, []byte("\n")) {
				t.Fatalf("%d points, %v", len(c.TimeMin), b)
			}
		}
	})
}
