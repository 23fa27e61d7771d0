package peak

import (
	"encoding/json"
	"errors"
	"math"
	"testing"
)

// Whatever the trace, fits, separations, baselines, noise and figures are finite (they can be written as JSON) or a named error.
func FuzzFigures(f *testing.F) {
	rng := seeded(6)
	for n := range 30 {
		b := make([]byte, 4+3*(6+8*n))
		for i := range b {
			b[i] = byte(rng.Uint32())
		}
		if n%2 == 0 {
			for i := 4; i+2 < len(b); i += 3 {
				k := (i - 4) / 3
				b[i], b[i+2] = 0x50, byte(40*math.Exp(-math.Pow(float64(k-4*n)/6, 2)))
			}
		}
		f.Add(b)
	}
	f.Fuzz(func(t *testing.T, b []byte) {
		if len(b) > 3000 {
			return
		}
		c, p := decode(b)
		sound := func(v any, err error) {
			t.Helper()
			var te *TraceError
			var ie *IntervalError
			var pe *ParameterError
			var fe *FitError
			if err != nil {
				if !errors.As(err, &te) && !errors.As(err, &ie) && !errors.As(err, &pe) && !errors.As(err, &fe) {
					t.Fatalf("error %T: %v", err, err)
				}
				return
			}
			if _, err := json.Marshal(v); err != nil {
				t.Fatalf("%+v: %v", v, err)
			}
		}
		list, err := Inspect(c)
		sound(list, err)
		if err != nil {
			return
		}
		n := len(c.TimeMin)
		first, last := c.TimeMin[0], c.TimeMin[n-1]
		noise, err := Noise(c, first, last)
		sound(noise, err)
		counting, err := CountingNoiseOf(c)
		sound(counting, err)
		h, err := PeakToPeak(c, c.TimeMin[n/2], (last-first)/25, []Interval{{c.TimeMin[n/3], c.TimeMin[n/2]}})
		sound(h, err)
		als, err := ALS(c, math.Ldexp(1, int(b[0]%40)), 0.01, 10)
		sound(als, err)
		arpls, err := ArPLS(c, math.Ldexp(1, int(b[1]%40)), 1e-3, 10)
		sound(arpls, err)
		r, err := Detect(c, p)
		if err != nil {
			return
		}
		for i := range r.Peaks {
			k := &r.Peaks[i]
			u, err := AreaUncertainty(c, k, NoiseModel{WhiteSD: r.Noise})
			sound(u, err)
			v, err := FiguresOf(c, k, System{VoidMin: 1, ColumnLengthMM: 100, PeakToPeakNoise: r.Noise})
			sound(v, err)
			if err == nil {
				sound(Hindrances(k, v, []PairFigures{PairOf(v, v, 1)}, QuantityLimits{3, 1.5, 5, 1.8, 0.8}), nil)
			}
		}
		for i, k := range Clusters(r) {
			if i > 2 || len(k.ApexesMin) > 4 {
				break
			}
			s, err := Separate(c, k, JointOptions{})
			sound(s, err)
			fit, err := FitCluster(c, k, JointOptions{SharedShape: true, FixedBaseline: true})
			sound(fit, err)
		}
	})
}
