package simulate

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// A Peak is an exponentially modified Gaussian: Area in counts·min, the others in minutes. Mu and Sigma (above 0) are those of
// the Gaussian, Tau is the time constant of the exponential; Tau 0 is the Gaussian itself. The area is exactly Area.
type Peak struct{ Area, Mu, Sigma, Tau float64 }

const sqrt2Pi = 2.50662827463100050242

// limits of Sigma/Tau: above the first the exponential shifts the apex by Tau and no more can be told in double precision, above
// the second the curve is the Gaussian to the last digits.
const (
	shiftOnly = 1e4
	gaussian  = 1e15
)

// At is the height in counts at time t, in the form that neither overflows nor cancels: with the scaled complementary error
// function where its argument is not below zero, with the plain one where it is.
//
// Source: Y. Kalambet et al., J. Chemometrics 25 (2011) 352-356 (from memory).
func (p Peak) At(t float64) float64 {
	d := (t - p.Mu) / p.Sigma
	gauss := strictmath.Exp(-float64(0.5 * d * d))
	if p.Tau <= 0 || p.Sigma/p.Tau > gaussian {
		return float64(p.Area * gauss / (p.Sigma * sqrt2Pi))
	}
	r := p.Sigma / p.Tau
	z := (r - d) / math.Sqrt2
	if z >= 0 {
		return float64(p.Area / (2 * p.Tau) * gauss * strictmath.Erfcx(z))
	}
	return float64(p.Area / (2 * p.Tau) * strictmath.Exp(float64(0.5*r*r)-float64(r*d)) * strictmath.Erfc(z))
}

// Apex is the time of the highest point, in minutes. It stands where erfcx(z) = √(2/π)·Tau/Sigma, with z as in At: the derivative
// of the closed form set to zero. erfcx falls throughout, so z is found by halving.
func (p Peak) Apex() float64 {
	if p.Tau <= 0 {
		return p.Mu
	}
	r := p.Sigma / p.Tau
	if r > shiftOnly {
		return p.Mu + p.Tau
	}
	want := 2 / (sqrt2Pi * r)
	lo, hi := -26., 1+1/want // erfcx(z) is below 1/(z√π) above 0
	for {
		z := float64(0.5 * (lo + hi))
		if !(z > lo && z < hi) {
			return p.Mu + float64(p.Sigma*(r-float64(math.Sqrt2*z)))
		}
		if strictmath.Erfcx(z) > want {
			lo = z
		} else {
			hi = z
		}
	}
}

// ApexAt is the peak moved so that its apex stands at t.
func (p Peak) ApexAt(t float64) Peak {
	p.Mu += t - p.Apex()
	return p
}
