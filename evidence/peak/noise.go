package peak

import "math"

const (
	madToSD     = 1.482602218505602 // 1/Φ⁻¹(3/4)
	lowerToSD   = 3.138344200661294 // 1/Φ⁻¹(5/8)
	clipWidth   = 3.0               // in standard deviations
	clipSD      = 1.0136            // standard deviation of a normal over that of one cut at ±3
	minQuiet    = 10                // differences that make an estimate
	minBlocks   = 3
	floorFactor = 0x1p-30
)

// blockSizes are the blocks of blockNoise, each with the median of the chi-square distribution with points - 2 degrees of
// freedom, divided by them (tables: 21.337 for 22, 9.342 for 10).
var blockSizes = [...]struct {
	points int
	median float64
}{{24, 21.337045 / 22}, {12, 9.341818 / 10}}

// blockQuartile is the lower quartile of that distribution for 22, divided by 22 (tables: 17.240).
const blockQuartile = 17.239619 / 22

// residuals writes to r, for each point but the first and last, its distance from the straight line through its two
// neighbours, divided by the factor by which that distance is noisier than one point. A straight drift leaves nothing.
func residuals(t, y, r []float64) {
	n := len(y)
	r[0], r[n-1] = 0, 0
	for i := 1; i < n-1; i++ {
		w := (t[i] - t[i-1]) / (t[i+1] - t[i-1])
		v := 1 - w
		d := y[i] - y[i-1] - float64(w*(y[i+1]-y[i-1]))
		r[i] = d / math.Sqrt(1+float64(w*w)+float64(v*v))
	}
}

// firstNoise estimates the noise before any peak is known, from the lower quartile of the residuals' size: half of the trace
// and more may be peaks. Where that is zero the median of those above zero is taken; without any it is 0.
func firstNoise(r, scratch []float64) float64 {
	d := scratch[:0]
	for _, v := range r[1 : len(r)-1] {
		d = append(d, math.Abs(v))
	}
	if q := nth(d, len(d)/4); q > 0 {
		return float64(q * lowerToSD)
	}
	above := d[:0]
	for _, v := range d {
		if v > 0 {
			above = append(above, v)
		}
	}
	if len(above) == 0 {
		return 0
	}
	return float64(nth(above, len(above)/2) * madToSD)
}

// quietNoise estimates the noise from the points marked quiet, as Detect says, and returns with it how many points were
// used; they are too few when it returns 0 points.
func quietNoise(t, y, r []float64, quiet []bool, scratch []float64) (float64, int) {
	d := scratch[:0]
	for i := 1; i < len(r)-1; i++ {
		if quiet[i-1] && quiet[i] && quiet[i+1] {
			d = append(d, math.Abs(r[i]))
		}
	}
	n := len(d)
	if n < minQuiet {
		return 0, 0
	}
	clip := float64(clipWidth * madToSD * nth(d, n/2))
	if clip == 0 { // more than half of the points are alike, as in thresholded counts
		clip = math.Inf(1)
	}
	var sum float64
	kept := 0
	for _, v := range d {
		if v <= clip {
			sum += float64(v * v)
			kept++
		}
	}
	sd := math.Sqrt(sum / float64(kept))
	if !math.IsInf(clip, 1) {
		sd = float64(sd * clipSD)
	}
	return max(sd, blockNoise(t, y, quiet, scratch)), n
}

// blockNoise returns the noise about straight lines through blocks of quiet points in a row: the median of their
// variances. Noise that a filter has made smooth shows here and not in the differences. Blocks are of 24 points if there
// are three such, or else of 12; with fewer than three of those it is 0.
func blockNoise(t, y []float64, quiet []bool, scratch []float64) float64 {
	for _, size := range blockSizes {
		v := blockVariances(t, y, quiet, size.points, scratch)
		if len(v) < minBlocks {
			continue
		}
		m := nth(v, len(v)/2)
		if len(v)%2 == 0 {
			m = (m + nth(v, len(v)/2-1)) / 2
		}
		return math.Sqrt(m / size.median)
	}
	return 0
}

// firstBlockNoise is that before any peak is known, from the lower quartile of the blocks of 24 points.
func firstBlockNoise(t, y []float64, scratch []float64) float64 {
	v := blockVariances(t, y, nil, blockSizes[0].points, scratch)
	if len(v) < minBlocks {
		return 0
	}
	return math.Sqrt(nth(v, len(v)/4) / blockQuartile)
}

// blockVariances returns the variances of the blocks; all points are quiet where quiet is nil.
func blockVariances(t, y []float64, quiet []bool, size int, scratch []float64) []float64 {
	v := scratch[:0]
	run := 0
	for i := range y {
		if quiet != nil && !quiet[i] {
			run = 0
			continue
		}
		if run++; run == size {
			v = append(v, variance(t[i+1-run:i+1], y[i+1-run:i+1]))
			run = 0
		}
	}
	return v
}

// variance of the points about their least-squares line.
func variance(t, y []float64) float64 {
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
	b := sty / stt
	var ss float64
	for i := range t {
		e := y[i] - y[0] - ym - float64(b*(t[i]-t[0]-tm))
		ss += float64(e * e)
	}
	return ss / (n - 2)
}
