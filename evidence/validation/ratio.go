package validation

import (
	"errors"
	"math"

	"assaywrit/evidence/strictmath"
)

// RatioAlgorithm names the ratio of two means; a published version never changes its results.
const RatioAlgorithm = "ratio-of-means@1"

// RatioOfMeans is mean(a)/mean(b) of independent values, at least two of each, both means above zero: its relative variance is the sum
// of those of the means (first order), its degrees of freedom are Welch and Satterthwaite's.
//
// Source: JCGM 100:2008, 5.1.6 and G.4.1.
func RatioOfMeans(a, b []float64) (Mean, error) {
	if len(a) < 2 || len(b) < 2 {
		return Mean{}, errors.New("fewer than two values on one side: a ratio of means needs two of each")
	}
	x, y := meanOf(a), meanOf(b)
	if !(x.Value > 0 && y.Value > 0) || !finite(x.Value, x.StdU, y.Value, y.StdU) {
		return Mean{}, errors.New("a mean that is not above zero: no ratio can be had of it")
	}
	ratio := x.Value / y.Value
	rx, ry := x.StdU/x.Value, y.StdU/y.Value
	vx, vy := float64(rx*rx), float64(ry*ry)
	nu := float64(len(a) + len(b) - 2) // where nothing varies
	if total := vx + vy; total > 0 {
		sx, sy := vx/total, vy/total
		nu = 1 / (float64(sx*sx)/x.DoF + float64(sy*sy)/y.DoF)
	}
	m := about(ratio, float64(ratio*math.Sqrt(vx+vy)), nu, len(a)+len(b))
	if !finite(m.Value, m.StdU, m.Interval.Low, m.Interval.High) {
		return Mean{}, errors.New("the means are too far apart for their ratio to be a number")
	}
	return m, nil
}

// An Extraction is what spikes before and after extraction and neat solutions of one level say.
//
// Source: B. K. Matuszewski, M. L. Constanzer, C. M. Chavez-Eng, Anal. Chem. 75 (2003) 3019-3030 (from memory).
type Extraction struct {
	Algorithm         string `json:"algorithm"`
	Level             string `json:"level"`
	MatrixEffect      *Mean  `json:"matrix_effect,omitempty"`       // after extraction / neat: 1 is none
	Recovery          *Mean  `json:"extraction_recovery,omitempty"` // before extraction / after extraction
	ProcessEfficiency *Mean  `json:"process_efficiency,omitempty"`  // before extraction / neat
	// SourceSpread is the relative standard deviation of the responses after extraction between sources of matrix (means of each).
	SourceSpread *Spread  `json:"matrix_source_spread,omitempty"`
	Sources      int      `json:"matrix_sources"`
	Flags        []string `json:"flags,omitempty"`
}

// extraction computes the three ratios. after has the responses of each source of matrix.
func extraction(level string, neat, before []float64, after [][]float64) Extraction {
	e := Extraction{Algorithm: RatioAlgorithm, Level: level, Sources: len(after)}
	var all, means []float64
	for _, s := range after {
		all = append(all, s...)
		means = append(means, strictmath.Mean(s))
	}
	ratio := func(what string, a, b []float64) *Mean {
		m, err := RatioOfMeans(a, b)
		if err != nil {
			e.Flags = append(e.Flags, what+": "+err.Error())
			return nil
		}
		return &m
	}
	e.MatrixEffect = ratio("matrix effect", all, neat)
	e.Recovery = ratio("extraction recovery", before, all)
	e.ProcessEfficiency = ratio("process efficiency", before, neat)
	if len(means) < 2 {
		e.Flags = append(e.Flags, "fewer than two sources of matrix: their scatter is not known")
		return e
	}
	mean, sd := strictmath.Mean(means), strictmath.SD(means)
	if finite(mean, sd) && mean > 0 {
		s := spread(sd, float64(len(means)-1), mean)
		e.SourceSpread = &s
	}
	return e
}
