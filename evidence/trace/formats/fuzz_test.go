package formats

import (
	"bytes"
	"errors"
	"testing"

	"assaywrit/evidence/trace"
)

// FuzzRead: whatever the bytes, a file is recognised and read, or refused with a reason.
func FuzzRead(f *testing.F) {
	f.Add("a.mzML", contents(f))
	f.Add("a.mzML.gz", gzipped(f, contents(f)[:2000]))
	f.Add("a.csv", []byte("1,2\n3,4\n"))
	f.Add("a.csv.gz", gzipped(f, []byte("1,2\n3,4\n")))
	f.Add("", []byte{})
	f.Fuzz(func(t *testing.T, name string, data []byte) {
		file, err := Read(name, bytes.NewReader(data), declared)
		if err != nil {
			var syntax *trace.SyntaxError
			if !errors.As(err, &syntax) || syntax.Got == "" || syntax.Want == "" {
				t.Fatalf("a refusal without a reason: %#v", err)
			}
			return
		}
		for _, c := range file.Chromatograms {
			if b := c.Check(); b != nil {
				t.Fatalf("chromatogram %q: %v", c.ID, b)
			}
		}
	})
}
