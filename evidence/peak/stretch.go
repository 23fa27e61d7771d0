package peak

import (
	"math"

	"assaywrit/evidence/trace"
)

// StretchNoiseAlgorithm is the version of Noise. A version never changes its results.
const StretchNoiseAlgorithm = "noise-stretch@1"

// A StretchNoise is the noise of a signal-free stretch of a trace by several published definitions, with the drift kept apart.
type StretchNoise struct {
	Algorithm      string   `json:"algorithm"` // StretchNoiseAlgorithm
	StartMin       float64  `json:"start_min"`
	EndMin         float64  `json:"end_min"`
	Points         int      `json:"points"`
	Drift          float64  `json:"drift_counts_per_min"`    // slope of a robust straight line
	SD             float64  `json:"sd_counts"`               // standard deviation about that line, n − 2 degrees of freedom
	RobustSD       float64  `json:"robust_sd_counts"`        // 1.4826 times the median distance from it
	PeakToPeak     float64  `json:"peak_to_peak_counts"`     // highest less lowest distance from the line
	PeakToPeakFull float64  `json:"peak_to_peak_with_drift"` // highest less lowest acquired value, as read off a paper chart
	DriftOverNoise float64  `json:"drift_over_noise"`        // change of the line over the stretch in units of SD; 0 where SD is 0
	Flags          []string `json:"flags,omitempty"`
}

// Flags of a stretch.
const (
	FlagNoiseless  = "noiseless"        // all points lie on one straight line
	FlagNotQuiet   = "not-quiet"        // SD is more than 1.5 times RobustSD: something else than noise is in the stretch
	FlagDrifting   = "drifting"         // the drift over the stretch exceeds three standard deviations
	FlagShortNoise = "few-noise-points" // fewer than 20 points
)

// Noise takes the noise between two times, which should hold no peak. At least five points must lie there. The line is found by
// iteratively reweighted least squares with Tukey's biweight (tuning constant 4.685), from the median slope between points half
// the stretch apart: a spike or a small peak moves it little.
//
// The error is a *TraceError or an *IntervalError.
//
// Sources: standard deviation as in ICH Q2; range as h in USP <621> and Ph. Eur. 2.2.46; biweight: F. Mosteller, J. W. Tukey, Data
// Analysis and Regression, 1977 (all from memory).
func Noise(c trace.Chromatogram, startMin, endMin float64) (*StretchNoise, error) {
	left, right, err := interval(c, startMin, endMin)
	if err != nil {
		return nil, err
	}
	return stretchNoise(c.TimeMin[left:right+1], c.Intensity[left:right+1]), nil
}

func stretchNoise(t, y []float64) *StretchNoise {
	n := len(t)
	s := &StretchNoise{Algorithm: StretchNoiseAlgorithm, StartMin: t[0], EndMin: t[n-1], Points: n}
	r := make([]float64, n)
	height, slope := robustLine(t, y, r)
	s.Drift = slope
	low, high, lo, hi := math.Inf(1), math.Inf(-1), y[0], y[0]
	var ss float64
	for i := range r {
		r[i] = y[i] - y[0] - height - float64(slope*(t[i]-t[0]))
		low, high = min(low, r[i]), max(high, r[i])
		lo, hi = min(lo, y[i]), max(hi, y[i])
		ss += float64(r[i] * r[i])
		r[i] = math.Abs(r[i])
	}
	s.SD = math.Sqrt(ss / float64(n-2))
	s.RobustSD = float64(madToSD * nth(r, n/2))
	s.PeakToPeak, s.PeakToPeakFull = high-low, hi-lo
	if s.SD <= float64((hi-lo)*floorFactor) {
		s.SD, s.RobustSD, s.PeakToPeak = 0, 0, 0
		s.Flags = append(s.Flags, FlagNoiseless)
	} else {
		s.DriftOverNoise = float64(math.Abs(slope)*(t[n-1]-t[0])) / s.SD
		if s.SD > float64(1.5*s.RobustSD) {
			s.Flags = append(s.Flags, FlagNotQuiet)
		}
	}
	if s.DriftOverNoise > 3 {
		s.Flags = append(s.Flags, FlagDrifting)
	}
	if n < 20 {
		s.Flags = append(s.Flags, FlagShortNoise)
	}
	return s
}

// robustLine returns the height at the first time, above the first value, and the slope. r is space for as many numbers.
func robustLine(t, y, r []float64) (height, drift float64) {
	const tuning, rounds = 4.685, 20
	n := len(t)
	drift = slope(t, y, r)
	for i := range r {
		r[i] = y[i] - y[0] - float64(drift*(t[i]-t[0]))
	}
	height = nth(r, n/2)
	for range rounds {
		for i := range r {
			r[i] = math.Abs(y[i] - y[0] - height - float64(drift*(t[i]-t[0])))
		}
		scale := float64(tuning * madToSD * nth(r, n/2))
		if scale == 0 {
			return height, drift
		}
		var sw, st, sy, stt, sty float64
		for i := range t {
			u := t[i] - t[0]
			d := (y[i] - y[0] - height - float64(drift*u)) / scale
			if d <= -1 || d >= 1 {
				continue
			}
			w := 1 - float64(d*d)
			w = float64(w * w)
			v := y[i] - y[0]
			sw += w
			st += float64(w * u)
			sy += float64(w * v)
			stt += float64(w * u * u)
			sty += float64(w * u * v)
		}
		den := stt - float64(st*st)/sw
		if !(den > 0) {
			return height, drift
		}
		next := (sty - float64(st*sy)/sw) / den
		h := (sy - float64(next*st)) / sw
		moved := math.Abs(h-height) + float64(math.Abs(next-drift)*(t[n-1]-t[0]))
		height, drift = h, next
		if moved <= float64(1e-9*scale) {
			break
		}
	}
	return height, drift
}
