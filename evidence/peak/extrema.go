package peak

import "math"

const (
	// significance is how far the smoothed trace must rise to a top and fall from it, in standard deviations of smoothed
	// noise.
	significance = 4.0
	// splitting is how deep a valley must be, in the same unit, to divide a top whose other flank falls more than twice as
	// far: many valleys could form by chance along a broad top or a tail.
	splitting = 6.0
)

// A top is a maximum of the smoothed trace on the way to becoming a peak. Indices are those of acquired points.
type top struct {
	apex   int
	valley int // lowest smoothed point between this top and the next; for the last one the end of the trace
	before int // lowest point since the top before, and
	after  int // up to the next one, as long as tops are being looked for

	left, right       int // limits
	leftEnd, rightEnd end
	leftValley        bool // shares the valley with the top before
	joined            bool // shares the valley with the next top
	line              ramp // baseline in the smoothed trace, for the walk only
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

// A ramp is a line as the walk needs it: cheap to follow, and exact at its beginning only.
type ramp struct{ t0, y0, slope float64 }

func (l line) ramp() ramp {
	if l.t1 == l.t0 {
		return ramp{l.t0, l.y0, 0}
	}
	return ramp{l.t0, l.y0, (l.y1 - l.y0) / (l.t1 - l.t0)}
}

func (r ramp) at(t float64) float64 { return r.y0 + float64(r.slope*(t-r.t0)) }

// findTops appends to tops the maxima of s that rise by at least delta above the lowest point since the one before, and
// fall by at least delta after. A trace that only falls from its start or rises to its end has none there.
func findTops(s []float64, delta float64, tops []top) []top {
	const (
		unknown = iota
		rising
		falling
	)
	state, hi, lo, before := unknown, 0, 0, 0
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
				tops = append(tops, top{apex: hi, valley: len(s) - 1, before: before})
			}
			state, lo = falling, i
		case state != rising && v > s[lo]+delta:
			if len(tops) > 0 {
				tops[len(tops)-1].valley, tops[len(tops)-1].after = lo, lo
			}
			before, state, hi = lo, rising, i
		}
	}
	if len(tops) > 0 && state == falling {
		tops[len(tops)-1].after = lo
	}
	return tops
}

// mergeRipple unites neighbouring tops whose valley is no deeper than chance explains, with the noise between the peaks or,
// where that is larger, the scatter of the acquired points about the smoothed trace near the valley: at high signal the
// noise is larger.
func (d *detector) mergeRipple(tops []top) []top {
	out := tops[:0]
	for _, next := range tops {
		for len(out) > 0 && d.isRipple(&out[len(out)-1], &next) {
			out = d.unite(out, &next)
		}
		out = append(out, next)
	}
	return out
}

// isRipple judges the valley between two neighbouring tops.
func (d *detector) isRipple(prev, next *top) bool {
	smaller, outside := prev.apex, prev.before
	if d.s[next.apex] < d.s[smaller] {
		smaller, outside = next.apex, next.after
	}
	depth := d.s[smaller] - d.s[prev.valley]
	factor := significance
	if 2*depth < d.s[smaller]-d.s[outside] {
		factor = splitting
	}
	return depth < float64(factor*max(d.smoothNoise, d.scatter(smaller, prev.valley)))
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
	return float64(math.Sqrt(sum/(float64(to-from+1)*(1-float64(d.keep*d.keep)))) * d.keep)
}

// unite takes the last of out away in favour of next, which gets the higher apex of the two. The valley before them is
// then the lowest point before that apex.
func (d *detector) unite(out []top, next *top) []top {
	last := out[len(out)-1]
	out = out[:len(out)-1]
	next.before = d.lower(last.before, next.before)
	if d.s[last.apex] >= d.s[next.apex] {
		next.before, next.apex = last.before, last.apex
		next.after = d.lower(last.after, next.after)
		return out
	}
	if len(out) > 0 {
		before := &out[len(out)-1]
		before.valley = d.lower(before.valley, last.valley)
		before.after = before.valley
	}
	return out
}

func (d *detector) lower(a, b int) int {
	if d.s[b] < d.s[a] {
		return b
	}
	return a
}
