package peak

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate"
)

// The trapezoid areas of the written samples for stated windows, each above the straight line between its end samples.
func TestStatedWindows(t *testing.T) {
	var truth map[string]struct {
		Integrations []struct {
			Start, End float64
			Area       float64 `json:"area_trapezoid"`
		}
	}
	readJSON(t, "synthetic_truth.json", &truth)
	checked := 0
	for _, name := range []string{"single_emg_clean", "pair_partially_resolved", "noisy_small_peak", "gaussian_sparse", "rider_on_tail"} {
		for _, w := range truth[name].Integrations {
			k, err := Integrate(readTrace(t, name), w.Start, w.End, 0.5)
			if err != nil {
				t.Fatal(err)
			}
			// as printed: ten digits
			if math.Abs(k.Area-w.Area) > 1e-9*w.Area {
				t.Errorf("%s, %v to %v: area %.12g, want %.12g", name, w.Start, w.End, k.Area, w.Area)
			}
			if k.StartKind != ByHand || k.EndKind != ByHand || k.Algorithm != "trapezoid@1" {
				t.Errorf("%s: %+v", name, k)
			}
			checked++
		}
	}
	if checked != 5 {
		t.Errorf("%d windows, want 5", checked)
	}
}

// Uneven times against gonum's trapezoid rule, a second computation.
func TestIntegrateAgainstGonum(t *testing.T) {
	rng := seeded(8)
	c := made(100, 0.01, 50, 3, 2, rng, emg{20, 0.4, 0.05, 0.03})
	for i := range c.TimeMin {
		c.TimeMin[i] += 0.004 * rng.Float64()
	}
	k, err := Integrate(c, c.TimeMin[10], c.TimeMin[90], 2)
	if err != nil {
		t.Fatal(err)
	}
	x, y := c.TimeMin[10:91], c.Intensity[10:91]
	want := integrate.Trapezoidal(x, y) - (x[80]-x[0])*(y[0]+y[80])/2
	if math.Abs(k.Area-want) > 1e-12*want {
		t.Errorf("area %v, want %v", k.Area, want)
	}
	if k.Points != 81 || k.BaselineStartCounts != y[0] || k.BaselineEndCounts != y[80] || k.BaselineStartPoints != 1 {
		t.Errorf("%+v", k)
	}
	if k.SignalToNoise != k.Height/2 {
		t.Errorf("signal-to-noise %v, want height over noise %v", k.SignalToNoise, k.Height/2)
	}
}

// The stated standard uncertainty of an area by hand, against the scatter of 2,000 simulated areas.
func TestAreaStdU(t *testing.T) {
	g := emg{10, 0.6, 0.05, 0.02}
	const sd, seeds = 2.0, 2000
	var sum, sq, u float64
	for seed := range uint64(seeds) {
		k, err := Integrate(made(120, 0.01, 30, 5, sd, seeded(seed), g), 0.3, 1, sd)
		if err != nil {
			t.Fatal(err)
		}
		sum += k.Area - g.area
		sq += (k.Area - g.area) * (k.Area - g.area)
		u = k.AreaStdU
	}
	got := math.Sqrt(sq/seeds - sum/seeds*sum/seeds)
	if math.Abs(got/u-1) > 0.06 { // 1.6 % standard error of the scatter
		t.Errorf("stated %v, found %v", u, got)
	}
	// closed form for even points and a line through two noisy ends
	n, h := 71.0, 0.01
	if want := sd * h * math.Sqrt((n-2)+2*math.Pow(0.5-(n-1)/2, 2)); math.Abs(u/want-1) > 1e-9 {
		t.Errorf("stated %v, closed form %v", u, want)
	}
}

// Limits move inwards to acquired points; fewer than five are refused.
func TestLimitsByHand(t *testing.T) {
	c := made(50, 0.01, 1, 0, 0, nil, emg{1, 0.25, 0.05, 0})
	k, err := Integrate(c, 0.0951, 0.4049, 0.1)
	if err != nil {
		t.Fatal(err)
	}
	if k.StartMin != c.TimeMin[10] || k.EndMin != c.TimeMin[40] || k.Points != 31 {
		t.Errorf("limits %v to %v, %d points; want %v to %v, 31", k.StartMin, k.EndMin, k.Points, c.TimeMin[10], c.TimeMin[40])
	}
	if k, err = Integrate(c, -5, 5, 0); err != nil || k.Points != 50 || !has(k.Flags, FlagNoiseFloor) {
		t.Errorf("beyond the trace: %v, %+v", err, k)
	}
	for _, w := range [][2]float64{{0.1, 0.135}, {0.3, 0.2}, {0.3, 0.3}, {0.301, 0.302}, {7, 8}, {math.NaN(), 1}, {0, math.Inf(1)}} {
		var e *IntervalError
		if _, err := Integrate(c, w[0], w[1], 0.1); !errors.As(err, &e) {
			t.Errorf("limits %v: %v, want an IntervalError", w, err)
		}
	}
	var pe *ParameterError
	if _, err := Integrate(c, 0, 0.4, math.NaN()); !errors.As(err, &pe) {
		t.Errorf("noise NaN: %v, want a ParameterError", err)
	}
	// a slope has no apex and no area, and says so
	if k, err = Integrate(made(50, 0.01, 1, 100, 0.1, seeded(1)), 0.1, 0.4, 0.1); err != nil || k.SignalToNoise > 5 {
		t.Errorf("a slope: %v, %+v", err, k)
	}
	dip := made(50, 0.01, 10, 0, 0, nil, emg{-1, 0.25, 0.05, 0})
	if k, err = Integrate(dip, 0.1, 0.4, 0.1); err != nil || k.Area >= 0 || !has(k.Flags, FlagNegativeArea) || !has(k.Flags, FlagApexAtLimit) {
		t.Errorf("a dip: %v, %+v", err, k)
	}
}

// Detect and Integrate agree on the same limits, as far as their baselines do.
func TestDetectAndIntegrate(t *testing.T) {
	g := emg{1, 0.6, 0.035, 0.015}
	_, h := g.apex()
	c := made(180, 0.4/60, h/10, h/20, h/1000, seeded(3), g)
	auto := only(t, c, demo)
	hand, err := Integrate(c, auto.StartMin, auto.EndMin, auto.Noise)
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(hand.Area/auto.Area-1) > 0.005 || hand.Points != auto.Points || math.Abs(hand.ApexMin-auto.ApexMin) > 1e-4 {
		t.Errorf("by hand %+v, automatic %+v", hand, auto)
	}
	if hand.AreaStdU <= auto.AreaStdU {
		t.Errorf("one point at each end fixes a baseline better (%v) than several (%v)?", hand.AreaStdU, auto.AreaStdU)
	}
}

func BenchmarkIntegrate(b *testing.B) {
	for _, n := range []int{200, 10000} {
		b.Run(fmt.Sprintf("points=%d", n), func(b *testing.B) {
			c := made(n, 0.4/60, 1, 0, 0.05, seeded(1))
			for b.Loop() {
				if _, err := Integrate(c, c.TimeMin[2], c.TimeMin[n-3], 0.05); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkDetect has a peak every minute of 150 points.
func BenchmarkDetect(b *testing.B) {
	for _, n := range []int{200, 10000, 1000000} {
		b.Run(fmt.Sprintf("points=%d", n), func(b *testing.B) {
			c := made(n, 0.4/60, 1, 0, 0.05, seeded(1))
			for m := 60; m+120 < n; m += 150 {
				g := emg{1, c.TimeMin[m], 0.035, 0.015}
				for i := m - 60; i < m+120; i++ {
					c.Intensity[i] += g.at(c.TimeMin[i])
				}
			}
			b.ReportAllocs()
			for b.Loop() {
				if _, err := Detect(c, demo); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
