package peak

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// The banded solution against a dense Cholesky solution of the same system.
//
// Source: gonum.org/v1/gonum/mat, and the definition of second divided differences.
func TestWhittakerDense(t *testing.T) {
	for _, uneven := range []float64{0, 0.4} {
		for _, n := range []int{5, 6, 7, 8, 9, 10, 15, 16, 17, 18, 19, 50, 301} {
			for _, lambda := range []float64{1, 1e3, 1e7} {
				rng := seeded(uint64(n))
				c := made(n, 0.01, 0, 0, 0, rng)
				w, y := make([]float64, n), make([]float64, n)
				for i := range w {
					c.TimeMin[i] += uneven * 0.01 * (2*rng.Float64() - 1)
					w[i] = []float64{0.001, 1, 0.999}[rng.IntN(3)]
					y[i] = rng.NormFloat64() + float64(i)/float64(n)
				}
				s, err := newWhittaker("w", c.TimeMin, lambda)
				if err != nil {
					t.Fatal(err)
				}
				s.solve(w, y)
				d := mat.NewDense(n-2, n, nil)
				step := (c.TimeMin[n-1] - c.TimeMin[0]) / float64(n-1)
				for i := range n - 2 {
					a, b := (c.TimeMin[i+1]-c.TimeMin[i])/step, (c.TimeMin[i+2]-c.TimeMin[i+1])/step
					if s.even {
						a, b = 1, 1
					}
					d.Set(i, i, 2/(a*(a+b)))
					d.Set(i, i+1, -2/(a*b))
					d.Set(i, i+2, 2/(b*(a+b)))
				}
				var m mat.SymDense
				m.SymOuterK(lambda, d.T())
				r := mat.NewVecDense(n, nil)
				for i := range n {
					m.SetSym(i, i, m.At(i, i)+w[i])
					r.SetVec(i, w[i]*y[i])
				}
				var chol mat.Cholesky
				if !chol.Factorize(&m) {
					t.Fatal("dense")
				}
				want := mat.NewVecDense(n, nil)
				if err := chol.SolveVecTo(want, r); err != nil {
					t.Fatal(err)
				}
				for i := range n {
					if tol := 1e-15 * chol.Cond() * 10; math.Abs(s.z[i]-want.AtVec(i)) > math.Max(tol, 1e-12) {
						t.Fatalf("n %d, λ %v, uneven %v, point %d: %v, want %v (condition %.1e)", n, lambda, uneven, i, s.z[i], want.AtVec(i), chol.Cond())
					}
				}
			}
		}
	}
}

// A curve of known form under peaks of known area: both find it, evenly sampled or not, and the peaks keep their areas. Truth: the
// curve and the areas that the trace was made with.
func TestGlobalBaselines(t *testing.T) {
	const n, step, sd = 4000, 0.0025, 0.5
	curve := func(x float64) float64 { return 200 + 60*math.Sin(x/2.5) + 8*x }
	peaks := []emg{{30, 1.5, 0.03, 0.015}, {60, 4, 0.03, 0.02}, {20, 6.5, 0.04, 0.02}, {80, 8.2, 0.03, 0.015}}
	for _, uneven := range []float64{0, 0.3} {
		rng := seeded(3)
		c := made(n, step, 0, 0, 0, rng)
		for i := range c.TimeMin {
			c.TimeMin[i] += uneven * step * (2*rng.Float64() - 1)
			c.Intensity[i] = curve(c.TimeMin[i]) + sd*rng.NormFloat64()
			for _, g := range peaks {
				c.Intensity[i] += g.at(c.TimeMin[i])
			}
		}
		als, err := ALS(c, 1e6, 0.001, 50)
		if err != nil {
			t.Fatal(err)
		}
		arpls, err := ArPLS(c, 1e7, 1e-6, 100)
		if err != nil {
			t.Fatal(err)
		}
		for _, g := range []struct {
			b   *GlobalBaseline
			off float64 // in noises: ALS lies near the lower edge of the noise, arPLS in its middle; the first and last twentieth left out
		}{{als, 5}, {arpls, 0.6}} {
			worst := 0.0
			for i, x := range c.TimeMin {
				if i > 200 && i < n-200 {
					worst = math.Max(worst, math.Abs(g.b.Counts[i]-curve(x))/sd)
				}
			}
			t.Logf("%s, uneven %v: %d iterations (at rest: %v), %.2f noises from the truth at most", g.b.Algorithm, uneven, g.b.Iterations, g.b.Converged, worst)
			if worst > g.off {
				t.Errorf("%s, uneven %v: %.2f noises from the truth, want %v at most", g.b.Algorithm, uneven, worst, g.off)
			}
			for _, p := range peaks {
				area := 0.0
				for i := 1; i < n; i++ {
					if c.TimeMin[i] > p.mu-0.25 && c.TimeMin[i] < p.mu+0.4 {
						area += (c.TimeMin[i] - c.TimeMin[i-1]) * (c.Intensity[i] - g.b.Counts[i] + c.Intensity[i-1] - g.b.Counts[i-1]) / 2
					}
				}
				// the window's width times the baseline's error, and three standard deviations of the noise on the sum
				if tol := 0.65*g.off*sd + 3*sd*math.Sqrt(0.65*step); math.Abs(area-p.area) > tol {
					t.Errorf("%s: area %v, want %v within %v", g.b.Algorithm, area, p.area, tol)
				}
			}
		}
	}
}

// A straight line is its own baseline, whatever the times; another unit gives the same baseline.
func TestGlobalBaselineInvariance(t *testing.T) {
	rng := seeded(9)
	c := made(500, 0.01, 0, 0, 0, rng)
	for i := range c.TimeMin {
		c.TimeMin[i] += 0.004 * rng.Float64()
		c.Intensity[i] = 5 - 2*c.TimeMin[i]
	}
	g, err := ALS(c, 1e6, 0.01, 10)
	if err != nil {
		t.Fatal(err)
	}
	for i, v := range g.Counts {
		if math.Abs(v-c.Intensity[i]) > 1e-9 {
			t.Fatalf("point %d of a straight line: %v, want %v", i, v, c.Intensity[i])
		}
	}
	noisy := made(500, 0.01, 1, 3, 0.1, rng, emg{1, 2, 0.1, 0})
	a, err := ArPLS(noisy, 1e5, 1e-6, 50)
	if err != nil {
		t.Fatal(err)
	}
	for i := range noisy.Intensity {
		noisy.Intensity[i] *= 1024
		noisy.TimeMin[i] *= 64
	}
	b, err := ArPLS(noisy, 1e5, 1e-6, 50)
	if err != nil {
		t.Fatal(err)
	}
	for i := range a.Counts {
		if a.Counts[i]*1024 != b.Counts[i] {
			t.Fatalf("point %d: %v, want %v", i, b.Counts[i], a.Counts[i]*1024)
		}
	}
}

// A straight line comes back from 200,000 points of any weights also where λ is largest.
func TestWhittakerLong(t *testing.T) {
	const n = 200001
	c := made(n, 0.01, 0, 0, 0, nil)
	for _, tt := range []struct{ lambda, within float64 }{{1e5, 1e-9}, {1e8, 1e-7}, {1e10, 1e-6}} {
		s, err := newWhittaker("long", c.TimeMin, tt.lambda)
		if err != nil {
			t.Fatal(err)
		}
		rng := seeded(3)
		w, y := make([]float64, n), make([]float64, n)
		for i := range y {
			w[i], y[i] = []float64{0.001, 0.999}[rng.IntN(2)], 2*float64(i)/n-1
		}
		s.solve(w, y)
		worst := 0.0
		for i := range y {
			worst = math.Max(worst, math.Abs(s.z[i]-y[i]))
		}
		t.Logf("λ %g: %.1e of the range at most", tt.lambda, worst)
		if worst > tt.within {
			t.Errorf("λ %g: wrong by %v", tt.lambda, worst)
		}
	}
}

func TestGlobalBaselineRefusals(t *testing.T) {
	ok := made(50, 0.01, 1, 0, 1, seeded(1))
	flat := made(50, 0.01, 1, 0, 0, nil)
	gap := made(50, 0.01, 1, 0, 1, seeded(1))
	for i := 25; i < 50; i++ {
		gap.TimeMin[i] += 2000
	}
	var te *TraceError
	var pe *ParameterError
	for _, err := range []error{
		second(ALS(flat, 100, 0.01, 10)), second(ArPLS(flat, 100, 0.01, 10)), second(ALS(gap, 100, 0.01, 10)),
		second(ALS(traceOf("few", ok.TimeMin[:4], ok.Intensity[:4]), 100, 0.01, 10)),
	} {
		if !errors.As(err, &te) {
			t.Errorf("%v, want a TraceError", err)
		}
	}
	for _, err := range []error{
		second(ALS(ok, 0, 0.01, 10)), second(ALS(ok, math.NaN(), 0.01, 10)), second(ALS(ok, 10, 0, 10)), second(ALS(ok, 10, 0.6, 10)),
		second(ALS(ok, 10, 0.1, 0)), second(ArPLS(ok, 10, 0, 10)), second(ArPLS(ok, 1e11, 0.1, 10)),
	} {
		if !errors.As(err, &pe) {
			t.Errorf("%v, want a ParameterError", err)
		}
	}
}

func second(_ *GlobalBaseline, err error) error { return err }

func BenchmarkGlobalBaseline(b *testing.B) {
	for _, n := range []int{10000, 1000000} {
		c := made(n, 0.4/60, 100, 0.01, 0.05, seeded(1))
		for m := 60; m+120 < n; m += 1500 {
			g := emg{1, c.TimeMin[m], 0.035, 0.015}
			for i := m - 60; i < m+120; i++ {
				c.Intensity[i] += g.at(c.TimeMin[i])
			}
		}
		for _, lambda := range []float64{1e7} {
			b.Run(fmt.Sprintf("als/points=%d/lambda=%g", n, lambda), func(b *testing.B) {
				for b.Loop() {
					g, err := ALS(c, lambda, 0.01, 10)
					if err != nil {
						b.Fatal(err)
					}
					b.ReportMetric(float64(g.Iterations), "iterations")
				}
			})
			b.Run(fmt.Sprintf("arpls/points=%d/lambda=%g", n, lambda), func(b *testing.B) {
				for b.Loop() {
					g, err := ArPLS(c, lambda, 1e-2, 50)
					if err != nil {
						b.Fatal(err)
					}
					b.ReportMetric(float64(g.Iterations), "iterations")
				}
			})
		}
	}
}
