package strictmath

import (
	"math"
	"math/big"
	"testing"
)

// TestPowLimits: the special cases are those of the standard library, sign of zero included.
func TestPowLimits(t *testing.T) {
	inf := math.Inf(1)
	values := []float64{0, math.Copysign(0, -1), 1, -1, 0.5, -0.5, 2, -2, 3, -3, 2.5, -2.5, 1e300, -1e300, 5e-324, -5e-324, 1 << 53, -(1 << 53), 1<<53 + 2, 9007199254740991, inf, -inf, math.NaN()}
	for _, x := range values {
		for _, y := range values {
			got, want := Pow(x, y), math.Pow(x, y)
			special := want == 0 || math.IsInf(want, 0) || math.IsNaN(want) || math.Abs(want) == 1
			same := math.Float64bits(got) == math.Float64bits(want) || math.IsNaN(got) && math.IsNaN(want)
			if special && !same || !special && math.Abs(got-want) > 1e-13*math.Abs(want) {
				t.Errorf("Pow(%g, %g) = %g, the standard library says %g", x, y, got, want)
			}
		}
	}
}

// TestPowExact: a power of whole numbers that fits into 53 bits comes out exactly, and so does a whole root.
func TestPowExact(t *testing.T) {
	n := 0
	for base := int64(2); base < 2000; base++ {
		p := big.NewInt(1)
		for e := 1; ; e++ {
			p.Mul(p, big.NewInt(base))
			if p.BitLen() > 53 {
				break
			}
			want := float64(p.Int64())
			if got := Pow(float64(base), float64(e)); got != want {
				t.Errorf("%d^%d = %.17g, want %.17g", base, e, got, want)
			}
			if got := Pow(-float64(base), float64(e)); math.Abs(got) != want || (got < 0) != (e%2 == 1) {
				t.Errorf("(-%d)^%d = %.17g", base, e, got)
			}
			if e == 2 || e == 4 {
				if got := Pow(want, 1/float64(e)); got != float64(base) {
					t.Errorf("%g^(1/%d) = %.17g, want %d", want, e, got, base)
				}
			}
			n++
		}
	}
	for e := -1074; e < 1024; e++ {
		if got, want := Pow(2, float64(e)), math.Ldexp(1, e); got != want {
			t.Errorf("2^%d = %g, want %g", e, got, want)
		}
	}
	if n < 5000 {
		t.Errorf("only %d powers tried", n)
	}
}

// TestPowIntegerExponents compares with exact products.
func TestPowIntegerExponents(t *testing.T) {
	worst := 0.0
	for i, x := range between(300, 0.2, 5) {
		n := i%60 + 1
		want := bf(1)
		for range n {
			want.Mul(want, bf(x))
		}
		worst = max(worst, ulps(Pow(x, float64(n)), want), ulps(Pow(x, float64(-n)), num().Quo(bf(1), want)))
	}
	t.Logf("worst %.4f ulp", worst)
	if worst > 0.505 {
		t.Errorf("%.4f ulp, want at most 0.505", worst)
	}
}
