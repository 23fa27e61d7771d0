package andi

import (
	"bytes"
	"errors"
	"math"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

// TestPublishedFiles compares with what another reader, checked against the format's own ncdump, found in files of other people.
func TestPublishedFiles(t *testing.T) {
	if n := againstOtherReader(t, folder); n != 5 {
		t.Errorf("%d files compared, want 5", n)
	}
}

// againstOtherReader compares every file that expected.json describes, and returns how many.
func againstOtherReader(t *testing.T, folder string) (compared int) {
	for name, want := range expected(t, folder) {
		path := filepath.Join(folder, name)
		switch {
		case strings.HasPrefix(want.Kind, "chromatography"):
			againstChromatography(t, path, want)
		case strings.HasPrefix(want.Kind, "mass spectrometry"):
			againstSpectrometry(t, path, want)
		case strings.HasPrefix(want.Kind, "netCDF-4"):
			againstHDF5(t, path)
		default:
			continue // netCDF of no kind that is read here: see package netcdf
		}
		compared++
	}
	return compared
}

func within(got, want, relative float64) bool { return math.Abs(got-want) <= relative*math.Abs(want) }

func againstChromatography(t *testing.T, path string, want known) {
	f := read(t, path)
	c := f.Chromatograms[0]
	if len(f.Chromatograms) != 1 || len(c.TimeMin) != want.Points || len(f.Warnings) > 0 || f.Scans != nil || f.Format != "ANDI chromatography" {
		t.Fatalf("%s: %d points, want %d; warnings %v", path, len(c.TimeMin), want.Points, f.Warnings)
	}
	if f.FormatVersion != want.global("aia_template_revision") || f.SampleCode != want.global("sample_name") || c.ID != want.global("detector_name") || c.Unit != want.global("detector_unit") {
		t.Errorf("%s: got %q, %q, %q, %q", path, f.FormatVersion, f.SampleCode, c.ID, c.Unit)
	}
	stamp := want.global("injection_date_time_stamp")
	if digits := strings.NewReplacer("-", "", "T", "", ":", "").Replace(f.StartTime); digits != strings.Replace(stamp, "-", "", 1) {
		t.Errorf("%s: start %s, want %s", path, f.StartTime, stamp)
	}
	if kind := map[string]trace.Kind{"mAU": trace.Absorption, "counts": trace.TIC}[c.Unit]; c.Kind != kind {
		t.Errorf("%s: kind %s, want %s", path, c.Kind, kind)
	}
	sum, least, most := 0., math.Inf(1), math.Inf(-1)
	for _, y := range c.Intensity {
		sum, least, most = sum+y, min(least, y), max(most, y)
	}
	// The sum is printed with eleven digits; times are divided by 60 here, and multiplied again.
	if !within(sum, want.Sum, 1e-9) || least != want.Least || most != want.Most {
		t.Errorf("%s: sum %v, from %v to %v; want %v, %v, %v", path, sum, least, most, want.Sum, want.Least, want.Most)
	}
	if first, last := c.TimeMin[0]*60, c.TimeMin[want.Points-1]*60; !within(first, want.First, 1e-14) || !within(last, want.Last, 1e-14) {
		t.Errorf("%s: from %v s to %v s, want %v, %v", path, first, last, want.First, want.Last)
	}
	againstPeaks(t, path, f, want)
}

// againstPeaks compares the peak table, and integrates each peak again: above the straight line through the stored ends of its
// baseline, by trapezoids, linear between points at both limits.
func againstPeaks(t *testing.T, path string, f *trace.File, want known) {
	if len(f.StoredPeaks) != len(want.Peaks) {
		t.Fatalf("%s: %d peaks, want %d", path, len(f.StoredPeaks), len(want.Peaks))
	}
	// Areas are stored with 24 bits; a trace of counts needs most of them. The worst of its areas is published as 2.6e-5 off.
	tolerance := map[string]float64{"mAU": 1e-6, "counts": 2.65e-5}[f.Chromatograms[0].Unit]
	worst := 0.
	for i, p := range f.StoredPeaks {
		w := want.Peaks[i]
		for k, pair := range [][2]float64{
			{p.RetentionMin * 60, w.Retention}, {*p.StartMin * 60, w.Start}, {*p.EndMin * 60, w.End}, {*p.BaselineStartMin * 60, w.Baseline[0]},
			{*p.BaselineStart, w.Baseline[1]}, {*p.BaselineEndMin * 60, w.Baseline[2]}, {*p.BaselineEnd, w.Baseline[3]},
		} {
			if math.Abs(pair[0]-pair[1]) > 0.51e-4 { // half the last printed digit
				t.Errorf("%s: peak %d, value %d: got %v, want %v", path, i+1, k, pair[0], pair[1])
			}
		}
		if !within(*p.Area*60, w.Area, 1e-15) || *p.Height != w.Height || p.TraceID != f.Chromatograms[0].ID || p.ByHand || p.Name != "" || len(strings.Fields(p.DetectionCodes)) != 2 {
			t.Errorf("%s: peak %d: %+v, want %+v", path, i+1, p, w)
		}
		again := area(f.Chromatograms[0], p)
		worst = max(worst, math.Abs(again / *p.Area - 1))
		if !within(again, *p.Area, tolerance) || !within(again*60, w.Recomputed, 1e-8) {
			t.Errorf("%s: peak %d: an area of %v, stored %v, recomputed elsewhere %v", path, i+1, again, *p.Area, w.Recomputed/60)
		}
	}
	t.Logf("%s: %d areas reproduced to %.1e", filepath.Base(path), len(f.StoredPeaks), worst)
}

// area is the area of a stored peak above its stored baseline.
func area(c trace.Chromatogram, p trace.StoredPeak) float64 {
	above := func(t, y float64) float64 {
		slope := (*p.BaselineEnd - *p.BaselineStart) / (*p.BaselineEndMin - *p.BaselineStartMin)
		return y - (*p.BaselineStart + float64(slope*(t-*p.BaselineStartMin)))
	}
	at := func(t float64) float64 { // linear between points
		for i := 1; i < len(c.TimeMin); i++ {
			if t <= c.TimeMin[i] {
				slope := (c.Intensity[i] - c.Intensity[i-1]) / (c.TimeMin[i] - c.TimeMin[i-1])
				return c.Intensity[i-1] + float64(slope*(t-c.TimeMin[i-1]))
			}
		}
		return c.Intensity[len(c.Intensity)-1]
	}
	start, end := *p.StartMin, *p.EndMin
	sum, t0, h0 := 0., start, above(start, at(start))
	step := func(t, h float64) {
		sum += float64((t - t0) * (h + h0) / 2)
		t0, h0 = t, h
	}
	for i, t := range c.TimeMin {
		if t > start && t < end {
			step(t, above(t, c.Intensity[i]))
		}
	}
	step(end, above(end, at(end)))
	return sum
}

func againstSpectrometry(t *testing.T, path string, want known) {
	f := read(t, path)
	if f.Scans.Len() != want.NScans || f.FormatVersion != want.global("ms_template_revision") || f.Format != "ANDI mass spectrometry" || len(f.Warnings) > 0 {
		t.Fatalf("%s: %d spectra, want %d; warnings %v", path, f.Scans.Len(), want.NScans, f.Warnings)
	}
	c := f.Chromatograms[0]
	if len(f.Chromatograms) != 1 || c.ID != "total_intensity" || c.Kind != trace.TIC || c.Check() != nil {
		t.Errorf("%s: %d chromatograms, %q", path, len(f.Chromatograms), c.ID)
	}
	r, sum, points := f.Scans.Open(), 0., 0
	for i := range f.Scans.Len() {
		s := f.Scans.Scan(i)
		sum += s.TotalIon
		points += s.Points
		mz, err := r.MZ(i)
		if err != nil {
			t.Fatal(err)
		}
		intensity, err := r.Intensity(i)
		if err != nil {
			t.Fatal(err)
		}
		if len(mz) != s.Points || len(intensity) != s.Points || s.Mode != trace.Centroid || s.Polarity != trace.Positive || c.Intensity[i] != s.TotalIon || c.TimeMin[i] != s.TimeMin {
			t.Fatalf("%s: spectrum %d: %d m/z, %d intensities, %+v", path, i, len(mz), len(intensity), s)
		}
		scanSum := 0.
		for _, y := range intensity {
			scanSum += y
		}
		if scanSum != s.TotalIon {
			t.Errorf("%s: spectrum %d: intensities sum up to %v, the file says %v", path, i, scanSum, s.TotalIon)
		}
	}
	if sum != want.Total || points != want.Points {
		t.Errorf("%s: %v in %d points, want %v in %d", path, sum, points, want.Total, want.Points)
	}
	for _, w := range want.Scans {
		s := f.Scans.Scan(w.Scan)
		mz, _ := r.MZ(w.Scan)
		intensity, _ := r.Intensity(w.Scan)
		base := 0
		for k := range intensity {
			if intensity[k] > intensity[base] {
				base = k
			}
		}
		if !within(s.TimeMin*60, w.Time, 1e-15) || s.Points != w.N || s.TotalIon != w.Total || mz[0] != w.FirstMZ || mz[w.N-1] != w.LastMZ || mz[base] != w.BaseMZ || intensity[base] != w.BasePeak {
			t.Errorf("%s: %+v, %v, %v; want %+v", path, s, mz, intensity, w)
		}
	}
}

func againstHDF5(t *testing.T, path string) {
	data := contents(t, path)
	_, err := Read("run.cdf", bytes.NewReader(data))
	var syntax *trace.SyntaxError
	if !errors.As(err, &syntax) || !strings.Contains(syntax.Hint, "nccopy -k classic in.cdf out.cdf") || !Sniff(data[:16]) {
		t.Errorf("%s: got %v", path, err)
	}
}

// TestVersions reads the same run as CDF-1, CDF-2 and CDF-5.
func TestVersions(t *testing.T) {
	want := read(t, filepath.Join(folder, "hplc-uv-a.cdf"))
	for _, name := range []string{"hplc-uv-a.cdf2.cdf", "hplc-uv-a.cdf5.cdf"} {
		data := contents(t, filepath.Join(folder, name))
		if got := read(t, filepath.Join(folder, name)); !reflect.DeepEqual(got, want) || !Sniff(data[:8]) {
			t.Errorf("%s: not the same", name)
		}
	}
}

// TestGenericNetCDF refuses netCDF files that hold neither chromatogram nor spectra.
func TestGenericNetCDF(t *testing.T) {
	for _, name := range []string{"example_1.nc", "example_2.nc"} {
		_, err := Read(name, bytes.NewReader(contents(t, filepath.Join(folder, name))))
		if err == nil || !strings.Contains(err.Error(), "with neither ordinate_values nor mass_values") {
			t.Errorf("%s: got %v", name, err)
		}
	}
}
