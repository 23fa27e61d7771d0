package separation

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// ChromatogramAlgorithm is the published version of Chromatogram.
const ChromatogramAlgorithm = "gaussian-sum@1"

// Chromatogram is the trace predicted at a composition (φ, or the time of a gradient in minutes), in counts at the given times: a Gaussian
// for each compound, with its predicted retention and width at half height and its area in the runs. The error is an *Error, where the
// composition or a time is not finite or retention there is beyond what can be computed.
func (r *Result) Chromatogram(at float64, timesMin []float64) ([]float64, error) {
	const halfToSigma = 2.3548200450309493 // 2 √(2 ln 2)
	areas := map[string]float64{}
	for _, c := range r.Compounds {
		areas[c.Name] = c.Area
	}
	out := make([]float64, len(timesMin))
	for _, p := range r.Predict(at) {
		sigma := p.WidthHalfMin / halfToSigma
		if !(sigma > 0) || math.IsInf(sigma, 0) || math.IsInf(p.RetentionMin, 0) || math.IsNaN(p.RetentionMin) {
			return nil, &Error{"", fmt.Sprintf("%s retained %g min at %g", p.Compound, p.RetentionMin, at), "a composition nearer to those studied"}
		}
		height := areas[p.Compound] / float64(sigma*math.Sqrt(2*math.Pi))
		for i, t := range timesMin {
			z := (t - p.RetentionMin) / sigma
			if out[i] += float64(height * strictmath.Exp(float64(-z*z)/2)); math.IsNaN(out[i]) || math.IsInf(out[i], 0) {
				return nil, &Error{"", fmt.Sprintf("a time of %g min", t), "a finite time"}
			}
		}
	}
	return out, nil
}
