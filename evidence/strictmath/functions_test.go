package strictmath

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// worst runs f over arguments and returns the largest error, as measured by one of ulps and relative.
func worst(args []float64, f func(float64) float64, want func(float64) *big.Float, measure func(float64, *big.Float) float64) (at, err float64) {
	for _, x := range args {
		if e := measure(f(x), want(x)); e > err {
			at, err = x, e
		}
	}
	return at, err
}

func between(n int, low, high float64) []float64 {
	r := rand.New(rand.NewPCG(1, uint64(n)))
	out := make([]float64, n)
	for i := range out {
		out[i] = low + float64((high-low)*r.Float64()) // rounded: the same arguments on every processor
	}
	return out
}

// TestAgainstExtendedPrecision compares with series in 1,300-bit arithmetic.
func TestAgainstExtendedPrecision(t *testing.T) {
	exp := func(x float64) *big.Float { return bigExp(bf(x)) }
	scaled := func(x float64) *big.Float {
		e := bigExp(num().Mul(bf(x), bf(x)))
		return e.Mul(e, bigErfc(x))
	}
	normal := func(z float64) *big.Float { // Φ(z) = erfc(−z/√2)/2, with √2 in extended precision
		x, _ := num().Quo(bf(-z), num().Sqrt(bf(2))).Float64()
		lost := num().Sub(num().Quo(bf(-z), num().Sqrt(bf(2))), bf(x))
		// erfc(x+d) ≈ erfc(x) − d·2/√π·exp(−x²)
		d := num().Mul(lost, bf(2))
		d.Quo(d, num().Sqrt(pi)).Mul(d, bigExp(num().Neg(num().Mul(bf(x), bf(x)))))
		r := num().Sub(bigErfc(x), d)
		return r.Quo(r, bf(2))
	}
	tests := []struct {
		name    string
		f       func(float64) float64
		want    func(float64) *big.Float
		args    []float64
		measure func(float64, *big.Float) float64
		limit   float64
	}{
		{"Exp, ulp", Exp, exp, append(between(300, -700, 700), between(100, -1, 1)...), ulps, 1},
		{"Log, ulp", Log, bigLog, append(between(60, 0, 3), between(60, 0, 1e9)...), ulps, 1},
		{"Erf, ulp", Erf, bigErf, between(100, 0.001, 5.5), ulps, 1},
		{"Erfc from -3 to 1.25, ulp", Erfc, bigErfc, between(80, -3, 1.25), ulps, 3},
		{"Erfc from 1.25 to 26, ulp", Erfc, bigErfc, between(80, 1.25, 26), ulps, 5},
		{"Erfcx from 0 to 26, ulp", Erfcx, scaled, between(80, 0, 26), ulps, 5},
		{"Erfcx from -5 to 0, relative", Erfcx, scaled, between(40, -5, 0), relative, 2e-15},
		{"NormCDF from -8 to 8, relative", NormCDF, normal, between(80, -8, 8), relative, 2e-14}, // 1 + z² roundings of the argument
	}
	for _, tt := range tests {
		at, err := worst(tt.args, tt.f, tt.want, tt.measure)
		t.Logf("%-34s worst %.3g at %g", tt.name, err, at)
		if err > tt.limit {
			t.Errorf("%s: %g at %g, want at most %g", tt.name, err, at, tt.limit)
		}
	}
}

// TestErfcxFarOut compares with the asymptotic series in extended precision (Abramowitz and Stegun 7.1.23), where it converges
// far enough.
func TestErfcxFarOut(t *testing.T) {
	for _, x := range []float64{28, 30, 100, 1e4, 1e8, 1e150, 1e300} {
		x2 := num().Mul(bf(x), bf(x))
		sum, term := bf(1), bf(1)
		for n := 1; n < 30; n++ {
			term.Mul(term, bf(float64(2*n-1))).Quo(term, x2).Quo(term, bf(2)).Neg(term)
			sum.Add(sum, term)
		}
		sum.Quo(sum, bf(x)).Quo(sum, num().Sqrt(pi))
		if e := ulps(Erfcx(x), sum); e > 3 {
			t.Errorf("Erfcx(%g): %g ulp", x, e)
		}
	}
}

// TestStudentAgainstClosedForm: for even ν the distribution is a finite sum, here in 1,300-bit arithmetic.
func TestStudentAgainstClosedForm(t *testing.T) {
	worstTail, worstQuantile := 0.0, 0.0
	for _, nu := range []int{2, 4, 6, 10, 18, 30, 60, 120, 1000} {
		for _, x := range append(between(20, 0.01, 3), between(20, 3, 40)...) {
			worstTail = max(worstTail, relative(TSF(x, float64(nu)), bigTSF(x, nu)))
		}
		for _, p := range []float64{0.6, 0.75, 0.9, 0.95, 0.975, 0.99, 0.995, 0.999, 0.9999} {
			// The quantile's error is that of the probability at the quantile, over the density.
			q := TQuantile(p, float64(nu))
			diff := num().Sub(bigTSF(q, nu), num().Sub(bf(1), bf(p)))
			d, _ := diff.Float64()
			worstQuantile = max(worstQuantile, math.Abs(d)/(tDensity(q, float64(nu))*q))
		}
	}
	t.Logf("upper tail: relative %.2g; quantile: relative %.2g", worstTail, worstQuantile)
	if worstTail > 1e-13 || worstQuantile > 1e-13 {
		t.Errorf("upper tail %.2g, quantile %.2g; want at most 1e-13", worstTail, worstQuantile)
	}
	// 2.228138851986274 is the 0.975 quantile for 10 degrees of freedom, to 16 digits, from the closed form.
	if got := TQuantile(0.975, 10); got != 2.228138851986274 {
		t.Errorf("t(0.975; 10) = %.17g", got)
	}
}

// TestQuantilesAgainstTables: printed tables of the normal and of Student's distribution (ISO 3207 and most textbooks, from memory).
func TestQuantilesAgainstTables(t *testing.T) {
	tests := []struct {
		got, want float64
	}{
		{NormQuantile(0.95), 1.645}, {NormQuantile(0.975), 1.960}, {NormQuantile(0.995), 2.576},
		{TQuantile(0.975, 1), 12.706}, {TQuantile(0.975, 2), 4.303}, {TQuantile(0.975, 4), 2.776}, {TQuantile(0.975, 19), 2.093},
		{TQuantile(0.95, 8), 1.860}, {TQuantile(0.995, 8), 3.355}, {TQuantile(0.025, 4), -2.776},
	}
	for _, tt := range tests {
		if math.Abs(tt.got-tt.want) > 0.0005 {
			t.Errorf("%g, want %g", tt.got, tt.want)
		}
	}
}

// TestAgainstGonum is a second computation by a general-purpose library.
func TestAgainstGonum(t *testing.T) {
	for _, p := range between(500, 1e-9, 1-1e-9) {
		if got, want := NormQuantile(p), distuv.UnitNormal.Quantile(p); math.Abs(got-want) > 1e-13*(1+math.Abs(want)) {
			t.Errorf("NormQuantile(%g) = %.17g, gonum says %.17g", p, got, want)
		}
		nu := 1 + 40*p
		student := distuv.StudentsT{Sigma: 1, Nu: nu}
		if got, want := TCDF(6*p-3, nu), student.CDF(6*p-3); math.Abs(got-want) > 1e-12 {
			t.Errorf("TCDF(%g, %g) = %.17g, gonum says %.17g", 6*p-3, nu, got, want)
		}
		if got, want := TQuantile(p, nu), student.Quantile(p); math.Abs(got-want) > 1e-9*(1+math.Abs(want)) {
			t.Errorf("TQuantile(%g, %g) = %.17g, gonum says %.17g", p, nu, got, want)
		}
	}
}

// TestAgainstStandardLibrary: package math is a second computation, though its last digits differ between processors.
func TestAgainstStandardLibrary(t *testing.T) {
	near := func(name string, x, got, want float64) {
		if math.Abs(got-want) > 4e-15*math.Abs(want) {
			t.Errorf("%s(%g) = %.17g, the standard library says %.17g", name, x, got, want)
		}
	}
	for _, x := range between(5000, -26, 26) {
		near("Exp", x, Exp(x), math.Exp(x))
		near("Log", x, Log(math.Abs(x)), math.Log(math.Abs(x)))
		near("log1p", x, log1p(math.Abs(x)), math.Log1p(math.Abs(x)))
		near("Erf", x/4, Erf(x/4), math.Erf(x/4))
		near("Erfc", x, Erfc(x), math.Erfc(x))
		u := (x + 26) / 52
		if v := 2*u - 1; math.Abs(v) < 0.9 { // farther out v has lost digits of u
			near("NormQuantile", u, NormQuantile(u), math.Sqrt2*math.Erfinv(v))
		}
		near("Pow", x, Pow(math.Abs(x), 3*u), math.Pow(math.Abs(x), 3*u))
	}
}

// TestGammaRatio: Γ(n+1/2)/Γ(n) and Γ(n+1)/Γ(n+1/2) from Γ(1/2) = √π and Γ(x+1) = x·Γ(x), in extended precision.
func TestGammaRatio(t *testing.T) {
	worst := 0.0
	ratio := num().Quo(bf(1), num().Sqrt(pi)) // Γ(1)/Γ(1/2)
	for i := 1; i <= 4000; i++ {
		x := float64(i) / 2
		worst = max(worst, ulps(gammaRatio(x), ratio))
		// Γ(x+1)/Γ(x+1/2) = x/(Γ(x+1/2)/Γ(x))
		ratio = num().Quo(bf(x), ratio)
	}
	t.Logf("worst %.2f ulp", worst)
	if worst > 2 {
		t.Errorf("%g ulp, want at most 2", worst)
	}
}

// TestStudentThroughout: the quantile undoes the distribution over all magnitudes of probability and of degrees of freedom, and
// both are monotone. No outside value is needed for that.
func TestStudentThroughout(t *testing.T) {
	for i, e := range between(3000, -300, -0.31) {
		if i%2 == 0 {
			e /= 300 // probabilities near the centre
		}
		q := Pow(10, e)
		if q >= 0.5 {
			q = 1 - q
		}
		nu := Pow(10, float64(i%601)/10-30) // 10^-30 to 10^30
		x := TQuantile(q, nu)
		switch {
		case math.IsInf(x, -1) && TSF(math.MaxFloat64, nu) > q:
			continue // it overflows rightly
		case math.IsNaN(x) || math.IsInf(x, 0) || x >= 0:
			t.Errorf("TQuantile(%g, %g) = %g", q, nu, x)
			continue
		}
		// An error of two units in t changes the tail by that times d log S/d log t, which is at most ν or t².
		if back, slope := TCDF(x, nu), 1+min(nu, float64(x*x)); math.Abs(back/q-1) > 4e-15+float64(5e-16*slope) {
			t.Errorf("TCDF(TQuantile(%g, %g)) = %g", q, nu, back)
		}
		if TQuantile(float64(q*1.01), nu) < x || TSF(float64(-x*1.01), nu) > TSF(-x, nu) {
			t.Errorf("not monotone near %g with %g degrees of freedom", x, nu)
		}
		if got := TQuantile(1-0x1p-40, nu); got != -TQuantile(0x1p-40, nu) {
			t.Errorf("not symmetric with %g degrees of freedom: %g", nu, got)
		}
	}
}

func TestEdges(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	tests := []struct {
		name      string
		got, want float64
	}{
		{"Exp(0)", Exp(0), 1}, {"Exp(-Inf)", Exp(-inf), 0}, {"Exp(710)", Exp(710), inf}, {"Exp(-746)", Exp(-746), 0},
		{"Exp of a subnormal result", Exp(-745), 5e-324}, {"Exp(NaN)", Exp(nan), nan},
		{"Log(1)", Log(1), 0}, {"Log(0)", Log(0), -inf}, {"Log(-1)", Log(-1), nan}, {"Log(Inf)", Log(inf), inf},
		{"Erf(0)", Erf(0), 0}, {"Erfc(0)", Erfc(0), 1}, {"Erfc(30)", Erfc(30), 0}, {"Erfc(-30)", Erfc(-30), 2}, {"Erfcx(0)", Erfcx(0), 1}, {"Erfcx(-27)", Erfcx(-27), inf},
		{"Erfcx(Inf)", Erfcx(inf), 0}, {"NormCDF(0)", NormCDF(0), 0.5}, {"NormQuantile(0)", NormQuantile(0), -inf}, {"NormQuantile(1)", NormQuantile(1), inf},
		{"NormQuantile(0.5)", NormQuantile(0.5), 0}, {"NormQuantile(2)", NormQuantile(2), nan},
		{"TSF(0, 3)", TSF(0, 3), 0.5}, {"TSF(Inf, 3)", TSF(inf, 3), 0}, {"TSF(1, 0)", TSF(1, 0), nan}, {"TQuantile(0.5, 3)", TQuantile(0.5, 3), 0},
		{"TSF(-Inf, 3)", TSF(-inf, 3), 1}, {"TCDF(Inf, 3)", TCDF(inf, 3), 1}, {"TCDF(NaN, 3)", TCDF(nan, 3), nan}, {"TSF(1, NaN)", TSF(1, nan), nan},
		{"TSF of a subnormal t", TSF(5e-324, 3), 0.5}, {"TSF with subnormal degrees of freedom", TSF(1e300, 5e-324), 0.5}, {"TSF with the most", TSF(2, math.MaxFloat64), NormSF(2)},
		{"TQuantile that overflows", TQuantile(0.01, 1e-3), -inf}, {"TQuantile(0.4, 1e-200)", TQuantile(0.4, 1e-200), -inf}, {"TQuantile(0.6, 5e-324)", TQuantile(0.6, 5e-324), inf},
		{"TQuantile(NaN, 3)", TQuantile(nan, 3), nan}, {"NormCDF(NaN)", NormCDF(nan), nan},
		{"NormSF(Inf)", NormSF(inf), 0}, {"NormSF(-Inf)", NormSF(-inf), 1}, {"NormSF(39)", NormSF(39), 0}, {"NormSF(-39)", NormSF(-39), 1}, {"NormQuantile(NaN)", NormQuantile(nan), nan},
		{"Erf(NaN)", Erf(nan), nan}, {"Erf(-Inf)", Erf(-inf), -1}, {"Erf of a subnormal", Erf(5e-324), 5e-324}, {"Erfc(NaN)", Erfc(nan), nan}, {"Erfcx(NaN)", Erfcx(nan), nan},
		{"Log(NaN)", Log(nan), nan}, {"Log(-Inf)", Log(-inf), nan}, {"Exp(Inf)", Exp(inf), inf}, {"Exp(1e300)", Exp(1e300), inf}, {"Exp(-1e300)", Exp(-1e300), 0},
		{"Sum with NaN", Sum([]float64{1, nan}), nan}, {"Sum with infinities", Sum([]float64{inf, -inf}), nan}, {"Dot with infinity", Dot([]float64{1, inf}, []float64{1, 1}), inf}, {"Mean of nothing", Mean(nil), nan},
		{"TQuantile(0.975, Inf)", TQuantile(0.975, inf), NormQuantile(0.975)}, {"TQuantile(1, 3)", TQuantile(1, 3), inf}, {"TQuantile(0.9, -1)", TQuantile(0.9, -1), nan},
		{"Sum of nothing", Sum(nil), 0}, {"Sum with cancellation", Sum([]float64{1, 1e100, 1, -1e100}), 2}, {"Sum that overflows", Sum([]float64{math.MaxFloat64, math.MaxFloat64}), inf},
		{"Dot with cancellation", Dot([]float64{1e15, 1, -1e15}, []float64{1e15, 1, 1e15}), 1},
		{"Mean", Mean([]float64{1, 2, 6}), 3}, {"SD", SD([]float64{2, 4, 4, 4, 5, 5, 7, 9}), math.Sqrt(32.0 / 7)}, {"SD of one", SD([]float64{1}), nan},
	}
	for _, tt := range tests {
		if tt.got != tt.want && !(math.IsNaN(tt.got) && math.IsNaN(tt.want)) {
			t.Errorf("%s = %g, want %g", tt.name, tt.got, tt.want)
		}
	}
}
