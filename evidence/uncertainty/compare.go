package uncertainty

import (
	"errors"
	"math"
)

// ComparisonAlgorithm names the comparison; a published version never changes its results.
const ComparisonAlgorithm = "gum-s1-validation@1"

// The verdicts of a comparison.
const (
	UseFirstOrder   = "first-order"    // both ends agree: the law of propagation may be used
	UseMonteCarlo   = "monte-carlo"    // they do not, or the first order gives no interval: the Monte Carlo result is to be used
	UseUndetermined = "not-determined" // the Monte Carlo result is not stable: make more trials
)

// A Comparison holds a propagated uncertainty against a simulation of the same model.
type Comparison struct {
	Algorithm      string    `json:"algorithm"`
	Probability    float64   `json:"coverage_probability"`
	Propagated     *Coverage `json:"propagated_interval,omitempty"` // absent where there is none
	Simulated      Coverage  `json:"simulated_interval"`
	DifferenceLow  *float64  `json:"difference_low,omitempty"`
	DifferenceHigh *float64  `json:"difference_high,omitempty"`
	Digits         int       `json:"digits"`
	Tolerance      float64   `json:"tolerance"`
	Use            string    `json:"use"`
	Reason         string    `json:"reason,omitempty"`
}

// Compare says which of two results for the same model is to be used: the propagated one where both ends of its coverage interval lie
// within the tolerance δ of those of the simulation's symmetric interval, otherwise the simulation. δ belongs to the simulation's
// standard uncertainty with so many significant digits (one or two are usual). For a sound decision the simulation itself should be
// stable to δ/5; one that was adaptive and is not even stable to its own tolerance leaves the question open. Results that do not vary at all agree.
//
// Source: JCGM 101:2008, clause 8 (from memory).
func Compare(p Propagation, s Simulation, digits int) (Comparison, error) {
	c := Comparison{Algorithm: ComparisonAlgorithm, Probability: s.Probability, Simulated: s.Symmetric, Digits: digits}
	if s.Algorithm == "" || p.Algorithm == "" {
		return Comparison{}, errors.New("a comparison needs a propagation and a simulation")
	}
	if s.StdU == 0 && p.StdU == 0 {
		same := Coverage{p.Value, p.Value}
		zero := 0.0
		c.Propagated, c.DifferenceLow, c.DifferenceHigh, c.Use, c.Reason = &same, &zero, &zero, UseFirstOrder, "nothing varies"
		return c, nil
	}
	var err error
	if c.Tolerance, err = Tolerance(s.StdU, digits); err != nil {
		return Comparison{}, err
	}
	unstable := s.Stable != nil && !*s.Stable
	if low, high, _, err := p.Interval(s.Probability); err != nil {
		c.Use, c.Reason = UseMonteCarlo, err.Error()
	} else {
		dl, dh := math.Abs(low-s.Symmetric.Low), math.Abs(high-s.Symmetric.High)
		c.Propagated, c.DifferenceLow, c.DifferenceHigh = &Coverage{low, high}, &dl, &dh
		if dl <= c.Tolerance && dh <= c.Tolerance {
			c.Use = UseFirstOrder
		} else {
			c.Use, c.Reason = UseMonteCarlo, "the ends of the two intervals differ by more than the tolerance"
		}
	}
	if unstable {
		c.Use, c.Reason = UseUndetermined, "the simulation did not become stable within its number of trials"
	}
	return c, nil
}
