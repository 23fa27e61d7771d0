package peak

import (
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

// Pure white noise, 2,000 traces of 180 points, a threshold of three: few peaks. The rates are what was reached when this was
// written (regression guard: 5 and 2 false peaks), the limit, 1 % of the traces, is what a method can live with.
func TestFalsePeaks(t *testing.T) {
	for _, window := range []int{5, 7, 9, 11, 13} {
		p := demo
		p.SmoothingPoints = window
		peaks := 0
		for seed := range uint64(2000) {
			r, err := Detect(made(180, 0.4/60, 100, 0, 10, seeded(seed)), p)
			if err != nil {
				t.Fatal(err)
			}
			peaks += len(r.Peaks)
		}
		t.Logf("window of %d points: %d peaks in 2000 traces of noise", window, peaks)
		if peaks > 20 {
			t.Errorf("window of %d points: %d peaks in 2000 traces of noise, want 20 at most", window, peaks)
		}
	}
	// noise that a filter has smoothed is harder
	peaks := 0
	for seed := range uint64(2000) {
		c := made(180, 0.4/60, 0, 0, 10, seeded(seed))
		filter(c.Intensity, 0.3)
		r, err := Detect(c, demo)
		if err != nil {
			t.Fatal(err)
		}
		peaks += len(r.Peaks)
	}
	t.Logf("filtered, 0.3: %d peaks in 2000 traces", peaks)
	if peaks > 200 {
		t.Errorf("filtered, 0.3: %d peaks in 2000 traces of noise, want 200 at most", peaks)
	}
}

// Small peaks are found: of those with a true height of three noises nine in ten with a window as wide as the half width, of
// those with five all.
func TestSmallPeaksAreFound(t *testing.T) {
	p := demo
	p.SmoothingPoints = 11
	for _, tt := range []struct{ sn, least float64 }{{3, 0.9}, {4, 0.99}, {5, 0.998}, {10, 1}} {
		g := emg{1, 0.6, 0.04, 0.01}
		_, h := g.apex()
		g.area = tt.sn * 10 / h
		found := 0.0
		const seeds = 1000
		for seed := range uint64(seeds) {
			r, err := Detect(made(180, 0.4/60, 100, 50, 10, seeded(seed), g), p)
			if err != nil {
				t.Fatal(err)
			}
			for _, k := range r.Peaks {
				if k.SignalToNoise < p.MinSN {
					t.Fatalf("a peak with signal-to-noise %v, want at least %v", k.SignalToNoise, p.MinSN)
				}
				if math.Abs(k.ApexMin-g.mu) < 0.08 {
					found++
					break
				}
			}
		}
		t.Logf("S/N %v: %.1f %% found", tt.sn, 100*found/seeds)
		if found/seeds < tt.least {
			t.Errorf("S/N %v: %.3f found, want %v", tt.sn, found/seeds, tt.least)
		}
	}
}

// Another unit or detector range gives the same peaks: with powers of two bit by bit, with other factors within 1e-12.
func TestScale(t *testing.T) {
	g, q := emg{1, 0.5, 0.035, 0.015}, emg{0.3, 0.72, 0.035, 0.015}
	_, h := g.apex()
	for seed := range uint64(20) {
		base := made(180, 0.4/60, h/10, h/20, h/200, seeded(seed), g, q)
		want, err := Detect(base, demo)
		if err != nil || len(want.Peaks) == 0 {
			t.Fatal(err, want)
		}
		for _, f := range []struct{ time, counts, within float64 }{{1, 1024, 0}, {1, 0x1p-20, 0}, {64, 1, 0}, {0.125, 4, 0}, {60, 1, 1e-12}, {1, 1e6, 1e-12}, {1. / 60, 0.001, 1e-12}} {
			c := trace.Chromatogram{ID: base.ID}
			for i := range base.TimeMin {
				c.TimeMin = append(c.TimeMin, base.TimeMin[i]*f.time)
				c.Intensity = append(c.Intensity, base.Intensity[i]*f.counts)
			}
			p := demo
			p.MinWidthMin *= f.time
			got, err := Detect(c, p)
			if err != nil {
				t.Fatal(err)
			}
			if len(got.Peaks) != len(want.Peaks) || got.NoisePoints != want.NoisePoints || got.NoiseMethod != want.NoiseMethod {
				t.Fatalf("factors %v: %+v, want as %+v", f, got, want)
			}
			for i := range got.Peaks {
				a, b := got.Peaks[i], want.Peaks[i]
				if a.Points != b.Points || a.StartKind != b.StartKind || a.EndKind != b.EndKind || !reflect.DeepEqual(a.Flags, b.Flags) {
					t.Errorf("factors %v, peak %d: %+v, want as %+v", f, i, a, b)
				}
				pairs := [][2]float64{{a.StartMin, b.StartMin * f.time}, {a.ApexMin, b.ApexMin * f.time}, {a.EndMin, b.EndMin * f.time},
					{a.Area, b.Area * f.time * f.counts}, {a.Height, b.Height * f.counts}, {a.Noise, b.Noise * f.counts},
					{a.SignalToNoise, b.SignalToNoise}, {value(a.WidthHalfMin), scaled(b.WidthHalfMin, f.time)}, {value(a.Plates), value(b.Plates)},
					{value(a.Symmetry), value(b.Symmetry)}, {a.AreaStdU, b.AreaStdU * f.time * f.counts}, {a.BaselineEndCounts, b.BaselineEndCounts * f.counts}}
				for j, v := range pairs {
					if math.Abs(v[0]-v[1]) > f.within*math.Abs(v[1]) {
						t.Errorf("factors %v, peak %d, figure %d: %v, want %v within %v", f, i, j, v[0], v[1], f.within)
					}
				}
			}
		}
	}
}

// value is a figure, or -1 where it is absent.
func value(v *float64) float64 {
	if v == nil {
		return -1
	}
	return *v
}

func scaled(v *float64, f float64) float64 {
	if v == nil {
		return -1
	}
	return *v * f
}

// The same call gives the same result, whatever the reused slices held before.
func TestReuse(t *testing.T) {
	g := emg{1, 0.5, 0.035, 0.015}
	_, h := g.apex()
	c := made(180, 0.4/60, h/10, h/20, h/50, seeded(1), g)
	want, _ := Detect(c, demo)
	for n := range uint64(20) {
		if _, err := Detect(made(50+int(n)*37, 0.01, 0, 1, 3, seeded(n), emg{5, 0.3, 0.03, 0.01}), demo); err != nil {
			t.Fatal(err)
		}
		if got, _ := Detect(c, demo); !reflect.DeepEqual(got, want) {
			t.Fatalf("another result after %d other traces", n+1)
		}
	}
}

func TestFlags(t *testing.T) {
	g := emg{1, 0.6, 0.035, 0.015}
	_, h := g.apex()
	whole := made(180, 0.4/60, h, 0, h/200, seeded(2), g)
	part := func(from, to int) trace.Chromatogram {
		return traceOf("part", whole.TimeMin[from:to], whole.Intensity[from:to])
	}
	if k := only(t, whole, demo); len(k.Flags) != 0 || k.StartKind != AtBaseline || k.EndKind != AtBaseline {
		t.Errorf("whole peak: %q, %s, %s", k.Flags, k.StartKind, k.EndKind)
	}
	if k := only(t, part(85, 180), demo); !has(k.Flags, FlagCutAtStart) || k.StartKind != AtTraceEnd || k.StartMin != whole.TimeMin[85] {
		t.Errorf("cut at its start: %q, %s at %v", k.Flags, k.StartKind, k.StartMin)
	}
	if k := only(t, part(0, 99), demo); !has(k.Flags, FlagCutAtEnd) || k.EndKind != AtTraceEnd || k.EndMin != whole.TimeMin[98] {
		t.Errorf("cut at its end: %q, %s at %v", k.Flags, k.EndKind, k.EndMin)
	}
	if r, err := Detect(part(96, 180), demo); err != nil || len(r.Peaks) != 0 {
		t.Errorf("a trace that begins behind the apex: %v, %+v; want no peak", err, r.Peaks)
	}
	flat := traceOf("flat", whole.TimeMin, append([]float64(nil), whole.Intensity...))
	for i, v := range flat.Intensity {
		flat.Intensity[i] = min(v, h+0.7*h)
	}
	if k := only(t, flat, demo); !has(k.Flags, FlagSaturated) {
		t.Errorf("flat top: %q", k.Flags)
	}
	spike := made(180, 0.4/60, 100, 0, 1, seeded(2))
	spike.Intensity[90] += 200
	wide := demo
	wide.MinWidthMin = 0
	if k := only(t, spike, wide); !has(k.Flags, FlagSpike) || !has(k.Flags, FlagFewPoints) {
		t.Errorf("one stray point: %q", k.Flags)
	}
	if r, err := Detect(spike, demo); err != nil || len(r.Peaks) != 0 {
		t.Errorf("one stray point narrower than a peak may be: %v, %+v", err, r.Peaks)
	}
	low := made(180, 0.4/60, -h/10, 0, h/200, seeded(2), g)
	if k := only(t, low, demo); !has(k.Flags, FlagNegativeBaseline) {
		t.Errorf("baseline under zero: %q", k.Flags)
	}
	if k := only(t, readTrace(t, "rider_on_tail"), demo); !has(k.Flags, FlagShoulder) {
		t.Errorf("rider without a maximum: %q", k.Flags)
	}
}

// Valleys: one baseline with a perpendicular; lines that touch the valley; and a valley so low that it separates.
func TestSharedValleys(t *testing.T) {
	const step, sn = 0.4 / 60, 2000
	a := emg{1, 0.5, 0.035, 0.01}
	_, h := a.apex()
	b := a
	b.mu += 0.16
	c := made(180, step, h/10, h/30, h/sn, seeded(1), a, b)
	find := func(p Parameters) []Peak {
		r, err := Detect(c, p)
		if err != nil {
			t.Fatal(err)
		}
		if len(r.Peaks) != 2 {
			t.Fatalf("%d peaks, want 2", len(r.Peaks))
		}
		return r.Peaks
	}
	p := Parameters{SmoothingPoints: 9, MinSN: 3, Shared: Drop}
	k := find(p)
	if k[0].EndKind != AtValley || k[1].StartKind != AtValley || k[0].EndMin != k[1].StartMin ||
		k[0].BaselineStartCounts != k[1].BaselineStartCounts || k[0].BaselineEndMin != k[1].BaselineEndMin || k[0].BaselineEndMin != k[1].EndMin {
		t.Errorf("perpendicular: %+v", k)
	}
	if sum := k[0].Area + k[1].Area; math.Abs(sum-2) > 0.003 {
		t.Errorf("perpendicular: areas add up to %v, want 2 within 0.003", sum)
	}
	dropped := k[0].Area + k[1].Area
	p.Shared = Valley
	k = find(p)
	at := 0
	for c.TimeMin[at] != k[0].EndMin {
		at++
	}
	if k[0].EndKind != AtValley || k[0].BaselineEndMin != k[0].EndMin || k[1].BaselineStartMin != k[0].EndMin ||
		k[0].BaselineEndCounts != c.Intensity[at] || k[0].BaselineEndPoints != 1 {
		t.Errorf("valley to valley: %+v", k)
	}
	if lost := dropped - k[0].Area - k[1].Area; lost <= 0 {
		t.Errorf("valley to valley: area larger by %v than with the perpendicular", -lost)
	}
	p.Shared, p.ValleyFraction = Drop, 0.5
	k = find(p)
	if k[0].EndKind != AtBaseline || k[1].StartKind != AtBaseline || k[0].EndMin != k[1].StartMin || k[0].BaselineEndMin != k[0].EndMin {
		t.Errorf("separate: %+v", k)
	}
}

func TestRefusals(t *testing.T) {
	ok := made(20, 0.01, 1, 0, 1, seeded(1))
	bad := func(change func(c *trace.Chromatogram)) trace.Chromatogram {
		c := traceOf("t", append([]float64(nil), ok.TimeMin...), append([]float64(nil), ok.Intensity...))
		change(&c)
		return c
	}
	traces := map[string]trace.Chromatogram{
		"got 19 times and 20 intensities":  bad(func(c *trace.Chromatogram) { c.TimeMin = c.TimeMin[:19] }),
		"got 4 points, want at least five": bad(func(c *trace.Chromatogram) { c.TimeMin, c.Intensity = c.TimeMin[:4], c.Intensity[:4] }),
		"point 8: got time 0.06 min":       bad(func(c *trace.Chromatogram) { c.TimeMin[7] = c.TimeMin[6] }),
		"point 3: got intensity NaN":       bad(func(c *trace.Chromatogram) { c.Intensity[2] = math.NaN() }),
		"point 20: got time +Inf min":      bad(func(c *trace.Chromatogram) { c.TimeMin[19] = math.Inf(1) }),
		"point 1: got intensity 1e+200":    bad(func(c *trace.Chromatogram) { c.Intensity[0] = 1e200 }),
	}
	for want, c := range traces {
		var e *TraceError
		if _, err := Detect(c, demo); !errors.As(err, &e) || !strings.Contains(err.Error(), want) {
			t.Errorf("Detect: %v, want a TraceError with %q", err, want)
		}
		if _, err := Integrate(c, 0, 0.1, 1); !errors.As(err, &e) {
			t.Errorf("Integrate: %v, want a TraceError with %q", err, want)
		}
	}
	for name, change := range map[string]func(p *Parameters){
		"smoothing_points":    func(p *Parameters) { p.SmoothingPoints = 8 },
		"min_signal_to_noise": func(p *Parameters) { p.MinSN = 0 },
		"min_width_min":       func(p *Parameters) { p.MinWidthMin = math.NaN() },
		"shared_valley":       func(p *Parameters) { p.Shared = "" },
		"valley_fraction":     func(p *Parameters) { p.ValleyFraction = 1 },
		"edge_fraction":       func(p *Parameters) { p.EdgeFraction = -1 },
	} {
		p := demo
		change(&p)
		var e *ParameterError
		if _, err := Detect(ok, p); !errors.As(err, &e) || e.Name != name {
			t.Errorf("Detect: %v, want a ParameterError for %s", err, name)
		}
	}
	// short traces are no error
	for n := 5; n < 20; n++ {
		if _, err := Detect(traceOf("short", ok.TimeMin[:n], ok.Intensity[:n]), demo); err != nil {
			t.Errorf("%d points: %v", n, err)
		}
	}
}

func TestHalvings(t *testing.T) {
	for f, want := range map[float64]float64{1: 0, 0.5: 1, 0.25: 2, 0x1p-13: 13, 0.01: 6.643856, 0.3: 1.736966} {
		if got := halvings(f); math.Abs(got-want) > 0.09 { // base-2 logarithms
			t.Errorf("halvings(%v) = %v, want %v within 0.09", f, got, want)
		}
	}
}
