package render

import "math"

// bell is a normal curve of height 1 about a value, for drawing.
func bell(value, u, low, high float64) (xs, ys []float64) {
	const points = 160
	if !(high > low) {
		return nil, nil
	}
	for i := range points + 1 {
		x := low + (high-low)*float64(i)/points
		z := (x - value) / u
		xs, ys = append(xs, x), append(ys, math.Exp(-z*z/2))
	}
	return xs, ys
}
