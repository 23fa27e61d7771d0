package peak

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// An EMG is an exponentially modified Gaussian: the convolution of a Gaussian (MuMin, SigmaMin above 0, minutes) with an
// exponential decay of time constant TauMin. TauMin below 0 is its mirror image, a peak that fronts; 0 is the Gaussian. Area is
// in counts·min and is exactly the area under the whole curve.
//
// Source: E. Grushka, Anal. Chem. 44 (1972) 1733 (from memory).
type EMG struct {
	Area     float64 `json:"area_counts_min"`
	MuMin    float64 `json:"mu_min"`
	SigmaMin float64 `json:"sigma_min"`
	TauMin   float64 `json:"tau_min"`
}

// At is the height in counts at time t, in minutes.
func (g EMG) At(t float64) float64 {
	m := g.moments()
	return float64(g.Area * m.value(t))
}

// moments gives the curve of area 1 by its mean, standard deviation and γ = (τ/s)³, half its skewness. A fit in these is
// well conditioned also where tailing vanishes: σ and τ themselves are then all but interchangeable.
func (g EMG) moments() emgMoments {
	s := math.Sqrt(float64(g.SigmaMin*g.SigmaMin) + float64(g.TauMin*g.TauMin))
	q := g.TauMin / s
	return newMoments(g.MuMin+g.TauMin, s, float64(q*q*q))
}

const (
	sqrt2Pi  = 2.50662827463100050242
	smallQ   = 0.05 // below it the first terms of the Edgeworth series are exact to 1e-7 and do not cancel
	maxGamma = 0.98
)

// emgMoments is an EMG of area 1 made ready for many points.
type emgMoments struct {
	mean, s, gamma  float64
	sign            float64 // -1 for a fronting peak
	q               float64 // |τ|/s
	sigma, tau      float64 // tau without its sign
	r               float64 // sigma/tau
	gaussScale      float64 // 1/(σ√(2π))
	halfRate        float64 // 1/(2τ)
	perTau, perTau2 float64
}

func newMoments(mean, s, gamma float64) emgMoments {
	e := emgMoments{mean: mean, s: s, gamma: gamma, sign: 1}
	if gamma < 0 {
		e.sign = -1
	}
	if g := math.Abs(gamma); g > 0 {
		e.q = strictmath.Exp(strictmath.Log(g) / 3)
	}
	e.tau = float64(s * e.q)
	e.sigma = float64(s * math.Sqrt(max(1-float64(e.q*e.q), 0)))
	e.gaussScale = 1 / float64(e.sigma*sqrt2Pi)
	if e.q >= smallQ {
		e.r = e.sigma / e.tau
		e.halfRate = 0.5 / e.tau
		e.perTau = 1 / e.tau
		e.perTau2 = float64(e.perTau * e.perTau)
	}
	return e
}

// emg is the curve of that area.
func (e *emgMoments) emg(area float64) EMG {
	tau := float64(e.sign * e.tau)
	return EMG{area, e.mean - tau, e.sigma, tau}
}

// parts returns the curve g and the Gaussian G that it is made of, at distance u from the mean (turned round where the peak
// fronts); z is the distance in standard deviations of G. For q from smallQ.
func (e *emgMoments) parts(u float64) (g, gauss, z float64) {
	z = (u + e.tau) / e.sigma
	if z > -38 && z < 38 {
		gauss = float64(e.gaussScale * strictmath.Exp(-float64(0.5*z*z)))
	}
	b := (e.r - z) / math.Sqrt2
	switch {
	case b >= 0:
		if gauss == 0 {
			return 0, 0, z
		}
		g = float64(gauss * e.sigma * sqrt2Pi * e.halfRate * strictmath.Erfcx(b))
	default:
		tail := 2.0
		if b > -6 {
			tail = strictmath.Erfc(b)
		}
		g = float64(e.halfRate * tail * strictmath.Exp(float64(e.r*(e.r/2-z))))
	}
	return g, gauss, z
}

func (e *emgMoments) value(t float64) float64 {
	u := float64(e.sign * (t - e.mean))
	if e.q < smallQ {
		g, _, _ := e.edgeworth(u)
		return g
	}
	g, _, _ := e.parts(u)
	return g
}

// gradient returns the value at t and its derivatives with respect to mean, s and γ. They follow from the differential equation
// τ·g′ + g = G and from scaling: ∂g/∂mean = −g′, ∂g/∂s = −(g + u·g′)/s, and with the chain rule over σ = s√(1−q²), τ = s·q,
// ∂g/∂q = s·[(u·g + σ²g′)/τ² + 2g′ − G′].
func (e *emgMoments) gradient(t float64) (g, dMean, dS, dGamma float64) {
	u := float64(e.sign * (t - e.mean))
	var slope float64
	if e.q < smallQ {
		g, slope, dGamma = e.edgeworth(u)
	} else {
		var gauss, z float64
		g, gauss, z = e.parts(u)
		slope = float64((gauss - g) * e.perTau)
		gaussSlope := -float64(z*gauss) / e.sigma
		dq := float64(e.s * (float64((float64(u*g)+float64(e.sigma*e.sigma*slope))*e.perTau2) + float64(2*slope) - gaussSlope))
		dGamma = dq / (3 * e.q * e.q)
	}
	return g, -float64(e.sign * slope), -(g + float64(u*slope)) / e.s, float64(e.sign * dGamma)
}

// edgeworth is the Edgeworth series with the cumulants 2q³, 6q⁴ and 24q⁵ of the EMG (of s = 1): value, slope and derivative with
// respect to |γ| = q³.
//
// Source: M. Abramowitz, I. A. Stegun, 26.2.47 (from memory).
func (e *emgMoments) edgeworth(u float64) (g, slope, dGamma float64) {
	z := u / e.s
	if z < -14 || z > 14 {
		return 0, 0, 0
	}
	phi := strictmath.Exp(-float64(0.5*z*z)) / float64(e.s*sqrt2Pi)
	var he [8]float64 // Hermite polynomials
	he[0], he[1] = 1, z
	for k := 2; k < len(he); k++ {
		he[k] = float64(z*he[k-1]) - float64(float64(k-1)*he[k-2])
	}
	q := e.q
	q3 := float64(q * q * q)
	c3, c4, c5, c6 := q3/3, float64(q3*q)/4, float64(q3*q*q)/5, float64(q3*q3)/18
	g = float64(phi * (1 + float64(c3*he[3]) + float64(c4*he[4]) + float64(c5*he[5]) + float64(c6*he[6])))
	slope = -float64(phi*(he[1]+float64(c3*he[4])+float64(c4*he[5])+float64(c5*he[6])+float64(c6*he[7]))) / e.s
	dGamma = float64(phi * (he[3]/3 + float64(q*he[4])/3 + float64(q*q*he[5])/3 + float64(q3*he[6])/9))
	return g, slope, dGamma
}
