package andi

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"testing"

	"assaywrit/evidence/trace"
)

// FuzzRead: whatever the bytes, a file is read or refused with a reason, never with a panic; what is read keeps the contracts of
// package trace and is never more than the bytes can hold.
func FuzzRead(f *testing.F) {
	seeds := 0
	for _, pattern := range []string{filepath.Join(damagedFolder, "*.cdf"), filepath.Join(folder, "*.cdf"), filepath.Join(folder, "*.nc")} {
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
	f.Add(written(f, chromatography()))
	f.Add(written(f, spectrometry()))
	f.Fuzz(func(t *testing.T, data []byte) {
		file, err := Read("fuzz.cdf", bytes.NewReader(data))
		if err != nil {
			refusal(t, err)
			return
		}
		points := 0
		for _, c := range file.Chromatograms {
			if b := c.Check(); b != nil || c.ID == "" {
				t.Fatalf("chromatogram %q: %v", c.ID, b)
			}
			points += len(c.TimeMin)
		}
		for _, p := range file.StoredPeaks {
			for _, v := range []*float64{&p.RetentionMin, p.StartMin, p.EndMin, p.Area, p.Height, p.BaselineStart, p.BaselineEnd, p.BaselineStartMin, p.BaselineEndMin} {
				if v != nil && *v-*v != 0 {
					t.Fatalf("%v in the peak table", *v)
				}
			}
			points++
		}
		if file.Scans != nil {
			points += spectra(t, file.Scans)
		}
		if points > len(data) {
			t.Fatalf("%d points from %d bytes", points, len(data))
		}
	})
}

// spectra reads all spectra and returns how many points they have.
func spectra(t *testing.T, s trace.Scans) (points int) {
	r := s.Open()
	for i := range s.Len() {
		scan := s.Scan(i)
		points += scan.Points
		if i > 0 && scan.TimeMin < s.Scan(i-1).TimeMin || scan.TimeMin-scan.TimeMin != 0 || scan.TotalIon-scan.TotalIon != 0 {
			t.Fatalf("spectrum %d: %+v", i, scan)
		}
		mz, err := r.MZ(i)
		if err != nil {
			refusal(t, err)
			continue
		}
		intensity, err := r.Intensity(i)
		if err != nil {
			refusal(t, err)
			continue
		}
		if len(mz) != scan.Points || len(intensity) != scan.Points {
			t.Fatalf("%d m/z and %d intensities for %d points", len(mz), len(intensity), scan.Points)
		}
		for k := range mz {
			if mz[k] <= 0 || k > 0 && mz[k] < mz[k-1] || mz[k]-mz[k] != 0 || intensity[k]-intensity[k] != 0 {
				t.Fatalf("spectrum %d: %v at m/z %v", i, intensity, mz)
			}
		}
	}
	return points
}

func refusal(t *testing.T, err error) {
	t.Helper()
	var syntax *trace.SyntaxError
	if !errors.As(err, &syntax) || syntax.Got == "" || syntax.Want == "" {
		t.Fatalf("a refusal without a reason: %#v", err)
	}
}
