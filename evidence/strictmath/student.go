package strictmath

import "math"

// TCDF is the probability that Student's t with nu > 0 degrees of freedom is at most t; NaN for another nu.
func TCDF(t, nu float64) float64 {
	if t < 0 {
		return TSF(-t, nu)
	}
	return 1 - TSF(t, nu)
}

// TSF is the probability that Student's t with nu > 0 degrees of freedom exceeds t, without the cancellation of 1 − TCDF.
// nu may be infinite: the normal distribution. The relative error is below 1e-13 for nu up to 10^6.
//
// It is half the regularised incomplete beta function I_x(ν/2, 1/2) at x = ν/(ν+t²) (Abramowitz and Stegun 26.7.1), by its
// continued fraction (26.5.8).
func TSF(t, nu float64) float64 {
	switch {
	case math.IsNaN(t) || !(nu > 0):
		return math.NaN()
	case math.IsInf(nu, 1):
		return NormSF(t)
	case t < 0:
		return 1 - TSF(-t, nu)
	case math.IsInf(t, 1):
		return 0
	}
	a := nu / 2
	t2 := float64(t * t)
	x, y := nu/(nu+t2), t2/(nu+t2)
	if math.IsInf(t2, 0) {
		x, y = 0, 1
	}
	// x^a·y^(1/2)/B(a, 1/2); log x = -log(1 + t²/ν) keeps its digits for large ν.
	const sqrtPi = 1.77245385090551602730
	front := float64(Exp(-float64(a*log1p(t2/nu))) * math.Sqrt(y) * gammaRatio(a) / sqrtPi)
	if x < (a+1)/(a+2.5) {
		return float64(0.5 * front / a * betaFraction(a, 0.5, x))
	}
	return 0.5 - float64(0.5*front/0.5*betaFraction(0.5, a, y))
}

// betaFraction is the continued fraction of the incomplete beta function by Lentz's method; it converges for
// x < (a+1)/(a+b+2).
func betaFraction(a, b, x float64) float64 {
	const tiny = 1e-300
	c, d := 1.0, 1-float64((a+b)*x)/(a+1)
	d = 1 / awayFrom0(d, tiny)
	h := d
	for m := 1.0; m < 10000; m++ {
		e := float64(m*(b-m)*x) / ((a + float64(2*m) - 1) * (a + float64(2*m)))
		d = 1 / awayFrom0(1+float64(e*d), tiny)
		c = awayFrom0(1+e/c, tiny)
		h = float64(h * d * c)
		e = -float64((a+m)*(a+b+m)*x) / ((a + float64(2*m)) * (a + float64(2*m) + 1))
		d = 1 / awayFrom0(1+float64(e*d), tiny)
		c = awayFrom0(1+e/c, tiny)
		step := float64(d * c)
		h = float64(h * step)
		if math.Abs(step-1) < 2e-16 {
			break
		}
	}
	return h
}

func awayFrom0(v, tiny float64) float64 {
	if math.Abs(v) < tiny {
		return tiny
	}
	return v
}

// gammaRatio is Γ(x+1/2)/Γ(x) for x > 0: by Γ(x+1) = x·Γ(x) up to where the asymptotic series holds to all digits.
//
// Source of the series: exp of the difference of two Stirling series (Abramowitz and Stegun 6.1.41).
func gammaRatio(x float64) float64 {
	scale := 1.0
	for x < 16 {
		scale = float64(scale * x / (x + 0.5))
		x++
	}
	r := 1 / x
	r2 := float64(r * r)
	s := horner(r2, -1.0/8, 1.0/192, -1.0/640, 17.0/14336, -31.0/18432, 691.0/180224)
	return float64(scale * math.Sqrt(x) * Exp(float64(r*s)))
}

// log1p is log(1+x) for x ≥ 0 (W. Kahan's form, from memory).
func log1p(x float64) float64 {
	u := 1 + x
	if u == 1 || math.IsInf(u, 0) {
		return x
	}
	return float64(Log(u) * (x / (u - 1)))
}

// TQuantile is the t with TCDF(t, nu) = p, for nu > 0 (infinite: the normal distribution). It is ±Inf at 1 and 0 and NaN
// outside. The relative error is below 1e-12 for nu from 1 to 10^6.
func TQuantile(p, nu float64) float64 {
	switch {
	case math.IsNaN(p) || p < 0 || p > 1 || !(nu > 0):
		return math.NaN()
	case p == 0.5:
		return 0
	case p == 0:
		return math.Inf(-1)
	case p == 1:
		return math.Inf(1)
	case math.IsInf(nu, 1):
		return NormQuantile(p)
	case p < 0.5:
		return -upperT(p, nu)
	}
	return upperT(1-p, nu)
}

// upperT solves TSF(t, nu) = q for 0 < q < 1/2: bisection in log t to bracket, then Newton's method on log TSF, kept inside.
func upperT(q, nu float64) float64 {
	low, high := 0.0, 1.0
	for TSF(high, nu) > q {
		low, high = high, float64(2*high)
		if math.IsInf(high, 0) {
			return high
		}
	}
	t := float64(0.5 * (low + high))
	for range 200 {
		s := TSF(t, nu)
		if s > q {
			low = t
		} else {
			high = t
		}
		next := t
		if s > 0 {
			next = t + float64(s*Log(s/q))/tDensity(t, nu)
		}
		if !(next > low && next < high) {
			next = float64(0.5 * (low + high))
		}
		if math.Abs(next-t) <= 1e-16*t || next == low || next == high {
			return next
		}
		t = next
	}
	return t
}

// tDensity is Student's density.
func tDensity(t, nu float64) float64 {
	const sqrtPi = 1.77245385090551602730
	return float64(gammaRatio(nu/2) / (sqrtPi * math.Sqrt(nu)) * Exp(-float64(0.5*(nu+1)*log1p(float64(t*t)/nu))))
}
