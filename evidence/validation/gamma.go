package validation

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// logGamma is the logarithm of Γ(x) for x > 0: by Γ(x+1) = x·Γ(x) up to where Stirling's series holds.
//
// Source: Abramowitz and Stegun 6.1.41 (from memory).
func logGamma(x float64) float64 {
	product := 1.0
	for x < 16 {
		product = float64(product * x)
		x++
	}
	r := 1 / x
	r2 := float64(r * r)
	s := 1.0/1188 - float64(r2*(691.0/360360))
	s = -1.0/1680 + float64(r2*s)
	s = 1.0/1260 + float64(r2*s)
	s = -1.0/360 + float64(r2*s)
	s = 1.0/12 + float64(r2*s)
	const halfLog2Pi = 0.91893853320467274178
	return float64((x-0.5)*strictmath.Log(x)) - x + halfLog2Pi + float64(s*r) - strictmath.Log(product)
}

// betaUpper is 1 − I_x(a, b), given x and y = 1 − x, by the continued fraction on the side where it is quick.
//
// Source: Abramowitz and Stegun 26.5.8, with Lentz's method (from memory).
func betaUpper(a, b, x, y float64) float64 {
	if x <= 0 {
		return 1
	}
	if y <= 0 {
		return 0
	}
	front := strictmath.Exp(logGamma(a+b) - logGamma(a) - logGamma(b) + float64(a*strictmath.Log(x)) + float64(b*strictmath.Log(y)))
	if x < (a+1)/(a+b+2) {
		return 1 - float64(front*betaFraction(a, b, x))/a
	}
	return float64(front*betaFraction(b, a, y)) / b
}

func betaFraction(a, b, x float64) float64 {
	const tiny = 1e-300
	away := func(v float64) float64 {
		if math.Abs(v) < tiny {
			return tiny
		}
		return v
	}
	c, d := 1.0, 1/away(1-float64((a+b)*x)/(a+1))
	h := d
	for m := 1.0; m < 10000; m++ {
		twice := a + float64(2*m)
		e := float64(m*(b-m)*x) / ((twice - 1) * twice)
		d = 1 / away(1+float64(e*d))
		c = away(1 + e/c)
		h = float64(h * float64(d*c))
		e = -float64((a+m)*(a+b+m)*x) / (twice * (twice + 1))
		d = 1 / away(1+float64(e*d))
		c = away(1 + e/c)
		step := float64(d * c)
		h = float64(h * step)
		if math.Abs(step-1) < 1e-16 {
			break
		}
	}
	return h
}

// fUpper is the probability that F with n and m degrees of freedom exceeds f ≥ 0.
//
// Source: Abramowitz and Stegun 26.6.2 (from memory).
func fUpper(f, n, m float64) float64 {
	nf := float64(n * f)
	if math.IsInf(nf, 1) {
		return 0
	}
	return betaUpper(n/2, m/2, nf/(nf+m), m/(nf+m))
}

// chiSquareCDF is the probability that χ² with nu degrees of freedom is at most x: the series of the incomplete gamma function, or its
// continued fraction beyond x/2 > ν/2 + 1.
//
// Source: Abramowitz and Stegun 6.5.29, 6.5.31 (from memory).
func chiSquareCDF(x, nu float64) float64 {
	if x <= 0 {
		return 0
	}
	a, z := nu/2, x/2
	front := strictmath.Exp(float64(a*strictmath.Log(z)) - z - logGamma(a))
	if z < a+1 {
		term, sum := 1/a, 1/a
		for k := 1.0; k < 100000 && term > float64(sum*1e-17); k++ {
			term = float64(term * (z / (a + k)))
			sum += term
		}
		return float64(front * sum)
	}
	b := z + 1 - a
	c, d := 1e300, 1/b
	h := d
	for k := 1.0; k < 100000; k++ {
		an := -float64(k * (k - a))
		b += 2
		d = 1 / (float64(an*d) + b)
		c = b + an/c
		step := float64(d * c)
		h = float64(h * step)
		if math.Abs(step-1) < 1e-16 {
			break
		}
	}
	return 1 - float64(front*h)
}

// chiSquareQuantile is the x with chiSquareCDF(x) = p, by halving an interval.
func chiSquareQuantile(p, nu float64) float64 {
	low, high := 0.0, nu+10
	for chiSquareCDF(high, nu) < p && high < 1e300 {
		high = float64(high * 2)
	}
	for range 200 {
		middle := low + (high-low)/2
		if middle <= low || middle >= high {
			break
		}
		if chiSquareCDF(middle, nu) < p {
			low = middle
		} else {
			high = middle
		}
	}
	return high
}
