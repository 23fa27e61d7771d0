package strictmath

import "math"

// Pow returns x to the power of y, rounded from a result with a relative error below 2^-58: what has an exact result gives
// it. The special cases are those of C99 (annex F.9.4.4), as in the Go standard library: Pow(x, ±0) = 1 and Pow(1, y) = 1 for
// every argument, NaN for a finite x < 0 and a y that is no whole number.
func Pow(x, y float64) float64 {
	whole := y == math.Trunc(y)
	odd := whole && math.Abs(y) < 1<<53 && math.Mod(y, 2) != 0
	switch {
	case y == 0 || x == 1:
		return 1
	case math.IsNaN(x) || math.IsNaN(y):
		return math.NaN()
	case x == -1 && math.IsInf(y, 0):
		return 1
	case x == 0 || math.IsInf(x, 0) || math.IsInf(y, 0):
		return powLimit(x, y, odd)
	case x < 0 && !whole:
		return math.NaN()
	}
	r := powPositive(math.Abs(x), y)
	if x < 0 && odd {
		return -r
	}
	return r
}

// powLimit is Pow where x is 0 or infinite, or y infinite and x not ±1.
func powLimit(x, y float64, odd bool) float64 {
	r := 0.0
	if (math.Abs(x) > 1) == (y > 0) {
		r = math.Inf(1)
	}
	if odd && math.Signbit(x) {
		return -r
	}
	return r
}

// powPositive is e^(y·log x) for finite x > 0 and y.
func powPositive(x, y float64) float64 {
	l := logDouble(x)
	switch e := float64(y * l.hi); {
	case e > 1000:
		return math.Inf(1)
	case e < -1000:
		return 0
	}
	return expDouble(l.scale(y))
}
