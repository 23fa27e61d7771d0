package strictmath

import "math"

// betaFraction is the continued fraction of the incomplete beta function, 1/(1+ d₁/(1+ d₂/(1+ …))), for x < 1; it is quick for
// x < (a+1)/(a+b+2). first is 1 + d₁, which the caller knows without cancellation. Where to begin is found by Lentz's method, which
// goes forward; the value is then had backwards, which does not gather rounding errors.
//
// Source: Abramowitz and Stegun 26.5.8.
func betaFraction(a, b, x, first float64) float64 {
	h := 1.0
	for n := betaTerms(a, b, x); n > 2; n-- {
		h = 1 / (1 + float64(betaTerm(n, a, b, x)*h))
	}
	d2 := float64(betaTerm(2, a, b, x) * h)
	// 1 + d₁/(1+d₂h) = (1 + d₁) − d₁·d₂h/(1+d₂h)
	return 1 / (first - float64(betaTerm(1, a, b, x)*(d2/(1+d2))))
}

// betaTerm is d_n of that fraction.
func betaTerm(n int, a, b, x float64) float64 {
	m := float64(n / 2)
	c := a + float64(2*m)
	if n%2 == 0 {
		return float64(m*(b-m)*x) / ((c - 1) * c)
	}
	return -float64((a+m)*(a+b+m)*x) / (c * (c + 1))
}

// betaTerms is the number of terms after which the fraction no longer changes.
func betaTerms(a, b, x float64) int {
	c, d := 1.0, 0.0
	for n := 1; n < 20000; n++ {
		e := betaTerm(n, a, b, x)
		d = 1 / awayFrom0(1+float64(e*d))
		c = awayFrom0(1 + e/c)
		if n > 3 && math.Abs(float64(d*c)-1) < 2e-16 {
			return n
		}
	}
	return 20000
}

func awayFrom0(v float64) float64 {
	const tiny = 1e-300
	if math.Abs(v) < tiny {
		return tiny
	}
	return v
}

// gammaRatio is Γ(x+1/2)/Γ(x) for x > 0: by Γ(x+1) = x·Γ(x) up to where the asymptotic series holds to all digits.
//
// Source of the series: exp of the difference of two Stirling series (Abramowitz and Stegun 6.1.41).
func gammaRatio(x float64) float64 {
	over, under := double{1, 0}, double{1, 0}
	for x < 16 {
		over, under = over.scale(x), under.mul(sum2(x, 0.5))
		x++
	}
	r := 1 / x
	r2 := float64(r * r)
	s := float64(r * horner(r2, -1.0/8, 1.0/192, -1.0/640, 17.0/14336, -31.0/18432, 691.0/180224))
	scale := over.div(under).scale(math.Sqrt(x)).hi
	// e^s − 1 for |s| < 0.01
	return scale + float64(scale*s*horner(s, 1, 1./2, 1./6, 1./24, 1./120, 1./720, 1./5040))
}

// log1p is log(1+x) for x ≥ 0 (W. Kahan's form, from memory).
func log1p(x float64) float64 {
	u := 1 + x
	if u == 1 || math.IsInf(u, 0) {
		return x
	}
	return float64(Log(u) * (x / (u - 1)))
}
