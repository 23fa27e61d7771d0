package bundle

import (
	"bytes"
	"io/fs"
	"testing"
)

// FuzzOpen: whatever is opened may be refused, never crash; what opens can be checked and read.
func FuzzOpen(f *testing.F) {
	f.Add(signedBundle(f))
	f.Add(written(f, testHeader(), testPayload()))
	names, content := unzipped(f, signedBundle(f))
	f.Add(zipped(f, names, content))
	f.Add(appended(f, stored("data/link", "x"), stored("seal/timestamps/a.tsr", "x")))
	f.Fuzz(func(t *testing.T, data []byte) {
		b, err := Open(bytes.NewReader(data), int64(len(data)))
		if err != nil {
			return
		}
		problems := b.CheckFiles()
		CheckSignatures(b, trusted())
		_ = fs.WalkDir(b.PayloadFS(), ".", func(_ string, _ fs.DirEntry, err error) error { return err })
		for _, p := range b.Paths() {
			if _, err := b.ReadFile(p); err != nil && len(problems) == 0 {
				t.Errorf("%s cannot be read, and nothing was said of it: %v", p, err)
			}
		}
	})
}

func FuzzManifest(f *testing.F) {
	f.Add(payloadManifest([]leaf{{Path: "data/a", SHA256: hexSum(nil)}, {Path: "data/b", SHA256: hexSum(nil)}}))
	f.Add([]byte("\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		if list, problems := parseManifest(data); len(problems) == 0 && !bytes.Equal(manifestText(list), data) {
			t.Errorf("%q comes back as %q", data, manifestText(list))
		}
	})
}

func FuzzStatement(f *testing.F) {
	f.Add(opened(f, written(f, testHeader(), testPayload())).StatementBytes())
	f.Fuzz(func(t *testing.T, data []byte) {
		if st, err := parseStatement(data); err == nil {
			bagInfo(st)
		}
	})
}
