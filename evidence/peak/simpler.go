package peak

import "math"

const simplerZ = 2.3263 // standard normal deviate that one in a hundred exceeds

// Simpler tells whether the fit with one common shape explains a cluster as well as the one with shapes of their own, and so is the one to
// take: what the free shapes lower the chi-square by is no more than chance would in 99 of 100 cases. Both must be fits of the same points
// with the noise stated, the first with SharedShape; otherwise it is false.
//
// The fall over the degrees of freedom spent, over the reduced chi-square of the free fit where that is above 1, is compared with a
// chi-square distribution by the normal deviate of Wilson and Hilferty.
func Simpler(shared, free *JointFit) bool {
	spent := shared.Freedom - free.Freedom
	if !shared.SharedShape || free.SharedShape || shared.Points != free.Points || spent <= 0 || !(free.ReducedChiSquare > 0) {
		return false
	}
	fall := float64(shared.ReducedChiSquare*float64(shared.Freedom)) - float64(free.ReducedChiSquare*float64(free.Freedom))
	fall /= math.Max(free.ReducedChiSquare, 1)
	return !(fall > 0) || chiSquareZ(fall/float64(spent), spent) <= simplerZ
}
