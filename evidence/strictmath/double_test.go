package strictmath

import (
	"math"
	"math/big"
	"testing"
)

func exactly(d double) *big.Float { return num().Add(bf(d.hi), bf(d.lo)) }

func (x double) relativeTo(want *big.Float) float64 {
	d := num().Sub(exactly(x), want)
	r, _ := d.Quo(d, want).Float64()
	return math.Abs(r)
}

// TestDoubleConstants: each is its closed form to twice the precision.
func TestDoubleConstants(t *testing.T) {
	over := func(n float64) *big.Float { return num().Quo(bf(1), bf(n)) }
	for _, tt := range []struct {
		name string
		got  double
		want *big.Float
	}{
		{"ln 2", ln2, bigLog(2)}, {"√½", sqrtHalf, num().Sqrt(bf(0.5))}, {"1/3", third, over(3)}, {"1/5", fifth, over(5)},
		{"1/6", sixth, over(6)}, {"1/24", twentyFourth, over(24)},
	} {
		if e := tt.got.relativeTo(tt.want); e > 1e-32 {
			t.Errorf("%s is %g off", tt.name, e)
		}
	}
}

// TestDoubleOperations compares with exact arithmetic on numbers of all magnitudes and signs.
func TestDoubleOperations(t *testing.T) {
	limit := math.Ldexp(1, -100)
	a, b, scale := between(500, -1, 1), between(501, -1, 1), between(502, -40, 40)
	for i := range a {
		x := sum2(a[i], float64(a[(i+1)%500]*1e-17))
		y := sum2(math.Ldexp(b[i], int(scale[i])), math.Ldexp(b[(i+7)%500], int(scale[i])-60))
		for _, tt := range []struct {
			name string
			got  double
			want *big.Float
		}{
			{"product", x.mul(y), num().Mul(exactly(x), exactly(y))},
			{"quotient", x.div(y), num().Quo(exactly(x), exactly(y))},
			{"scaled", x.scale(b[i]), num().Mul(exactly(x), bf(b[i]))},
		} {
			if e := tt.got.relativeTo(tt.want); e > limit {
				t.Errorf("%s of %v and %v: relative error %g", tt.name, x, y, e)
			}
		}
		exact := num().Add(exactly(x), exactly(y))
		larger, _ := num().Add(num().Abs(exactly(x)), num().Abs(exactly(y))).Float64()
		off, _ := num().Sub(exactly(x.add(y)), exact).Float64()
		if math.Abs(off) > float64(limit*larger) {
			t.Errorf("sum of %v and %v is off by %g", x, y, off)
		}
	}
}

// TestLogAndExpDouble holds the logarithm to 2^-65 and the exponential to just above half a unit of the last place.
func TestLogAndExpDouble(t *testing.T) {
	worstLog, worstSmall, worstExp := 0.0, 0.0, 0.0
	for i, x := range append(between(60, 0, 3), between(30, 0, 1e300)...) {
		worstLog = max(worstLog, logDouble(x).relativeTo(bigLog(x)))
		q := math.Ldexp(x, -i) // log(1+q) = 2·artanh(q/(2+q)), as a series
		if q < 1 {
			s := num().Quo(bf(q), num().Add(bf(2), bf(q)))
			s2, sum, power := num().Mul(s, s), num().Set(s), num().Set(s)
			for n := 3; n < 300; n += 2 {
				power.Mul(power, s2)
				sum.Add(sum, num().Quo(power, bf(float64(n))))
			}
			worstSmall = max(worstSmall, log1pDouble(double{q, 0}).relativeTo(sum.Mul(sum, bf(2))))
		}
	}
	for _, x := range between(400, -707, 709) {
		e := double{x, math.Ldexp(x, -55)}
		worstExp = max(worstExp, ulps(expDouble(e), bigExp(exactly(e))))
	}
	t.Logf("logarithm: relative %.2g; of 1+q: %.2g; exponential: %.4f ulp", worstLog, worstSmall, worstExp)
	if limit := math.Ldexp(1, -65); worstLog > limit || worstSmall > limit || worstExp > 0.502 {
		t.Errorf("logarithm %g and %g, want at most %g; exponential %g ulp, want at most 0.502", worstLog, worstSmall, limit, worstExp)
	}
}

// TestExpDoubleSubnormal: one rounding also where the result is subnormal.
func TestExpDoubleSubnormal(t *testing.T) {
	for _, x := range between(200, -745.1, -707) {
		if e := ulps(expDouble(double{x, 0}), bigExp(bf(x))); e > 0.502 {
			t.Errorf("e^%g: %.4f ulp", x, e)
		}
	}
}
