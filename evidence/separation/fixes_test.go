package separation

import (
	"errors"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

// TestParabolaTakenByChance: straight lines with scatter are taken for parabolas as often as the test's level says, whatever the number of runs.
func TestParabolaTakenByChance(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for _, n := range []int{4, 5, 6, 8} {
		const tries = 10000
		taken := 0
		for range tries {
			phi, k := make([]float64, n), make([]float64, n)
			for i := range phi {
				phi[i] = 0.2 + 0.3*float64(i)/float64(n-1)
				k[i] = math.Pow(10, 2.5-4*phi[i]+0.002*r.NormFloat64())
			}
			if m, err := fitIsocratic(phi, k); err != nil {
				t.Fatal(err)
			} else if m.Algorithm == ParabolaAlgorithm {
				taken++
			}
		}
		near(t, "share of parabolas", float64(taken)/tries, 0.05, 0.009) // four standard deviations of a count of 500
	}
}

// TestFCritical: F of 161.45 with 1 and 1 and of 10.13 with 1 and 3 degrees of freedom has the probability 0.05 (tables of F, from memory).
func TestFCritical(t *testing.T) {
	for _, n := range []int{4, 6} {
		phi, k := make([]float64, n), make([]float64, n)
		r := rand.New(rand.NewPCG(uint64(n), 1))
		critical := map[int]float64{4: 161.45, 6: 10.13}[n]
		for range 2000 {
			for i := range phi {
				phi[i] = 0.2 + 0.05*float64(i)
				k[i] = math.Pow(10, 2-3*phi[i]+0.01*r.NormFloat64())
			}
			m, err := fitIsocratic(phi, k)
			if err != nil {
				t.Fatal(err)
			}
			if (*m.F > critical) != (m.Algorithm == ParabolaAlgorithm) && math.Abs(*m.F/critical-1) > 1e-3 {
				t.Errorf("%d runs: F %g with p %g gives %s", n, *m.F, *m.FProbability, m.Algorithm)
			}
		}
	}
}

// TestExactLine: runs that lie on a line but for rounding are not tested for curvature.
func TestExactLine(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for range 1000 {
		a, b := 2+r.Float64(), 3+3*r.Float64()
		phi, k := []float64{.2, .3, .4, .5, .6}, make([]float64, 5)
		for i, p := range phi {
			k[i] = math.Pow(10, a-b*p)
		}
		m, err := fitIsocratic(phi, k)
		if err != nil || m.Algorithm != LineAlgorithm || m.F != nil {
			t.Fatalf("%+v, %v", m, err)
		}
	}
}

// TestParabolaUncertainty: the parabola's standard uncertainties cover its true coefficients in 95 % of many studies, by Student's t.
func TestParabolaUncertainty(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	const tries, student = 10000, 3.182446 // t of 3 degrees of freedom, 95 % (table)
	inside := [3]int{}
	for range tries {
		phi, k := []float64{.2, .25, .3, .35, .4, .5}, make([]float64, 6)
		for i, p := range phi {
			k[i] = math.Pow(10, 2.5-5*p+3*p*p+0.0005*r.NormFloat64())
		}
		m, err := fitIsocratic(phi, k)
		if err != nil || m.CStdU == nil {
			t.Fatalf("%+v, %v", m, err)
		}
		for i, d := range []float64{(m.LogKw - 2.5) / *m.LogKwStdU, (m.S - 5) / *m.SStdU, (m.C - 3) / *m.CStdU} {
			if math.Abs(d) < student {
				inside[i]++
			}
		}
	}
	for _, n := range inside {
		near(t, "coverage", float64(n)/tries, 0.95, 0.01)
	}
}

func TestRefusedToo(t *testing.T) {
	a := Run{Name: "1", Phi: .3, VoidMin: 1, Peaks: []Peak{{"", 5, .1, 100}, {"", 8, .15, 70}}}
	hidden := Run{Name: "2", Phi: .4, VoidMin: 1, Peaks: []Peak{{"", 3, .06, 120}, {"", 4, .08, 50}}}
	early := func(name string, time float64) Run {
		return Run{Name: name, VoidMin: 1, Gradient: &Gradient{0.05, 0.95, time, 1}, Peaks: []Peak{{"x", 1.6, .05, 1}, {"y", 2 + time/4, .1, 1}}}
	}
	b := isocraticRun("1", 0.3, true)
	c := isocraticRun("2", 0.4, true)
	for _, tt := range []struct {
		runs   []Run
		limits Limits
		want   string
	}{
		{[]Run{a, hidden}, Limits{}, "run 2: got 70.6 % of the area in the peak at 3 min, want 58.8 % to within 15 %"},
		{[]Run{early("1", 8), early("2", 24)}, Limits{}, "want one after 2 min: what leaves before the gradient comes says nothing of S"},
		{[]Run{b, c}, Limits{TimeMin: math.NaN()}, "got a limit of NaN"},
		{[]Run{b, c}, Limits{Resolution: -1}, "got a limit of -1"},
		{[]Run{b, c}, Limits{MinK: 5, MaxK: 2}, "got retention factors from 5 to 2"},
	} {
		_, err := Analyse(tt.runs, tt.limits)
		var e *Error
		if !errors.As(err, &e) || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("got %v, want %s", err, tt.want)
		}
	}
}

// TestChromatogram: the area under the trace is the sum of the areas, and the trace is the mixture's in closed form.
func TestChromatogram(t *testing.T) {
	r := analyse(t, Limits{}, isocraticRun("1", 0.30, true), isocraticRun("2", 0.45, true))
	times := make([]float64, 40001)
	for i := range times {
		times[i] = 1 + float64(i)*0.001
	}
	y, err := r.Chromatogram(0.40, times)
	if err != nil {
		t.Fatal(err)
	}
	sum := 0.0
	for _, v := range y {
		sum += v * 0.001
	}
	near(t, "area", sum, 100+70+40+20+9, 1e-6)
	// At any time the sum of the closed forms of the mixture.
	for i, at := range times {
		want := 0.0
		for _, c := range mixture {
			apex := 1.2 * (1 + math.Pow(10, c.logKw-c.s*0.40))
			sigma := apex * math.Sqrt(5.54/c.n) / math.Sqrt(8*math.Ln2)
			want += c.area / (sigma * math.Sqrt(2*math.Pi)) * math.Exp(-(at-apex)*(at-apex)/(2*sigma*sigma))
		}
		if math.Abs(y[i]-want) > 1e-6 {
			t.Fatalf("%g at %g min, want %g", y[i], at, want)
		}
	}
	for _, at := range []float64{math.NaN(), math.Inf(1)} {
		if _, err := r.Chromatogram(at, times[:3]); err == nil {
			t.Errorf("%g accepted", at)
		}
	}
	if _, err := r.Chromatogram(0.4, []float64{math.NaN()}); err == nil {
		t.Error("a time that is no number accepted")
	}
}
