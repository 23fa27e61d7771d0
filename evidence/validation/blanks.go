package validation

import (
	"errors"
	"math"

	"assaywrit/evidence/strictmath"
)

// BlankAlgorithm names the limits from blanks; a published version never changes its results.
const BlankAlgorithm = "blank-limits@1"

// BlankLimits are limits from the scatter of blanks, on the scale of concentration. They assume normal scatter, the same at the
// detection limit as in the blanks, and that one reading is compared with the blanks' mean.
type BlankLimits struct {
	Algorithm string  `json:"algorithm"`
	N         int     `json:"n"`
	Mean      float64 `json:"mean_ng_per_ml"`
	Spread    Spread  `json:"spread_ng_per_ml"`
	// Critical is t(95 %, n−1)·s·√(1 + 1/n) above the mean of the blanks: what a blank exceeds in one case of twenty. Detection is
	// twice that: what is found above it in about nineteen cases of twenty. Quantification is 10·s. All are net of the mean.
	Critical       float64 `json:"critical_ng_per_ml"`
	Detection      float64 `json:"detection_ng_per_ml"`
	Quantification float64 `json:"quantification_ng_per_ml"`
	// The intervals are those of s, carried over: the limits are proportional to it.
	CriticalInterval       Interval `json:"critical_interval_ng_per_ml"`
	DetectionInterval      Interval `json:"detection_interval_ng_per_ml"`
	QuantificationInterval Interval `json:"quantification_interval_ng_per_ml"`
	Flags                  []string `json:"flags,omitempty"`
}

// LimitsFromBlanks computes the limits; at least two blanks are needed. Blanks that do not differ at all give limits of zero, and a flag:
// an integrator that reports zero below a threshold has told nothing of the scatter.
//
// Source: L. A. Currie, Pure Appl. Chem. 67 (1995) 1699-1723; DIN 32645, blank method (both from memory).
func LimitsFromBlanks(found []float64) (BlankLimits, error) {
	if len(found) < 2 {
		return BlankLimits{}, errors.New("limits from fewer than two blanks")
	}
	n := float64(len(found))
	b := BlankLimits{Algorithm: BlankAlgorithm, N: len(found), Mean: strictmath.Mean(found)}
	s := strictmath.SD(found)
	if !finite(b.Mean, s, float64(10*s)) {
		return BlankLimits{}, errors.New("the blanks are too far apart for numbers")
	}
	b.Spread = spread(s, n-1, 0)
	b.Critical = float64(strictmath.TQuantile(confidence, n-1) * float64(s*math.Sqrt(1+1/n)))
	b.Detection, b.Quantification = float64(2*b.Critical), float64(10*s)
	if !finite(b.Critical, b.Detection, b.Quantification) {
		return BlankLimits{}, errors.New("the blanks are too far apart for numbers")
	}
	b.CriticalInterval = b.Spread.Interval.times(b.Critical, s)
	b.DetectionInterval = b.Spread.Interval.times(b.Detection, s)
	b.QuantificationInterval = b.Spread.Interval.times(b.Quantification, s)
	if s == 0 {
		b.Flags = append(b.Flags, "all blanks are equal: their scatter is not known, and limits of zero mean nothing")
	}
	if len(found) < 10 {
		b.Flags = append(b.Flags, "fewer than ten blanks: the limits are uncertain (common practice, no source)")
	}
	return b, nil
}
