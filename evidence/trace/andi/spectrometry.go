package andi

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"assaywrit/evidence/trace"
)

// spectrometry reads a file of ASTM E2077: spectra over time, and their total ion current as a chromatogram.
func (r *reader) spectrometry() error {
	f := r.file
	f.Format, f.FormatVersion = "ANDI mass spectrometry", r.global("ms_template_revision")
	r.start("experiment_date_time_stamp")
	if f.SampleCode = r.global("sample_internal_id"); f.SampleCode == "" {
		f.SampleCode = r.global("sample_external_id")
	}
	f.Method = joined("; ", r.global("test_scan_function"), r.global("test_ionization_mode"), r.global("test_separation_type"))
	var err error
	if f.Instrument, err = r.joinedRows("instrument_mfr", "instrument_model", "instrument_serial_no"); err != nil {
		return err
	}
	if f.Instrument == "" {
		if f.Instrument, err = r.joinedRows("instrument_name", "instrument_id"); err != nil {
			return err
		}
	}
	if f.Software, err = r.joinedRows("instrument_app_version", "instrument_sw_version"); err != nil {
		return err
	}
	for _, name := range []string{"scan_acquisition_time", "scan_index", "point_count", "mass_values", "intensity_values"} {
		if v := r.nc.Variable(name); v == nil {
			return r.missing()
		} else if isText(v) {
			return r.fail(fmt.Sprintf("text in the variable %s at byte %d", name, v.Offset(0)), "numbers", "")
		}
	}
	s := &scans{nc: r.nc, mode: mode(r.global("experiment_type")), polarity: polarity(r.global("test_ionization_polarity"))}
	for _, step := range []func(s *scans) error{r.arrays, r.scanTimes, r.pieces, r.scanNumbers} {
		if err := step(s); err != nil {
			return err
		}
	}
	f.Scans = s
	return r.total(s)
}

// missing names what a mass spectrometry file lacks.
func (r *reader) missing() error {
	var absent []string
	for _, name := range []string{"scan_acquisition_time", "scan_index", "point_count", "mass_values", "intensity_values"} {
		if r.nc.Variable(name) == nil {
			absent = append(absent, name)
		}
	}
	return r.fail("no variable "+strings.Join(absent, ", "), "the mandatory variables of ASTM E2077", "export the run again, with its raw data")
}

// arrays looks at the variables that hold the spectra.
func (r *reader) arrays(s *scans) (err error) {
	mass, intensity := r.nc.Variable("mass_values"), r.nc.Variable("intensity_values")
	if s.points = mass.Len(); intensity.Len() != s.points {
		return r.fail(fmt.Sprintf("%d mass_values and %d intensity_values", s.points, intensity.Len()), "as many of each", "")
	}
	if s.massScale, err = r.scaleOf(mass); err != nil {
		return err
	}
	if s.intensityScale, err = r.scaleOf(intensity); err != nil {
		return err
	}
	if unit := r.attribute("mass_values", "units"); unit != "" && !strings.EqualFold(unit, "m/z") {
		r.warn("mass-unit", fmt.Sprintf("mass_values are in %.80q, want M/Z", unit))
	}
	return nil
}

// scanTimes reads the times of the spectra. They are in seconds by the standard; an attribute units is obeyed where a file has one.
func (r *reader) scanTimes(s *scans) (err error) {
	const name = "scan_acquisition_time"
	if s.times, err = r.known(name, -1); err != nil {
		return err
	}
	if len(s.times) == 0 {
		return r.fail("no values of "+name, "a run with spectra", "")
	}
	scale := 60.
	if unit := r.attribute(name, "units"); unit != "" {
		if scale = perMinute(unit); scale == 0 {
			return r.fail(fmt.Sprintf("the units %.80q of %s", unit, name), timeUnits, "")
		}
	}
	for i := range s.times {
		if i > 0 && s.times[i]/scale < s.times[i-1] {
			at := r.nc.Variable(name).Offset(int64(i))
			return r.fail(fmt.Sprintf("a time of %g min for spectrum %d at byte %d", s.times[i]/scale, i+1, at), fmt.Sprintf("none before %g min", s.times[i-1]), "spectra must be in acquisition order; export the run again")
		}
		s.times[i] /= scale
	}
	return nil
}

// pieces reads where in the arrays each spectrum lies.
func (r *reader) pieces(s *scans) error {
	index, _, err := r.numbers("scan_index")
	if err != nil {
		return err
	}
	count, _, err := r.numbers("point_count")
	if err != nil {
		return err
	}
	if n := len(s.times); len(index) != n || len(count) != n {
		return r.fail(fmt.Sprintf("%d values of scan_index and %d of point_count", len(index), len(count)), fmt.Sprintf("%d of each, as of scan_acquisition_time", n), "")
	}
	s.first, s.count = make([]int64, len(index)), make([]int, len(index))
	end, used := int64(0), int64(0)
	for i := range index {
		switch {
		case count[i] < 0 || count[i] != math.Trunc(count[i]) || count[i] > float64(s.points):
			at := r.nc.Variable("point_count").Offset(int64(i))
			return r.fail(fmt.Sprintf("a point_count of %g for spectrum %d at byte %d", count[i], i+1, at), fmt.Sprintf("a whole number up to %d", s.points), "")
		case count[i] == 0: // where it would lie says nothing
			continue
		case index[i] < float64(end) || index[i] != math.Trunc(index[i]) || index[i]+count[i] > float64(s.points):
			at := r.nc.Variable("scan_index").Offset(int64(i))
			return r.fail(fmt.Sprintf("a scan_index of %g for spectrum %d of %g points at byte %d", index[i], i+1, count[i], at),
				fmt.Sprintf("a whole number from %d, where the spectrum before ends, to %g", end, float64(s.points)-count[i]), "")
		}
		s.first[i], s.count[i] = int64(index[i]), int(count[i])
		end = s.first[i] + int64(s.count[i])
		used += int64(s.count[i])
	}
	if used < s.points {
		r.warn("points-without-scan", fmt.Sprintf("%d of %d points belong to no spectrum", s.points-used, s.points))
	}
	return nil
}

// scanNumbers reads the numbers that the file gives its spectra, if it numbers each of them.
func (r *reader) scanNumbers(s *scans) error {
	numbers, missing, err := r.numbers("actual_scan_number")
	if err != nil || len(numbers) != len(s.times) {
		return err
	}
	seen := make(map[float64]bool, len(numbers))
	for i, n := range numbers {
		if missing(i) || n < 0 || seen[n] || n != math.Trunc(n) {
			r.warn("scan-numbers", fmt.Sprintf("actual_scan_number of spectrum %d is %g, which is not a number of its own: the numbers are left out", i+1, n))
			return nil
		}
		seen[n] = true
	}
	s.numbers = numbers
	return nil
}

// total reads total_intensity, into the spectra and as a chromatogram.
func (r *reader) total(s *scans) error {
	const name = "total_intensity"
	total, missing, err := r.numbers(name)
	if err != nil || missing == nil {
		return err
	}
	if len(total) != len(s.times) {
		return r.fail(fmt.Sprintf("%d values of %s", len(total), name), fmt.Sprintf("%d, as of scan_acquisition_time", len(s.times)), "")
	}
	whole := true
	for i := range total {
		if missing(i) {
			total[i], whole = 0, false
		}
	}
	s.total = total
	if !whole {
		r.warn("total-intensity", "total_intensity is not known for every spectrum: no chromatogram is made of it")
		return nil
	}
	c := trace.Chromatogram{ID: name, Kind: trace.TIC, Unit: r.attribute(name, "units"), TimeMin: append([]float64(nil), s.times...), Intensity: append([]float64(nil), total...)}
	c.Transition.Polarity = s.polarity
	if b := c.Check(); b != nil {
		r.warn("total-intensity", fmt.Sprintf("spectra %d and %d have the same time: no chromatogram is made of total_intensity", b.Point-1, b.Point))
		return nil
	}
	r.file.Chromatograms = append(r.file.Chromatograms, c)
	return nil
}

// mode reads experiment_type.
func mode(text string) trace.Mode {
	switch text = strings.ToLower(text); {
	case strings.HasPrefix(text, "centroid"):
		return trace.Centroid
	case strings.HasPrefix(text, "continuum"):
		return trace.Profile
	}
	return ""
}

// polarity reads test_ionization_polarity.
func polarity(text string) trace.Polarity {
	switch text = strings.ToLower(text); {
	case strings.HasPrefix(text, "positive"):
		return trace.Positive
	case strings.HasPrefix(text, "negative"):
		return trace.Negative
	}
	return ""
}

// joined puts texts together that are not empty.
func joined(separator string, parts ...string) string {
	var all []string
	for _, p := range parts {
		if p != "" {
			all = append(all, p)
		}
	}
	return strings.Join(all, separator)
}

// joinedRows puts the texts of variables together.
func (r *reader) joinedRows(names ...string) (string, error) {
	var all []string
	for _, name := range names {
		rows, err := r.rows(name)
		if err != nil {
			return "", err
		}
		all = append(all, rows...)
	}
	return joined(" ", all...), nil
}

func scanID(n float64) string { return "scan=" + strconv.FormatFloat(n, 'f', -1, 64) }
