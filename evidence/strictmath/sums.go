// Package strictmath is arithmetic whose bits are the same on every processor.
//
// Go may fuse x*y + z into one rounding on some processors, and several functions of package math are written in assembly
// that rounds otherwise: the same program then gives other last digits elsewhere. Here every product that is added is
// rounded by a conversion, sums go in index order, and the elementary functions are plain Go. math.Sqrt, Abs, Floor, Ldexp,
// Frexp and FMA are exact everywhere and are used as they are.
package strictmath

import "math"

// Sum adds x in index order with Neumaier's compensation: the error is that of one rounding of the result, but for terms in
// n·2^-106 of the sum of magnitudes. The sum of nothing is 0.
//
// Source: A. Neumaier, Z. angew. Math. Mech. 54 (1974) 39-51 (from memory).
func Sum(x []float64) float64 {
	var sum, lost float64
	for _, v := range x {
		t := sum + v
		if math.Abs(sum) >= math.Abs(v) {
			lost += (sum - t) + v
		} else {
			lost += (v - t) + sum
		}
		sum = t
	}
	if math.IsInf(sum, 0) || math.IsNaN(sum) {
		return sum // the compensation of an overflow is NaN
	}
	return sum + lost
}

// Dot adds the products x[i]·y[i] in index order, as if in twice the precision (the error of each product is had exactly from
// a fused multiply-add, and that of each addition is kept). It panics where the lengths differ.
//
// Source: T. Ogita, S. M. Rump, S. Oishi, SIAM J. Sci. Comput. 26 (2005) 1955-1988, algorithm Dot2 (from memory).
func Dot(x, y []float64) float64 {
	if len(x) != len(y) {
		panic("strictmath: internal error: Dot of different lengths")
	}
	var sum, lost float64
	for i, v := range x {
		p := float64(v * y[i])
		e := math.FMA(v, y[i], -p)
		t := sum + p
		b := t - sum
		lost += ((sum - (t - b)) + (p - b)) + e
		sum = t
	}
	if math.IsInf(sum, 0) || math.IsNaN(sum) {
		return sum
	}
	return sum + lost
}

// Mean is the sum over the count; of nothing it is NaN.
func Mean(x []float64) float64 { return Sum(x) / float64(len(x)) }

// SD is the sample standard deviation (n − 1), by two passes; of fewer than two values it is NaN.
func SD(x []float64) float64 {
	if len(x) < 2 {
		return math.NaN()
	}
	mean := Mean(x)
	d := make([]float64, len(x))
	for i, v := range x {
		d[i] = v - mean
	}
	s := Sum(d) // what rounding of the mean leaves
	return math.Sqrt((Dot(d, d) - float64(s*s)/float64(len(x))) / float64(len(x)-1))
}
