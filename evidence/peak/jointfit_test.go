package peak

import (
	"math"
	"testing"
)

// Noiseless curves come back to the digits of the search, in any number up to eight, with shapes of their own. Truth: the parameters that
// the curves were made with.
func TestFitOfCurves(t *testing.T) {
	for _, n := range []int{1, 2, 3, 5, 8} {
		var peaks []emg
		k := Cluster{0, float64(n)*5 + 15, nil, Line{0, 2, 60, 2}, NoiseModel{WhiteSD: 0.001}}
		for i := range n {
			g := emg{10 + 5*float64(i%3), 6 + 5*float64(i), 0.9 + 0.1*float64(i%2), 0.3 + 0.2*float64(i%4)}
			a, _ := g.apex()
			peaks = append(peaks, g)
			k.ApexesMin = append(k.ApexesMin, a)
		}
		c := made(int(k.EndMin*10)+1, 0.1, 2, 0.01, 0, nil, peaks...)
		if n == 3 { // uneven times
			rng := seeded(1)
			for i := range c.TimeMin {
				c.TimeMin[i] += 0.04 * rng.Float64()
				c.Intensity[i] = 2 + 0.01*c.TimeMin[i]
				for _, g := range peaks {
					c.Intensity[i] += g.at(c.TimeMin[i])
				}
			}
		}
		fit, err := FitCluster(c, k, JointOptions{})
		if err != nil {
			t.Fatal(err)
		}
		for i, g := range peaks {
			got := fit.Peaks[i]
			if math.Abs(got.Area/g.area-1) > 1e-6 || math.Abs(got.MuMin-g.mu) > 1e-5 || math.Abs(got.SigmaMin-g.sigma) > 1e-5 || math.Abs(got.TauMin-g.tau) > 1e-5 || math.Abs(got.ApexMin-k.ApexesMin[i]) > 1e-6 {
				t.Errorf("%d peaks: peak %d is %+v, want %+v with apex %v", n, i+1, got, g, k.ApexesMin[i])
			}
		}
		if math.Abs(fit.Baseline.StartCounts-2-0.01*fit.Baseline.StartMin) > 1e-5 || math.Abs(fit.Baseline.EndCounts-2-0.01*fit.Baseline.EndMin) > 1e-5 {
			t.Errorf("%d peaks: baseline %+v", n, fit.Baseline)
		}
	}
}

// The committed traces. Truth: synthetic_truth.json; the rider has no maximum of its own, and the skims do not apply to it.
func TestFitOfCommittedTraces(t *testing.T) {
	for _, tt := range []struct {
		name   string
		areas  []float64
		apexes []float64
		from   float64
		to     float64
		noise  float64
		within float64
	}{
		{"single_emg_clean", []float64{100}, []float64{5.03}, 4.5, 6, 0.01, 1e-4},
		{"pair_partially_resolved", []float64{60, 40}, []float64{3.015, 3.235}, 2.6, 3.9, 0.01, 1e-4},
		{"rider_on_tail", []float64{80, 6}, []float64{61.8, 69}, 40, 110, 0.001, 1e-3},
		{"noisy_small_peak", []float64{15}, []float64{8.02}, 7, 9.5, 0.5, 0.02},
	} {
		c := readTrace(t, tt.name)
		k := Cluster{StartMin: tt.from, EndMin: tt.to, ApexesMin: tt.apexes, Noise: NoiseModel{WhiteSD: tt.noise}}
		l, err := ForcedCommon(c, tt.from, tt.to)
		if err != nil {
			t.Fatal(err)
		}
		k.Baseline = l
		fit, err := FitCluster(c, k, JointOptions{})
		if err != nil {
			t.Fatal(err)
		}
		for i, want := range tt.areas {
			if got := fit.Peaks[i]; math.Abs(got.Area/want-1) > tt.within {
				t.Errorf("%s: area %v, want %v within %v (stated u %v, %q)", tt.name, got.Area, want, tt.within, got.AreaStdU, fit.Distrust)
			}
		}
		t.Logf("%s: %+v, %d iterations, %q", tt.name, fit.Peaks, fit.Iterations, fit.Distrust)
	}
}

// The stated standard uncertainty of a fitted area is its scatter, white and counting noise alike.
func TestFitUncertainty(t *testing.T) {
	g, q := emg{400, 3, 0.12, 0.06}, emg{150, 3.6, 0.12, 0.06}
	ga, _ := g.apex()
	qa, _ := q.apex()
	for _, model := range []NoiseModel{{WhiteSD: 8}, {WhiteSD: 3, CountingGain: 1}} {
		const seeds = 400
		var pull [2]float64
		doubted := 0
		for seed := range uint64(seeds) {
			rng := seeded(seed)
			c := made(200, 0.03, 20, 0, 0, nil, g, q)
			for i, v := range c.Intensity {
				c.Intensity[i] += model.SD(v) * rng.NormFloat64()
			}
			fit, err := FitCluster(c, Cluster{1.5, 5.9, []float64{ga, qa}, Line{1.5, 20, 5.9, 20}, model}, JointOptions{})
			if err != nil {
				t.Fatal(err)
			}
			for i, want := range []float64{400, 150} {
				e := (fit.Peaks[i].Area - want) / fit.Peaks[i].AreaStdU
				pull[i] += e * e / seeds
			}
			if len(fit.Distrust) > 0 {
				doubted++
			}
		}
		t.Logf("%+v: mean squared error over stated variance %.2f and %.2f, doubted %d of %d", model, pull[0], pull[1], doubted, seeds)
		for _, p := range pull { // 7 % standard error
			if p < 0.75 || p > 1.3 {
				t.Errorf("%+v: mean squared error over stated variance %v", model, pull)
			}
		}
		if doubted > seeds/50 {
			t.Errorf("%+v: %d of %d good fits doubted", model, doubted, seeds)
		}
	}
}

// BenchmarkJointFit is three overlapping peaks on a straight baseline.
func BenchmarkJointFit(b *testing.B) {
	peaks := []emg{{10, 6, 0.9, 0.4}, {4, 9.5, 0.9, 0.5}, {7, 13, 1, 0.5}}
	c := made(300, 0.08, 2, 0.01, 0.01, seeded(1), peaks...)
	k := Cluster{StartMin: 0, EndMin: 23.9, Baseline: Line{0, 2, 23.9, 2.2}, Noise: NoiseModel{WhiteSD: 0.01}}
	for _, g := range peaks {
		a, _ := g.apex()
		k.ApexesMin = append(k.ApexesMin, a)
	}
	for _, shared := range []bool{false, true} {
		b.Run(map[bool]string{false: "peaks=3/points=300", true: "peaks=3/points=300/shared"}[shared], func(b *testing.B) {
			for b.Loop() {
				fit, err := FitCluster(c, k, JointOptions{SharedShape: shared})
				if err != nil {
					b.Fatal(err)
				}
				b.ReportMetric(float64(fit.Iterations), "iterations")
			}
		})
	}
}
