package peak

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"testing"
)

// The committed traces give the same bits on every processor: regression guard, printed first by this code on amd64 and found
// again under emulation of arm64. A change of it is a change of sg-walk@1, noise-quiet-differences@1 or trapezoid@1.
func TestSameBits(t *testing.T) {
	const want = "17ae24c0ae5fb26e6eeca6c07b60419a1d7c64f831f4ffd4657129dd712069f0"
	sum := sha256.New()
	add := func(v any, err error) {
		if err != nil {
			t.Fatal(err)
		}
		b, err := json.Marshal(v)
		if err != nil {
			t.Fatal(err)
		}
		sum.Write(b)
	}
	for _, name := range []string{"single_emg_clean", "pair_partially_resolved", "noisy_small_peak", "gaussian_sparse", "rider_on_tail"} {
		c := readTrace(t, name)
		for _, window := range []int{5, 9, 15} {
			for _, shared := range []Shared{Drop, Valley} {
				add(Detect(c, Parameters{SmoothingPoints: window, MinSN: 3, Shared: shared, ValleyFraction: 0.02}))
			}
		}
		n := len(c.TimeMin)
		add(Integrate(c, c.TimeMin[n/5], c.TimeMin[n-1-n/5], 0.1))
	}
	cols, samples := table(t, "mrm_calibration_synthetic.csv")
	for from := 0; from < len(samples); from += 161 {
		for _, name := range []string{"quantifier", "qualifier", "internal_standard"} {
			add(Detect(traceOf(name, cols["time_min"][from:from+161], cols[name][from:from+161]), demo))
		}
	}
	if got := hex.EncodeToString(sum.Sum(nil)); got != want {
		t.Errorf("SHA-256 of the results %s, want %s", got, want)
	}
}
