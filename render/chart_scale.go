package render

import (
	"math"
	"sort"

	"assaywrit/evidence"
	"assaywrit/evidence/trace"
)

// A scale maps values onto the page: v0 lies at p0, v1 at p1 (millimetres).
type scale struct{ v0, v1, p0, p1 float64 }

func (s scale) at(v float64) float64 { return s.p0 + (v-s.v0)/(s.v1-s.v0)*(s.p1-s.p0) }

// A span is a stretch of time, minutes.
type span struct{ from, to float64 }

func (s span) holds(t float64) bool { return t >= s.from && t <= s.to }

// spanOf is the stretch that all charts of one row show: every window in which a peak was sought, and as much again around it as
// the widest is wide, with every peak that was used, within what was recorded.
func spanOf(list []*evidence.Measurement) span {
	s := span{math.Inf(1), math.Inf(-1)}
	first, last, pad := math.Inf(1), math.Inf(-1), 0.0
	for _, m := range list {
		s.from, s.to = min(s.from, m.WindowStartMin), max(s.to, m.WindowEndMin)
		first, last = min(first, m.FirstMin), max(last, m.LastMin)
		pad = max(pad, (m.WindowEndMin-m.WindowStartMin)/2)
	}
	s.from, s.to = s.from-pad, s.to+pad
	for _, m := range list {
		if p := m.Peak; p != nil {
			s.from, s.to = min(s.from, p.StartMin-pad/4), max(s.to, p.EndMin+pad/4)
		}
		if p := m.Automatic; p != nil {
			s.from, s.to = min(s.from, p.StartMin-pad/4), max(s.to, p.EndMin+pad/4)
		}
	}
	return span{max(s.from, first), min(s.to, last)}
}

// within is the part of a trace in a stretch, points as acquired.
func within(c trace.Chromatogram, s span) (ts, ys []float64) {
	lo := sort.SearchFloat64s(c.TimeMin, s.from)
	hi := sort.Search(len(c.TimeMin), func(i int) bool { return c.TimeMin[i] > s.to })
	return c.TimeMin[lo:max(lo, hi)], c.Intensity[lo:max(lo, hi)]
}

// counts are the values that the axis of a chart spans: from zero, or from just below the smallest point where that is more than half
// the largest or less than zero, up to a little above the largest.
func counts(ys []float64) (low, high, largest float64) {
	low, largest = math.Inf(1), math.Inf(-1)
	for _, y := range ys {
		low, largest = min(low, y), max(largest, y)
	}
	if low > 0 && low <= largest/2 {
		low = 0
	}
	span := largest - low
	if !(span > 0) {
		span = max(1, math.Abs(largest))
	}
	if low != 0 {
		low -= span * 0.05
	}
	return low, largest + span*0.13, largest
}

// axisPower is the power of ten that an axis of counts is written in: its marks are then short.
func axisPower(high float64) int {
	if high < 1e4 {
		return 0
	}
	return int(math.Floor(math.Log10(high) + 1e-9))
}

// maxColumns bounds how many points a chart draws: beyond it, each column is drawn by its first, lowest, highest and last point.
const maxColumns = 500

// thinned keeps each column's first, lowest, highest and last point.
func thinned(ts, ys []float64) (pt, py []float64) {
	if len(ts) <= 2*maxColumns {
		return ts, ys
	}
	span := ts[len(ts)-1] - ts[0]
	columnOf := func(t float64) int { return int((t - ts[0]) / span * maxColumns) }
	for i := 0; i < len(ts); {
		column := columnOf(ts[i])
		j, lowest, highest := i, i, i
		for ; j < len(ts) && columnOf(ts[j]) == column; j++ {
			if ys[j] < ys[lowest] {
				lowest = j
			}
			if ys[j] > ys[highest] {
				highest = j
			}
		}
		before := -1
		for _, at := range []int{i, min(lowest, highest), max(lowest, highest), j - 1} {
			if at > before {
				pt, py = append(pt, ts[at]), append(py, ys[at])
				before = at
			}
		}
		i = j
	}
	return pt, py
}
