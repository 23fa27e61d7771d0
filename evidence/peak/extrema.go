package peak

import "math"

// significance is how far the smoothed trace must rise to a top and fall from it, in standard deviations of smoothed noise.
const significance = 4.0

// A top is a maximum of the smoothed trace on the way to becoming a peak. Indices are those of acquired points.
type top struct {
	apex   int
	valley int // lowest smoothed point between this top and the next; for the last one the end of the trace

	left, right       int // limits
	leftEnd, rightEnd end
	leftValley        bool // shares the valley with the top before
	joined            bool // shares the valley with the next top
	line              line // baseline in the smoothed trace, for the walk only
	base              baseline
	rise              float64 // of the smoothed apex above the line joining the limits
	weak              bool
}

// end says how a walk ended.
type end struct {
	trace bool // at the trace's first or last point
	cut   bool // where the flank was still well above the baseline
}

// A line goes through two points.
type line struct{ t0, y0, t1, y1 float64 }

func (l line) at(t float64) float64 {
	if l.t1 == l.t0 {
		return l.y0
	}
	return l.y0 + float64((l.y1-l.y0)*((t-l.t0)/(l.t1-l.t0)))
}

// findTops appends to tops the maxima of s that rise by at least delta above the lowest point since the one before, and
// fall by at least delta after. A trace that only falls from its start or rises to its end has none there.
func findTops(s []float64, delta float64, tops []top) []top {
	const (
		unknown = iota
		rising
		falling
	)
	state, hi, lo := unknown, 0, 0
	for i, v := range s {
		if v > s[hi] {
			hi = i
		}
		if v < s[lo] {
			lo = i
		}
		switch {
		case state != falling && v < s[hi]-delta:
			if state == rising {
				tops = append(tops, top{apex: hi, valley: len(s) - 1})
			}
			state, lo = falling, i
		case state != rising && v > s[lo]+delta:
			if len(tops) > 0 {
				tops[len(tops)-1].valley = lo
			}
			state, hi = rising, i
		}
	}
	return tops
}

// mergeRipple unites neighbouring tops whose valley is no deeper than the scatter of the acquired points about the
// smoothed trace there explains: at high signal the noise is larger than between the peaks.
func (d *detector) mergeRipple(tops []top) []top {
	out := tops[:0]
	for _, next := range tops {
		for len(out) > 0 {
			prev := &out[len(out)-1]
			smaller := prev.apex
			if d.s[next.apex] < d.s[smaller] {
				smaller = next.apex
			}
			depth := d.s[smaller] - d.s[prev.valley]
			if depth >= float64(significance*d.scatter(smaller, prev.valley)) {
				break
			}
			out = d.unite(out, &next)
		}
		out = append(out, next)
	}
	return out
}

// scatter is the noise that smoothing leaves between points a and b, as the acquired points there show it.
func (d *detector) scatter(a, b int) float64 {
	half := d.p.SmoothingPoints / 2
	from, to := max(min(a, b)-half, 0), min(max(a, b)+half, len(d.s)-1)
	var sum float64
	for i := from; i <= to; i++ {
		e := d.straightened(i) - d.s[i]
		sum += float64(e * e)
	}
	return math.Sqrt(sum/(float64(to-from+1)*(1-float64(d.keep*d.keep)))) * d.keep
}

// unite takes the last of out away in favour of next, which gets the higher apex of the two. The valley before them is
// then the lowest point before that apex.
func (d *detector) unite(out []top, next *top) []top {
	last := out[len(out)-1]
	out = out[:len(out)-1]
	if d.s[last.apex] >= d.s[next.apex] {
		next.apex = last.apex
		return out
	}
	if len(out) > 0 {
		if before := &out[len(out)-1]; d.s[last.valley] < d.s[before.valley] {
			before.valley = last.valley
		}
	}
	return out
}
