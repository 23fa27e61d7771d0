package strictmath

import "math"

// Erfcx returns the scaled complementary error function exp(x²)·erfc(x), which neither underflows nor cancels for large x.
// It overflows to +Inf below -26.6. The relative error is a few units of the last place; below 0 it grows like x² units.
//
// From 1.25 to 28 it is the rational part of FreeBSD's erfc (s_erf.c), above that the asymptotic series (Abramowitz and Stegun
// 7.1.23); elsewhere the definition, with the rounding error of x² carried along.
func Erfcx(x float64) float64 {
	switch {
	case math.IsNaN(x):
		return x
	case x < 0:
		return float64(2*expSquare(x)) - Erfcx(-x)
	case x < 1.25:
		return float64(expSquare(x) * Erfc(x))
	case x < 28:
		return float64(Exp(erfcRational(x)-0.5625) / x)
	}
	const invSqrtPi = 0.56418958354775628695
	s := 1 / (x * x)
	return float64(invSqrtPi / x * horner(s, 1, -1./2, 3./4, -15./8, 105./16, -945./32, 10395./64, -135135./128, 2027025./256))
}

// expSquare is exp(x²): the part of x² that rounding loses goes into a first-order factor.
func expSquare(x float64) float64 {
	h := float64(x * x)
	l := math.FMA(x, x, -h)
	e := Exp(h)
	if math.IsInf(e, 0) {
		return e
	}
	return e + float64(e*l)
}

// horner is c[0] + c[1]·s + c[2]·s² + …
func horner(s float64, c ...float64) float64 {
	v := 0.0
	for i := len(c) - 1; i >= 0; i-- {
		v = c[i] + float64(s*v)
	}
	return v
}
