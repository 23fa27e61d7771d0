package formats

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"runtime/metrics"
	"testing"

	"assaywrit/evidence/trace"
)

// allocated is how many bytes of memory have been taken so far, given back or not.
func allocated() uint64 {
	sample := []metrics.Sample{{Name: "/gc/heap/allocs:bytes"}}
	metrics.Read(sample)
	return sample[0].Value.Uint64()
}

// mostMemory is what reading so many bytes may take: sixteen for each, and 64 MiB.
func mostMemory(size int) uint64 { return uint64(16*size + 64<<20) }

// everything reads a file with all its spectra, and tells what does not keep the contract of package trace.
func everything(name string, data []byte) (*trace.File, error) {
	file, err := Read(name, bytes.NewReader(data), declared)
	if err != nil {
		return nil, err
	}
	ids := map[string]bool{}
	for _, c := range file.Chromatograms {
		if b := c.Check(); b != nil || c.ID == "" || ids[c.ID] {
			return nil, errors.New("the chromatogram " + c.ID + " breaks its contract")
		}
		ids[c.ID] = true
	}
	if file.Scans == nil {
		return file, nil
	}
	r := file.Scans.Open()
	for i := range file.Scans.Len() {
		mz, err := r.MZ(i)
		if err != nil {
			return nil, err
		}
		y, err := r.Intensity(i)
		if err != nil {
			return nil, err
		}
		if n := file.Scans.Scan(i).Points; len(mz) != n || len(y) != n {
			return nil, errors.New("the spectrum " + file.Scans.Scan(i).ID + " breaks its contract")
		}
	}
	return file, nil
}

// FuzzRead: whatever the bytes, a file is recognised and read, or refused with a reason, within bounds of memory.
func FuzzRead(f *testing.F) {
	seeds := 0
	for _, folder := range []string{"mzml", "andi", "jcamp", "jcamp/compression-small", "table", "damaged"} {
		entries, err := os.ReadDir(filepath.Join("../../../testdata", folder))
		if err != nil {
			f.Fatal(err)
		}
		for _, e := range entries {
			info, err := e.Info()
			if err != nil {
				f.Fatal(err)
			}
			if e.IsDir() || info.Size() > 32<<10 {
				continue
			}
			data, err := os.ReadFile(filepath.Join("../../../testdata", folder, e.Name()))
			if err != nil {
				f.Fatal(err)
			}
			f.Add(e.Name(), data)
			seeds++
		}
	}
	if seeds < 200 {
		f.Fatalf("only %d seed files", seeds)
	}
	f.Add("a.mzML.gz", gzipped(f, contents(f)[:2000]))
	f.Add("a.csv.gz", gzipped(f, []byte("1,2\n3,4\n")))
	f.Add("zeros.gz", gzipped(f, make([]byte, 1<<20)))
	f.Add("", []byte{})
	f.Fuzz(func(t *testing.T, name string, data []byte) {
		before := allocated()
		_, err := everything(name, data)
		if took := allocated() - before; took > mostMemory(len(data)) {
			t.Fatalf("%d bytes of memory for a file of %d", took, len(data))
		}
		var syntax *trace.SyntaxError
		if err != nil && (!errors.As(err, &syntax) || syntax.Got == "" || syntax.Want == "") {
			t.Fatalf("a refusal without a reason: %#v", err)
		}
	})
}
