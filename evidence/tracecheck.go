package evidence

import (
	"fmt"
	"slices"

	"assaywrit/evidence/trace"
)

// What a trace can show of a fault of the detector or of the acquisition. The names are kept in records.
const (
	FlatTop      = "flat-top"             // the detector was at its limit: the peak is higher than it could say
	CutByEnd     = "peak-cut-by-trace"    // the recording begins or ends inside the peak
	GapInPeak    = "sampling-gap-in-peak" // points are missing inside the peak
	GapInTrace   = "sampling-gap"         // points are missing elsewhere
	FewPoints    = "few-points"           // too few points describe the peak
	NegativeIons = "negative-values"      // ions cannot be fewer than none
)

const (
	flatPoints  = 3   // consecutive points at the very same highest value
	flatNoise   = 10  // height over noise from which they are no chance
	gapInterval = 1.5 // of the median interval
	fewest      = 8   // points across a peak, for its area
)

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
	p := m.Peak
	if p == nil {
		return list
	}
	from, _ := slices.BinarySearch(c.TimeMin, p.StartMin)
	to, _ := slices.BinarySearch(c.TimeMin, p.EndMin)
	to = min(to, len(c.TimeMin)-1)
	if n := to - from + 1; n < fewest {
		warn(FewPoints, "%d points from the peak's start to its end; fewer than %d do not describe its shape", n, fewest)
	}
	if from == 0 || to == len(c.TimeMin)-1 {
		warn(CutByEnd, "the peak reaches to the %s of the recording", map[bool]string{true: "beginning", false: "end"}[from == 0])
	}
	if run := longestTop(c.Intensity[from : to+1]); run >= flatPoints && p.SignalToNoise >= flatNoise {
		warn(FlatTop, "%d consecutive points at the same highest value: the detector was probably saturated", run)
	}
	return list
}

// longestTop is the length of the longest run of points at the highest value.
func longestTop(y []float64) int {
	top, best, run := slices.Max(y), 0, 0
	for _, v := range y {
		if v != top {
			run = 0
			continue
		}
		run++
		best = max(best, run)
	}
	return best
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
