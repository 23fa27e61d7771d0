package separation

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

// A truth is a compound whose retention is known in closed form.
type truth struct {
	name              string
	logKw, s, area, n float64
}

var mixture = []truth{{"a", 2.10, 3.2, 100, 8000}, {"b", 2.45, 4.1, 70, 8200}, {"c", 2.62, 4.0, 40, 9000}, {"d", 3.30, 5.2, 20, 9000}, {"e", 3.05, 4.1, 9, 9500}}

// isocraticRun makes the run that the linear solvent strength model gives.
func isocraticRun(name string, phi float64, named bool) Run {
	r := Run{Name: name, Phi: phi, VoidMin: 1.2}
	for _, c := range mixture {
		t := r.VoidMin * (1 + math.Pow(10, c.logKw-c.s*phi))
		p := Peak{RetentionMin: t, WidthHalfMin: t * math.Sqrt(5.54/c.n), Area: c.area}
		if named {
			p.Compound = c.name
		}
		r.Peaks = append(r.Peaks, p)
	}
	slices.SortFunc(r.Peaks, func(a, b Peak) int { return int(math.Copysign(1, a.RetentionMin-b.RetentionMin)) })
	return r
}

func analyse(t *testing.T, l Limits, runs ...Run) *Result {
	t.Helper()
	r, err := Analyse(runs, l)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func near(t *testing.T, what string, got, want, within float64) {
	t.Helper()
	if !(math.Abs(got-want) <= within) {
		t.Errorf("%s: %.12g, want %.12g ± %g", what, got, want, within)
	}
}

// TestLineRecovered: from two runs that follow the model in closed form, its parameters come back, whether the peaks are named or followed by
// area, although two of them change places between the runs.
func TestLineRecovered(t *testing.T) {
	for _, named := range []bool{true, false} {
		r := analyse(t, Limits{}, isocraticRun("1", 0.30, named), isocraticRun("2", 0.45, named))
		for _, c := range r.Compounds {
			k := slices.IndexFunc(mixture, func(m truth) bool { return m.area == c.Area })
			near(t, c.Name+" log kw", c.Model.LogKw, mixture[k].logKw, 1e-9)
			near(t, c.Name+" S", c.Model.S, mixture[k].s, 1e-9)
			near(t, c.Name+" N", c.Plates, mixture[k].n, 1e-6)
		}
		for _, phi := range []float64{0.32, 0.40, 0.55} {
			want := isocraticRun("x", phi, false)
			for i, p := range r.Predict(phi) {
				near(t, "retention", p.RetentionMin, want.Peaks[i].RetentionMin, 1e-9)
				if i > 0 {
					a, b := want.Peaks[i-1], want.Peaks[i]
					near(t, "resolution", *r.Predict(phi)[i-1].Resolution, 1.18*(b.RetentionMin-a.RetentionMin)/(a.WidthHalfMin+b.WidthHalfMin), 1e-9)
				}
			}
		}
	}
}

// TestOrderOfRuns: the order in which runs are given changes nothing.
func TestOrderOfRuns(t *testing.T) {
	runs := []Run{isocraticRun("1", 0.30, true), isocraticRun("2", 0.38, true), isocraticRun("3", 0.45, true)}
	a := analyse(t, Limits{}, runs...)
	b := analyse(t, Limits{}, runs[2], runs[0], runs[1])
	near(t, "best", a.Best.At, b.Best.At, 1e-6)
	near(t, "resolution", a.Best.Resolution, b.Best.Resolution, 1e-6)
}

// TestParabola: four runs on a parabola show that a line is not enough; four on a line with scatter do not.
func TestParabola(t *testing.T) {
	phi := []float64{0.2, 0.3, 0.4, 0.5}
	curved, straight := make([]float64, 4), make([]float64, 4)
	for i, p := range phi {
		wobble := []float64{1e-4, -2e-4, 2e-4, -1e-4}[i]
		curved[i] = math.Pow(10, 2.5-5*p+3*p*p+wobble)
		straight[i] = math.Pow(10, 2.5-4*p+wobble)
	}
	m, err := fitIsocratic(phi, curved)
	if err != nil || m.Algorithm != ParabolaAlgorithm {
		t.Fatalf("%+v, %v", m, err)
	}
	near(t, "log kw", m.LogKw, 2.5, 0.01)
	near(t, "S", m.S, 5, 0.05)
	near(t, "C", m.C, 3, 0.06)
	m, err = fitIsocratic(phi, straight)
	if err != nil || m.Algorithm != LineAlgorithm || m.SStdU == nil {
		t.Fatalf("%+v, %v", m, err)
	}
	near(t, "S", m.S, 4, 0.01)
}

// TestLineByHand: slope, intercept and their standard uncertainties of three points, worked out by the formulas of linear regression
// (J. N. Miller, J. C. Miller, Statistics and Chemometrics for Analytical Chemistry, chapter 5, from memory).
func TestLineByHand(t *testing.T) {
	// log k = 1.00, 0.55, 0.00 at φ = 0.2, 0.3, 0.4: slope −5.0, mean 0.51667, intercept 2.01667; residuals 1/60·(−1, 2, −1)
	m, err := fitIsocratic([]float64{0.2, 0.3, 0.4}, []float64{10, math.Pow(10, 0.55), 1})
	if err != nil {
		t.Fatal(err)
	}
	sd := math.Sqrt(6.0 / 3600) // two runs' worth of parameters leave one degree of freedom
	near(t, "S", m.S, 5, 1e-9)
	near(t, "log kw", m.LogKw, 2.0166666666666667, 1e-9)
	near(t, "residual", *m.Residual, sd, 1e-9)
	near(t, "u(S)", *m.SStdU, sd/math.Sqrt(0.02), 1e-9)
	near(t, "u(log kw)", *m.LogKwStdU, sd*math.Sqrt(1.0/3+0.09/0.02), 1e-9)
}

// integrated is the retention in a gradient by walking along the column: the fraction passed in dt is dt/(t0 k(φ)).
func integrated(c truth, g Gradient, void float64) float64 {
	passed, t := 0.0, 0.0
	const dt = 2e-5
	for passed < 1 {
		phi := g.StartPhi
		if u := t + dt/2 - g.DwellMin; u > 0 {
			phi = math.Min(g.StartPhi+(g.EndPhi-g.StartPhi)*u/g.TimeMin, g.EndPhi)
		}
		passed += dt / (void * math.Pow(10, c.logKw-c.s*phi))
		t += dt
	}
	return t + void
}

// TestGradientTime: the closed form against the walk along the column, with and without dwell, for what leaves before the gradient comes,
// in it, and after its end.
func TestGradientTime(t *testing.T) {
	for _, c := range []truth{{"early", 0.4, 3, 0, 0}, {"in it", 2.2, 4, 0, 0}, {"late", 3.4, 5, 0, 0}, {"after", 4.3, 4.5, 0, 0}} {
		for _, g := range []Gradient{{0.1, 0.6, 10, 0}, {0.1, 0.6, 30, 1.5}, {0.05, 0.7, 5, 3}} {
			got := Model{LogKw: c.logKw, S: c.s}.gradientTime(g, 1.2)
			near(t, fmt.Sprint(c.name, g), got, integrated(c, g, 1.2), 2e-4)
		}
	}
}

func gradientRun(name string, time float64) Run {
	r := Run{Name: name, VoidMin: 1.2, Gradient: &Gradient{0.1, 0.7, time, 0.8}}
	for _, c := range mixture {
		r.Peaks = append(r.Peaks, Peak{Compound: c.name, RetentionMin: integrated(c, *r.Gradient, r.VoidMin), WidthHalfMin: 0.05 + time/400, Area: c.area})
	}
	slices.SortFunc(r.Peaks, func(a, b Peak) int { return int(math.Copysign(1, a.RetentionMin-b.RetentionMin)) })
	return r
}

// TestGradientsRecovered: from gradients of two slopes, whose retention comes from the walk along the column, the model comes back, and
// predicts a third.
func TestGradientsRecovered(t *testing.T) {
	r := analyse(t, Limits{}, gradientRun("1", 10), gradientRun("2", 30))
	for _, c := range r.Compounds {
		k := slices.IndexFunc(mixture, func(m truth) bool { return m.name == c.Name })
		near(t, c.Name+" log kw", c.Model.LogKw, mixture[k].logKw, 0.005)
		near(t, c.Name+" S", c.Model.S, mixture[k].s, 0.01)
	}
	want := gradientRun("3", 20)
	for i, p := range r.Predict(20) {
		near(t, "retention", p.RetentionMin, want.Peaks[i].RetentionMin, 1e-3)
		near(t, "width", p.WidthHalfMin, want.Peaks[i].WidthHalfMin, 1e-9)
	}
	if !r.Gradients || r.Best == nil || r.Best.At < 10 || r.Best.At > 30 {
		t.Errorf("best %+v", r.Best)
	}
}

// TestBest: the best of the map is the best of a fine walk over the model in closed form, within the time; and where the resolution falls under
// 1.5 is where that walk says.
func TestBest(t *testing.T) {
	limit := 14.0
	r := analyse(t, Limits{TimeMin: limit}, isocraticRun("1", 0.30, true), isocraticRun("2", 0.55, true))
	critical := func(phi float64) (rs, last float64) {
		run := isocraticRun("x", phi, true)
		rs = math.Inf(1)
		for i := 1; i < len(run.Peaks); i++ {
			a, b := run.Peaks[i-1], run.Peaks[i]
			rs = math.Min(rs, 1.18*(b.RetentionMin-a.RetentionMin)/(a.WidthHalfMin+b.WidthHalfMin))
		}
		end := run.Peaks[len(run.Peaks)-1]
		return rs, end.RetentionMin + 1.5*end.WidthHalfMin
	}
	bestPhi, bestRs := 0.0, 0.0
	for phi := 0.30; phi <= 0.55; phi += 1e-5 {
		if rs, last := critical(phi); last <= limit && rs > bestRs {
			bestPhi, bestRs = phi, rs
		}
	}
	near(t, "best φ", r.Best.At, bestPhi, 2e-5)
	near(t, "its resolution", r.Best.Resolution, bestRs, 1e-3)
	if !r.Best.Holds {
		t.Fatalf("best %+v", r.Best)
	}
	for _, edge := range []float64{r.Best.LowTolerated, r.Best.HighTolerated} {
		if edge == r.LowStudied || edge == r.HighStudied {
			continue
		}
		rs, last := critical(edge)
		if math.Abs(last-limit) < 1e-6 && rs > 1.5 {
			continue // the time ends it
		}
		near(t, "resolution at the edge", rs, 1.5, 1e-6)
	}
	outside := 0
	for _, p := range r.Map {
		if p.Outside {
			outside++
		}
	}
	if outside == 0 || outside > len(r.Map)/2 {
		t.Errorf("%d points of the map are extrapolated", outside)
	}
}

func TestRefused(t *testing.T) {
	a, b := isocraticRun("1", 0.30, true), isocraticRun("2", 0.45, true)
	change := func(f func(r *Run)) []Run {
		r := b
		r.Peaks = slices.Clone(b.Peaks)
		f(&r)
		return []Run{a, r}
	}
	for _, tt := range []struct {
		name string
		runs []Run
		want string
	}{
		{"one run", []Run{a}, "got 1 runs, want at least two"},
		{"same composition", change(func(r *Run) { r.Phi = 0.30 }), "run 2: got the composition of run 1 again"},
		{"before the void", change(func(r *Run) { r.Peaks[0].RetentionMin = 1.1 }), "run 2: got a peak at 1.1 min, want one after the void time"},
		{"φ", change(func(r *Run) { r.Phi = 45 }), "run 2: got φ of 45, want a fraction from 0 to 1"},
		{"missing", change(func(r *Run) { r.Peaks = r.Peaks[1:] }), `run 2: got no peak of "`},
		{"twice", change(func(r *Run) { r.Peaks[1].Compound = r.Peaks[0].Compound }), `" twice, want each once`},
		{"unknown", change(func(r *Run) { r.Peaks[1].Compound = "z" }), `run 2: got the compound "z", which run 1 does not have`},
		{"half named", change(func(r *Run) { r.Peaks[1].Compound = "" }), "got 9 peaks with a name and 1 without"},
		{"not finite", change(func(r *Run) { r.Peaks[1].RetentionMin = math.NaN() }), "run 2: got a peak at NaN min"},
		{"no width", change(func(r *Run) { r.Peaks[1].WidthHalfMin = 0 }), "run 2: got a peak at"},
		{"mixed", []Run{a, gradientRun("2", 10)}, "run 2: got an isocratic run beside a gradient"},
		{"other void", change(func(r *Run) { r.VoidMin = 1.3 }), "run 2: got a void time of 1.3 min"},
		{"alike", func() []Run {
			x, y := isocraticRun("1", 0.30, false), isocraticRun("2", 0.45, false)
			x.Peaks[0].Area, x.Peaks[1].Area = 50, 49
			return []Run{x, y}
		}(), "run 1: got the areas 50 and 49"},
	} {
		_, err := Analyse(tt.runs, Limits{})
		var e *Error
		if !errors.As(err, &e) || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: got %v, want %s", tt.name, err, tt.want)
		}
	}
}

// TestNoCompositionInTime: where nothing keeps the limits nothing is recommended.
func TestNoCompositionInTime(t *testing.T) {
	r := analyse(t, Limits{TimeMin: 1.5}, isocraticRun("1", 0.30, true), isocraticRun("2", 0.45, true))
	if r.Best != nil || len(r.Remarks) == 0 {
		t.Errorf("%+v, %v", r.Best, r.Remarks)
	}
}

func ExampleAnalyse() {
	r, err := Analyse([]Run{
		{Name: "30 %", Phi: 0.30, VoidMin: 1.0, Peaks: []Peak{{"x", 5.0, 0.10, 100}, {"y", 5.6, 0.11, 60}}},
		{Name: "50 %", Phi: 0.50, VoidMin: 1.0, Peaks: []Peak{{"x", 1.8, 0.04, 100}, {"y", 1.86, 0.04, 60}}},
	}, Limits{TimeMin: 6})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("φ = %.3f: critical resolution %.2f, from %.3f to %.3f at least 1.5\n", r.Best.At, r.Best.Resolution, r.Best.LowTolerated, r.Best.HighTolerated)
	// Output: φ = 0.300: critical resolution 3.22, from 0.300 to 0.441 at least 1.5
}

// BenchmarkAnalyse: twenty compounds, the whole map.
func BenchmarkAnalyse(b *testing.B) {
	runs := make([]Run, 3)
	for i := range runs {
		runs[i] = Run{Name: fmt.Sprint(i), Phi: 0.25 + 0.1*float64(i), VoidMin: 1}
		for c := range 20 {
			k := math.Pow(10, 1.2+0.07*float64(c)-(3+0.05*float64(c))*runs[i].Phi)
			runs[i].Peaks = append(runs[i].Peaks, Peak{fmt.Sprint(c), 1 + k, (1 + k) * 0.025, float64(c + 1)})
		}
	}
	for b.Loop() {
		if _, err := Analyse(runs, Limits{}); err != nil {
			b.Fatal(err)
		}
	}
}
