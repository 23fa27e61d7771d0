package andi

import (
	"fmt"
	"strings"

	"assaywrit/evidence/trace"
)

// peaks reads the peak table. Its times are in the unit of retention, its areas in the unit of the detector times that unit; scale is
// how many of that unit make a minute. A column that is not there or holds -9999 stays empty.
func (r *reader) peaks(id string, scale float64) error {
	at, unset, err := r.numbers("peak_retention_time")
	if err != nil {
		return err
	}
	if unset == nil {
		if v := r.nc.Variable("peak_area"); v != nil && v.Len() > 0 {
			r.warn("peak-table", "peak_area without peak_retention_time: the peak table is left out")
		}
		return nil
	}
	peaks := make([]trace.StoredPeak, len(at))
	for i := range peaks {
		peaks[i] = trace.StoredPeak{TraceID: id, RetentionMin: at[i] / scale}
	}
	for _, column := range []struct {
		name  string
		scale float64
		field func(p *trace.StoredPeak) **float64
	}{
		{"peak_start_time", scale, func(p *trace.StoredPeak) **float64 { return &p.StartMin }},
		{"peak_end_time", scale, func(p *trace.StoredPeak) **float64 { return &p.EndMin }},
		{"peak_area", scale, func(p *trace.StoredPeak) **float64 { return &p.Area }},
		{"peak_height", 1, func(p *trace.StoredPeak) **float64 { return &p.Height }},
		{"baseline_start_time", scale, func(p *trace.StoredPeak) **float64 { return &p.BaselineStartMin }},
		{"baseline_stop_time", scale, func(p *trace.StoredPeak) **float64 { return &p.BaselineEndMin }},
		{"baseline_start_value", 1, func(p *trace.StoredPeak) **float64 { return &p.BaselineStart }},
		{"baseline_stop_value", 1, func(p *trace.StoredPeak) **float64 { return &p.BaselineEnd }},
	} {
		values, missing, err := r.numbers(column.name)
		if err != nil {
			return err
		}
		if missing == nil {
			continue
		}
		if err := r.sameLength(column.name, len(values), len(peaks)); err != nil {
			return err
		}
		for i := range peaks {
			if !missing(i) {
				v := values[i] / column.scale
				*column.field(&peaks[i]) = &v
			}
		}
	}
	if err := r.peakText(peaks); err != nil {
		return err
	}
	for i := range peaks {
		if unset(i) {
			r.warn("peak-table", fmt.Sprintf("peak %d of the peak table has no retention time, and is left out", i+1))
			continue
		}
		r.file.StoredPeaks = append(r.file.StoredPeaks, peaks[i])
	}
	return nil
}

// sameLength refuses a column of the peak table that is shorter or longer than the table.
func (r *reader) sameLength(name string, got, want int) error {
	if got != want {
		return r.fail(fmt.Sprintf("%d values of %s", got, name), fmt.Sprintf("%d, as of peak_retention_time", want), "")
	}
	return nil
}

// peakText reads the columns of text, and which peaks were drawn by hand.
func (r *reader) peakText(peaks []trace.StoredPeak) error {
	column := func(name string) ([]string, error) {
		rows, err := r.rows(name)
		if err == nil && rows != nil {
			err = r.sameLength(name, len(rows), len(peaks))
		}
		return rows, err
	}
	names, err := column("peak_name")
	if err != nil {
		return err
	}
	from, err := column("peak_start_detection_code")
	if err != nil {
		return err
	}
	to, err := column("peak_stop_detection_code")
	if err != nil {
		return err
	}
	byHand, err := r.flags("manually_reintegrated_peaks", len(peaks))
	if err != nil {
		return err
	}
	for i := range peaks {
		p := &peaks[i]
		if names != nil {
			p.Name = names[i]
		}
		p.ByHand = byHand != nil && byHand[i]
		p.DetectionCodes = codes(from, to, i)
	}
	return nil
}

// codes joins the codes of both limits of a peak; "-" stands for the one that is not there.
func codes(from, to []string, i int) string {
	a, b := "-", "-"
	if from != nil && from[i] != "" {
		a = from[i]
	}
	if to != nil && to[i] != "" {
		b = to[i]
	}
	if a == "-" && b == "-" {
		return ""
	}
	return a + " " + b
}

// flags reads a variable of truth values: numbers, of which 0 is no, or letters (Y and T are yes). Nothing where it is not there.
func (r *reader) flags(name string, n int) ([]bool, error) {
	v := r.nc.Variable(name)
	if v == nil {
		return nil, nil
	}
	flags := make([]bool, n)
	if isText(v) {
		rows, err := r.nc.Text(name)
		if err != nil {
			return nil, err
		}
		if len(rows) == 1 && n != 1 { // a letter for each peak
			rows = strings.Split(rows[0], "")
		}
		if err := r.sameLength(name, len(rows), n); err != nil {
			return nil, err
		}
		for i, s := range rows {
			s = strings.ToUpper(r.text(s))
			flags[i] = strings.HasPrefix(s, "Y") || strings.HasPrefix(s, "T") || s == "1"
		}
		return flags, nil
	}
	values, missing, err := r.numbers(name)
	if err != nil {
		return nil, err
	}
	if err := r.sameLength(name, len(values), n); err != nil {
		return nil, err
	}
	for i := range flags {
		flags[i] = values[i] != 0 && !missing(i)
	}
	return flags, nil
}
