package peak

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// byTangent skims what follows the tallest peak by the straight line that starts at the valley and touches the trace from below
// behind the last rider. The area under that line belongs to the tallest peak.
//
// Source: N. Dyson, Chromatographic Integration Methods, 2nd ed., RSC 1998 (from memory).
func (v *clusterView) byTangent() Separation {
	main := v.tallest()
	if why := v.skimInapplicable(main); why != "" {
		return Separation{Method: SeparateTangent, Refused: why}
	}
	from := v.valley[main]
	to, least := v.right, math.Inf(1)
	for i := v.apex[len(v.apex)-1] + 1; i <= v.right; i++ {
		if slope := (v.height(i) - v.height(from)) / (v.t[i] - v.t[from]); slope < least {
			to, least = i, slope
		}
	}
	tangent := line{v.t[from], v.height(from), v.t[to], v.height(to)}
	return separation(SeparateTangent, v.skimmed(main, from, to, tangent.at))
}

func (v *clusterView) skimInapplicable(main int) string {
	switch {
	case len(v.apex) < 2:
		return RefusedOnePeak
	case main+1 == len(v.apex):
		return RefusedNoRider
	case v.withoutValley() >= 0:
		return RefusedNoValley
	}
	return ""
}

// skimmed gives the riders behind the main peak what lies above the curve between the two points, divided by perpendiculars, and
// the main peak all else behind its own valley.
func (v *clusterView) skimmed(main, from, to int, curve func(t float64) float64) []float64 {
	areas := v.drops()
	var rest float64
	for i := main; i < len(areas); i++ {
		rest += areas[i]
	}
	for i := main + 1; i < len(areas); i++ {
		a, b := from, to
		if i > main+1 {
			a = v.valley[i-1]
		}
		if i+1 < len(areas) {
			b = v.valley[i]
		}
		areas[i] = v.above(a, b, curve)
		rest -= areas[i]
	}
	areas[main] = rest
	return areas
}

const (
	tailTop     = 0.5 // of the apex: the tail begins below it
	tailNoises  = 5.0 // and is read down to this many standard deviations of noise
	minTail     = 5   // points
	tailWindows = 3   // the window of the decay is a third of the tail
)

// byExponential continues the tail of the tallest peak as an exponential decay. The decay constant is the largest that a straight
// line through the logarithms of a third of the tail's points has anywhere between half height and the valley: above, the peak is
// still round, and below the rider flattens the fall. What lies above the exponential from the end of that third on belongs to
// the riders.
func (v *clusterView) byExponential() Separation {
	main := v.tallest()
	if why := v.skimInapplicable(main); why != "" {
		return Separation{Method: SeparateExponent, Refused: why}
	}
	from, to := v.apex[main], v.valley[main]
	for from < to && v.height(from) > float64(tailTop*v.height(v.apex[main])) {
		from++
	}
	least := float64(tailNoises * v.noise.WhiteSD)
	for i := from; i <= to; i++ {
		if !(v.height(i) > least) {
			to = i - 1
		}
	}
	m := max((to-from+1)/tailWindows, minTail)
	rate, level, at := 0.0, 0.0, -1
	for i := from; i+m-1 <= to; i++ {
		if k, l := v.decay(i, i+m-1); k > rate {
			rate, level, at = k, l, i
		}
	}
	if at < 0 {
		return Separation{Method: SeparateExponent, Refused: RefusedNoTail}
	}
	begin := at + m - 1
	t0 := v.t[at]
	curve := func(t float64) float64 { return strictmath.Exp(level - float64(rate*(t-t0))) }
	return separation(SeparateExponent, v.skimmed(main, begin, v.right, curve))
}

// decay is the rate at which the logarithm of the trace falls from point a to b, by a least-squares line, and its value at a.
func (v *clusterView) decay(a, b int) (rate, level float64) {
	n := float64(b - a + 1)
	var st, sl float64
	for i := a; i <= b; i++ {
		st += v.t[i] - v.t[a]
		sl += strictmath.Log(v.height(i))
	}
	tm, lm := st/n, sl/n
	var stt, stl float64
	for i := a; i <= b; i++ {
		u := v.t[i] - v.t[a] - tm
		stt += float64(u * u)
		stl += float64(u * (strictmath.Log(v.height(i)) - lm))
	}
	rate = -stl / stt
	return rate, lm + float64(rate*tm)
}
