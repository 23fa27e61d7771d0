package peak

import (
	"fmt"

	"assaywrit/evidence/trace"
)

// An Interval is a stretch of time, in minutes.
type Interval struct{ StartMin, EndMin float64 }

// PharmacopoeiaAlgorithm is the version of PeakToPeak. A version never changes its results.
const PharmacopoeiaAlgorithm = "noise-peak-to-peak@1"

// A PharmacopoeiaNoise is h, the peak-to-peak noise of USP <621> and Ph. Eur. 2.2.46, and the signal-to-noise ratio 2H/h.
type PharmacopoeiaNoise struct {
	Algorithm  string   `json:"algorithm"` // PharmacopoeiaAlgorithm
	Widths     float64  `json:"widths"`    // of signal-free trace, in widths at half height; 20 is asked for, 5 allowed
	Points     int      `json:"points"`
	H          float64  `json:"peak_to_peak_counts"`     // h, about a robust straight line
	HWithDrift float64  `json:"peak_to_peak_with_drift"` // h as read off a chart, drift included
	SD         float64  `json:"sd_counts"`               // of the same points
	Drift      float64  `json:"drift_counts_per_min"`
	Flags      []string `json:"flags,omitempty"` // FlagShortSpan and those of a stretch
}

// FlagShortSpan: less than 20 widths at half height of signal-free trace were there.
const FlagShortSpan = "span-under-20-widths"

const (
	wantedWidths = 20.0
	leastWidths  = 5.0
)

// SignalToNoise is 2H/h for a peak of this height; 0 where there is no noise.
func (n *PharmacopoeiaNoise) SignalToNoise(height float64) float64 {
	if !(n.H > 0) {
		return 0
	}
	return 2 * height / n.H
}

// PeakToPeak takes h over 20 widths at half height, as far as can be equally around the place of the peak, outside the stretches
// named as signal. In a blank there are none; in the chromatogram itself they are the limits of its peaks. Signal-free points are
// taken in order of their distance from the peak, until they span 20 widths.
//
// At least five points and a span of five widths (USP 38) must remain, otherwise the error is an *IntervalError. It is a
// *ParameterError for a width not above zero.
func PeakToPeak(c trace.Chromatogram, apexMin, widthHalfMin float64, signal []Interval) (*PharmacopoeiaNoise, error) {
	if err := check(c); err != nil {
		return nil, err
	}
	if !(widthHalfMin > 0 && widthHalfMin <= maxMinutes) || !finiteValue(apexMin) {
		return nil, &ParameterError{"width_half_min", fmt.Sprint(widthHalfMin), "a width above 0 min around a finite time"}
	}
	t, y := c.TimeMin, c.Intensity
	quiet := func(i int) bool {
		for _, s := range signal {
			if t[i] >= s.StartMin && t[i] <= s.EndMin {
				return false
			}
		}
		return true
	}
	// Grow in both directions at once; a step counts where both of its points are quiet.
	right := 0
	for right < len(t) && t[right] < apexMin {
		right++
	}
	left := right - 1
	first, last := right, left
	span, want := 0.0, float64(wantedWidths*widthHalfMin)
	for span < float64(want*(1-0x1p-30)) && (left >= 0 || right < len(t)) {
		if left >= 0 && (right == len(t) || apexMin-t[left] <= t[right]-apexMin) {
			if quiet(left) && left+1 < len(t) && quiet(left+1) {
				span += t[left+1] - t[left]
			}
			first = left
			left--
			continue
		}
		if quiet(right) && right > 0 && quiet(right-1) {
			span += t[right] - t[right-1]
		}
		last = right
		right++
	}
	var qt, qy []float64
	for i := first; i <= last; i++ {
		if quiet(i) {
			qt, qy = append(qt, t[i]), append(qy, y[i])
		}
	}
	if len(qt) < minPoints || span < float64(leastWidths*widthHalfMin*(1-0x1p-30)) {
		return nil, &IntervalError{c.ID, apexMin - want/2, apexMin + want/2, len(qt),
			fmt.Sprintf("at least five signal-free, over five widths at half height (%v min; found %v)", float64(5*widthHalfMin), span)}
	}
	s := stretchNoise(qt, qy)
	n := &PharmacopoeiaNoise{Algorithm: PharmacopoeiaAlgorithm, Widths: span / widthHalfMin, Points: len(qt),
		H: s.PeakToPeak, HWithDrift: s.PeakToPeakFull, SD: s.SD, Drift: s.Drift}
	if n.Widths < float64(wantedWidths*(1-0x1p-20)) {
		n.Flags = append(n.Flags, FlagShortSpan)
	}
	n.Flags = append(n.Flags, s.Flags...)
	return n, nil
}
