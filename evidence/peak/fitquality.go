package peak

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// result turns the end of the search into what is reported.
func (f *joint) result(ends []peakStart, fit *lsFit, asked bool) *JointFit {
	n, p := len(f.t), len(fit.theta)
	r := &JointFit{Algorithm: JointFitAlgorithm, SharedShape: asked, Points: n, Freedom: fit.dof, Iterations: fit.iters}
	scale := fit.rss / float64(fit.dof)
	if f.w != nil {
		r.ReducedChiSquare = scale
		scale = max(scale, 1)
	}
	for i, e := range ends {
		m := newMoments(e.mean, e.s, e.gamma)
		k := FittedPeak{EMG: m.emg(e.area), ApexMin: m.apex()}
		k.Height = float64(e.area * m.value(k.ApexMin))
		k.AreaStdU = math.Sqrt(float64(fit.cov[f.areaAt(i)][f.areaAt(i)] * scale))
		r.Peaks = append(r.Peaks, k)
	}
	r.Baseline = Line{f.t[0], f.v.base.at(f.t[0]), f.t[n-1], f.v.base.at(f.t[n-1])}
	if !f.fixed {
		u := (f.t[n-1] - f.centre) / f.step
		r.Baseline.StartCounts += fit.theta[p-2] - float64(fit.theta[p-1]*u)
		r.Baseline.EndCounts += fit.theta[p-2] + float64(fit.theta[p-1]*u)
	}
	r.residuals = make([]float64, n)
	for i := range r.residuals {
		r.residuals[i] = f.y[i] - fit.values[i]
		if f.w != nil {
			r.residuals[i] = float64(r.residuals[i] * f.w[i])
		}
	}
	r.RunsZ = runsZ(r.residuals)
	r.Distrust = f.distrust(r, fit)
	return r
}

// distrust lists the reasons in the order of the constants.
func (f *joint) distrust(r *JointFit, fit *lsFit) []string {
	var list []string
	add := func(on bool, reason string) {
		if on {
			list = append(list, reason)
		}
	}
	bound, correlated, weak := false, false, false
	for i := range r.Peaks {
		a, b := f.areaAt(i), f.shapeAt(i)
		bound = bound || fit.atBound[a+1] || fit.atBound[b] || fit.atBound[b+1]
		weak = weak || !(r.Peaks[i].Area >= 3*r.Peaks[i].AreaStdU) || fit.atBound[a]
		for j := range i {
			c := f.areaAt(j)
			together := math.Abs(fit.cov[a][c]) > float64(maxAreaCorr*math.Sqrt(fit.cov[a][a]*fit.cov[c][c]))
			correlated = correlated || together && (r.Peaks[i].unsure() || r.Peaks[j].unsure())
		}
	}
	add(!fit.converged, DistrustNotConverged)
	add(f.w != nil && r.ReducedChiSquare > chiSquareSlop && chiSquareZ(r.ReducedChiSquare, fit.dof) > judgedZ, DistrustChiSquare)
	add(r.RunsZ < -judgedZ, DistrustRuns)
	add(bound, DistrustBound)
	add(correlated, DistrustCorrelated)
	add(weak, DistrustWeak)
	add(r.Points < 4*len(fit.theta), DistrustFewPoints)
	add(saturated(f.signals, 0, len(f.signals)-1), DistrustSaturated)
	add(f.w == nil, DistrustNoNoise)
	return list
}

// unsure tells whether the area is known to worse than a twentieth.
func (k *FittedPeak) unsure() bool { return !(k.AreaStdU <= float64(unsureArea*k.Area)) }

// chiSquareZ is the normal deviate of a reduced chi-square.
//
// Source: E. B. Wilson, M. M. Hilferty, Proc. Natl. Acad. Sci. 17 (1931) 684 (from memory).
func chiSquareZ(reduced float64, dof int) float64 {
	if !(reduced > 0) {
		return math.Inf(-1)
	}
	v := 2 / float64(9*dof)
	return (strictmath.Exp(strictmath.Log(reduced)/3) - (1 - v)) / math.Sqrt(v)
}

// runsZ is the normal deviate of the number of runs of like sign: about 0 for independent residuals, below 0 where neighbours
// hang together.
//
// Source: A. Wald, J. Wolfowitz, Ann. Math. Stat. 11 (1940) 147 (from memory).
func runsZ(r []float64) float64 {
	var plus, minus, runs float64
	before := 0.0
	for _, v := range r {
		if v == 0 {
			continue
		}
		if v > 0 {
			plus++
		} else {
			minus++
		}
		if before == 0 || (v > 0) != (before > 0) {
			runs++
		}
		before = v
	}
	n := plus + minus
	if plus == 0 || minus == 0 || n < 3 {
		return 0
	}
	mean := 2*plus*minus/n + 1
	variance := (mean - 1) * (mean - 2) / (n - 1)
	if !(variance > 0) {
		return 0
	}
	return (runs - mean) / math.Sqrt(variance)
}

// saturated tells whether three or more points in a row share the highest value.
func saturated(y []float64, from, to int) bool {
	at := from
	for i := from; i <= to; i++ {
		if y[i] > y[at] {
			at = i
		}
	}
	n := 1
	for i := at + 1; i <= to && y[i] == y[at]; i++ {
		n++
	}
	return n >= plateau
}

// apex is the time of the highest point, to rounding: where the slope changes sign.
func (e *emgMoments) apex() float64 {
	lo, hi := -float64(1.01*e.tau)-float64(0.01*e.s), float64(0.01*e.s) // distances from the mean, in the direction of the tail
	for {
		u := float64((lo + hi) / 2)
		if !(u > lo && u < hi) {
			return e.mean + float64(e.sign*u)
		}
		_, dMean, _, _ := e.gradient(e.mean + float64(e.sign*u))
		if -float64(e.sign*dMean) > 0 {
			lo = u
		} else {
			hi = u
		}
	}
}
