package peak

import (
	"fmt"
	"sort"

	"assaywrit/evidence/trace"
)

// A Line is a straight baseline, given by two of its points: times in minutes, heights in counts.
type Line struct {
	StartMin    float64 `json:"start_min"`
	StartCounts float64 `json:"start_counts"`
	EndMin      float64 `json:"end_min"`
	EndCounts   float64 `json:"end_counts"`
}

func (l Line) line() line { return line{l.StartMin, l.StartCounts, l.EndMin, l.EndCounts} }

// At is the height of the line at time t, in counts.
func (l Line) At(t float64) float64 { return l.line().at(t) }

// A Cluster is one or more peaks on a common straight baseline, with the times of their apexes in order. An apex may be one that the
// trace itself does not show, as that of a shoulder.
type Cluster struct {
	StartMin  float64    `json:"start_min"`
	EndMin    float64    `json:"end_min"`
	ApexesMin []float64  `json:"apexes_min"`
	Baseline  Line       `json:"baseline"`
	Noise     NoiseModel `json:"noise"`
}

const maxClusterPeaks = 8

// Clusters groups the peaks of a result: neighbours that share a valley belong together. The baseline is that of the first peak's
// start and the last peak's end, which with Drop is the one that they have in common.
func Clusters(r *Result) []Cluster {
	var list []Cluster
	for i := range r.Peaks {
		p := &r.Peaks[i]
		if i > 0 && p.StartKind == AtValley && r.Peaks[i-1].EndMin == p.StartMin {
			k := &list[len(list)-1]
			k.EndMin, k.ApexesMin = p.EndMin, append(k.ApexesMin, p.ApexMin)
			k.Baseline.EndMin, k.Baseline.EndCounts = p.BaselineEndMin, p.BaselineEndCounts
			continue
		}
		list = append(list, Cluster{p.StartMin, p.EndMin, []float64{p.ApexMin},
			Line{p.BaselineStartMin, p.BaselineStartCounts, p.BaselineEndMin, p.BaselineEndCounts}, NoiseModel{WhiteSD: r.Noise}})
	}
	return list
}

// ForcedCommon is the one straight baseline of a whole cluster: through the signal at its first and last point.
func ForcedCommon(c trace.Chromatogram, startMin, endMin float64) (Line, error) {
	left, right, err := interval(c, startMin, endMin)
	if err != nil {
		return Line{}, err
	}
	return Line{c.TimeMin[left], c.Intensity[left], c.TimeMin[right], c.Intensity[right]}, nil
}

// ValleyToValley are the baselines of the peaks between these limits, one each, that join the lowest acquired points between
// neighbouring apexes. The error is a *ParameterError where two apexes have no valley between them.
func ValleyToValley(c trace.Chromatogram, startMin, endMin float64, apexesMin []float64) ([]Line, error) {
	v, err := view(c, Cluster{StartMin: startMin, EndMin: endMin, ApexesMin: apexesMin, Baseline: Line{startMin, 0, endMin, 0}})
	if err != nil {
		return nil, err
	}
	if i := v.withoutValley(); i >= 0 {
		return nil, &ParameterError{"apexes_min", fmt.Sprintf("no valley after the apex at %v min", apexesMin[i]), "apexes with a lower point between them"}
	}
	edges := v.edges()
	lines := make([]Line, len(apexesMin))
	for i := range lines {
		a, b := edges[i], edges[i+1]
		lines[i] = Line{v.t[a], v.y[a], v.t[b], v.y[b]}
	}
	return lines, nil
}

// interval returns the first and last acquired points between two times; at least five must lie there.
func interval(c trace.Chromatogram, startMin, endMin float64) (left, right int, err error) {
	if err := check(c); err != nil {
		return 0, 0, err
	}
	if !(startMin < endMin) || !finiteValue(endMin-startMin) {
		return 0, 0, &IntervalError{c.ID, startMin, endMin, 0, "an end after the start, both finite"}
	}
	left = sort.SearchFloat64s(c.TimeMin, startMin)
	right = sort.Search(len(c.TimeMin), func(i int) bool { return c.TimeMin[i] > endMin }) - 1
	if n := right - left + 1; n < minPoints {
		return 0, 0, &IntervalError{c.ID, startMin, endMin, max(n, 0), "at least five"}
	}
	return left, right, nil
}

// A clusterView is a cluster by the acquired points.
type clusterView struct {
	t, y        []float64
	h           []float64 // above the baseline, from left to right; h[0] belongs to point left
	left, right int
	apex        []int // nearest acquired points, inside the limits
	valley      []int // lowest points between neighbouring apexes
	base        line
	noise       NoiseModel
}

func view(c trace.Chromatogram, k Cluster) (*clusterView, error) {
	left, right, err := interval(c, k.StartMin, k.EndMin)
	if err != nil {
		return nil, err
	}
	if err := k.Noise.Validate(); err != nil {
		return nil, err
	}
	if n := len(k.ApexesMin); n == 0 || n > maxClusterPeaks {
		return nil, &ParameterError{"apexes_min", fmt.Sprintf("%d apexes", n), fmt.Sprintf("1 to %d", maxClusterPeaks)}
	}
	b := k.Baseline
	if !(b.StartMin < b.EndMin) || !finiteValue(b.EndMin-b.StartMin) || !finiteValue(b.StartCounts) || !finiteValue(b.EndCounts) {
		return nil, &ParameterError{"baseline", fmt.Sprint(b), "two points in order of time, all numbers finite"}
	}
	v := &clusterView{t: c.TimeMin, y: c.Intensity, left: left, right: right, base: b.line(), noise: k.Noise}
	for i := left; i <= right; i++ {
		v.h = append(v.h, v.y[i]-v.base.at(v.t[i]))
	}
	for i, a := range k.ApexesMin {
		if !(a > v.t[left] && a < v.t[right]) || i > 0 && !(a > k.ApexesMin[i-1]) {
			return nil, &ParameterError{"apexes_min", fmt.Sprintf("%v min", a), "times inside the limits, in order"}
		}
		at := sort.SearchFloat64s(v.t, a)
		if a-v.t[at-1] < v.t[at]-a {
			at--
		}
		v.apex = append(v.apex, at)
	}
	for i := 1; i < len(v.apex); i++ {
		if v.apex[i] == v.apex[i-1] {
			return nil, &ParameterError{"apexes_min", fmt.Sprintf("%v and %v min", k.ApexesMin[i-1], k.ApexesMin[i]), "apexes at different acquired points"}
		}
		low := v.apex[i-1]
		for j := low + 1; j <= v.apex[i]; j++ {
			if v.height(j) < v.height(low) {
				low = j
			}
		}
		v.valley = append(v.valley, low)
	}
	return v, nil
}

func (v *clusterView) height(i int) float64 { return v.h[i-v.left] }

// withoutValley is the index of the first apex that no valley separates from the next, or -1.
func (v *clusterView) withoutValley() int {
	for i, at := range v.valley {
		if at == v.apex[i] || at == v.apex[i+1] {
			return i
		}
	}
	return -1
}

// edges are the limits of all the peaks: left, the valleys, right.
func (v *clusterView) edges() []int {
	return append(append([]int{v.left}, v.valley...), v.right)
}

// above is the trapezoid area between two points above any curve given by its heights over the baseline.
func (v *clusterView) above(from, to int, curve func(t float64) float64) float64 {
	var sum float64
	before := 0.0
	for i := from; i <= to; i++ {
		d := v.height(i)
		if curve != nil {
			d -= curve(v.t[i])
		}
		if i > from {
			sum += float64((v.t[i] - v.t[i-1]) * (before + d) / 2)
		}
		before = d
	}
	return sum
}
