package peak

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// The mean range of n normal deviates is d₂ standard deviations.
//
// Source: the d₂ of Shewhart charts, ISO 7870-2 and ASTM MNL 7 (from memory): 3.735 for 20, 3.931 for 25; 5.015 for 100.
func TestPeakToPeakRange(t *testing.T) {
	for _, tt := range []struct {
		n  int
		d2 float64
	}{{100, 5.015}, {25, 3.931}, {20, 3.735}} {
		const seeds = 4000
		var range_, full, sd float64
		for seed := range uint64(seeds) {
			s, err := Noise(made(tt.n, 0.01, 5, 30, 2, seeded(seed)), 0, 10)
			if err != nil {
				t.Fatal(err)
			}
			range_ += s.PeakToPeak / 2 / seeds
			s, err = Noise(made(tt.n, 0.01, 5, 0, 2, seeded(seed)), 0, 10)
			if err != nil {
				t.Fatal(err)
			}
			full += s.PeakToPeakFull / 2 / seeds
			sd += s.SD * s.SD / 4 / seeds
		}
		if math.Abs(full/tt.d2-1) > 0.01 { // 0.3 % standard error
			t.Errorf("%d points: mean range %.3f standard deviations, want %.3f", tt.n, full, tt.d2)
		}
		// a line fitted takes two degrees of freedom out of the residuals
		if low := tt.d2 * math.Sqrt(float64(tt.n-2)/float64(tt.n)); range_ < 0.99*low || range_ > 1.01*tt.d2 {
			t.Errorf("%d points: mean range about the line %.3f standard deviations, want %.3f to %.3f", tt.n, range_, low, tt.d2)
		}
		if math.Abs(sd-1) > 0.02 {
			t.Errorf("%d points: variance %.4f of the true one", tt.n, sd)
		}
	}
}

// Drift is found and kept out of the noise; a spike moves neither line nor robust estimate, and is flagged. Truth: the slope and the
// standard deviation that the trace was made with.
func TestDrift(t *testing.T) {
	c := made(600, 0.01, 100, 40, 2, seeded(4))
	s, err := Noise(c, 0, 6)
	if err != nil {
		t.Fatal(err)
	}
	if u := 2 / (6 * math.Sqrt(600./12)); math.Abs(s.Drift-40) > 4*u || math.Abs(s.SD/2-1) > 0.1 || math.Abs(s.RobustSD/2-1) > 0.15 {
		t.Errorf("%+v; want a drift of 40 within %.2f and a standard deviation of 2", s, 4*u)
	}
	if s.PeakToPeakFull < 235 || s.PeakToPeak > 18 || !has(s.Flags, FlagDrifting) {
		t.Errorf("%+v: with drift the range is 240 and more", s)
	}
	for i := range 20 {
		c.Intensity[300+i] += 200
	}
	d, err := Noise(c, 0, 6)
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(d.Drift-s.Drift) > 0.15 || d.RobustSD > 1.1*s.RobustSD || !has(d.Flags, FlagNotQuiet) {
		t.Errorf("a peak in the stretch: %+v, before %+v", d, s)
	}
	line, err := Noise(made(50, 0.01, 3, 7, 0, nil), 0, 1)
	if err != nil || line.SD != 0 || !has(line.Flags, FlagNoiseless) || math.Abs(line.Drift-7) > 1e-9 {
		t.Errorf("a straight line: %v, %+v", err, line)
	}
	var ie *IntervalError
	if _, err := Noise(c, 1, 1.03); !errors.As(err, &ie) {
		t.Errorf("four points: %v", err)
	}
}

// 2H/h over 20 widths at half height, in a blank and beside the peak itself.
//
// Source: USP <621> and Ph. Eur. 2.2.46, formula; widths from the closed form of the Gaussian.
func TestPharmacopoeiaNoise(t *testing.T) {
	blank := made(2000, 0.01, 5, 0, 1, seeded(2))
	n, err := PeakToPeak(blank, 10, 0.3, nil)
	if err != nil {
		t.Fatal(err)
	}
	lo, hi := math.Inf(1), math.Inf(-1)
	for i, x := range blank.TimeMin {
		if x > 10-3.001 && x < 10+3.001 {
			lo, hi = min(lo, blank.Intensity[i]), max(hi, blank.Intensity[i])
		}
	}
	if n.HWithDrift != hi-lo || math.Abs(n.Widths-20) > 0.1 || len(n.Flags) != 0 {
		t.Errorf("%+v, want h %v over 20 widths", n, hi-lo)
	}
	if got, want := n.SignalToNoise(50), 2*50/n.H; got != want {
		t.Errorf("S/N %v, want %v", got, want)
	}
	with, err := PeakToPeak(made(2000, 0.01, 5, 0, 1, seeded(2), emg{100, 10, 0.127, 0}), 10, 0.3, []Interval{{9, 11}})
	if err != nil || math.Abs(with.Widths-20) > 0.1 || with.H > 9 {
		t.Errorf("beside the peak: %v, %+v", err, with)
	}
	short, err := PeakToPeak(made(300, 0.01, 5, 0, 1, seeded(2)), 1.5, 0.3, nil)
	if err != nil || !has(short.Flags, FlagShortSpan) || math.Abs(short.Widths-2.99/0.3) > 0.1 {
		t.Errorf("a short trace: %v, %+v", err, short)
	}
	var ie *IntervalError
	if _, err := PeakToPeak(made(300, 0.01, 5, 0, 1, seeded(2)), 1.5, 1, nil); !errors.As(err, &ie) {
		t.Errorf("under five widths: %v", err)
	}
	var pe *ParameterError
	if _, err := PeakToPeak(blank, 10, 0, nil); !errors.As(err, &pe) {
		t.Errorf("no width: %v", err)
	}
}

// poisson draws a count with this mean: exact below 30, above that the rounded normal.
func poisson(mean float64, rng *rand.Rand) float64 {
	if mean > 30 {
		return math.Max(0, math.Round(mean+math.Sqrt(mean)*rng.NormFloat64()))
	}
	k, p := 0.0, rng.Float64()
	for limit := math.Exp(-mean); p > limit; p *= rng.Float64() {
		k++
	}
	return k
}

// Counts are recognised with their gain, white noise is not taken for counts. Truth: variance of Poisson counts = their mean.
func TestCountingNoise(t *testing.T) {
	for _, gain := range []float64{1, 25} {
		const seeds = 200
		found, mean, pull := 0.0, 0.0, 0.0
		for seed := range uint64(seeds) {
			rng := seeded(seed)
			c := made(600, 0.01, 2, 0, 0, nil, emg{300, 3, 0.12, 0.06}, emg{80, 4.5, 0.12, 0.06})
			for i, v := range c.Intensity {
				c.Intensity[i] = gain*poisson(v*10, rng) + gain*3*rng.NormFloat64()
			}
			r, err := CountingNoiseOf(c)
			if err != nil {
				t.Fatal(err)
			}
			if r.Recognised {
				found++
			}
			mean += r.Gain / seeds
			pull += (r.Gain - gain) * (r.Gain - gain) / (r.GainStdU * r.GainStdU) / seeds
		}
		t.Logf("gain %v: recognised in %v of %d, mean gain %.3f, pull %.2f", gain, found, seeds, mean, math.Sqrt(pull))
		if found < 0.99*seeds || math.Abs(mean/gain-1) > 0.07 || pull > 2 {
			t.Errorf("gain %v: recognised in %v of %d, mean %v, squared pull %v", gain, found, seeds, mean, pull)
		}
	}
	const seeds = 1000
	false_ := 0
	for seed := range uint64(seeds) {
		r, err := CountingNoiseOf(made(600, 0.01, 20, 5, 3, seeded(seed), emg{300, 3, 0.12, 0.06}))
		if err != nil {
			t.Fatal(err)
		}
		if r.Recognised {
			false_++
		} else if math.Abs(r.Model.WhiteSD/3-1) > 0.25 {
			t.Errorf("white noise of 3: %v", r.Model.WhiteSD)
		}
	}
	t.Logf("white noise taken for counts in %d of %d", false_, seeds)
	if false_ > 5 {
		t.Errorf("white noise taken for counts in %d of %d", false_, seeds)
	}
	var te *TraceError
	if _, err := CountingNoiseOf(made(49, 0.01, 1, 0, 1, seeded(1))); !errors.As(err, &te) {
		t.Errorf("49 points: %v", err)
	}
	if _, err := CountingNoiseOf(made(80, 0.01, 1, 0, 0, nil)); !errors.As(err, &te) {
		t.Errorf("constant: %v", err)
	}
}
