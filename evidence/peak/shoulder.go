package peak

import "math"

const (
	shoulderNoises   = 6.0  // standard deviations of the difference of two smoothed points
	shoulderFraction = 0.05 // of the flank's steepest fall
)

// hasShoulder tells whether a flank of the top, going down from the apex in the smoothed trace, flattens and then steepens
// again: a single peak does not, two fused ones may. The fall is taken over half a window, and the change must exceed
// both what noise explains, there too, and a twentieth of the steepest fall before.
func (d *detector) hasShoulder(p *top) bool {
	return d.steepensAgain(p, -1, p.left) || d.steepensAgain(p, +1, p.right)
}

func (d *detector) steepensAgain(p *top, step, stop int) bool {
	lag := d.p.SmoothingPoints / 2
	steepest, flattest := 0.0, math.Inf(1)
	for k := p.apex; (stop-k)*step >= lag; k += step {
		to := k + step*lag
		time := math.Abs(d.t[to] - d.t[k])
		fall := (d.s[k] - d.s[to]) / time
		if fall > steepest && math.IsInf(flattest, 1) {
			steepest = fall
			continue
		}
		change := max(float64(shoulderNoises*math.Sqrt2*d.smoothNoise/time), float64(shoulderFraction*steepest))
		if fall < steepest-change {
			flattest = min(flattest, max(fall, 0))
		}
		if fall > flattest+change && fall > flattest+float64(shoulderNoises*math.Sqrt2*d.scatter(k-2*step*lag, to+2*step*lag)/time) {
			return true
		}
	}
	return false
}
