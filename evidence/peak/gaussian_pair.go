package peak

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// GaussianPairDrop is the relative error that the perpendicular drop makes in the two areas of a pair of Gaussians, in closed form.
// Means and standard deviations are in minutes, the first mean is the smaller. valley is false, and the errors 0, where the sum of
// the two has no minimum between the means: then there is nothing to drop from.
//
// Derivation. With areas A₁, A₂ and Φ the normal distribution function, the part of the trace before the time v is
//
//	A₁·Φ((v−t₁)/σ₁) + A₂·Φ((v−t₂)/σ₂),
//
// of which A₁ is the truth. So the first area is wrong by what it wins of the second peak's front less what it loses of its own tail,
//
//	e = A₂·Φ((v−t₂)/σ₂) − A₁·Φ((t₁−v)/σ₁),
//
// and the second by −e, for the sum is right. The drop stands at the valley v, where the derivative of the sum,
// −A₁/σ₁²·z₁φ(z₁) − A₂/σ₂²·z₂φ(z₂) with z = (v−t)/σ, changes from falling to rising. Pairs of equal width and height have e = 0;
// of unequal height, the smaller is given too little where the larger tail is cut off in its favour less than it loses.
func GaussianPairDrop(area1, mean1, sd1, area2, mean2, sd2 float64) (error1, error2 float64, valley bool) {
	if !(area1 > 0 && area2 > 0 && sd1 > 0 && sd2 > 0 && mean1 < mean2) || !finiteValue(area1+area2+sd1+sd2+mean1+mean2) {
		return 0, 0, false
	}
	slope := func(v float64) float64 {
		z1, z2 := (v-mean1)/sd1, (v-mean2)/sd2
		return -float64(area1/sd1/sd1*z1*strictmath.Exp(-float64(z1*z1/2))) - float64(area2/sd2/sd2*z2*strictmath.Exp(-float64(z2*z2/2)))
	}
	value := func(v float64) float64 {
		z1, z2 := (v-mean1)/sd1, (v-mean2)/sd2
		return float64(area1/sd1*strictmath.Exp(-float64(z1*z1/2))) + float64(area2/sd2*strictmath.Exp(-float64(z2*z2/2)))
	}
	// The valley is looked for on a grid and then by halving.
	const steps = 2000
	at := func(i int) float64 { return mean1 + float64((mean2-mean1)*float64(i))/steps }
	low := 0
	for i := 1; i <= steps; i++ {
		if value(at(i)) < value(at(low)) {
			low = i
		}
	}
	if low == 0 || low == steps {
		return 0, 0, false
	}
	lo, hi := at(low-1), at(low+1)
	for {
		v := float64((lo + hi) / 2)
		if !(v > lo && v < hi) {
			break
		}
		if slope(v) < 0 {
			lo = v
		} else {
			hi = v
		}
	}
	e := float64(area2*strictmath.NormCDF((lo-mean2)/sd2)) - float64(area1*strictmath.NormSF((lo-mean1)/sd1))
	if !finiteValue(e / math.Min(area1, area2)) {
		return 0, 0, false
	}
	return e / area1, -e / area2, true
}
