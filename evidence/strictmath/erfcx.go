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
		return float64(Exp(erfcExponent(x)) / x)
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

// erfcExponent is log(x·exp(x²)·erfc(x)) for 1.25 ≤ x < 28: the coefficients of Erfc.
func erfcExponent(x float64) float64 {
	s := 1 / (x * x)
	var r, q float64
	if x < 1/0.35 {
		r = horner(s, ra0, ra1, ra2, ra3, ra4, ra5, ra6, ra7)
		q = horner(s, 1, sa1, sa2, sa3, sa4, sa5, sa6, sa7, sa8)
	} else {
		r = horner(s, rb0, rb1, rb2, rb3, rb4, rb5, rb6)
		q = horner(s, 1, sb1, sb2, sb3, sb4, sb5, sb6, sb7)
	}
	return r/q - 0.5625
}

// horner is c[0] + c[1]·s + c[2]·s² + …
func horner(s float64, c ...float64) float64 {
	v := 0.0
	for i := len(c) - 1; i >= 0; i-- {
		v = c[i] + float64(s*v)
	}
	return v
}
