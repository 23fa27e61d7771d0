package strictmath

import "math"

// TQuantile is the t with TCDF(t, nu) = p, for nu > 0 (infinite: the normal distribution). It is ±Inf at 1 and 0, and where the
// quantile of few degrees of freedom overflows; NaN outside. The relative error is below 2e-15 for nu from 1/2, also near the
// centre; below, it grows as 1/nu.
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
	case nu >= normalFrom:
		return NormQuantile(p)
	case nu < flatBelow:
		return math.Copysign(math.Inf(1), p-0.5)
	case p < 0.25:
		return -upperT(p, nu)
	case p < 0.5:
		return -centralT(0.5-p, nu)
	case p <= 0.75:
		return centralT(p-0.5, nu)
	}
	return upperT(1-p, nu)
}

// quantileSteps is far more than Newton's method needs here.
const quantileSteps = 500

// upperT solves TSF(t, nu) = q for 0 < q < 1/4 by Newton's method on log TSF against log t. That curve is concave, so the method
// comes down from the right after its first step; the normal quantile, where it starts, lies to the left.
func upperT(q, nu float64) float64 {
	t := -NormQuantile(q)
	last := t
	for range quantileSteps {
		s := TSF(t, nu)
		if s == 0 { // too far
			t = float64(math.Sqrt(t) * math.Sqrt(last))
			continue
		}
		d := float64(logOfRatio(s, q) * (s / studentAt(t, nu).front()))
		last, t = t, float64(t*Exp(d))
		if math.IsInf(t, 0) || math.Abs(d) < 1e-15 {
			break
		}
	}
	return t
}

// logOfRatio is log(s/q), with all digits where s is near q.
func logOfRatio(s, q float64) float64 {
	switch {
	case s >= 2*q || s <= 0.5*q:
		return Log(s) - Log(q)
	case s >= q:
		return log1p((s - q) / q)
	}
	return -log1p((q - s) / s)
}

// centralT solves P(0 < T < t) = d for 0 < d ≤ 1/4 by Newton's method, which goes up from the left as the curve is concave.
func centralT(d, nu float64) float64 {
	t := d / tDensity(0, nu)
	for range quantileSteps {
		step := (d - studentAt(t, nu).fromCentre()) / tDensity(t, nu)
		t += step
		if math.IsInf(t, 0) || math.Abs(step) <= float64(4e-16*t) {
			break
		}
	}
	return t
}

// tDensity is Student's density at t ≥ 0.
func tDensity(t, nu float64) float64 {
	const sqrtPi = 1.77245385090551602730
	s := studentAt(t, nu)
	return float64(expDouble(s.log.scale(-float64(0.5*(nu+1)))) * gammaRatio(s.a) / (sqrtPi * math.Sqrt(nu)))
}
