package peak

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"testing"
)

// The committed traces give the same bits on every processor also by fits, separations, baselines and noise: regression guard, printed first
// by this code on amd64 and found again under emulation of arm64. A change of it is a change of one of the versions named in its parts.
func TestSameBitsOfFits(t *testing.T) {
	want := map[string]string{
		JointFitAlgorithm:        "4be5187ede6b2d2a75abffcd0b0cbfa46bed4c963cbd2713117274b3a080497c",
		ALSAlgorithm:             "7d54f94960dd990c099c7ef34581c2dda53c97fc031010b27300d0accc1afe52",
		ArPLSAlgorithm:           "a03803b78248638c3c464438697d1f5963e200dac0f114c1d59eeb628f9b8d6e",
		StretchNoiseAlgorithm:    "7e9b2e0ab58a81dcc89c6573e43c522927b3a26755fd92bc72dfa055851c8105",
		AreaUncertaintyAlgorithm: "caeb60d6d7e4ca3de6a939112d285a549dece0ca211230a28c947cc761bd6e63",
		ConditionAlgorithm:       "168dfee00bce2c29401af5e11cec235fbad0483b1080caa46311a5a7f0fdeeb5",
	}
	got := map[string][]byte{}
	add := func(name string, v any, err error) {
		if err != nil {
			t.Fatal(name, err)
		}
		b, err := json.Marshal(v)
		if err != nil {
			t.Fatal(name, err)
		}
		got[name] = append(got[name], b...)
	}
	for _, tt := range []struct {
		name   string
		apexes []float64
		from   float64
		to     float64
		noise  NoiseModel
	}{
		{"pair_partially_resolved", []float64{3.015, 3.235}, 2.6, 3.9, NoiseModel{WhiteSD: 0.1}},
		{"rider_on_tail", []float64{61.8, 69}, 45, 110, NoiseModel{WhiteSD: 0.01}},
		{"noisy_small_peak", []float64{8.02}, 7.6, 8.6, NoiseModel{WhiteSD: 0.5, CountingGain: 0.01}},
	} {
		c := readTrace(t, tt.name)
		l, err := ForcedCommon(c, tt.from, tt.to)
		add(JointFitAlgorithm, l, err)
		k := Cluster{tt.from, tt.to, tt.apexes, l, tt.noise}
		s, err := Separate(c, k, JointOptions{})
		add(JointFitAlgorithm, s, err)
		f, err := FitCluster(c, k, JointOptions{})
		add(JointFitAlgorithm, f, err)
		g, err := ALS(c, 1e4, 0.01, 10)
		add(ALSAlgorithm, g, err)
		g, err = ArPLS(c, 1e4, 1e-6, 30)
		add(ArPLSAlgorithm, g, err)
		n, err := Noise(c, c.TimeMin[0], c.TimeMin[len(c.TimeMin)/5])
		add(StretchNoiseAlgorithm, n, err)
		m, err := CountingNoiseOf(c)
		add(StretchNoiseAlgorithm, m, err)
		h, err := PeakToPeak(c, tt.apexes[0], (c.TimeMin[len(c.TimeMin)-1]-c.TimeMin[0])/30, []Interval{{tt.from, tt.to}})
		if err == nil { // some of the traces hold too little beside the peaks
			add(StretchNoiseAlgorithm, h, nil)
		}
		r, err := Detect(c, demo)
		if err != nil {
			t.Fatal(err)
		}
		for i := range r.Peaks {
			u, err := AreaUncertainty(c, &r.Peaks[i], tt.noise)
			add(AreaUncertaintyAlgorithm, u, err)
			v, err := FiguresOf(c, &r.Peaks[i], System{VoidMin: 0.9, ColumnLengthMM: 100, PeakToPeakNoise: 1})
			add(AreaUncertaintyAlgorithm, v, err)
		}
		d, err := Inspect(c)
		add(ConditionAlgorithm, d, err)
	}
	for name := range want {
		sum := sha256.Sum256(got[name])
		if got := hex.EncodeToString(sum[:]); got != want[name] {
			t.Errorf("%s: SHA-256 of the results %q, want %q", name, got, want[name])
		}
	}
}
