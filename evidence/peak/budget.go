package peak

import (
	"fmt"
	"math"
	"sort"

	"assaywrit/evidence/trace"
)

// AreaUncertaintyAlgorithm is the version of AreaUncertainty. A version never changes its results.
const AreaUncertaintyAlgorithm = "area-uncertainty@1"

// An AreaBudget is the standard uncertainty of an area, in counts·min, by its causes. StdU is not just the root of the sum of
// squares: points that are both summed and fix the baseline count once.
type AreaBudget struct {
	Algorithm    string  `json:"algorithm"`      // AreaUncertaintyAlgorithm
	NoiseStdU    float64 `json:"noise_std_u"`    // noise on the points summed
	BaselineStdU float64 `json:"baseline_std_u"` // noise on the points that fix the baseline
	LimitsStdU   float64 `json:"limits_std_u"`   // where the peak was taken to begin and end
	StdU         float64 `json:"std_u"`          // combined
}

// AreaUncertainty is the uncertainty of the area of p, a peak of c with its straight baseline, in closed form.
//
// Noise and baseline: the area is a weighted sum of acquired points. A point's weight is half the distance of its neighbours (the
// trapezoid rule), less, for the points whose mean fixes an end of the baseline, that end's share of the length. The variance is the
// sum of the squares of the weights times the variance of each point by the noise model.
//
// Limits: a limit that stands where the flank has fallen to h above the baseline leaves an area of about h·r/ln 2 outside, where r is
// the time in which the flank falls by half, and lifts that end of the baseline by up to h, which takes up to h/2 times the length of the
// peak. h is what limits are followed to, a tenth of the noise or 2^-13 of the height, whichever is larger; the two areas together are
// the half width of a rectangular distribution, divided by √3. For an end at a valley nothing is added: what lies behind it is another
// peak, and how to divide from that is not noise.
//
// The noise model should be that of the trace. The error is a *TraceError, an *IntervalError for a peak that is not one of this trace, or
// a *ParameterError. What this cannot know is left out: a wrong shape of baseline, and peaks underneath.
//
// Source: JCGM 100:2008, 5.1.2 and 4.3.7; N. Dyson, Chromatographic Integration Methods, 2nd ed., RSC 1998 (from memory).
func AreaUncertainty(c trace.Chromatogram, p *Peak, noise NoiseModel) (*AreaBudget, error) {
	if err := noise.Validate(); err != nil {
		return nil, err
	}
	left, right, err := interval(c, p.StartMin, p.EndMin)
	if err != nil {
		return nil, err
	}
	from, to := sort.SearchFloat64s(c.TimeMin, p.BaselineStartMin), sort.SearchFloat64s(c.TimeMin, p.BaselineEndMin)
	if from > left || to < right || to == len(c.TimeMin) || p.BaselineStartPoints < 1 || p.BaselineEndPoints < 1 ||
		!finiteValue(p.BaselineStartCounts) || !finiteValue(p.BaselineEndCounts) {
		return nil, &ParameterError{"baseline", fmt.Sprintf("%v to %v min, %d and %d points", p.BaselineStartMin, p.BaselineEndMin, p.BaselineStartPoints, p.BaselineEndPoints),
			"the baseline of this peak, from its start or before to its end or behind"}
	}
	a, b := anchorSpan(from, -1, p.BaselineStartPoints, len(c.TimeMin)), anchorSpan(to, +1, p.BaselineEndPoints, len(c.TimeMin))
	u := &AreaBudget{Algorithm: AreaUncertaintyAlgorithm}
	var all float64
	u.NoiseStdU, u.BaselineStdU, all = weighted(c, left, right, a, b, noise)
	l := line{p.BaselineStartMin, p.BaselineStartCounts, p.BaselineEndMin, p.BaselineEndCounts}
	s := shape{t: c.TimeMin, y: c.Intensity, left: left, right: right, top: highest(c.TimeMin, c.Intensity, left, right, l), base: l}
	var limits float64
	if p.StartKind != AtValley {
		v := s.limit(-1, noise)
		limits += float64(v * v)
	}
	if p.EndKind != AtValley {
		v := s.limit(+1, noise)
		limits += float64(v * v)
	}
	u.LimitsStdU = math.Sqrt(limits)
	u.StdU = math.Sqrt(all + limits)
	return u, nil
}

// anchorSpan is the points that fix an end of a baseline: from it outwards, and where the trace ends before, inwards.
func anchorSpan(at, step, points, n int) span {
	points = min(points, n)
	s := span{at - points + 1, at}
	if step > 0 {
		s = span{at, at + points - 1}
	}
	if s.from < 0 {
		s = span{0, points - 1}
	}
	if s.to >= n {
		s = span{n - points, n - 1}
	}
	return s
}

// weighted returns the standard uncertainties from the points summed and from those that fix the baseline, and the variance of both
// together.
func weighted(c trace.Chromatogram, left, right int, a, b span, noise NoiseModel) (sum, base, variance float64) {
	t := c.TimeMin
	length := t[right] - t[left]
	t0, t1 := centre(t, a), centre(t, b)
	later := 0.5
	if t1 > t0 {
		later = (float64((t[left]+t[right])/2) - t0) / (t1 - t0)
	}
	var ss, sb float64
	for i := min(a.from, left); i <= max(b.to, right); i++ {
		var w, v float64
		if i > left && i <= right {
			w += (t[i] - t[i-1]) / 2
		}
		if i >= left && i < right {
			w += (t[i+1] - t[i]) / 2
		}
		if i >= a.from && i <= a.to {
			v -= length * (1 - later) / float64(a.len())
		}
		if i >= b.from && i <= b.to {
			v -= length * later / float64(b.len())
		}
		of := noise.Variance(c.Intensity[i])
		ss += float64(w * w * of)
		sb += float64(v * v * of)
		variance += float64((w + v) * (w + v) * of)
	}
	return math.Sqrt(ss), math.Sqrt(sb), variance
}

func centre(t []float64, s span) float64 { return mean(t, s) }

// limit is the standard uncertainty that the limit on one side adds.
func (s *shape) limit(step int, noise NoiseModel) float64 {
	height := s.height(s.top)
	if !(height > 0) {
		return 0
	}
	edge := s.left
	if step > 0 {
		edge = s.right
	}
	h := max(float64(defaultEdgeFraction*height), float64(edgeOfNoise*noise.SD(s.y[edge])))
	// The time of a fall by half: the slowest that can be read above four noises, from the half down.
	rate, before, level := 0.0, 0.0, height/2
	at, ok := s.fall(step, level)
	if !ok {
		return 0
	}
	before = at
	rate = float64(halvingWidth * at)
	for range maxRead - 1 {
		if level /= 2; level < float64(reliable*noise.SD(s.y[edge])) {
			break
		}
		if at, ok = s.fall(step, level); !ok {
			break
		}
		rate, before = max(rate, at-before), at
	}
	return float64(h*(rate/math.Ln2+(s.t[s.right]-s.t[s.left])/2)) / math.Sqrt(3)
}

// fall is the time from the highest point to where the trace first passes below the level, on one side.
func (s *shape) fall(step int, level float64) (float64, bool) {
	pass := s.before
	if step > 0 {
		pass = s.after
	}
	at, ok := pass(level)
	return math.Abs(at - s.t[s.top]), ok
}
