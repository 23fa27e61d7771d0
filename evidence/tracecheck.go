package evidence

import (
	"fmt"
	"slices"

	"assaywrit/evidence/trace"
)

// What a trace can show of a fault of its acquisition, beside the flags of its peaks. The names are kept in records.
const (
	GapInPeak    = "sampling-gap-in-peak" // points are missing inside the peak
	GapInTrace   = "sampling-gap"         // points are missing elsewhere
	NegativeIons = "negative-values"      // ions cannot be fewer than none
)

// gapInterval is the length of an interval, in units of the median, from which points are missing.
const gapInterval = 1.5

// traceWarnings looks at the trace of a measurement, and closer at the peak in use.
func traceWarnings(c trace.Chromatogram, m *Measurement) []trace.Warning {
	var list []trace.Warning
	warn := func(code, format string, args ...any) {
		list = append(list, trace.Warning{Code: code, Detail: fmt.Sprintf(format, args...)})
	}
	gaps, longest, at, inPeak := samplingGaps(c.TimeMin, m)
	switch {
	case inPeak:
		warn(GapInPeak, "an interval of %.4g min at %.4g min, inside the peak; the median interval is %.4g min", longest, at, medianInterval(c.TimeMin))
	case gaps > 0:
		warn(GapInTrace, "%d intervals longer than %g times the median of %.4g min; the longest, %.4g min, at %.4g min", gaps, gapInterval, medianInterval(c.TimeMin), longest, at)
	}
	if c.Kind == trace.SRM || c.Kind == trace.SIM || c.Kind == trace.TIC {
		n := 0
		for _, y := range c.Intensity {
			if y < 0 {
				n++
			}
		}
		if n > 0 {
			warn(NegativeIons, "%d of %d points are below zero: something was subtracted before the file was written", n, len(c.Intensity))
		}
	}
	return list
}

// samplingGaps counts the intervals that are longer than the median by the factor gapInterval, with the longest: inside the peak in
// use, if there is one there.
func samplingGaps(t []float64, m *Measurement) (n int, longest, at float64, inPeak bool) {
	median := medianInterval(t)
	for i := 1; i < len(t); i++ {
		d := t[i] - t[i-1]
		if !(d > gapInterval*median) {
			continue
		}
		n++
		inside := m.Peak != nil && t[i] > m.Peak.StartMin && t[i-1] < m.Peak.EndMin
		if inside && !inPeak || inside == inPeak && d > longest {
			longest, at = d, t[i-1]
		}
		inPeak = inPeak || inside
	}
	return n, longest, at, inPeak
}

// medianInterval is the lower median of the intervals between points, or 0 where there are none.
func medianInterval(t []float64) float64 {
	if len(t) < 2 {
		return 0
	}
	d := make([]float64, len(t)-1)
	for i := range d {
		d[i] = t[i+1] - t[i]
	}
	slices.Sort(d)
	return d[(len(d)-1)/2]
}
