package peak

import (
	"math"
	"sort"
	"testing"
)

// White noise of known standard deviation under a steep drift, without and with a peak that covers a third of the trace.
// The larger of two estimates is on average a little high: within -1 % and +7 %.
func TestNoiseOfWhiteTraces(t *testing.T) {
	for _, peaks := range [][]emg{nil, {{5000, 0.5, 0.05, 0.03}}} {
		sum, sq := 0.0, 0.0
		const seeds = 500
		for seed := range uint64(seeds) {
			r, err := Detect(made(180, 0.4/60, 100, 2000, 10, seeded(seed), peaks...), demo)
			if err != nil {
				t.Fatal(err)
			}
			sum += r.Noise / 10
			sq += (r.Noise/10 - 1) * (r.Noise/10 - 1)
		}
		t.Logf("%d peaks: noise %.3f of the true one, rms %.3f", len(peaks), sum/seeds, math.Sqrt(sq/seeds))
		if m := sum / seeds; m < 0.99 || m > 1.07 || math.Sqrt(sq/seeds) > 0.12 {
			t.Errorf("%d peaks: noise %.3f of the true one, rms %.3f", len(peaks), m, math.Sqrt(sq/seeds))
		}
	}
}

// Noise that a filter has smoothed (each point 0.6 of the one before) looks small in differences: alone they would give 0.62
// of it (closed form: the residual's variance is (3 - 4ρ + ρ²)/3 of that of white noise).
func TestNoiseOfFilteredTraces(t *testing.T) {
	sum := 0.0
	const seeds = 300
	for seed := range uint64(seeds) {
		c := made(180, 0.4/60, 0, 0, 1, seeded(seed))
		filter(c.Intensity, 0.6)
		r, err := Detect(c, demo)
		if err != nil {
			t.Fatal(err)
		}
		sum += r.Noise
	}
	if m := sum / seeds; m < 0.8 || m > 1.05 {
		t.Errorf("noise %.3f of the true one, want 0.8 to 1.05", m)
	}
}

// filter makes white noise red, keeping its standard deviation.
func filter(y []float64, rho float64) {
	f := 0.0
	for i := range y {
		f = rho*f + math.Sqrt(1-rho*rho)*y[i]
		y[i] = f
	}
}

func TestNoiseMethods(t *testing.T) {
	g := emg{100, 0.6, 0.035, 0.015}
	smooth := made(180, 0.4/60, 10, 5, 0, nil, g)
	r, err := Detect(smooth, demo)
	if err != nil {
		t.Fatal(err)
	}
	if r.NoiseMethod != NoiseFloor || !has(r.Peaks[0].Flags, FlagNoiseFloor) {
		t.Errorf("without noise: method %q, flags %q", r.NoiseMethod, r.Peaks[0].Flags)
	}
	lo, hi := smooth.Intensity[0], smooth.Intensity[0]
	for _, v := range smooth.Intensity {
		lo, hi = min(lo, v), max(hi, v)
	}
	if want := (hi - lo) * 0x1p-30; r.Noise != want {
		t.Errorf("without noise: floor %v, want %v", r.Noise, want)
	}
	// a peak over the whole trace leaves no quiet points
	wide := made(60, 0.01, 0, 0, 0.01, seeded(1), emg{1, 0.3, 0.1, 0})
	if r, err = Detect(wide, demo); err != nil || r.NoiseMethod != NoiseWholeTrace || r.NoisePoints != 58 {
		t.Errorf("peak over all of it: %v, method %q, %d points", err, r.NoiseMethod, r.NoisePoints)
	}
	flat := made(50, 0.01, 7, 0, 0, nil)
	if r, err = Detect(flat, demo); err != nil || len(r.Peaks) != 0 || r.Noise != 0 {
		t.Errorf("constant trace: %v, %+v", err, r)
	}
	// thresholded counts: more than half of the points are zero
	counts := made(180, 0.4/60, 0, 0, 0, nil)
	rng := seeded(3)
	for i := range counts.Intensity {
		if rng.Float64() < 0.2 {
			counts.Intensity[i] = float64(1 + rng.IntN(3))
		}
	}
	if r, err = Detect(counts, demo); err != nil || r.NoiseMethod != NoiseAlgorithm || r.Noise < 0.5 || r.Noise > 1.5 {
		t.Errorf("thresholded counts: %v, %q, noise %v; their standard deviation is 0.9", err, r.NoiseMethod, r.Noise)
	}
}

func has(list []string, s string) bool {
	for _, v := range list {
		if v == s {
			return true
		}
	}
	return false
}

// The quickselect against sorting.
func TestNth(t *testing.T) {
	rng := seeded(9)
	for n := 1; n < 60; n++ {
		v := make([]float64, n)
		for i := range v {
			v[i] = float64(rng.IntN(n))
		}
		want := append([]float64(nil), v...)
		sort.Float64s(want)
		for k := range want {
			if got := nth(append([]float64(nil), v...), k); got != want[k] {
				t.Fatalf("n %d, k %d: %v, want %v", n, k, got, want[k])
			}
		}
	}
}
