package strictmath

import (
	"math"
	"math/big"
)

// Extended precision, for tests: series with big floats of prec bits.
const prec = 1300

func bf(x float64) *big.Float { return new(big.Float).SetPrec(prec).SetFloat64(x) }

func num() *big.Float { return new(big.Float).SetPrec(prec) }

// bigExp is e^x by its Taylor series, after halving x until it is below 2^-8.
func bigExp(x *big.Float) *big.Float {
	halvings := 0
	r := num().Set(x)
	for r.MantExp(nil) > -8 && r.Sign() != 0 {
		r.Quo(r, bf(2))
		halvings++
	}
	sum, term := bf(1), bf(1)
	for n := 1; n < 400; n++ {
		term.Mul(term, r).Quo(term, bf(float64(n)))
		sum.Add(sum, term)
	}
	for range halvings {
		sum.Mul(sum, sum)
	}
	return sum
}

// bigLog is ln x by Newton's method on bigExp.
func bigLog(x float64) *big.Float {
	y := bf(math.Log(x))
	for range 6 {
		e := bigExp(num().Neg(y))
		e.Mul(e, bf(x)).Sub(e, bf(1)) // x·exp(−y) − 1
		y.Add(y, e)
		if e.Sign() == 0 || e.MantExp(nil) < -prec/2 {
			break
		}
	}
	e := bigExp(num().Neg(y))
	return y.Add(y, e.Mul(e, bf(x)).Sub(e, bf(1)))
}

// bigPi by Machin's formula.
func bigPi() *big.Float {
	arctan := func(inv float64) *big.Float {
		x := num().Quo(bf(1), bf(inv))
		x2 := num().Mul(x, x)
		sum, term := num().Set(x), num().Set(x)
		for n := 1; n < 1200; n++ {
			term.Mul(term, x2).Neg(term)
			sum.Add(sum, num().Quo(term, bf(float64(2*n+1))))
		}
		return sum
	}
	a, b := arctan(5), arctan(239)
	return a.Mul(a, bf(16)).Sub(a, b.Mul(b, bf(4)))
}

var pi = bigPi()

// bigErf is 2/√π·exp(−x²)·Σ 2ⁿx²ⁿ⁺¹/(2n+1)!! (Abramowitz and Stegun 7.1.6), whose terms are all positive.
func bigErf(x float64) *big.Float {
	x2 := num().Mul(bf(x), bf(x))
	sum, term := bf(x), bf(x)
	for n := 1; n < 6000; n++ {
		term.Mul(term, x2).Mul(term, bf(2)).Quo(term, bf(float64(2*n+1)))
		sum.Add(sum, term)
		if term.Sign() == 0 || term.MantExp(nil) < sum.MantExp(nil)-prec {
			break
		}
	}
	sum.Mul(sum, bf(2)).Mul(sum, bigExp(num().Neg(x2)))
	return sum.Quo(sum, num().Sqrt(pi))
}

func bigErfc(x float64) *big.Float { return num().Sub(bf(1), bigErf(x)) }

// bigTSF is the upper tail of Student's t for even ν in closed form (Abramowitz and Stegun 26.7.4): 1/2 − A/2 with
// A = sinθ·(1 + cos²θ/2 + 1·3·cos⁴θ/(2·4) + …), tanθ = t/√ν.
func bigTSF(t float64, nu int) *big.Float {
	t2 := num().Mul(bf(t), bf(t))
	den := num().Add(t2, bf(float64(nu)))
	cos2 := num().Quo(bf(float64(nu)), den)
	sin := num().Quo(bf(t), num().Sqrt(den))
	sum, term := bf(1), bf(1)
	for k := 1; k <= nu/2-1; k++ {
		term.Mul(term, cos2).Mul(term, bf(float64(2*k-1))).Quo(term, bf(float64(2*k)))
		sum.Add(sum, term)
	}
	a := sum.Mul(sum, sin)
	return a.Sub(bf(1), a).Quo(a, bf(2))
}

// ulps is how far got lies from want, in units of the last place of want.
func ulps(got float64, want *big.Float) float64 {
	w, _ := want.Float64()
	ulp := math.Nextafter(math.Abs(w), math.Inf(1)) - math.Abs(w)
	d, _ := num().Sub(bf(got), want).Float64()
	return math.Abs(d) / ulp
}

// relative is |got/want − 1|.
func relative(got float64, want *big.Float) float64 {
	d := num().Sub(bf(got), want)
	r, _ := d.Quo(d, want).Float64()
	return math.Abs(r)
}
