package peak

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// baseWidth is the width at the base: the distance, on the baseline, of the tangents at the steepest points of both flanks. A flank's
// steepest point and the slope there come from a cubic fitted by least squares to the window around each acquired point, an eighth
// of the points that stand above half height to either side; the cubic's own turning point of slope is taken where it lies in the
// window.
//
// Source: USP <621> and Ph. Eur. 2.2.46; tangents through the inflection points.
func (k *shape) baseWidth() (float64, bool) {
	start, ok1 := k.tangentFoot(-1)
	end, ok2 := k.tangentFoot(+1)
	return end - start, ok1 && ok2 && end > start
}

// tangentFoot is the time at which the steepest tangent of a flank meets the baseline.
func (k *shape) tangentFoot(step int) (float64, bool) {
	half := max(k.aboveHalf()/8, 3)
	low := k.height(k.top) / 5 // the steepest point of a flank stands far above
	best, foot := 0.0, 0.0
	for i := k.top; i >= k.left && i <= k.right && k.height(i) > low; i += step {
		if i-half < k.left || i+half > k.right {
			break
		}
		slope, at, ok := k.steepest(i, half)
		if rise := -float64(float64(step) * slope); ok && rise > best {
			best, foot = rise, at
		}
	}
	return foot, best > 0
}

// steepest fits the cubic around point i and returns its slope at its inflection, or at i itself where that lies outside of the
// window, and the time at which the tangent there meets the baseline.
func (k *shape) steepest(i, half int) (slope, foot float64, ok bool) {
	scale := (k.t[i+half] - k.t[i-half]) / 2
	rows, y := make([][]float64, 0, 2*half+1), make([]float64, 0, 2*half+1)
	for j := i - half; j <= i+half; j++ {
		u := (k.t[j] - k.t[i]) / scale
		u2 := float64(u * u)
		rows, y = append(rows, []float64{1, u, u2, float64(u2 * u)}), append(y, k.height(j))
	}
	fit, err := strictmath.WeightedLeastSquares(rows, y, nil)
	if err != nil {
		return 0, 0, false
	}
	c := fit.Coef
	u := 0.0
	if c[3] != 0 {
		if v := -c[2] / (3 * c[3]); math.Abs(v) <= 1 {
			u = v
		}
	}
	value := c[0] + float64(u*(c[1]+float64(u*(c[2]+float64(u*c[3])))))
	slope = c[1] + float64(u*(float64(2*c[2])+float64(3*u*c[3])))
	if slope == 0 {
		return 0, 0, false
	}
	foot = k.t[i] + float64(scale*(u-value/slope))
	return slope / scale, foot, finiteValue(foot)
}
