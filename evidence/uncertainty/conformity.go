package uncertainty

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// ProbabilityAbove is the probability that the true value exceeds a limit, given the measured value and its standard
// uncertainty: Φ((value − limit)/u), the normal distribution, where effectiveDoF is nil. Where effective degrees of freedom are
// given it is Student's distribution of the same argument, with the degrees as they are (more than zero, not cut to a whole number):
// that is nearer to 1/2, as the uncertainty itself is uncertain. Nothing is assumed of the true value beforehand. Without
// uncertainty it is 0, 1, or 1/2 at the limit itself.
//
// Source: JCGM 106:2012, clause 7 (from memory).
func ProbabilityAbove(value, stdU, limit float64, effectiveDoF *float64) (float64, error) {
	if !(stdU >= 0) || math.IsInf(stdU, 0) || math.IsNaN(value-limit) || math.IsInf(value-limit, 0) {
		return 0, fmt.Errorf("value %g with u %g against %g: want finite numbers and u of zero or more", value, stdU, limit)
	}
	if effectiveDoF != nil && !(*effectiveDoF > 0) {
		return 0, fmt.Errorf("%g effective degrees of freedom: want more than zero", *effectiveDoF)
	}
	if stdU == 0 {
		switch {
		case value > limit:
			return 1, nil
		case value < limit:
			return 0, nil
		}
		return 0.5, nil
	}
	z := (value - limit) / stdU
	if effectiveDoF == nil {
		return strictmath.NormCDF(z), nil
	}
	return strictmath.TCDF(z, *effectiveDoF), nil
}
