package andi

import (
	"bytes"
	"path/filepath"
	"testing"
)

// BenchmarkSpectra reads all spectra of a published run: 157201 points in 6401 spectra.
func BenchmarkSpectra(b *testing.B) {
	data := contents(b, filepath.Join(folder, "gcms-scan-a.cdf"))
	b.SetBytes(int64(len(data)))
	for b.Loop() {
		f, err := Read("run.cdf", bytes.NewReader(data))
		if err != nil {
			b.Fatal(err)
		}
		r := f.Scans.Open()
		for i := range f.Scans.Len() {
			if _, err := r.MZ(i); err != nil {
				b.Fatal(err)
			}
			if _, err := r.Intensity(i); err != nil {
				b.Fatal(err)
			}
		}
	}
}
