package simulate

import (
	"encoding/json"
	"math"
	"os"
	"testing"
)

type closedForm struct {
	Area, Mu, Sigma, Tau float64
	Apex                 float64 `json:"apex_time"`
	Height               float64
	Mean, Variance       float64
	Points               [][2]float64
}

func (c closedForm) peak() Peak { return Peak{Area: c.Area, Mu: c.Mu, Sigma: c.Sigma, Tau: c.Tau} }

// closedForms were worked out with 40 digits, independently of this package: see SOURCES.
func closedForms(t testing.TB) []closedForm {
	t.Helper()
	data, err := os.ReadFile("../../testdata/simulate/emg_closed_form.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Peaks []closedForm }
	if err := json.Unmarshal(data, &file); err != nil {
		t.Fatal(err)
	}
	if len(file.Peaks) < 6 {
		t.Fatalf("%d peaks in the file, want at least 6", len(file.Peaks))
	}
	return file.Peaks
}

// TestAtClosedForm holds heights against 40-digit values. They are printed with 14 digits, and the arguments -(d²/2) lose up to 70
// times the unit roundoff in the flanks.
func TestAtClosedForm(t *testing.T) {
	for _, c := range closedForms(t) {
		for _, p := range c.Points {
			if got := c.peak().At(p[0]); math.Abs(got-p[1]) > 3e-13*p[1] {
				t.Errorf("σ %g, τ %g: At(%g) = %.15g, want %.15g (relative error %.1e)", c.Sigma, c.Tau, p[0], got, p[1], got/p[1]-1)
			}
		}
	}
}

// TestApexClosedForm: printed with 12 digits.
func TestApexClosedForm(t *testing.T) {
	for _, c := range closedForms(t) {
		apex := c.peak().Apex()
		if math.Abs(apex-c.Apex) > 1e-11*c.Apex {
			t.Errorf("σ %g, τ %g: Apex = %.13g, want %.13g", c.Sigma, c.Tau, apex, c.Apex)
		}
		if got := c.peak().At(apex); math.Abs(got-c.Height) > 1e-11*c.Height {
			t.Errorf("σ %g, τ %g: height %.13g, want %.13g", c.Sigma, c.Tau, got, c.Height)
		}
		if got := c.peak().ApexAt(7.5).Apex(); math.Abs(got-7.5) > 1e-12*c.Mu {
			t.Errorf("σ %g, τ %g: ApexAt(7.5) has its apex at %.13g", c.Sigma, c.Tau, got)
		}
	}
}

// TestMoments: area, mean and variance of the sampled curve, by sums over a range outside which less than e^-36 of the area lies. Sums
// of equidistant samples of so smooth a curve are exact to far better than 1e-10 (Euler and Maclaurin).
func TestMoments(t *testing.T) {
	for _, c := range closedForms(t) {
		p, step := c.peak(), c.Sigma/20
		from, to := c.Mu-9*c.Sigma, c.Mu+9*c.Sigma+36*c.Tau
		var s0, s1, s2 float64
		for i := 0; from+float64(i)*step < to; i++ {
			x := from + float64(i)*step
			y := p.At(x) * step
			s0, s1, s2 = s0+y, s1+y*(x-c.Mean), s2+y*(x-c.Mean)*(x-c.Mean)
		}
		for _, m := range []struct {
			name             string
			got, want, scale float64
		}{
			{"area", s0, c.Area, c.Area},
			{"mean", c.Mean + s1/s0, c.Mean, c.Sigma},
			{"variance", s2 / s0, c.Variance, c.Variance},
		} {
			if math.Abs(m.got-m.want) > 1e-10*m.scale {
				t.Errorf("σ %g, τ %g: %s %.13g, want %.13g", c.Sigma, c.Tau, m.name, m.got, m.want)
			}
		}
	}
}

// TestTowardsGaussian: as Tau goes to 0 the curve goes to the Gaussian of mean Mu+Tau, by less than (Tau/Sigma)² of its height where
// it is high (expansion in Tau), without a step where the formula changes.
func TestTowardsGaussian(t *testing.T) {
	for e := -1; e >= -20; e-- {
		tau := math.Pow(10, float64(e))
		p := Peak{Area: 1, Mu: 0, Sigma: 1, Tau: tau}
		for _, x := range []float64{-3, -1, -0.1, 0, 0.5, 2, 4} {
			gauss := math.Exp(-(x-tau)*(x-tau)/2) / math.Sqrt(2*math.Pi)
			if got := p.At(x); math.Abs(got-gauss) > (1.2*tau*tau+2e-14)*(1+x*x)*gauss+tau*tau*tau {
				t.Errorf("τ %g: At(%g) = %.16g, the Gaussian is %.16g", tau, x, got, gauss)
			}
		}
		if got := p.Apex(); math.Abs(got-tau) > tau*tau*tau+1e-10 && e < -1 {
			t.Errorf("τ %g: Apex %.16g", tau, got)
		}
	}
}

// TestAtExtremes: no NaN and no overflow, and nothing below zero, far out in either flank.
func TestAtExtremes(t *testing.T) {
	for _, tau := range []float64{0, 1e-300, 1e-17, 1e-14, 1e-6, 0.01, 1, 100, 1e8} {
		p := Peak{Area: 1e6, Mu: 3, Sigma: 0.03, Tau: tau}
		for _, x := range []float64{-1e9, -100, 0, 2, 2.9, 3, 3.1, 4, 100, 1e9} {
			if y := p.At(x); !(y >= 0) || math.IsInf(y, 0) {
				t.Errorf("τ %g: At(%g) = %g", tau, x, y)
			}
		}
		if a := p.Apex(); math.IsNaN(a) || math.IsInf(a, 0) {
			t.Errorf("τ %g: Apex = %g", tau, a)
		}
	}
	if a := (Peak{Area: 1, Sigma: 1, Tau: math.NaN()}).Apex(); !math.IsNaN(a) {
		t.Errorf("Apex of a peak with τ NaN = %g", a)
	}
}

func BenchmarkAt(b *testing.B) {
	b.Run("points=180", func(b *testing.B) {
		p := Peak{Area: 1e4, Mu: 2.3, Sigma: 0.026, Tau: 0.012}
		for b.Loop() {
			for i := range 180 {
				_ = p.At(1.7 + float64(i)/150)
			}
		}
	})
}
