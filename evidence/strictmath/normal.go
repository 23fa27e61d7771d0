package strictmath

import "math"

// NormCDF is the probability that a standard normal deviate is at most z. The relative error is a few units of the last place
// in either tail, down to where the result is subnormal.
func NormCDF(z float64) float64 { return NormSF(-z) }

// NormSF is the probability that a standard normal deviate exceeds z, without the cancellation of 1 − NormCDF(z).
func NormSF(z float64) float64 {
	if !(z > -9 && z < 39) {
		return float64(0.5 * Erfc(z)) // 1, 0 or NaN
	}
	x := sqrtHalf.scale(z)
	return float64(0.5 * (Erfc(x.hi) - perturbation(x)))
}

// perturbation is what the second part of x adds to the error function: the far tail would otherwise lose z² times its precision.
func perturbation(x double) float64 {
	const twoOverSqrtPi = 1.1283791670955126
	return float64(twoOverSqrtPi * x.lo * Exp(-float64(x.hi*x.hi)))
}

// NormQuantile is the z with NormCDF(z) = p. It is -Inf for 0, +Inf for 1 and NaN outside. The relative error is below 1e-15,
// also near the centre.
//
// Source: M. J. Wichura, Algorithm AS 241, Appl. Statist. 37 (1988) 477-484, in the form that the Go standard library has it
// (math/erfinv.go), followed by one step of Halley's method.
func NormQuantile(p float64) float64 {
	switch {
	case math.IsNaN(p) || p < 0 || p > 1:
		return math.NaN()
	case p == 0:
		return math.Inf(-1)
	case p == 1:
		return math.Inf(1)
	}
	q := p - 0.5
	if math.Abs(q) <= 0.425 {
		r := 0.180625 - float64(q*q)
		z := float64(2*math.Sqrt2*q*horner(r, quantA[:]...)) / horner(r, quantB[:]...)
		x := sqrtHalf.scale(z)
		return halley(z, float64(0.5*(Erf(x.hi)+perturbation(x)))-q)
	}
	tail := p
	if q > 0 {
		tail = 1 - p // exact
	}
	r := math.Sqrt(-Log(tail))
	var z float64
	if r <= 5 {
		r -= 1.6
		z = float64(math.Sqrt2*horner(r, quantC[:]...)) / horner(r, quantD[:]...)
	} else {
		r -= 5
		z = float64(math.Sqrt2*horner(r, quantE[:]...)) / horner(r, quantF[:]...)
	}
	z = halley(-z, NormCDF(-z)-tail)
	if q > 0 {
		return -z
	}
	return z
}

// halley makes one step of Halley's method from z, where the distribution is too large by e.
func halley(z, e float64) float64 {
	const sqrt2Pi = 2.50662827463100050242
	f := float64(sqrt2Pi * Exp(float64(0.5*z*z)))
	if math.IsInf(f, 0) {
		return z
	}
	step := float64(e * f)
	return z - step/(1+float64(0.5*z*step))
}

// Coefficients of AS 241 for the inverse of the error function.
var (
	quantA = [...]float64{1.1975323115670912564578e0, 4.7072688112383978012285e1, 6.9706266534389598238465e2, 4.8548868893843886794648e3,
		1.6235862515167575384252e4, 2.3782041382114385731252e4, 1.1819493347062294404278e4, 8.8709406962545514830200e2}
	quantB = [...]float64{1, 4.2313330701600911252e1, 6.8718700749205790830e2, 5.3941960214247511077e3,
		2.1213794301586595867e4, 3.9307895800092710610e4, 2.8729085735721942674e4, 5.2264952788528545610e3}
	quantC = [...]float64{1.42343711074968357734e0, 4.63033784615654529590e0, 5.76949722146069140550e0, 3.64784832476320460504e0,
		1.27045825245236838258e0, 2.41780725177450611770e-1, 2.27238449892691845833e-2, 7.74545014278341407640e-4}
	quantD = [...]float64{1.4142135623730950488016887e0, 2.9036514445419946173133295e0, 2.3707661626024532365971225e0, 9.7547832001787427186894837e-1,
		2.0945065210512749128288442e-1, 2.1494160384252876777097297e-2, 7.7441459065157709165577218e-4, 1.4859850019840355905497876e-9}
	quantE = [...]float64{6.65790464350110377720e0, 5.46378491116411436990e0, 1.78482653991729133580e0, 2.96560571828504891230e-1,
		2.65321895265761230930e-2, 1.24266094738807843860e-3, 2.71155556874348757815e-5, 2.01033439929228813265e-7}
	quantF = [...]float64{1.414213562373095048801689e0, 8.482908416595164588112026e-1, 1.936480946950659106176712e-1, 2.103693768272068968719679e-2,
		1.112800997078859844711555e-3, 2.611088405080593625138020e-5, 2.010321207683943062279931e-7, 2.891024605872965461538222e-15}
)
