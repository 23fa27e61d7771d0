package uncertainty

import (
	"errors"
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// BiasAlgorithm names the figures below; a published version never changes its results.
const BiasAlgorithm = "rms-bias@1"

// A Reference is one comparison of the method with a reference value: a certified reference material, a round of a proficiency test,
// or a spiked sample. All figures are relative (0.03 is 3 %).
type Reference struct {
	Name string  `json:"name"`
	Bias float64 `json:"relative_bias"` // (found − reference value) / reference value
	// UReference is the relative standard uncertainty of the reference value. Of a proficiency test it is the reproducibility standard
	// deviation over the root of the number of laboratories (see AssignedValue).
	UReference float64 `json:"relative_u_reference"`
	// SD and N are the relative standard deviation of the laboratory's own results and their number. They count where there is a
	// single reference only; with several, the scatter is in the biases themselves.
	SD float64 `json:"relative_sd,omitempty"`
	N  int     `json:"n,omitempty"`
}

// A BiasUncertainty is what is known of the bias of a method, relative.
type BiasUncertainty struct {
	Algorithm  string      `json:"algorithm"`
	References []Reference `json:"references"`
	RMSBias    float64     `json:"relative_rms_bias"`
	UMean      float64     `json:"relative_u_mean,omitempty"` // s/√n of a single reference
	UReference float64     `json:"relative_u_reference"`      // mean over the references
	StdU       float64     `json:"relative_std_u"`
	DoF        float64     `json:"degrees_of_freedom"`
}

// Bias combines the biases against one or more references: u² = RMS(bias)² + mean(u_ref)², and for a single reference
// u² = bias² + s²/n + u_ref². The degrees of freedom are those of the root mean square, one for each reference (n − 1 for a single
// one); no more is claimed, though u_ref usually has many.
//
// It is the uncertainty of a result that is not corrected for its bias. The error names the reference.
//
// Source: B. Magnusson et al., Handbook for calculation of measurement uncertainty in environmental laboratories, Nordtest report TR
// 537, section 5 (from memory).
func Bias(references []Reference) (BiasUncertainty, error) {
	n := len(references)
	if n == 0 {
		return BiasUncertainty{}, errors.New("a bias without a reference: want at least one")
	}
	b := BiasUncertainty{Algorithm: BiasAlgorithm, References: references, DoF: float64(n)}
	squares, us := make([]float64, n), make([]float64, n)
	for i, r := range references {
		if math.IsNaN(r.Bias) || math.IsInf(r.Bias, 0) || !(r.UReference >= 0 && r.SD >= 0) || math.IsInf(r.UReference, 0) || math.IsInf(r.SD, 0) {
			return BiasUncertainty{}, fmt.Errorf("reference %q: bias %g, u %g, standard deviation %g: want finite numbers, the last two zero or more", r.Name, r.Bias, r.UReference, r.SD)
		}
		squares[i], us[i] = float64(r.Bias*r.Bias), r.UReference
	}
	b.RMSBias = math.Sqrt(strictmath.Mean(squares))
	b.UReference = strictmath.Mean(us)
	if n == 1 {
		r := references[0]
		if r.N < 2 {
			return BiasUncertainty{}, fmt.Errorf("reference %q: %d results: a single reference needs the standard deviation of at least two", r.Name, r.N)
		}
		b.UMean = r.SD / math.Sqrt(float64(r.N))
		b.DoF = float64(r.N - 1)
	}
	b.StdU = math.Sqrt(float64(b.RMSBias*b.RMSBias) + float64(b.UMean*b.UMean) + float64(b.UReference*b.UReference))
	if math.IsInf(b.StdU, 0) || math.IsNaN(b.StdU) {
		return BiasUncertainty{}, errors.New("the biases are too large for numbers")
	}
	return b, nil
}

// AssignedValue is the relative standard uncertainty of the assigned value of a proficiency test: the relative reproducibility standard
// deviation of its participants over the root of their number; 1.25 times that where the value is a median or a robust mean.
//
// Source: ISO 13528:2015, 7.7.3; Nordtest report TR 537 (from memory).
func AssignedValue(relativeSD float64, laboratories int, robust bool) (float64, error) {
	if !(relativeSD >= 0) || math.IsInf(relativeSD, 0) || laboratories < 2 {
		return 0, fmt.Errorf("an assigned value of %d laboratories with a standard deviation of %g: want at least two and zero or more", laboratories, relativeSD)
	}
	u := relativeSD / math.Sqrt(float64(laboratories))
	if robust {
		u = float64(1.25 * u)
	}
	return u, nil
}
