package peak

import (
	"errors"
	"math"
	"testing"

	"assaywrit/evidence/trace"
)

// Every kind of bad input gets its name, and nothing of the kind is found in 2,000 sound traces.
func TestInspect(t *testing.T) {
	g := emg{1, 0.6, 0.035, 0.015}
	_, h := g.apex()
	sound := func(seed uint64) trace.Chromatogram { return made(180, 0.4/60, h, h/30, h/200, seeded(seed), g) }
	part := func(from, to int) trace.Chromatogram {
		c := sound(1)
		return traceOf("part", c.TimeMin[from:to], c.Intensity[from:to])
	}
	change := func(f func(c *trace.Chromatogram)) trace.Chromatogram {
		c := sound(1)
		f(&c)
		return c
	}
	for _, tt := range []struct {
		name string
		c    trace.Chromatogram
	}{
		{TraceAllZero, made(50, 0.01, 0, 0, 0, nil)},
		{TraceConstant, made(50, 0.01, 7, 0, 0, nil)},
		{TraceFlatTop, change(func(c *trace.Chromatogram) {
			for i, v := range c.Intensity {
				c.Intensity[i] = min(v, 1.6*h)
			}
		})},
		{TraceSpike, change(func(c *trace.Chromatogram) { c.Intensity[20] += h })},
		{TraceSpike, change(func(c *trace.Chromatogram) { c.Intensity[20] -= h })},
		{TraceNegative, made(180, 0.4/60, h, h/30, h/200, seeded(1), emg{-1, 0.6, 0.035, 0.015})},
		{TraceCutAtStart, part(96, 180)},
		{TraceCutAtStart, part(85, 180)},
		{TraceCutAtEnd, part(0, 99)},
		{TraceCutAtEnd, part(0, 88)},
		{TraceGap, change(func(c *trace.Chromatogram) {
			for i := 140; i < 180; i++ {
				c.TimeMin[i] += 0.2
			}
		})},
		{TraceBelowNought, change(func(c *trace.Chromatogram) {
			for i := range c.Intensity {
				c.Intensity[i] -= 1.2 * h
			}
		})},
	} {
		list, err := Inspect(tt.c)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
		}
		if len(list) != 1 || list[0].Name != tt.name {
			t.Errorf("%s: found %+v", tt.name, list)
		}
	}
	wrong := 0
	for seed := range uint64(2000) {
		list, err := Inspect(sound(seed))
		if err != nil {
			t.Fatal(err)
		}
		wrong += len(list)
	}
	if wrong > 0 {
		t.Errorf("%d findings in 2000 sound traces", wrong)
	}
	var te *TraceError
	twice := change(func(c *trace.Chromatogram) { c.TimeMin[10] = c.TimeMin[9] })
	if _, err := Inspect(twice); !errors.As(err, &te) || te.Index != 10 {
		t.Errorf("two points at one time: %v", err)
	}
	if _, err := Inspect(part(0, 4)); !errors.As(err, &te) {
		t.Errorf("four points: %v", err)
	}
}

// What a fit or a separation is made of bad traces: an error, or named reasons, never a bare area.
func TestBadInputIsNamed(t *testing.T) {
	g := emg{1, 0.6, 0.035, 0.015}
	a, h := g.apex()
	ok := made(180, 0.4/60, h, 0, h/200, seeded(1), g)
	k := Cluster{0.4, 0.95, []float64{a}, Line{0.4, h, 0.95, h}, NoiseModel{WhiteSD: h / 200}}
	fit, err := FitCluster(ok, k, JointOptions{})
	if err != nil || len(fit.Distrust) != 0 || math.Abs(fit.Peaks[0].Area-1) > 4*fit.Peaks[0].AreaStdU {
		t.Fatalf("a sound peak: %v, %+v", err, fit)
	}
	reason := func(what string, c trace.Chromatogram, k Cluster, want string) {
		t.Helper()
		fit, err := FitCluster(c, k, JointOptions{})
		if err != nil {
			t.Errorf("%s: %v", what, err)
		} else if !has(fit.Distrust, want) {
			t.Errorf("%s: %q, want %s among them", what, fit.Distrust, want)
		}
	}
	flat := traceOf("flat", ok.TimeMin, append([]float64(nil), ok.Intensity...))
	for i, v := range flat.Intensity {
		flat.Intensity[i] = min(v, 1.6*h)
	}
	reason("saturated", flat, k, DistrustSaturated)
	reason("saturated", flat, k, DistrustChiSquare)
	two := made(180, 0.4/60, h, 0, h/200, seeded(1), g, emg{0.5, 0.72, 0.035, 0.015})
	reason("two peaks as one", two, k, DistrustRuns)
	silent := k
	silent.Noise = NoiseModel{}
	reason("no noise stated", ok, silent, DistrustNoNoise)
	// an area at its bound, zero, leaves nothing to determine a shape from
	var fe *FitError
	for _, c := range []trace.Chromatogram{made(180, 0.4/60, h, 0, h/200, seeded(1), emg{-1, 0.6, 0.035, 0.015}), made(180, 0.4/60, h, 0, h/200, seeded(1))} {
		if fit, err := FitCluster(c, k, JointOptions{}); !errors.As(err, &fe) && (err != nil || !has(fit.Distrust, DistrustWeak)) {
			t.Errorf("no peak there: %v, %+v", err, fit)
		}
	}
	few := k
	few.StartMin, few.EndMin = 0.55, 0.66
	reason("few points", ok, few, DistrustFewPoints)
	constant := made(180, 0.4/60, h, 0, 0, nil)
	if fit, err := FitCluster(constant, k, JointOptions{}); err == nil && !has(fit.Distrust, DistrustWeak) {
		t.Errorf("constant: %+v", fit)
	}
	zero := made(180, 0.4/60, 0, 0, 0, nil)
	k0 := k
	k0.Baseline = Line{0.4, 0, 0.95, 0}
	k0.Noise = NoiseModel{}
	if fit, err := FitCluster(zero, k0, JointOptions{}); err == nil && !has(fit.Distrust, DistrustWeak) {
		t.Errorf("all zero: %+v", fit)
	}
	list, err := Separate(zero, Cluster{0.4, 0.95, []float64{0.5, 0.7}, Line{0.4, 0, 0.95, 0}, NoiseModel{}}, JointOptions{})
	if err != nil {
		t.Fatal(err)
	}
	for _, s := range list {
		if s.Refused == "" && len(s.Distrust) == 0 {
			t.Errorf("all zero: %+v without a word", s)
		}
	}
	var te *TraceError
	var pe *ParameterError
	var ie *IntervalError
	if _, err := Separate(traceOf("few", ok.TimeMin[:4], ok.Intensity[:4]), k, JointOptions{}); !errors.As(err, &te) {
		t.Errorf("four points: %v", err)
	}
	for _, bad := range []func(k *Cluster){
		func(k *Cluster) { k.ApexesMin = nil },
		func(k *Cluster) { k.ApexesMin = []float64{0.7, 0.6} },
		func(k *Cluster) { k.ApexesMin = []float64{0.3} },
		func(k *Cluster) { k.ApexesMin = []float64{math.NaN()} },
		func(k *Cluster) { k.ApexesMin = make([]float64, 9) },
		func(k *Cluster) { k.Noise.WhiteSD = math.Inf(1) },
		func(k *Cluster) { k.Baseline.EndMin = 0 },
		func(k *Cluster) { k.Baseline.EndCounts = math.NaN() },
	} {
		b := k
		bad(&b)
		if _, err := FitCluster(ok, b, JointOptions{}); !errors.As(err, &pe) {
			t.Errorf("%+v: %v, want a ParameterError", b, err)
		}
	}
	short := k
	short.EndMin = 0.42
	if _, err := FitCluster(ok, short, JointOptions{}); !errors.As(err, &ie) {
		t.Errorf("few points inside: %v", err)
	}
}
