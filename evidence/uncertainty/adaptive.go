package uncertainty

import (
	"fmt"
	"math"
	"strconv"

	"assaywrit/evidence/strictmath"
)

// Tolerance is the numerical tolerance δ of a standard uncertainty that is given with some significant digits: half a unit of the last
// one, δ = ½·10^l where u rounds to c·10^l with an integer c of that many digits.
//
// Source: JCGM 101:2008, 7.9.2 (from memory).
func Tolerance(u float64, digits int) (float64, error) {
	if !(u > 0) || math.IsInf(u, 0) || digits < 1 || digits > 15 {
		return 0, fmt.Errorf("a tolerance for u = %g with %d significant digits: want u above zero and 1 to 15 digits", u, digits)
	}
	// The decimal text gives the exponent after rounding: 0.996 to two digits is 10·10^-1.
	text := strconv.FormatFloat(u, 'e', digits-1, 64)
	for i := range text {
		if text[i] == 'e' {
			exponent, err := strconv.Atoi(text[i+1:])
			if err != nil {
				return 0, err
			}
			return strconv.ParseFloat("5e"+strconv.Itoa(exponent-digits), 64)
		}
	}
	return 0, fmt.Errorf("uncertainty: internal error: %q has no exponent", text)
}

// roundBlocks is how many blocks an adaptive run makes at a time: it is fixed, so that the end does not depend on the workers.
const roundBlocks = 16

// adapt makes blocks until the results are stable. Blocks that were made beyond the one that settles it are dropped.
func (e *engine) adapt(run Run, result *Simulation) error {
	most := run.Trials / blockTrials
	var figures [4][]float64 // of each block: mean, standard deviation, ends of the symmetric interval
	stable := false
	h := 0
	for h < most && !stable {
		if err := e.extend(min(len(e.blocks)+roundBlocks, most) * blockTrials); err != nil {
			return err
		}
		for h < len(e.blocks) && !stable {
			b := e.blocks[h]
			mean, sd, err := e.moments(e.blocks[h : h+1])
			if err != nil {
				return err
			}
			symmetric, _ := intervals(b.y, run.Probability)
			for i, v := range []float64{mean, sd, symmetric.Low, symmetric.High} {
				figures[i] = append(figures[i], v)
			}
			if h++; h < 2 {
				continue
			}
			_, u, err := e.moments(e.blocks[:h])
			if err != nil {
				return err
			}
			delta := 0.0 // where nothing varies, nothing may
			if u > 0 {
				if delta, err = Tolerance(u, run.Digits); err != nil {
					return err
				}
			}
			stable = settled(figures, delta)
			result.Tolerance = &delta
		}
	}
	e.blocks = e.blocks[:h]
	result.Stable, result.Digits = &stable, run.Digits
	return nil
}

// settled tells whether twice the standard deviation of each figure's mean is within the tolerance.
func settled(figures [4][]float64, delta float64) bool {
	for _, f := range figures {
		if !(2*strictmath.SD(f)/math.Sqrt(float64(len(f))) <= delta) {
			return false
		}
	}
	return true
}
