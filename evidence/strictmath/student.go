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
// nu may be infinite: the normal distribution. It is NaN for another nu. The relative error is below 2e-15.
//
// Source: half the regularised incomplete beta function I_x(ν/2, 1/2) at x = ν/(ν+t²) (Abramowitz and Stegun 26.7.1), by its
// continued fraction (26.5.8), from the nearer side. For many degrees of freedom see tailSeries.
func TSF(t, nu float64) float64 {
	switch {
	case math.IsNaN(t) || !(nu > 0):
		return math.NaN()
	case nu >= normalFrom:
		return NormSF(t)
	case t < 0:
		return 1 - TSF(-t, nu)
	case math.IsInf(t, 1):
		return 0
	case nu < flatBelow:
		return 0.5
	}
	s := studentAt(t, nu)
	switch {
	case nu >= seriesFrom && s.log.hi <= 1:
		return s.tailSeries()
	case s.y*(s.a+2.5) < 0.5: // nearer to the centre than to the tail
		return 0.5 - s.fromCentre()
	}
	return s.fromTail()
}

const (
	normalFrom = 1e25   // degrees of freedom from which Student's tail is the normal one to all digits: they differ by t⁴/(4ν)
	flatBelow  = 1e-290 // degrees of freedom below which the probability between 0 and any finite t is nothing
	seriesFrom = 20     // degrees of freedom from which tailSeries holds
)

// A student holds what its distribution is computed from at t ≥ 0.
type student struct {
	nu, a float64 // degrees of freedom, and half of them
	x, y  float64 // ν/(ν+t²), t²/(ν+t²)
	rootY float64
	log   double // log(1 + t²/ν) = −log x
}

func studentAt(t, nu float64) student {
	s := student{nu: nu, a: float64(nu / 2), y: 1, rootY: 1}
	t2 := product2(t, t)
	if !math.IsInf(t2.hi, 0) {
		s.x, s.y = nu/(nu+t2.hi), t2.hi/(nu+t2.hi)
		s.rootY = t / math.Sqrt(nu+t2.hi) // where t² underflows too
	}
	q := t2.div(double{nu, 0})
	if q.hi < 1<<60 {
		s.log = log1pDouble(q)
		return s
	}
	// log(1+q) = log q + 1/q, and q may overflow.
	l := logDouble(t)
	s.log = double{float64(2 * l.hi), float64(2 * l.lo)}.add(logDouble(nu).scale(-1)).add(double{s.x, 0})
	return s
}

// central tells whether the fraction from the centre is the one that converges.
func (s student) central() bool { return s.y*(s.a+2.5) < 1.5 }

// front is x^a·√y/B(a, 1/2), which is t times Student's density at t.
func (s student) front() float64 {
	const sqrtPi = 1.77245385090551602730
	return float64(expDouble(s.log.scale(-s.a)) * s.rootY * gammaRatio(s.a) / sqrtPi)
}

// fromCentre is the probability between 0 and t.
func (s student) fromCentre() float64 {
	if s.central() {
		return float64(s.front() * betaFraction(0.5, s.a, s.y, 1-float64((s.a+0.5)*s.y)/1.5))
	}
	return 0.5 - s.fromTail()
}

// fromTail is the probability above t.
func (s student) fromTail() float64 {
	first := (0.5 + float64((s.a+0.5)*s.y)) / (s.a + 1)
	return float64(0.5 * s.front() / s.a * betaFraction(s.a, 0.5, s.x, first))
}

// tailSeries is the upper tail for many degrees of freedom.
//
// With u = log(1+t²/ν) as the variable of integration the tail is
//
//	Γ(a+1/2)/(2·√π·Γ(a)) · ∫ e^(−Nu)·u^(−1/2)·g(u) du from u₀ up,  N = (ν − 1/2)/2,  g(u) = √((u/2)/sinh(u/2)),
//
// and g has a series in u²; each power gives an incomplete gamma function, of which the first is √π·erfc(√(N·u₀)) and the others
// follow by Γ(s+1, z) = s·Γ(s, z) + z^s·e^(−z). All have e^(−N·u₀) as a factor.
//
// It is the idea of A. R. DiDonato and A. H. Morris, ACM Trans. Math. Softw. 18 (1992) 360-373, section 9 (from memory), for b = 1/2.
func (s student) tailSeries() float64 {
	const sqrtPi = 1.77245385090551602730
	n := float64((s.nu - 0.5) / 2)
	u := s.log.hi
	sum := float64(Erfcx(math.Sqrt(float64(n*u))) * sqrtPi)
	term, step, power := sum, math.Sqrt(u/n), 1.0 // term is e^z·Γ(j+1/2, z)/N^j
	for j := range 2 * (len(rootOfSinh) - 1) {
		term = float64((float64(j)+0.5)/n*term) + float64(power*step)
		power = float64(power * u)
		if j%2 == 1 {
			sum += float64(rootOfSinh[(j+1)/2] * term)
		}
	}
	return float64(expDouble(s.log.scale(-n)) * gammaRatio(s.a) / math.Sqrt(n) * sum / (2 * sqrtPi))
}

// rootOfSinh are the coefficients of √((u/2)/sinh(u/2)) in powers of u².
var rootOfSinh = [...]float64{
	1, -1.0 / 48, 1.0 / 2560, -61.0 / 7741440, 1.6967665791721781305e-7, -3.8050641917219065657e-9, 8.7483775963154073041e-11,
	-2.0445233594119738176e-12, 4.8333517979677044083e-14, -1.1524341017673859239e-15, 2.7660520435993700423e-17, -6.6742819508916599512e-19,
	1.6174550771815798882e-20, -3.9339779200913800155e-22,
}
