package andi

import (
	"fmt"
	"math"
	"strings"
	"unicode"

	"assaywrit/evidence/trace"
)

// chromatography reads a file of ASTM E1947: one trace and its peak table.
func (r *reader) chromatography() error {
	f := r.file
	f.Format, f.FormatVersion = "ANDI chromatography", r.global("aia_template_revision")
	f.SampleCode, f.Method = r.global("sample_name"), r.global("detection_method_name")
	r.start("injection_date_time_stamp")

	unit := r.global("retention_unit")
	scale := perMinute(unit)
	if scale == 0 {
		got := fmt.Sprintf("a retention_unit of %.80q", unit)
		if unit == "" {
			got = "no retention_unit"
		}
		return r.fail(got, timeUnits, "the unit of time must be in the file: export the run again")
	}
	c := trace.Chromatogram{ID: r.global("detector_name"), Unit: r.global("detector_unit")}
	c.Kind = kind(c.ID, c.Unit)
	if c.ID == "" {
		c.ID = "ordinate_values"
	}
	// A point that equals -9999 may have been measured, as signals go below 0: only what was never written is refused.
	var err error
	if c.Intensity, err = r.signal(); err != nil {
		return err
	}
	times, from, err := r.times(len(c.Intensity))
	if err != nil {
		return err
	}
	r.runLength(times)
	for i := range times {
		times[i] /= scale
	}
	c.TimeMin = times
	if b := c.Check(); b != nil {
		return r.fail(fmt.Sprintf("%s at point %d (%s)", b.Got, b.Point, from), b.Want, "points must be in acquisition order; export the run again")
	}
	f.Chromatograms = []trace.Chromatogram{c}
	return r.peaks(c.ID, scale)
}

// signal reads ordinate_values.
func (r *reader) signal() ([]float64, error) {
	const name = "ordinate_values"
	y, err := r.nc.Floats(name)
	v := r.nc.Variable(name)
	if v == nil {
		_, err = r.known(name, -1) // says that it is missing
	}
	if err != nil {
		return nil, err
	}
	if len(y) == 0 {
		return nil, r.fail("no values of "+name, "a trace", "")
	}
	if fill, ok := v.Fill(); ok {
		for i := range y {
			if y[i] == fill {
				return nil, r.fail(fmt.Sprintf("value %d of %s at byte %d that was never written", i+1, name, v.Offset(int64(i))), "a measured value", "")
			}
		}
	}
	s, err := r.scaleOf(v)
	if err != nil {
		return nil, err
	}
	if i := s.apply(y); i >= 0 {
		return nil, r.overflow(v, i)
	}
	return y, nil
}

// times are the times of n points in the file's unit, and the name of the variable that they come from. Points are spaced evenly
// (actual_delay_time and actual_sampling_interval, in the unit of retention) or each has its time (raw_data_retention). The attribute
// uniform_sampling_flag says which; without it, only one of the two may be there.
func (r *reader) times(n int) ([]float64, string, error) {
	const each, interval, delay = "raw_data_retention", "actual_sampling_interval", "actual_delay_time"
	uniform := false
	switch flag := r.attribute("ordinate_values", "uniform_sampling_flag"); strings.ToUpper(flag) {
	case "Y", "YES":
		uniform = true
	case "N", "NO":
	case "":
		uniform = r.nc.Variable(each) == nil
		if !uniform && r.nc.Variable(interval) != nil {
			return nil, "", r.fail("both "+interval+" and "+each+", and no uniform_sampling_flag", "one of them, or the flag", "")
		}
	default:
		return nil, "", r.fail(fmt.Sprintf("a uniform_sampling_flag of %.80q", flag), "Y or N", "")
	}
	if !uniform {
		t, err := r.known(each, n)
		return t, each, err
	}
	step, err := r.single(interval)
	if err != nil {
		return nil, "", err
	}
	first, err := r.single(delay)
	if err != nil {
		return nil, "", err
	}
	if step <= 0 {
		return nil, "", r.fail(fmt.Sprintf("an %s of %g", interval, step), "a number above 0", "")
	}
	t := make([]float64, n)
	for i := range t {
		t[i] = first + float64(float64(i)*step)
	}
	return t, interval, nil
}

// runLength compares the span of the points with actual_run_time_length, where both are in the file: a unit that is not what the file
// says shows there.
func (r *reader) runLength(times []float64) {
	const name, within = "actual_run_time_length", 0.05
	stated, missing, err := r.numbers(name)
	if err != nil || len(stated) != 1 || missing(0) || stated[0] <= 0 || len(times) < 2 {
		return
	}
	last := times[len(times)-1]
	if span := last - times[0]; math.Abs(span-stated[0]) > within*stated[0] && math.Abs(last-stated[0]) > within*stated[0] {
		r.warn("run-length", fmt.Sprintf("the points span %g %s, %s says %g", span, r.global("retention_unit"), name, stated[0]))
	}
}

// kind tells what a trace is, where the unit or a whole word of the detector's name leaves no doubt.
func kind(detector, unit string) trace.Kind {
	switch unit {
	case "AU", "mAU", "uAU", "µAU", "μAU":
		return trace.Absorption
	}
	words := strings.FieldsFunc(strings.ToUpper(detector), func(c rune) bool { return !unicode.IsLetter(c) })
	for _, w := range words {
		if w == "TIC" {
			return trace.TIC
		}
	}
	switch unit {
	case "", "V", "mV", "uV", "µV", "μV", "counts":
		for _, w := range words {
			switch w {
			case "UV", "UVVIS", "DAD", "PDA": // ultraviolet, visible, diode array, photodiode array
				return trace.Absorption
			}
		}
	}
	return trace.Other
}
