package simulate

import (
	"fmt"
	"math"
)

// A Detector turns a signal into what is recorded.
type Detector struct {
	Baseline   float64 // counts at the start of the trace
	Drift      float64 // counts that the baseline rises by to the end
	Wave       float64 // half height of a slow wave on the baseline, one period in the trace, counts
	Electronic float64 // standard deviation of the noise without signal, counts
	Gain       float64 // counts for an ion: the variance of counting is Gain times the signal
}

// maxPoints of a trace.
const maxPoints = 1 << 20

// Record acquires peaks from start to end (minutes) every step minutes. Intensities are rounded to 32-bit floats, as files hold
// them, and never below zero. Counting is taken as normal with the variance of a Poisson count, which holds for many ions.
//
// It is an error if fewer than two points or more than 1,048,576 come out, or one that is not a finite 32-bit number.
func (d Detector) Record(peaks []Peak, start, end, step float64, noise *Stream) (timeMin, intensity []float64, err error) {
	steps := math.Floor((end-start)/step + 1e-9) // 1e-9: the last point is not lost to the rounding of the quotient
	if !(step > 0) || !(steps >= 1) || steps >= maxPoints {
		return nil, nil, fmt.Errorf("simulate: a trace from %g min to %g min every %g min, want 2 to %d points", start, end, step, maxPoints)
	}
	n := int(steps) + 1
	timeMin, intensity = make([]float64, n), make([]float64, n)
	phase := noise.Uniform()
	for i := range n {
		t := math.Round((start+float64(step*float64(i)))*1e6) / 1e6
		x := float64(i) / float64(n-1)
		signal := d.Baseline + float64(d.Drift*x) + float64(d.Wave*triangle(x+phase))
		for _, p := range peaks {
			signal += p.At(t)
		}
		sd := math.Sqrt(float64(d.Electronic*d.Electronic) + float64(d.Gain*max(signal, 0)))
		y := float64(float32(max(0, signal+float64(sd*noise.Normal()))))
		if math.IsNaN(y) || math.IsInf(y, 0) {
			return nil, nil, fmt.Errorf("simulate: an intensity of %g counts at %g min, want a finite 32-bit number", y, t)
		}
		timeMin[i], intensity[i] = t, y
	}
	return timeMin, intensity, nil
}

// triangle is a wave of period 1 between -1 and 1, smoothed by a cubic: it needs no sine, whose bits differ between processors.
func triangle(x float64) float64 {
	x -= math.Floor(x)
	t := 1 - math.Abs(float64(4*x)-2)
	return float64(t * (1.5 - float64(0.5*t*t)))
}
