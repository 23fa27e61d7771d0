package peak

import (
	"math"
	"testing"
)

// odd returns the odd number nearest to x, at least 5.
func odd(x float64) int { return max(5, 2*int(x/2)+1) }

// The mean error of the area, over simulated exponentially modified Gaussians whose area is known in closed form. The base
// (four standard deviations) has 20 to 100 points, σ/τ goes from 0.5 to 10, the baseline drifts by the height of 20 noises.
// Limits are automatic and the window has about half of the points of the base.
func TestAreaBias(t *testing.T) {
	const seeds = 120
	tests := []struct{ sn, bias, rms float64 }{ // relative; rms as a guard against outliers
		{20, 0.02, 0.075},
		{50, 0.01, 0.035},
		{500, 0.003, 0.005},
		{3000, 0.003, 0.002},
	}
	for _, points := range []float64{20, 40, 100} {
		for _, ratio := range []float64{0.5, 1, 2, 5, 10} {
			for _, tt := range tests {
				g := emg{1, 0, ratio, 1}
				sd := math.Hypot(ratio, 1)
				_, h := g.apex()
				step := 4 * sd / points
				n := int(8 * points)
				p := Parameters{SmoothingPoints: odd(points / 2), MinSN: 3, Shared: Drop}
				var sum, sq, stdU float64
				for seed := range uint64(seeds) {
					rng := seeded(seed)
					g.mu = (float64(n/2) + rng.Float64()) * step
					c := made(n, step, 20, 20*h/tt.sn/(float64(n)*step), h/tt.sn, rng, g)
					k := nearest(t, c, p, g.mu)
					e := k.Area - 1
					sum += e
					sq += e * e
					stdU += k.AreaStdU
				}
				bias, rms, u := sum/seeds, math.Sqrt(sq/seeds), stdU/seeds
				t.Logf("%3.0f points, σ/τ %4.1f, S/N %4.0f: bias %+.3f %%, rms %.3f %%, stated u %.3f %%", points, ratio, tt.sn, 100*bias, 100*rms, 100*u)
				if math.Abs(bias) > tt.bias || rms > tt.rms {
					t.Errorf("%v points, σ/τ %v, S/N %v: bias %+.4f, rms %.4f; at most %v and %v", points, ratio, tt.sn, bias, rms, tt.bias, tt.rms)
				}
				// The stated standard uncertainty explains the scatter, to the precision that so many seeds allow.
				if scatter := math.Sqrt(rms*rms - bias*bias); scatter > 1.35*u+0.0003 || scatter < 0.7*u {
					t.Errorf("%v points, σ/τ %v, S/N %v: areas scatter by %.5f, stated %.5f", points, ratio, tt.sn, scatter, u)
				}
			}
		}
	}
}

// The 24 Gaussian traces of known area of an open test set; they fill their traces, so that hardly a quiet point is left.
func TestKnownGaussians(t *testing.T) {
	cols, ids := table(t, "known_gaussians.csv")
	n := 0
	for i := 0; i < len(ids); n++ {
		j := i
		for j < len(ids) && ids[j] == ids[i] {
			j++
		}
		c := traceOf(ids[i], cols["time_s"][i:j], cols["signal"][i:j])
		p := Parameters{SmoothingPoints: 11, MinSN: 3, Shared: Drop}
		k := only(t, c, p)
		want := cols["known_area"][i]
		if math.Abs(k.Area/want-1) > 0.001 {
			t.Errorf("%s: area %v, want %v within 0.1 %% (known area of the set)", ids[i], k.Area, want)
		}
		if h := want / (10 * math.Sqrt(2*math.Pi)); math.Abs(k.Height/h-1) > 0.001 {
			t.Errorf("%s: height %v, want %v within 0.1 %% (closed form, σ = 10 s)", ids[i], k.Height, h)
		}
		if w := 20 * math.Sqrt(2*math.Ln2); math.Abs(*k.WidthHalfMin/w-1) > 0.001 {
			t.Errorf("%s: width %v, want %v within 0.1 %% (closed form)", ids[i], *k.WidthHalfMin, w)
		}
		i = j
	}
	if n != 24 {
		t.Errorf("%d traces, want 24", n)
	}
}

// Automatic limits on the committed traces, against their true areas.
func TestCommittedTraces(t *testing.T) {
	tests := []struct {
		name   string
		areas  []float64 // synthetic_truth.json
		within float64
	}{
		{"single_emg_clean", []float64{100}, 0.001},
		{"gaussian_sparse", []float64{5}, 0.001},
		{"noisy_small_peak", []float64{15}, 0.02},              // S/N 200: 0.3 % by noise on the sum, 0.5 % by the baseline
		{"pair_partially_resolved", []float64{60, 40}, 0.0035}, // the perpendicular itself is wrong by so much at this overlap
	}
	for _, tt := range tests {
		r, err := Detect(readTrace(t, tt.name), demo)
		if err != nil {
			t.Fatal(err)
		}
		if len(r.Peaks) != len(tt.areas) {
			t.Errorf("%s: %d peaks, want %d", tt.name, len(r.Peaks), len(tt.areas))
			continue
		}
		for i, want := range tt.areas {
			if got := r.Peaks[i].Area; math.Abs(got/want-1) > tt.within {
				t.Errorf("%s: area %v, want %v within %v", tt.name, got, want, tt.within)
			}
		}
	}
}

// A rider without a maximum of its own stays in the main peak: the two true areas together, one peak, flagged.
func TestRiderWithoutMaximum(t *testing.T) {
	k := only(t, readTrace(t, "rider_on_tail"), demo)
	if want := 86.0; math.Abs(k.Area/want-1) > 0.001 { // 80 + 6, synthetic_truth.json
		t.Errorf("area %v, want %v within 0.1 %%", k.Area, want)
	}
}

// The simulated batch: every quantifier, qualifier and internal standard against its true area.
func TestCommittedBatch(t *testing.T) {
	var truth struct {
		Batch struct {
			Samples []struct {
				Sample          string
				Quant           float64 `json:"true_area_quant"`
				Qual            float64 `json:"true_area_qual"`
				InternalStdArea float64 `json:"true_area_is"`
			}
		} `json:"mrm_calibration_synthetic"`
	}
	readJSON(t, "synthetic_truth.json", &truth)
	cols, samples := table(t, "mrm_calibration_synthetic.csv")
	if len(truth.Batch.Samples) == 0 {
		t.Fatal("no samples")
	}
	for _, s := range truth.Batch.Samples {
		from := 0
		for samples[from] != s.Sample {
			from++
		}
		to := from
		for to < len(samples) && samples[to] == s.Sample {
			to++
		}
		for name, want := range map[string]float64{"quantifier": s.Quant, "qualifier": s.Qual, "internal_standard": s.InternalStdArea} {
			k := only(t, traceOf(s.Sample+" "+name, cols["time_min"][from:to], cols[name][from:to]), demo)
			// 0.1 % for the limits and three standard uncertainties for the noise
			if tol := 0.001*want + 3*k.AreaStdU; math.Abs(k.Area-want) > tol {
				t.Errorf("%s %s: area %v, want %v within %v", s.Sample, name, k.Area, want, tol)
			}
		}
	}
}

// Two partly resolved peaks of the demo's kind, divided by a perpendicular, at a resolution of 1.5: the two areas against their
// closed forms.
func TestPairs(t *testing.T) {
	const step = 0.4 / 60
	for _, ratio := range []float64{1, 5, 0.2} {
		for _, sn := range []float64{500, 3000} {
			a := emg{1, 0.55, 0.035, 0.015}
			_, h := a.apex()
			wh := 2.355 * math.Hypot(a.sigma, a.tau)
			b := emg{ratio, 0.55 + 1.5*2*wh/1.18, a.sigma, a.tau}
			one, two := 0.0, 0.0
			const seeds = 60
			for seed := range uint64(seeds) {
				r, err := Detect(made(180, step, h/10, h/20, h/sn, seeded(seed), a, b), demo)
				if err != nil {
					t.Fatal(err)
				}
				if len(r.Peaks) < 2 {
					t.Fatalf("ratio %v, S/N %v: %d peaks", ratio, sn, len(r.Peaks))
				}
				one += r.Peaks[0].Area/a.area - 1
				two += r.Peaks[1].Area/b.area - 1
				if rs := r.Peaks[0].ResolutionPos; rs == nil || math.Abs(*rs-1.5) > 0.1 {
					t.Errorf("ratio %v, S/N %v: resolution %v, want 1.5 within 0.1", ratio, sn, rs)
				}
			}
			if one, two = one/seeds, two/seeds; math.Abs(one) > 0.004 || math.Abs(two) > 0.004 {
				t.Errorf("ratio %v, S/N %v: bias %+.4f and %+.4f, want 0.004 at most", ratio, sn, one, two)
			}
		}
	}
}

// Times that jitter by 40 % of the step either way change neither area nor noise.
func TestUnevenTimes(t *testing.T) {
	const step, sn, seeds = 0.4 / 60, 500, 100
	g := emg{1, 0.6, 0.035, 0.015}
	_, h := g.apex()
	bias, noise := 0.0, 0.0
	for seed := range uint64(seeds) {
		rng := seeded(seed)
		c := made(180, step, 0, 0, 0, rng)
		for i := range c.TimeMin {
			c.TimeMin[i] += 0.4 * step * (2*rng.Float64() - 1)
			c.Intensity[i] = h/10 + h/20*c.TimeMin[i] + g.at(c.TimeMin[i]) + h/sn*rng.NormFloat64()
		}
		r, err := Detect(c, demo)
		if err != nil {
			t.Fatal(err)
		}
		k := nearest(t, c, demo, g.mu)
		bias += k.Area - 1
		noise += r.Noise / h * sn
	}
	if bias /= seeds; math.Abs(bias) > 0.001 {
		t.Errorf("bias %+.4f, want 0.001 at most", bias)
	}
	if noise /= seeds; noise < 0.97 || noise > 1.08 {
		t.Errorf("noise %.3f of the true one, want 0.97 to 1.08", noise)
	}
}
