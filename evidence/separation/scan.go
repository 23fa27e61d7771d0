package separation

import (
	"fmt"
	"math"
	"slices"
)

const (
	mapPoints    = 201
	outsideShare = 0.25 // of the studied range, shown on either side of it as extrapolated
	resolved     = 1.5
)

// Predict gives the peaks at a composition, in order of retention: φ, or the time of a gradient, in minutes.
func (r *Result) Predict(at float64) []Predicted {
	list := make([]Predicted, 0, len(r.Compounds))
	for _, c := range r.Compounds {
		t := 0.0
		width := 0.0
		if r.Gradients {
			g := *r.runs[0].Gradient
			g.TimeMin = at
			t = c.Model.gradientTime(g, r.VoidMin)
			width = r.gradientWidth(c, at)
		} else {
			t = float64(r.VoidMin * (1 + c.Model.K(at)))
			width = float64(t * math.Sqrt(5.54/c.Plates))
		}
		list = append(list, Predicted{Compound: c.Name, RetentionMin: t, WidthHalfMin: width})
	}
	slices.SortStableFunc(list, func(a, b Predicted) int { return int(math.Copysign(1, a.RetentionMin-b.RetentionMin)) })
	for i := 0; i+1 < len(list); i++ {
		list[i].Resolution = pointer(1.18 * (list[i+1].RetentionMin - list[i].RetentionMin) / (list[i].WidthHalfMin + list[i+1].WidthHalfMin))
	}
	return list
}

// gradientWidth is between those of the two studied gradients nearest in time, in proportion to the time: in a gradient widths follow its
// slope, not the retention.
func (r *Result) gradientWidth(c Compound, at float64) float64 {
	var times, widths []float64
	for i, x := range r.runs {
		k := slices.IndexFunc(x.Peaks, func(p Peak) bool { return p.RetentionMin == c.RetentionMin[i] })
		times, widths = append(times, x.at()), append(widths, x.Peaks[k].WidthHalfMin)
	}
	low, high := 0, 0
	for i := range times {
		if times[i] < times[low] {
			low = i
		}
		if times[i] > times[high] {
			high = i
		}
	}
	for i := range times {
		if times[i] <= at && times[i] > times[low] {
			low = i
		}
		if times[i] >= at && times[i] < times[high] {
			high = i
		}
	}
	if low == high {
		return widths[low]
	}
	return max(widths[low]+float64((widths[high]-widths[low])*(at-times[low])/(times[high]-times[low])), 1e-6)
}

// point is the critical pair at a composition.
func (r *Result) point(at float64) Point {
	list := r.Predict(at)
	p := Point{At: at, Resolution: math.MaxFloat64, Outside: at < r.LowStudied || at > r.HighStudied}
	for i, x := range list {
		if x.Resolution != nil && *x.Resolution < p.Resolution {
			p.Resolution, p.First, p.Second = *x.Resolution, x.Compound, list[i+1].Compound
		}
		p.LastMin = max(p.LastMin, x.RetentionMin+float64(1.5*x.WidthHalfMin))
	}
	return p
}

// scan draws the map, and looks for the best composition among those studied.
func (r *Result) scan(l Limits) {
	least := l.Resolution
	if least == 0 {
		least = resolved
	}
	span := r.HighStudied - r.LowStudied
	from, to := r.LowStudied-float64(outsideShare*span), r.HighStudied+float64(outsideShare*span)
	if r.Gradients {
		from = max(from, r.LowStudied/2)
	} else {
		from, to = max(from, 0), min(to, 1)
	}
	best := -1
	for i := range mapPoints {
		p := r.point(from + float64((to-from)*float64(i))/(mapPoints-1))
		r.Map = append(r.Map, p)
		if !p.Outside && r.allowed(p, l) && (best < 0 || p.Resolution > r.Map[best].Resolution) {
			best = i
		}
	}
	if best < 0 {
		r.Remarks = append(r.Remarks, "no composition between those studied keeps the limits of time and retention factor: study others")
		return
	}
	r.Best = r.refine(best, least, l)
	if edge := span / 50; r.Best.At-r.LowStudied < edge || r.HighStudied-r.Best.At < edge {
		r.Remarks = append(r.Remarks, fmt.Sprintf("the best composition lies at the end of those studied (%.4g): a run beyond it would tell whether the resolution goes on rising; what the map shows there is extrapolated", r.Best.At))
	}
	if !r.Best.Holds {
		r.Remarks = append(r.Remarks, fmt.Sprintf("the critical pair, %s and %s, does not reach a resolution of %g anywhere in the study", r.Best.First, r.Best.Second, least))
	}
}

func (r *Result) allowed(p Point, l Limits) bool {
	if l.TimeMin > 0 && p.LastMin > l.TimeMin {
		return false
	}
	if r.Gradients || l.MinK == 0 && l.MaxK == 0 {
		return true
	}
	for _, c := range r.Compounds {
		if k := c.Model.K(p.At); k < l.MinK || l.MaxK > 0 && k > l.MaxK {
			return false
		}
	}
	return true
}

// refine looks closer at the best point of the map, and finds how far the composition may drift.
func (r *Result) refine(best int, least float64, l Limits) *Best {
	const closer = 40
	lo, hi := max(r.Map[max(best-1, 0)].At, r.LowStudied), min(r.Map[min(best+1, len(r.Map)-1)].At, r.HighStudied)
	top := r.Map[best]
	for range 4 { // each time a twentieth of the width is left
		step := (hi - lo) / closer
		for i := range closer + 1 {
			if p := r.point(lo + float64(step*float64(i))); !p.Outside && p.Resolution > top.Resolution && r.allowed(p, l) {
				top = p
			}
		}
		lo, hi = max(top.At-step, r.LowStudied), min(top.At+step, r.HighStudied)
	}
	b := &Best{Point: top, Holds: top.Resolution >= least, LowTolerated: top.At, HighTolerated: top.At, Predicted: r.Predict(top.At)}
	if b.Holds {
		b.LowTolerated, b.HighTolerated = r.drift(top.At, r.LowStudied, least, l), r.drift(top.At, r.HighStudied, least, l)
	}
	return b
}

// drift is how far from one composition towards another the resolution and the limits hold.
func (r *Result) drift(from, to, least float64, l Limits) float64 {
	const steps = 400
	holds := func(at float64) bool {
		p := r.point(at)
		return p.Resolution >= least && r.allowed(p, l)
	}
	good := from
	for i := 1; i <= steps; i++ {
		at := from + float64((to-from)*float64(i))/steps
		if holds(at) {
			good = at
			continue
		}
		bad := at
		for range 60 {
			if mid := good + (bad-good)/2; holds(mid) {
				good = mid
			} else {
				bad = mid
			}
		}
		break
	}
	return good
}
