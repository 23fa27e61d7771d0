package peak

import "math"

const (
	walkRounds   = 4
	reliable     = 4.0  // a level is looked for down to this many standard deviations of smoothed noise
	edgeOfNoise  = 0.1  // of the noise: a flank is not followed further down than this
	maxRead      = 6    // halvings of the height that are read from the trace
	halvingWidth = 0.45 // of the half width: one more halving, where no second level can be read
	cutFraction  = 0.01 // of the height: a flank that ends above this is cut
	minAnchor    = 3    // points behind each end of a baseline, if the trace has them
)

// setLimits finds the limits of all tops, first each by itself, then with the baseline of the cluster that it turns out to
// belong to, until nothing moves.
func (d *detector) setLimits(tops []top) {
	for i := range tops {
		d.firstLine(tops, i)
	}
	for range walkRounds {
		moved := false
		for i := range tops {
			o := tops[i]
			d.walk(tops, i, -1)
			d.walk(tops, i, +1)
			moved = moved || o.left != tops[i].left || o.right != tops[i].right
		}
		d.join(tops)
		d.clusterLines(tops)
		if !moved {
			break
		}
	}
}

// bounds returns, on one side of top i, the valley shared with its neighbour (-1 without one) and the last point that a
// limit may take: the neighbour's apex, or the end of the trace.
func (d *detector) bounds(tops []top, i, step int) (valley, last int) {
	switch {
	case step < 0 && i > 0:
		return tops[i-1].valley, tops[i-1].apex
	case step < 0:
		return -1, 0
	case i+1 < len(tops):
		return tops[i].valley, tops[i+1].apex
	}
	return -1, len(d.s) - 1
}

// firstLine joins the lowest points on both sides of the apex, within a distance of at least four half widths.
func (d *detector) firstLine(tops []top, i int) {
	_, first := d.bounds(tops, i, -1)
	_, last := d.bounds(tops, i, +1)
	l := d.foot(tops[i].apex, -1, first)
	r := d.foot(tops[i].apex, +1, last)
	tops[i].line = line{d.t[l], d.s[l], d.t[r], d.s[r]}.ramp()
}

func (d *detector) foot(apex, step, last int) int {
	room := (last - apex) * step
	lowest, looked := apex, 0
	for reach := d.p.SmoothingPoints; ; reach *= 2 {
		reach = min(reach, room)
		for ; looked < reach; looked++ {
			if k := apex + step*(looked+1); d.s[k] < d.s[lowest] {
				lowest = k
			}
		}
		if reach == room {
			return lowest
		}
		fall := d.s[apex] - d.s[lowest]
		if fall < float64(significance*d.smoothNoise) {
			continue
		}
		// The last point above half height counts: a dip near a broad top does not end the peak.
		width := reach
		for width > 0 && d.s[apex+step*width] < d.s[apex]-float64(fall/2) {
			width--
		}
		if 4*(width+1) <= reach {
			return lowest
		}
	}
}

// walk sets the limit of top i on one side. It goes down from the apex to the lowest level, a half to a power up to the sixth,
// that the noise leaves readable. From there it goes as far as a flank that keeps falling as over the last two halvings would
// need to come down to the edge fraction, or to a tenth of the noise. A lower level is not read: the baseline is not known
// so well yet, and the trace always meets a line drawn from its own foot.
func (d *detector) walk(tops []top, i, step int) {
	p := &tops[i]
	valley, last := d.bounds(tops, i, step)
	stop := last
	if valley >= 0 {
		stop = valley
	}
	height := d.s[p.apex] - p.line.at(d.t[p.apex])
	depth, level, counts := d.levels(height)
	over := min(level-1, 2) // halvings
	upper, width, k := d.descend(p, step, stop, float64(counts*float64(int(1)<<over)), counts)
	if width == 0 {
		p.setLimit(step, stop, end{trace: valley < 0, cut: valley < 0})
		return
	}
	rate := float64(halvingWidth * width)
	if over > 0 {
		rate = (width - upper) / float64(over)
	}
	reach := width + float64(rate*max(depth-float64(level), 0))
	for k != last && math.Abs(d.t[k]-d.t[p.apex]) < reach {
		k += step
	}
	var e end
	if left := reach - math.Abs(d.t[k]-d.t[p.apex]); valley < 0 && left > 0 {
		e.trace = true
		e.cut = left > float64(rate*(depth-halvings(cutFraction)))
	}
	p.setLimit(step, k, e)
}

// levels returns how many halvings of the height there are to the edge of a peak, how many of them are read, and the counts
// above the baseline after those.
func (d *detector) levels(height float64) (depth float64, read int, counts float64) {
	if !(height > 0) {
		return 1, 1, height / 2
	}
	f := max(d.p.edge(), float64(edgeOfNoise*d.noise/height))
	depth = halvings(min(f, 0.5))
	read, counts = 1, height/2
	for read < maxRead && float64(read+1) <= depth && counts/2 >= float64(reliable*d.smoothNoise) {
		read++
		counts /= 2
	}
	return depth, read, counts
}

// descend returns the distances in time from the apex at which the smoothed trace falls to two heights above the line, and the
// first point below the lower; 0 where the trace does not come down so far before stop.
func (d *detector) descend(p *top, step, stop int, upper, lower float64) (first, second float64, k int) {
	apex := p.apex
	before := d.s[apex] - p.line.at(d.t[apex])
	for k = apex; k != stop; {
		k += step
		v := d.s[k] - p.line.at(d.t[k])
		if first == 0 && v < upper {
			first = d.crossing(apex, k, step, before, v, upper)
		}
		if v < lower || v <= 0 {
			return first, d.crossing(apex, k, step, before, v, lower), k
		}
		before = v
	}
	return first, 0, k
}

// crossing is the distance in time from the apex to where the straight piece ending at point k, from value a to b, passes
// through level.
func (d *detector) crossing(apex, k, step int, a, b, level float64) float64 {
	t := d.t[k-step]
	if a > b {
		t += float64((d.t[k] - t) * ((a - level) / (a - b)))
	}
	return math.Abs(t - d.t[apex])
}

func (p *top) setLimit(step, k int, e end) {
	if step < 0 {
		p.left, p.leftEnd = k, e
	} else {
		p.right, p.rightEnd = k, e
	}
}

// join marks the neighbours whose limits overlap, or leave no room for a baseline between them, and puts both limits at the
// valley. Room is as many points as the wider of the two has above half height.
func (d *detector) join(tops []top) {
	for i := range tops {
		tops[i].joined = false
		if i == 0 {
			tops[i].leftValley = false
		}
		if i+1 == len(tops) {
			break
		}
		next := &tops[i+1]
		room := max(d.halfPoints(&tops[i]), d.halfPoints(next))
		next.leftValley = next.left-tops[i].right < room
		if next.leftValley {
			tops[i].joined = true
			tops[i].right, next.left = tops[i].valley, tops[i].valley
		}
	}
}

// clusterLines gives the tops of every cluster the same baseline.
func (d *detector) clusterLines(tops []top) {
	for i := 0; i < len(tops); {
		last := clusterEnd(tops, i)
		a, b := d.anchors(tops, i, last)
		l := newBaseline(d.t, d.s, a, b).ramp()
		for ; i <= last; i++ {
			tops[i].line = l
		}
	}
}

// clusterEnd returns the index of the last top of the cluster that begins with top i.
func clusterEnd(tops []top, i int) int {
	for tops[i].joined {
		i++
	}
	return i
}

// A span is a stretch of acquired points, both ends included.
type span struct{ from, to int }

func (s span) len() int { return s.to - s.from + 1 }

func mean(v []float64, s span) float64 {
	var sum float64
	for _, x := range v[s.from : s.to+1] {
		sum += x - v[s.from]
	}
	return v[s.from] + sum/float64(s.len())
}

// anchors returns the points that fix the baseline of the cluster of tops first to last: from each limit outwards as many
// as the peak there has above half height, but not into the next cluster. At least three are taken, the missing ones from
// inside; where the flank is cut, only the last point of the trace.
func (d *detector) anchors(tops []top, first, last int) (a, b span) {
	p, q := &tops[first], &tops[last]
	low, high := 0, len(d.s)-1
	if first > 0 {
		low = min(tops[first-1].right, p.left)
	}
	if last+1 < len(tops) {
		high = max(tops[last+1].left, q.right)
	}
	a = span{max(p.left-d.halfPoints(p)+1, low), p.left}
	if short := minAnchor - a.len(); short > 0 && !p.leftEnd.cut {
		a.to = min(a.to+short, p.apex)
	}
	b = span{q.right, min(q.right+d.halfPoints(q)-1, high)}
	if short := minAnchor - b.len(); short > 0 && !q.rightEnd.cut {
		b.from = max(b.from-short, q.apex)
	}
	return a, b
}

// halfPoints counts the points of a top above half its height, at least three.
func (d *detector) halfPoints(p *top) int {
	level := (d.s[p.apex] + p.line.at(d.t[p.apex])) / 2
	n := 1
	for k := p.apex - 1; k >= p.left && d.s[k] > level; k-- {
		n++
	}
	for k := p.apex + 1; k <= p.right && d.s[k] > level; k++ {
		n++
	}
	return max(n, minAnchor)
}
