package peak

import (
	"errors"
	"math"
	"testing"
)

// Coverage of the 95 % interval, area ± 1.96 u, by the true area of the curve: 10,000 simulated peaks with automatic limits and estimated
// noise, S/N 10 to 1,000 (as height over noise, evenly in its logarithm), σ/τ 0.5 to 10, 30 to 120 points across the base, drift.
func TestAreaCoverage(t *testing.T) {
	if testing.Short() {
		t.Skip("10,000 simulated peaks")
	}
	const peaks = 10000
	var bins [4]struct{ n, in, pull, u float64 }
	inside, lost := 0.0, 0
	for seed := range uint64(peaks) {
		rng := seeded(seed)
		sn := math.Pow(10, 1+2*rng.Float64())
		ratio := 0.5 * math.Pow(20, rng.Float64())
		g := emg{1, 0, ratio, 1}
		_, h := g.apex()
		points := 30 + 90*rng.Float64()
		step := 4 * math.Hypot(ratio, 1) / points
		n := int(10 * points)
		g.mu = (float64(n)*0.45 + rng.Float64()) * step
		c := made(n, step, 20*h, 10*h/sn/(float64(n)*step), h/sn, rng, g)
		r, err := Detect(c, Parameters{SmoothingPoints: odd(points / 4), MinSN: 3, Shared: Drop})
		if err != nil {
			t.Fatal(err)
		}
		best := -1
		for i, k := range r.Peaks {
			if math.Abs(k.ApexMin-g.mu) < 3*ratio+3 && (best < 0 || k.Height > r.Peaks[best].Height) {
				best = i
			}
		}
		if best < 0 {
			lost++
			continue
		}
		k := &r.Peaks[best]
		u, err := AreaUncertainty(c, k, NoiseModel{WhiteSD: r.Noise})
		if err != nil {
			t.Fatal(err)
		}
		b := &bins[min(int(2*math.Log10(sn/10)), 3)]
		b.n++
		e := (k.Area - g.area) / u.StdU
		b.pull += e * e
		b.u += e
		if math.Abs(e) <= 1.96 {
			inside++
			b.in++
		}
	}
	for i, b := range bins {
		t.Logf("S/N %.0f to %.0f: %.0f peaks, coverage %.2f %%, mean error %+.2f u, rms %.2f u", math.Pow(10, 1+float64(i)/2), math.Pow(10, 1.5+float64(i)/2), b.n, 100*b.in/b.n, b.u/b.n, math.Sqrt(b.pull/b.n))
	}
	cover := inside / (peaks - float64(lost))
	t.Logf("coverage %.2f %% of %d peaks, %d not found", 100*cover, peaks-lost, lost)
	if cover < 0.93 || cover > 0.97 || lost > 10 {
		t.Errorf("coverage %.4f, %d not found; want 0.93 to 0.97", cover, lost)
	}
}

// The closed form by hand: even points, no signal, a line through two single points at the ends.
func TestAreaUncertaintyClosedForm(t *testing.T) {
	c := made(71, 0.01, 5, 0, 2, seeded(1), emg{100, 0.35, 0.05, 0})
	k, err := Integrate(c, 0, 0.7001, 2)
	if err != nil {
		t.Fatal(err)
	}
	u, err := AreaUncertainty(c, k, NoiseModel{WhiteSD: 2})
	if err != nil {
		t.Fatal(err)
	}
	n, h := 71.0, 0.01
	// inner points weigh h, the ends h/2; each end fixes half of a baseline of length (n-1)h
	noise, base := 2*h*math.Sqrt(n-2+0.5), 2*h*(n-1)/2*math.Sqrt2
	both := 2 * h * math.Sqrt((n-2)+2*math.Pow(0.5-(n-1)/2, 2))
	if math.Abs(u.NoiseStdU/noise-1) > 1e-12 || math.Abs(u.BaselineStdU/base-1) > 1e-12 || math.Abs(math.Sqrt(u.StdU*u.StdU-u.LimitsStdU*u.LimitsStdU)/both-1) > 1e-12 {
		t.Errorf("%+v; want %v, %v, together %v", u, noise, base, both)
	}
	if math.Abs(both/k.AreaStdU-1) > 1e-12 {
		t.Errorf("together %v, trapezoid@1 says %v", both, k.AreaStdU)
	}
	// counting noise: variance of the sum of counts is the sum of the counts
	counted, err := AreaUncertainty(c, k, NoiseModel{CountingGain: 1})
	if err != nil {
		t.Fatal(err)
	}
	sum := -(c.Intensity[0] + c.Intensity[70]) * 0.75
	for _, v := range c.Intensity {
		sum += math.Max(v, 0)
	}
	if want := h * math.Sqrt(sum); math.Abs(counted.NoiseStdU/want-1) > 0.01 {
		t.Errorf("counting: %v, want %v", counted.NoiseStdU, want)
	}
	var pe *ParameterError
	var ie *IntervalError
	if _, err := AreaUncertainty(c, k, NoiseModel{WhiteSD: -1}); !errors.As(err, &pe) {
		t.Errorf("negative noise: %v", err)
	}
	if _, err := AreaUncertainty(c, &Peak{}, NoiseModel{}); !errors.As(err, &ie) {
		t.Errorf("no peak: %v", err)
	}
}
