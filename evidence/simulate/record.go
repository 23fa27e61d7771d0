package simulate

import (
	"math"

	"assaywrit/evidence/trace"
)

// A Detector turns a signal into what is recorded.
type Detector struct {
	Baseline   float64 // counts at the start of the trace
	Drift      float64 // counts that the baseline rises by to the end
	Wave       float64 // half height of a slow wave on the baseline, counts
	Electronic float64 // standard deviation of the noise without signal, counts
	Gain       float64 // counts for an ion: the variance of counting is Gain times the signal
}

// Record acquires peaks from start to end (minutes) every step minutes. Intensities are rounded to 32-bit floats, as files hold
// them, and never below zero.
func (d Detector) Record(peaks []Peak, start, end, step float64, noise *Stream) (timeMin, intensity []float64) {
	n := int(math.Floor((end-start)/step)) + 1
	phase := noise.Uniform()
	for i := range n {
		t := math.Round((start+float64(step*float64(i)))*1e6) / 1e6
		x := float64(i) / float64(n-1)
		signal := d.Baseline + float64(d.Drift*x) + float64(d.Wave*triangle(x+phase))
		for _, p := range peaks {
			signal += p.At(t)
		}
		sd := math.Sqrt(float64(d.Electronic*d.Electronic) + float64(d.Gain*max(signal, 0)))
		y := max(0, signal+float64(sd*noise.Normal()))
		timeMin = append(timeMin, t)
		intensity = append(intensity, float64(float32(y)))
	}
	return timeMin, intensity
}

// triangle is a wave of period 1 between -1 and 1, smoothed by a cubic: it needs no sine, whose bits differ between processors.
func triangle(x float64) float64 {
	x -= math.Floor(x)
	t := 1 - math.Abs(float64(4*x)-2)
	return float64(t * (1.5 - float64(0.5*t*t)))
}

// A Run is one injection as an instrument would write it down.
type Run struct {
	ID         string // of the run in the file
	SampleCode string
	StartTime  string // RFC 3339
	Model      string // description of the instrument
	Serial     string
	Software   string
	Version    string
	Traces     []trace.Chromatogram
}
