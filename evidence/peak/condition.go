package peak

import (
	"math"
	"sort"

	"assaywrit/evidence/trace"
)

// ConditionAlgorithm is the version of Inspect. A version never changes its results.
const ConditionAlgorithm = "trace-condition@1"

// A Finding is something about a trace that areas taken from it must not be silent on.
type Finding struct {
	Name     string  `json:"name"` // of the constants below
	StartMin float64 `json:"start_min"`
	EndMin   float64 `json:"end_min"`
	Points   int     `json:"points"`
}

// Names of findings.
const (
	TraceAllZero     = "all-zero"      // every value is zero
	TraceConstant    = "constant"      // every value is the same, and not zero
	TraceFlatTop     = "flat-top"      // three or more points in a row share a value that nothing near them exceeds: saturated
	TraceSpike       = "spike"         // one point stands out from both neighbours alone, where the trace around is smooth
	TraceNegative    = "negative-peak" // five or more points in a row dip deep under the baseline
	TraceCutAtStart  = "cut-at-start"  // the trace begins on a falling flank
	TraceCutAtEnd    = "cut-at-end"    // the trace ends on a rising or falling flank
	TraceGap         = "gap"           // a step ten times the usual one
	TraceBelowNought = "below-zero"    // more than half of the values are below zero
)

const (
	standsOut   = 8.0 // standard deviations of noise
	dipPoints   = 5
	dipNoises   = 8.0
	endNoises   = 8.0
	gapSteps    = 10.0
	flatNoises  = 8.0
	flankPoints = 8
)

// Inspect looks a trace over before anything is integrated, and lists what it finds in order of time; whole-trace findings come first.
// Noise is the robust one of the differences over the whole trace, with a floor of 2^-30 of its range; levels are counted from the
// median drift and the lower quartile of what remains.
//
// Fewer than five points, two points at one time, times out of order, values that are not finite: these are refused, with a
// *TraceError that names the point.
func Inspect(c trace.Chromatogram) ([]Finding, error) {
	if err := check(c); err != nil {
		return nil, err
	}
	n := len(c.TimeMin)
	v := inspection{t: c.TimeMin, y: c.Intensity, scratch: make([]float64, n)}
	if constant(v.y) {
		name := TraceConstant
		if v.y[0] == 0 {
			name = TraceAllZero
		}
		v.add(name, 0, n-1)
		return v.list, nil
	}
	v.prepare()
	v.spikes()
	v.flatTops()
	v.dips()
	v.ends()
	v.gaps()
	sort.SliceStable(v.list, func(i, j int) bool { return v.list[i].StartMin < v.list[j].StartMin })
	below := 0
	for _, y := range v.y {
		if y < 0 {
			below++
		}
	}
	if 2*below > n {
		v.list = append([]Finding{{TraceBelowNought, v.t[0], v.t[n-1], below}}, v.list...)
	}
	return v.list, nil
}

type inspection struct {
	t, y    []float64
	level   []float64 // less the drift and the quiet level
	scratch []float64
	noise   float64
	list    []Finding
}

func (v *inspection) add(name string, from, to int) {
	v.list = append(v.list, Finding{name, v.t[from], v.t[to], to - from + 1})
}

func (v *inspection) prepare() {
	n := len(v.y)
	lo, hi := v.y[0], v.y[0]
	for _, y := range v.y {
		lo, hi = min(lo, y), max(hi, y)
	}
	r := make([]float64, n)
	residuals(v.t, v.y, r)
	v.noise = max(firstNoise(r, v.scratch), firstBlockNoise(v.t, v.y, v.scratch), float64((hi-lo)*floorFactor))
	drift := slope(v.t, v.y, v.scratch)
	v.level = make([]float64, n)
	for i, y := range v.y {
		v.level[i] = y - float64(drift*(v.t[i]-v.t[0]))
	}
	copy(v.scratch, v.level)
	quiet := nth(v.scratch[:n], n/2)
	// Half of a trace may be peaks: the quiet level is the middle of what lies at or under the median, unless that is alike.
	copy(v.scratch, v.level)
	if low := nth(v.scratch[:n], n/4); quiet-low > float64(4*v.noise) {
		quiet = low
	}
	for i := range v.level {
		v.level[i] -= quiet
	}
}

// spikes are points that stand out from both neighbours by many noises and by more than four times what those differ from theirs.
func (v *inspection) spikes() {
	for i := 2; i+2 < len(v.y); i++ {
		up, down := v.y[i]-v.y[i-1], v.y[i]-v.y[i+1]
		if up*down <= 0 {
			continue
		}
		least := min(math.Abs(up), math.Abs(down))
		around := max(math.Abs(v.y[i-1]-v.y[i-2]), math.Abs(v.y[i+1]-v.y[i+2]), math.Abs(v.y[i+1]-v.y[i-1]))
		if least > float64(standsOut*v.noise) && least > float64(4*around) {
			v.add(TraceSpike, i, i)
		}
	}
}

// flatTops are runs of three or more equal values, far above the quiet level, that the trace falls from on both sides or ends with.
func (v *inspection) flatTops() {
	n := len(v.y)
	for i := 0; i < n; {
		j := i
		for j+1 < n && v.y[j+1] == v.y[i] {
			j++
		}
		if j-i+1 >= plateau && v.level[i] > float64(flatNoises*v.noise) &&
			(i == 0 || v.y[i-1] < v.y[i]) && (j == n-1 || v.y[j+1] < v.y[i]) {
			v.add(TraceFlatTop, i, j)
		}
		i = j + 1
	}
}

// dips are runs of points far under the quiet level.
func (v *inspection) dips() {
	n := len(v.y)
	least := -float64(dipNoises * v.noise)
	for i := 0; i < n; {
		if v.level[i] >= least {
			i++
			continue
		}
		j := i
		for j+1 < n && v.level[j+1] < least {
			j++
		}
		if j-i+1 >= dipPoints {
			v.add(TraceNegative, i, j)
		}
		i = j + 1
	}
}

// ends finds a trace that begins or ends well above its quiet level, on a slope steeper than drift and noise.
func (v *inspection) ends() {
	n := len(v.y)
	k := min(flankPoints, n/2)
	least := float64(endNoises * v.noise)
	high := func(from, to int) bool {
		edge, inner := v.level[from], v.level[to]
		return edge > least && math.Abs(edge-inner) > least
	}
	if high(0, k-1) {
		v.add(TraceCutAtStart, 0, k-1)
	}
	if high(n-1, n-k) {
		v.add(TraceCutAtEnd, n-k, n-1)
	}
}

// gaps are steps of time that are ten times the median one.
func (v *inspection) gaps() {
	n := len(v.t)
	d := v.scratch[:n-1]
	for i := range d {
		d[i] = v.t[i+1] - v.t[i]
	}
	usual := nth(d, len(d)/2)
	for i := 1; i < n; i++ {
		if v.t[i]-v.t[i-1] > float64(gapSteps*usual) {
			v.add(TraceGap, i-1, i)
		}
	}
}
