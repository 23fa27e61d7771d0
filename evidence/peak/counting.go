package peak

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
	"assaywrit/evidence/trace"
)

// CountingAlgorithm is the version of CountingNoiseOf. A version never changes its results.
const CountingAlgorithm = "noise-counting@1"

// A CountingNoise is the noise as it depends on the signal.
type CountingNoise struct {
	Algorithm  string     `json:"algorithm"` // CountingAlgorithm
	Model      NoiseModel `json:"model"`     // CountingGain 0 unless Recognised
	Gain       float64    `json:"gain_counts"`
	GainStdU   float64    `json:"gain_std_u_counts"`
	Recognised bool       `json:"recognised"` // the gain exceeds four of its standard uncertainties
	Points     int        `json:"points"`
}

const (
	levelPoints    = 15
	recognisedGain = 4.0
	leastWhite     = 1e-4 // of the mean variance: the white part is never taken for less
)

// CountingNoiseOf fits variance = e² + g·signal to a whole trace, peaks and all. Each point's distance from the parabola or cubic
// through its four neighbours, in units of the factor by which that is noisier than a point, has the variance of a point; its square
// is fitted by weighted least squares against the Savitzky–Golay parabola of 15 points (below zero it counts as no signal), with weights
// 1/variance² that come from the fit, both coefficients at least 0.
//
// The cubic leaves nothing of a peak with ten or more points a standard deviation; with five it leaves about 0.4 % of the height,
// which looks like noise where S/N exceeds some hundred. Below some ten events a point their squares scatter more than stated. At least 50 points are needed, otherwise the error is a *TraceError.
//
// Source: maximum likelihood for squares of normal deviates with a linear variance, by iteratively reweighted least squares, P.
// McCullagh, J. A. Nelder, Generalized Linear Models, 2nd ed. 1989, chapter 8 (from memory).
func CountingNoiseOf(c trace.Chromatogram) (*CountingNoise, error) {
	const least, rounds = 50, 60
	if err := check(c); err != nil {
		return nil, err
	}
	n := len(c.TimeMin)
	if n < least {
		return nil, &TraceError{c.ID, -1, fmt.Sprintf("%d points", n), "at least 50 to tell counting noise"}
	}
	if constant(c.Intensity) {
		return nil, &TraceError{c.ID, -1, fmt.Sprintf("one constant value, %v", c.Intensity[0]), "a trace with noise"}
	}
	v, x, level := make([]float64, 0, n), make([]float64, 0, n), make([]float64, n)
	smooth(c.TimeMin, c.Intensity, level, levelPoints)
	for i := 2; i+2 < n; i++ {
		d := cubicResidual(c.TimeMin[i-2:i+3], c.Intensity[i-2:i+3])
		v, x = append(v, float64(d*d)), append(x, max(level[i], 0))
	}
	all := strictmath.Mean(v)
	if !(all > 0) {
		return nil, &TraceError{c.ID, -1, "no scatter", "a trace with noise"}
	}
	e2, g := all, 0.0
	var cov float64
	for range rounds {
		e2, g, cov = varianceStep(v, x, e2, g, float64(leastWhite*all))
	}
	r := &CountingNoise{Algorithm: CountingAlgorithm, Points: len(v), Gain: g, GainStdU: math.Sqrt(cov), Model: NoiseModel{WhiteSD: math.Sqrt(e2)}}
	if r.Recognised = g > float64(recognisedGain*r.GainStdU) && r.GainStdU > 0; r.Recognised {
		r.Model.CountingGain = g
	} else {
		r.Model.WhiteSD = math.Sqrt(all)
	}
	return r, nil
}

// cubicResidual is the distance of the middle of five points from the cubic through the four others, in units of its noise.
func cubicResidual(t, y []float64) float64 {
	d := y[2]
	norm := 1.0
	for _, j := range [4]int{0, 1, 3, 4} {
		l := 1.0
		for _, k := range [4]int{0, 1, 3, 4} {
			if k != j {
				l = float64(l * ((t[2] - t[k]) / (t[j] - t[k])))
			}
		}
		d -= float64(l * y[j])
		norm += float64(l * l)
	}
	return d / math.Sqrt(norm)
}

// varianceStep is one round: the two coefficients and the variance of g. The variance of the square of a normal deviate is 2·variance²;
// neighbouring distances share points, which adds the correlation of their squares: for even times (1 + 2·Σρ²), ρ the lag correlations
// of the weights (1, −4, 6, −4, 1), 1 + 2·(0.8² + 0.4² + (8/70)² + (1/70)²) = 2.627.
func varianceStep(v, x []float64, e2, g, least float64) (float64, float64, float64) {
	const shared = 2.627
	var sw, sx, sy, sxx, sxy float64
	for i := range v {
		w := e2 / (e2 + float64(g*x[i])) // relative to e2, so that squares stay in range
		w = float64(w * w)
		sw += w
		sx += float64(w * x[i])
		sy += float64(w * v[i])
		sxx += float64(w * x[i] * x[i])
		sxy += float64(w * x[i] * v[i])
	}
	den := float64(sw*sxx) - float64(sx*sx)
	if !(den > 0) || !finiteValue(den) {
		return e2, 0, 0
	}
	a, b := (float64(sxx*sy)-float64(sx*sxy))/den, (float64(sw*sxy)-float64(sx*sy))/den
	if b < 0 {
		a, b = sy/sw, 0
	}
	if a < least {
		a, b = least, max((sxy-float64(least*sx))/sxx, 0)
	}
	return a, b, float64(2*shared*e2) * e2 * sw / den
}
