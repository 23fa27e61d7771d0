package peak

import "math"

// smooth writes the Savitzky–Golay smoothed y to s: at each point the value there of the parabola fitted by least squares
// to the window of m points centred on it, at their own times. Within half a window of either end it is the straight
// line fitted to the first or last m points. Evenly spaced times (to a thousandth of the mean step) take the tabulated
// weights.
//
// Source: A. Savitzky, M. J. E. Golay, Anal. Chem. 36 (1964) 1627, with the closed form of the weights for a parabola
// (from memory; checked in the tests against a general least-squares fit).
func smooth(t, y, s []float64, m int) {
	n, h := len(y), m/2
	if even(t) {
		w := evenWeights(m)
		for i := h; i < n-h; i++ {
			sum := float64(w[0] * y[i])
			for k := 1; k <= h; k++ {
				sum += float64(w[k] * (y[i-k] + y[i+k]))
			}
			s[i] = sum
		}
	} else {
		for i := h; i < n-h; i++ {
			s[i] = parabolaAt(t[i-h:i+h+1], y[i-h:i+h+1], h)
		}
	}
	for i := 0; i < h; i++ {
		s[i] = lineAt(t[:m], y[:m], t[i])
		s[n-1-i] = lineAt(t[n-m:], y[n-m:], t[n-1-i])
	}
}

func even(t []float64) bool {
	step := (t[len(t)-1] - t[0]) / float64(len(t)-1)
	for i := 1; i < len(t); i++ {
		if math.Abs(t[i]-t[i-1]-step) > step/1024 {
			return false
		}
	}
	return true
}

// evenWeights returns the weights of the middle point and of those 1, 2, … steps away from it.
func evenWeights(m int) [maxSmoothingPoints/2 + 1]float64 {
	var w [maxSmoothingPoints/2 + 1]float64
	den := m * (m*m - 4)
	for k := 0; k <= m/2; k++ {
		w[k] = 0.75 * float64(3*m*m-7-20*k*k) / float64(den)
	}
	return w
}

// parabolaAt fits a parabola to the points and returns its value at the one with index c.
func parabolaAt(t, y []float64, c int) float64 {
	scale := (t[len(t)-1] - t[0]) / float64(len(t)-1)
	var s1, s2, s3, s4, b0, b1, b2 float64
	for i := range t {
		u := (t[i] - t[c]) / scale
		d := y[i] - y[c]
		u2 := float64(u * u)
		s1 += u
		s2 += float64(u * u)
		s3 += float64(u2 * u)
		s4 += float64(u2 * u2)
		b0 += d
		b1 += float64(u * d)
		b2 += float64(u2 * d)
	}
	s0 := float64(len(t))
	m00 := float64(s2*s4) - float64(s3*s3)
	m01 := float64(s1*s4) - float64(s2*s3)
	m02 := float64(s1*s3) - float64(s2*s2)
	det := float64(s0*m00) - float64(s1*m01) + float64(s2*m02)
	if !(det > 0) {
		return y[c]
	}
	return y[c] + (float64(b0*m00)-float64(b1*m01)+float64(b2*m02))/det
}

// lineAt fits a straight line to the points and returns its value at time at.
func lineAt(t, y []float64, at float64) float64 {
	n := float64(len(t))
	var st, sy float64
	for i := range t {
		st += t[i] - t[0]
		sy += y[i] - y[0]
	}
	tm, ym := st/n, sy/n
	var stt, sty float64
	for i := range t {
		u := t[i] - t[0] - tm
		stt += float64(u * u)
		sty += float64(u * (y[i] - y[0] - ym))
	}
	return y[0] + ym + float64(sty/stt*(at-t[0]-tm))
}

// slope returns the median slope between points half the trace apart: the drift of the whole trace, which peaks that
// cover less than half of it do not move much. scratch must be as long as y.
func slope(t, y, scratch []float64) float64 {
	h := len(y) / 2
	d := scratch[:len(y)-h]
	for i := range d {
		d[i] = (y[i+h] - y[i]) / (t[i+h] - t[i])
	}
	return nth(d, len(d)/2)
}
