package strictmath

import "math"

// A double is the unevaluated sum of two numbers, the second below half a unit of the last place of the first: about 106 bits.
//
// Source of the operations: T. J. Dekker, Numer. Math. 18 (1971) 224-242, with a fused multiply-add for the error of a product
// (from memory).
type double struct{ hi, lo float64 }

// sum2 is a + b with its rounding error.
func sum2(a, b float64) double {
	s := a + b
	t := s - a
	return double{s, (a - (s - t)) + (b - t)}
}

// quick2 is sum2 where |a| ≥ |b|.
func quick2(a, b float64) double {
	s := a + b
	return double{s, b - (s - a)}
}

// product2 is a·b with its rounding error.
func product2(a, b float64) double {
	p := float64(a * b)
	return double{p, math.FMA(a, b, -p)}
}

func (x double) add(y double) double {
	s, t := sum2(x.hi, y.hi), sum2(x.lo, y.lo)
	s = quick2(s.hi, s.lo+t.hi)
	return quick2(s.hi, s.lo+t.lo)
}

func (x double) mul(y double) double {
	p := product2(x.hi, y.hi)
	return quick2(p.hi, p.lo+(float64(x.hi*y.lo)+float64(x.lo*y.hi)))
}

func (x double) scale(f float64) double { return x.mul(double{f, 0}) }

func (x double) div(y double) double {
	q := x.hi / y.hi
	r := x.add(y.scale(-q)) // exact but for its own last bits
	return quick2(q, r.hi/y.hi)
}

// Constants to twice the precision: the second number is what the first lacks.
var (
	ln2          = double{0.6931471805599453, 2.31904681384629961549e-17}
	sqrtHalf     = double{0.7071067811865476, -4.83364665672645651859e-17}
	third        = double{0.3333333333333333, 1.85037170770859423404e-17}
	fifth        = double{0.2, -1.11022302462515654042e-17}
	sixth        = double{0.16666666666666666, 9.2518585385429711702e-18}
	twentyFourth = double{0.041666666666666664, 2.31296463463574279255e-18}
)

// logDouble is the natural logarithm of a finite x > 0 with a relative error near 2^-70.
//
// x = m·2^k with m between √½ and √2; log m = 2·artanh(s), s = (m−1)/(m+1), whose square is below 0.0295.
func logDouble(x float64) double {
	m, k := math.Frexp(x)
	if m < math.Sqrt2/2 {
		m = float64(m * 2)
		k--
	}
	s := double{m - 1, 0}.div(sum2(m, 1)) // m − 1 is exact
	l := artanh2(s)
	return l.add(ln2.scale(float64(k)))
}

// artanh2 is 2·artanh(s) for |s| < 0.172: 2s + 2s³(1/3 + s²(1/5 + s²(1/7 + …))), the tail in single numbers.
func artanh2(s double) double {
	s2 := s.mul(s)
	tail := horner(s2.hi, 1./7, 1./9, 1./11, 1./13, 1./15, 1./17, 1./19, 1./21, 1./23, 1./25, 1./27, 1./29, 1./31, 1./33)
	p := third.add(s2.mul(fifth.add(s2.scale(tail))))
	twice := double{float64(2 * s.hi), float64(2 * s.lo)}
	return twice.add(twice.mul(s2).mul(p))
}

// log1pDouble is log(1+q) for q ≥ 0, likewise.
func log1pDouble(q double) double {
	if q.hi < 1./(1<<20) {
		// q − q²(1/2 − q/3 + q²/4 − q³/5)
		t := horner(q.hi, 0.5, -1./3, 1./4, -1./5)
		return q.add(q.mul(q).scale(-t))
	}
	u := sum2(1, q.hi)
	l := logDouble(u.hi)
	// log(u + d) = log u + d/u, the square of d/u being below 2^-106
	return l.add(double{(u.lo + q.lo) / u.hi, 0})
}

// expDouble is e^x, rounded once from a result with a relative error near 2^-64; it underflows to 0 and overflows to +Inf.
//
// x = k·ln 2 + r with |r| ≤ ln(2)/2; e^r is its Taylor series, the first terms to twice the precision.
func expDouble(x double) float64 {
	switch {
	case math.IsNaN(x.hi):
		return x.hi
	case x.hi > 710:
		return math.Inf(1)
	case x.hi < -746:
		return 0
	}
	k := math.Round(x.hi / ln2.hi)
	r := x.add(ln2.scale(-k))
	tail := horner(r.hi, 1./120, 1./720, 1./5040, 1./40320, 1./362880, 1./3628800, 1./39916800, 1./479001600,
		1./6227020800, 1./87178291200, 1./1307674368000, 1./20922789888000, 1./355687428096000)
	p := twentyFourth.add(r.scale(tail))
	p = sixth.add(r.mul(p))
	p = double{0.5, 0}.add(r.mul(p))
	p = r.add(r.mul(r).mul(p))
	return ldexp2(double{1, 0}.add(p), int(k))
}

// ldexp2 is (x.hi + x.lo)·2^k for x between 1/2 and 2, rounded once also where the result is subnormal.
func ldexp2(x double, k int) float64 {
	if k >= -1021 || k == -1022 && x.hi >= 1 {
		return math.Ldexp(x.hi+x.lo, k)
	}
	// The last place of shift + x is that of the smallest subnormal, times 2^-k: the bits below it go in one rounding.
	shift := math.Ldexp(1, -1022-k)
	s := sum2(shift, x.hi)
	return math.Ldexp(s.hi+(s.lo+x.lo)-shift, k)
}
