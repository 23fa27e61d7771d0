package andi

import (
	"bytes"
	"math"
	"slices"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/netcdf"
)

func readSet(t testing.TB, d *netcdf.Dataset) *trace.File {
	t.Helper()
	f, err := Read("made.cdf", bytes.NewReader(written(t, d)))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func codesOf(f *trace.File) (all []string) {
	for _, w := range f.Warnings {
		all = append(all, w.Code)
	}
	return all
}

func TestChromatography(t *testing.T) {
	f := readSet(t, chromatography())
	if f.Format != "ANDI chromatography" || f.FormatVersion != "1.0" || f.StartTime != "2026-01-02T03:04:05-01:30" || f.SampleCode != "C-0001" || f.Method != "method 7" || len(f.Warnings) > 0 {
		t.Errorf("got %+v", f)
	}
	c := f.Chromatograms[0]
	if c.ID != "flame ionization" || c.Unit != "mV" || c.Kind != trace.Other || !slices.Equal(c.TimeMin, []float64{0.5, 0.75, 1, 1.25, 1.5, 1.75}) || !slices.Equal(c.Intensity, []float64{1, 2, 9, 4, -9999, 1}) {
		t.Errorf("got %+v", c)
	}
	a, b := f.StoredPeaks[0], f.StoredPeaks[1]
	if a.Name != "abc" || a.RetentionMin != 1 || *a.Area != 3 || a.Height != nil || a.StartMin != nil || a.BaselineEnd != nil || a.ByHand || a.DetectionCodes != "B V" {
		t.Errorf("got %+v", a)
	}
	if b.Name != "d" || b.RetentionMin != 1.5 || b.Area != nil || !b.ByHand || b.DetectionCodes != "V -" || b.TraceID != c.ID {
		t.Errorf("got %+v", b)
	}
}

// TestUnits reads the same numbers as seconds: times and areas are a sixtieth, all else is the same.
func TestUnits(t *testing.T) {
	for unit, factor := range map[string]float64{"seconds": 60, "Seconds\x00": 60, "sec": 60, "s": 60, "minutes": 1, "MIN": 1} {
		d := chromatography()
		attribute(d, "retention_unit").Values = unit
		f := readSet(t, d)
		if got := f.Chromatograms[0].TimeMin; got[0] != 0.5/factor || got[5] != 1.75/factor {
			t.Errorf("%q: times %v", unit, got)
		}
		if p := f.StoredPeaks[0]; p.RetentionMin != 1/factor || *p.Area != 3/factor {
			t.Errorf("%q: %+v, an area of %v", unit, p, *p.Area)
		}
	}
}

// TestLeftOut takes everything out that need not be there.
func TestLeftOut(t *testing.T) {
	d := chromatography()
	without(d, "aia_template_revision", "detector_unit", "detector_name", "sample_name", "injection_date_time_stamp", "detection_method_name", "peak_retention_time", "peak_area",
		"peak_name", "peak_start_detection_code", "peak_stop_detection_code", "manually_reintegrated_peaks")
	variable(d, "ordinate_values").Attributes = nil
	f := readSet(t, d)
	if f.FormatVersion+f.StartTime+f.SampleCode+f.Method+f.Instrument+f.Software != "" || f.StoredPeaks != nil || f.Chromatograms[0].ID != "ordinate_values" || f.Chromatograms[0].Unit != "" || len(f.Warnings) > 0 {
		t.Errorf("got %+v", f)
	}
	s := spectrometry()
	without(s, "ms_template_revision", "experiment_type", "test_ionization_polarity", "experiment_date_time_stamp", "sample_internal_id", "test_scan_function", "total_intensity",
		"actual_scan_number", "instrument_mfr", "instrument_model", "instrument_serial_no", "instrument_app_version")
	f = readSet(t, s)
	if f.FormatVersion+f.StartTime+f.SampleCode+f.Method+f.Instrument+f.Software != "" || f.Chromatograms != nil || len(f.Warnings) > 0 {
		t.Errorf("got %+v", f)
	}
	if got, want := f.Scans.Scan(0), (trace.Scan{TimeMin: 0.1, Points: 3}); got != want {
		t.Errorf("got %+v, want %+v", got, want)
	}
}

// TestSampling tells even and uneven sampling apart by the flag, or by what is there.
func TestSampling(t *testing.T) {
	uneven := netcdf.NewVariable{Name: "raw_data_retention", Dimensions: []string{"point_number"}, Values: []float64{1, 2, 4, 8, 16, 32}}
	for _, tt := range []struct {
		flag        string
		each, steps bool
		last        float64
		want        string
	}{
		{"Y", false, true, 1.75, ""}, {"y", true, true, 1.75, ""}, {"N", true, true, 32, ""}, {"N", true, false, 32, ""}, {"", true, false, 32, ""}, {"", false, true, 1.75, ""},
		{"", true, true, 0, "got both actual_sampling_interval and raw_data_retention, and no uniform_sampling_flag"},
		{"N", false, true, 0, "got no variable raw_data_retention"}, {"Y", true, false, 0, "got no variable actual_sampling_interval"}, {"", false, false, 0, "got no variable actual_sampling_interval"},
		{"maybe", true, true, 0, `got a uniform_sampling_flag of "maybe", want Y or N`},
	} {
		d := chromatography()
		variable(d, "ordinate_values").Attributes[0].Values = tt.flag
		if tt.each {
			d.Variables = append(d.Variables, uneven)
		}
		if !tt.steps {
			without(d, "actual_sampling_interval")
		}
		f, err := Read("f", bytes.NewReader(written(t, d)))
		if tt.want == "" && (err != nil || f.Chromatograms[0].TimeMin[5] != tt.last) || tt.want != "" && (err == nil || !strings.Contains(err.Error(), tt.want)) {
			t.Errorf("%+v: got %v", tt, err)
		}
	}
}

func TestKind(t *testing.T) {
	for _, tt := range []struct {
		detector, unit string
		want           trace.Kind
	}{
		{"", "mAU", trace.Absorption}, {"anything", "AU", trace.Absorption}, {"UV 254 nm", "mV", trace.Absorption}, {"DAD1 A", "", trace.Absorption}, {"PDA", "counts", trace.Absorption},
		{"MS TIC", "counts", trace.TIC}, {"tic", "", trace.TIC}, {"static pressure", "bar", trace.Other}, {"DAD1 temperature", "°C", trace.Other}, {"UV", "bar", trace.Other},
		{"FID", "pA", trace.Other}, {"", "", trace.Other}, {"louver", "mV", trace.Other}, {"", "mau", trace.Other},
	} {
		if got := kind(tt.detector, tt.unit); got != tt.want {
			t.Errorf("%q, %q: %s, want %s", tt.detector, tt.unit, got, tt.want)
		}
	}
}

func TestStartTime(t *testing.T) {
	for stamp, want := range map[string]string{
		"20260102030405+0000": "2026-01-02T03:04:05+00:00", "20260102030405-0930": "2026-01-02T03:04:05-09:30", "20260102030405": "2026-01-02T03:04:05", "20240229000000+0100": "2024-02-29T00:00:00+01:00",
		"20260229000000+0100": "", "2026-01-02": "", "20260102030405.5": "", "20260102256000": "", "20260102030405+9900": "", "20260102030405Z": "",
	} {
		d := chromatography()
		attribute(d, "injection_date_time_stamp").Values = stamp
		f := readSet(t, d)
		if f.StartTime != want || (want == "") != slices.Equal(codesOf(f), []string{"start-time"}) {
			t.Errorf("%s: got %q, %v, want %q", stamp, f.StartTime, f.Warnings, want)
		}
	}
}

// TestText reads what software before UTF-8 wrote, and what stands after the end of a text.
func TestText(t *testing.T) {
	d := chromatography()
	attribute(d, "detector_unit").Values = "\xb5V"
	attribute(d, "sample_name").Values = " a\x00left over "
	f := readSet(t, d)
	if f.Chromatograms[0].Unit != "µV" || f.SampleCode != "a" || !slices.Equal(codesOf(f), []string{"text-encoding"}) {
		t.Errorf("got %q, %q, %v", f.Chromatograms[0].Unit, f.SampleCode, f.Warnings)
	}
}

// TestWarnings changes files so that they can still be read.
func TestWarnings(t *testing.T) {
	for want, change := range map[string]func(d *netcdf.Dataset){
		"run-length": func(d *netcdf.Dataset) {
			d.Variables = append(d.Variables, netcdf.NewVariable{Name: "actual_run_time_length", Values: []float32{75}}) // 1.25 min in seconds
		},
		"peak-table": func(d *netcdf.Dataset) { without(d, "peak_retention_time") },
	} {
		d := chromatography()
		change(d)
		if f := readSet(t, d); !slices.Equal(codesOf(f), []string{want}) || f.StoredPeaks != nil && want == "peak-table" {
			t.Errorf("got %v, want %s", f.Warnings, want)
		}
	}
	d := chromatography()
	variable(d, "peak_retention_time").Values = []float32{-9999, 1.5}
	if f := readSet(t, d); !slices.Equal(codesOf(f), []string{"peak-table"}) || len(f.StoredPeaks) != 1 || f.StoredPeaks[0].Name != "d" {
		t.Errorf("got %v, %v", f.StoredPeaks, f.Warnings)
	}
	d = chromatography()
	d.Variables = append(d.Variables, netcdf.NewVariable{Name: "actual_run_time_length", Values: []float32{1.25}})
	if f := readSet(t, d); len(f.Warnings) > 0 {
		t.Error(f.Warnings)
	}
	for want, change := range map[string]func(d *netcdf.Dataset){
		"scan-numbers":        func(d *netcdf.Dataset) { variable(d, "actual_scan_number").Values = []int32{1, 2, 2} },
		"points-without-scan": func(d *netcdf.Dataset) { variable(d, "point_count").Values = []int32{3, 0, 3} },
		"total-intensity":     func(d *netcdf.Dataset) { variable(d, "scan_acquisition_time").Values = []float64{6, 12, 12} },
		"mass-unit": func(d *netcdf.Dataset) {
			m := variable(d, "mass_values")
			m.Attributes = append(m.Attributes, netcdf.NewAttribute{Name: "units", Values: "Arbitrary Mass Units"})
		},
	} {
		d := spectrometry()
		change(d)
		f := readSet(t, d)
		if !slices.Equal(codesOf(f), []string{want}) || (f.Scans.Scan(0).ID == "") != (want == "scan-numbers") || (len(f.Chromatograms) == 0) != (want == "total-intensity") {
			t.Errorf("got %v, want %s", f.Warnings, want)
		}
	}
	s := spectrometry()
	variable(s, "total_intensity").Values = []float64{60, -9999, 100}
	if f := readSet(t, s); !slices.Equal(codesOf(f), []string{"total-intensity"}) || f.Chromatograms != nil || f.Scans.Scan(1).TotalIon != 0 || f.Scans.Scan(2).TotalIon != 100 {
		t.Errorf("got %v", f.Warnings)
	}
}

func TestSpectrometry(t *testing.T) {
	f := readSet(t, spectrometry())
	if f.Format != "ANDI mass spectrometry" || f.FormatVersion != "1.0.1" || f.StartTime != "2026-01-02T03:04:05+01:00" || f.SampleCode != "C-0002" || f.Method != "Mass Scan" ||
		f.Instrument != "maker model no 7" || f.Software != "soft 2" || len(f.Warnings) > 0 {
		t.Errorf("got %+v", f)
	}
	if c := f.Chromatograms[0]; c.ID != "total_intensity" || c.Kind != trace.TIC || c.Unit != "counts" || c.Transition.Polarity != trace.Negative || !slices.Equal(c.TimeMin, []float64{0.1, 0.2, 0.21}) || !slices.Equal(c.Intensity, []float64{60, 0, 100}) {
		t.Errorf("got %+v", c)
	}
	want := []trace.Spectrum{{MZ: []float64{50, 100, 150}, Intensity: []float64{16, 14, 12}}, {}, {MZ: []float64{30, 35, 40, 40}, Intensity: []float64{20, 24, 18, 22}}}
	for i, id := range []string{"scan=11", "scan=12", "scan=13"} {
		s := f.Scans.Scan(i)
		if s.ID != id || s.Points != len(want[i].MZ) || s.Polarity != trace.Negative || s.Mode != trace.Profile || s.MSLevel != 0 || s.PrecursorMZ != 0 {
			t.Errorf("got %+v", s)
		}
	}
	// The arrays in any order of calls; what was returned stays until the same method is called again.
	for _, calls := range []string{"m0i0m1i1m2i2", "i2m2i0m0", "m0i2", "i0m2", "m2i2i2m2m0", "m0m2i0i2", "i1i2m0m2", "m2i0i2m0"} {
		r := f.Scans.Open()
		var mz, intensity []float64
		var mzOf, intensityOf = -1, -1
		for k := 0; k < len(calls); k += 2 {
			var err error
			i := int(calls[k+1] - '0')
			if calls[k] == 'm' {
				mz, err = r.MZ(i)
				mzOf = i
			} else {
				intensity, err = r.Intensity(i)
				intensityOf = i
			}
			if err != nil {
				t.Fatal(err)
			}
			if mzOf >= 0 && !slices.Equal(mz, want[mzOf].MZ) || intensityOf >= 0 && !slices.Equal(intensity, want[intensityOf].Intensity) {
				t.Fatalf("%s, after %s: got %v, %v", calls, calls[:k+2], mz, intensity)
			}
		}
	}
}

// TestBothRevisions reads spectra whatever other template a file names.
func TestBothRevisions(t *testing.T) {
	d := spectrometry()
	d.Attributes = append(d.Attributes, netcdf.NewAttribute{Name: "aia_template_revision", Values: "1.0"})
	if f := readSet(t, d); f.Scans == nil {
		t.Error("no spectra")
	}
	without(d, "mass_values", "scan_acquisition_time", "aia_template_revision")
	if _, err := Read("f", bytes.NewReader(written(t, d))); err == nil || !strings.Contains(err.Error(), "got no variable scan_acquisition_time, mass_values, want") {
		t.Errorf("got %v", err)
	}
}

// TestUnitOfScans obeys a unit that a file gives the times of its spectra.
func TestUnitOfScans(t *testing.T) {
	d := spectrometry()
	v := variable(d, "scan_acquisition_time")
	v.Attributes = []netcdf.NewAttribute{{Name: "units", Values: "minutes"}}
	if f := readSet(t, d); f.Scans.Scan(2).TimeMin != 12.6 {
		t.Errorf("got %v", f.Scans.Scan(2))
	}
	v.Attributes[0].Values = "Seconds"
	if f := readSet(t, d); f.Scans.Scan(2).TimeMin != 12.6/60 {
		t.Errorf("got %v", f.Scans.Scan(2))
	}
}

// TestArraysRefused: what is wrong in the arrays of a spectrum is refused when they are read, and the others still can be.
func TestArraysRefused(t *testing.T) {
	for want, change := range map[string]func(d *netcdf.Dataset){
		"got an m/z of -5 as point 2 of spectrum 3 in mass_values at byte ": func(d *netcdf.Dataset) {
			variable(d, "mass_values").Values = []int16{300, 200, 100, 80, -10, 80, 70}
		},
		"got a value that was never written as point 1 of spectrum 3 in mass_values at byte ": func(d *netcdf.Dataset) {
			variable(d, "mass_values").Values = []int16{300, 200, 100, -32767, 1, 80, 70}
		},
		"got a value that was never written as point 4 of spectrum 3 in intensity_values at byte ": func(d *netcdf.Dataset) {
			variable(d, "intensity_values").Values = []float32{1, 2, 3, 4, 5, 6, 0x1.ep122}
		},
		"got a value that scale_factor and add_offset make infinite as point 1 of spectrum 3 in intensity_values at byte ": func(d *netcdf.Dataset) {
			v := variable(d, "intensity_values")
			v.Values, v.Attributes[0].Values = []float32{1, 2, 3, 1e30, 5, 6, 7}, []float64{1e300}
		},
	} {
		d := spectrometry()
		change(d)
		r := readSet(t, d).Scans.Open()
		_, err := r.MZ(2)
		if err == nil {
			_, err = r.Intensity(2)
		}
		if err == nil || !strings.HasPrefix(err.Error(), "made.cdf: "+want) {
			t.Errorf("got %v, want %s", err, want)
		}
		mz, err := r.MZ(0)
		if err != nil || !slices.Equal(mz, []float64{50, 100, 150}) {
			t.Errorf("after a refusal: %v, %v", mz, err)
		}
		if _, err := r.Intensity(0); err != nil {
			t.Errorf("after a refusal: %v", err)
		}
	}
	// Not finite in the file itself.
	data := written(t, spectrometry())
	f, err := netcdf.Open("f", bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	copy(data[f.Variable("intensity_values").Offset(4):], "\x7f\xc0\x00\x00")
	file, err := Read("f", bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	if _, err := file.Scans.Open().Intensity(2); err == nil || !strings.Contains(err.Error(), "got NaN as value 5") {
		t.Errorf("got %v", err)
	}
}

// TestScaled applies the scale of a trace, as of any variable.
func TestScaled(t *testing.T) {
	d := chromatography()
	v := variable(d, "ordinate_values")
	v.Attributes = append(v.Attributes, netcdf.NewAttribute{Name: "scale_factor", Values: []float64{0.5}}, netcdf.NewAttribute{Name: "add_offset", Values: []int16{3}})
	if got := readSet(t, d).Chromatograms[0].Intensity; got[2] != 7.5 || math.Signbit(got[0]) {
		t.Errorf("got %v", got)
	}
}
