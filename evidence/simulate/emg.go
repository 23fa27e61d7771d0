package simulate

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// A Peak is an exponentially modified Gaussian: Area in counts·min, the others in minutes. Mu and Sigma are those of the
// Gaussian, Tau is the time constant of the exponential; Tau 0 is the Gaussian itself.
type Peak struct{ Area, Mu, Sigma, Tau float64 }

// At is the height in counts at time t, in the form that neither overflows nor cancels: with the scaled complementary error
// function where its argument is not below zero, with the plain one where it is.
//
// Source: Y. Kalambet et al., J. Chemometrics 25 (2011) 352-356 (from memory).
func (p Peak) At(t float64) float64 {
	d := (t - p.Mu) / p.Sigma
	gauss := strictmath.Exp(-float64(0.5 * d * d))
	if p.Tau <= 0 {
		const sqrt2Pi = 2.50662827463100050242
		return float64(p.Area * gauss / (p.Sigma * sqrt2Pi))
	}
	r := p.Sigma / p.Tau
	z := (r - d) / math.Sqrt2
	if z >= 0 {
		return float64(p.Area / (2 * p.Tau) * gauss * strictmath.Erfcx(z))
	}
	return float64(p.Area / (2 * p.Tau) * strictmath.Exp(float64(0.5*r*r)-float64(r*d)) * strictmath.Erfc(z))
}
