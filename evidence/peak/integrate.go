package peak

import (
	"fmt"
	"math"
	"sort"

	"assaywrit/evidence/trace"
)

// Integrate returns the peak in c between limits set by hand, above the straight baseline joining the signal at the two
// ends. It is algorithm trapezoid@1.
//
// startMin and endMin are moved inwards to the nearest acquired points. The area is the trapezoid rule over the points as
// acquired, less the trapezoid under the baseline: nothing is smoothed, resampled or interpolated, and signal under the
// baseline counts as negative. The height is that of the highest point between the ends above the baseline. noise is a
// standard deviation in counts, from Detect; where it is 0, or smaller than 2^-30 of the trace's range, that is taken
// and the peak is flagged.
//
// At least five points must remain between the limits; otherwise the error is an *IntervalError. It is a *TraceError for
// a trace that Detect refuses and a *ParameterError for a noise that is negative or not finite.
//
// Source: N. Dyson, Chromatographic Integration Methods, 2nd ed., RSC 1998 (from memory).
func Integrate(c trace.Chromatogram, startMin, endMin, noise float64) (*Peak, error) {
	if err := check(c); err != nil {
		return nil, err
	}
	if !(noise >= 0 && noise <= maxCounts) {
		return nil, &ParameterError{"noise", fmt.Sprint(noise), "a standard deviation of 0 counts or more"}
	}
	t, y := c.TimeMin, c.Intensity
	refuse := func(points int, want string) error {
		return &IntervalError{ID: c.ID, StartMin: startMin, EndMin: endMin, Points: points, Want: want}
	}
	if !(startMin < endMin) || math.IsInf(startMin, 0) || math.IsInf(endMin, 0) {
		return nil, refuse(0, "an end after the start, both finite")
	}
	left := sort.SearchFloat64s(t, startMin)
	right := sort.Search(len(t), func(i int) bool { return t[i] > endMin }) - 1
	if n := right - left + 1; n < minPoints {
		return nil, refuse(max(n, 0), "at least five")
	}
	b := baseline{from: span{left, left}, to: span{right, right}, left: left, right: right, start: ByHand, end: ByHand}
	b.line = newBaseline(t, y, b.from, b.to)
	lo, hi := y[0], y[0]
	for _, v := range y {
		lo, hi = min(lo, v), max(hi, v)
	}
	var f facts
	if floor := float64((hi - lo) * floorFactor); noise <= floor {
		noise, f.noiseFloor = floor, true
	}
	p := new(Peak)
	measure(t, y, left, right, b, noise, f, p)
	return p, nil
}

// trapezoid is the area under the acquired points from left to right and above the line.
func trapezoid(t, y []float64, left, right int, b line) float64 {
	var sum float64
	before := y[left] - b.at(t[left])
	for i := left + 1; i <= right; i++ {
		v := y[i] - b.at(t[i])
		sum += float64((t[i] - t[i-1]) * (before + v) / 2)
		before = v
	}
	return sum
}

// areaStdU is the standard uncertainty of that area from white noise on the points: the square root of the sum of squares
// of each point's weight in it, times the noise. A point that also fixes the baseline counts once, with both weights.
func areaStdU(t []float64, left, right int, b baseline, noise float64) float64 {
	length := t[right] - t[left]
	later := 0.0 // share of the baseline's mean height that comes from its later end
	if b.line.t1 > b.line.t0 {
		later = (float64((t[left]+t[right])/2) - b.line.t0) / (b.line.t1 - b.line.t0)
	}
	weight := func(i int) float64 {
		var w float64
		if i > left && i <= right {
			w += float64((t[i] - t[i-1]) / 2)
		}
		if i >= left && i < right {
			w += float64((t[i+1] - t[i]) / 2)
		}
		if i >= b.from.from && i <= b.from.to {
			w -= length * (1 - later) / float64(b.from.len())
		}
		if i >= b.to.from && i <= b.to.to {
			w -= length * later / float64(b.to.len())
		}
		return w
	}
	// The first span begins before the peak and the second ends behind it; what of them lies inside is counted there.
	var sum float64
	add := func(from, to int) {
		for i := from; i <= to; i++ {
			w := weight(i)
			sum += float64(w * w)
		}
	}
	add(b.from.from, min(b.from.to, left-1))
	add(left, right)
	add(max(b.to.from, right+1), b.to.to)
	return float64(math.Sqrt(sum) * noise)
}

// highest returns the highest point above the line among those between left and right, the ends not included.
func highest(t, y []float64, left, right int, b line) int {
	best := left + 1
	top := math.Inf(-1)
	for i := left + 1; i < right; i++ {
		if h := y[i] - b.at(t[i]); h > top {
			best, top = i, h
		}
	}
	return best
}
