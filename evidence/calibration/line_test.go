package calibration

import (
	"errors"
	"fmt"
	"math"
	"testing"
)

func TestRefusedCalibrations(t *testing.T) {
	good := []Point{{1, 1}, {2, 2.1}, {3, 2.9}, {4, 4}}
	with := func(i int, p Point) []Point {
		c := append([]Point(nil), good...)
		c[i] = p
		return c
	}
	var point *PointError
	var slope *SlopeError
	tests := []struct {
		name   string
		points []Point
		w      Weighting
		as     any
	}{
		{"zero amount with 1/x", with(0, Point{0, 0.1}), InverseX, &point},
		{"negative amount with 1/x2", with(2, Point{-3, 0.1}), InverseX2, &point},
		{"NaN", with(1, Point{2, math.NaN()}), Unweighted, &point},
		{"infinite amount", with(1, Point{math.Inf(1), 2}), Unweighted, &point},
		{"falling response", []Point{{1, 3}, {2, 2}, {3, 1}}, Unweighted, &slope},
		{"flat response", []Point{{1, 2}, {2, 2}, {3, 2}}, Unweighted, &slope},
		{"two amounts", []Point{{1, 1}, {1, 1.1}, {2, 2}, {2, 2.2}}, Unweighted, nil},
		{"one amount", []Point{{1, 1}, {1, 1.1}, {1, 2}}, InverseX, nil},
		{"nothing", nil, Unweighted, nil},
		{"unknown weights", good, "1/y", nil},
	}
	for _, tt := range tests {
		_, err := FitLine(tt.points, tt.w)
		if err == nil || tt.as != nil && !errors.As(err, tt.as) {
			t.Errorf("%s: %v", tt.name, err)
		}
	}
	if _, err := FitLineWeights(good, []float64{1, 1, 0, 1}); !errors.As(err, &point) || point.Index != 2 {
		t.Errorf("weight of zero: %v", err)
	}
}

func TestPredictionEdges(t *testing.T) {
	f, err := FitLine([]Point{{1, 1}, {2, 2.1}, {3, 2.9}, {4, 4}}, InverseX2)
	if err != nil {
		t.Fatal(err)
	}
	for name, try := range map[string]func() (Prediction, error){
		"no replicate":          func() (Prediction, error) { return f.Predict(2, 0, 1) },
		"no weight":             func() (Prediction, error) { return f.Predict(2, 1, 0) },
		"not finite":            func() (Prediction, error) { return f.Predict(math.NaN(), 1, 1) },
		"below zero, with 1/x2": func() (Prediction, error) { return f.PredictSample(-5, 1) },
	} {
		if p, err := try(); err == nil {
			t.Errorf("%s: %+v", name, p)
		}
	}
	p, err := f.PredictSample(2.5, 3)
	if err != nil || !(p.StdULine < p.StdU) || p.M != 3 || p.DoF != 2 {
		t.Errorf("%+v, %v", p, err)
	}
}

// TestLineUncertainty: the part of the line is that of the covariance of its coefficients (JCGM 100:2008, 5.2.2, and example H.3):
// u² = (u²(a) + x²u²(b) + 2x·cov)/b².
func TestLineUncertainty(t *testing.T) {
	f, err := FitLine([]Point{{50, 0.11}, {100, 0.2}, {250, 0.52}, {500, 0.99}, {1000, 2.03}}, InverseX)
	if err != nil {
		t.Fatal(err)
	}
	p, err := f.Predict(1.4, 1, 1)
	if err != nil {
		t.Fatal(err)
	}
	want := math.Sqrt(f.SA*f.SA+p.X*p.X*f.SB*f.SB+2*p.X*f.Cov) / f.B
	near(t, "line", p.StdULine, want, 1e-12*want)
}

// TestTooLarge: finite numbers whose squares are not, and amounts or responses out of all proportion.
func TestTooLarge(t *testing.T) {
	for name, points := range map[string][]Point{
		"amounts of 10^200":   {{1e200, 1}, {2e200, 2}, {3e200, 3}},
		"responses of 10^200": {{1, 1e200}, {2, 2e200}, {3, 2.5e200}},
		"amounts of 10^-200":  {{1e-200, 1}, {2e-200, 2}, {3e-200, 3}},
		"the largest numbers": {{-math.MaxFloat64, -math.MaxFloat64}, {0, 0}, {math.MaxFloat64, math.MaxFloat64}},
	} {
		for _, w := range []Weighting{Unweighted, InverseX2} {
			if f, err := FitLine(points, w); err == nil {
				t.Errorf("%s, weights %s: %+v", name, w, f)
			}
		}
	}
	f, err := FitLine([]Point{{1, 1}, {2, 2.1}, {3, 2.9}}, Unweighted)
	if err != nil {
		t.Fatal(err)
	}
	if p, err := f.Predict(1e300, 1, 1); err == nil {
		t.Errorf("a response of 1e300: %+v", p)
	}
}

// TestWeightAt: the rule of the fit at other amounts.
func TestWeightAt(t *testing.T) {
	points := []Point{{1, 1}, {2, 2.1}, {4, 3.9}}
	for _, tt := range []struct {
		w       Weighting
		x, want float64
	}{{Unweighted, -3, 1}, {Unweighted, 0, 1}, {InverseX, 4, 0.25}, {InverseX2, 4, 0.0625}} {
		f, err := FitLine(points, tt.w)
		if err != nil {
			t.Fatal(err)
		}
		if got, err := f.WeightAt(tt.x); err != nil || got != tt.want {
			t.Errorf("weights %s at %g: %g, %v; want %g", tt.w, tt.x, got, err, tt.want)
		}
	}
	f, err := FitLine(points, InverseX)
	if err != nil {
		t.Fatal(err)
	}
	for _, x := range []float64{0, -1, math.NaN(), math.Inf(1), 1e-320} {
		if w, err := f.WeightAt(x); err == nil {
			t.Errorf("weight at %g: %g", x, w)
		}
	}
	if f, err = FitLineWeights(points, []float64{1, 2, 3}); err != nil {
		t.Fatal(err)
	}
	if w, err := f.WeightAt(2); err == nil {
		t.Errorf("a fit with given weights has none elsewhere, got %g", w)
	}
}

// FuzzFitLine: any numbers are refused or give a fit and predictions that are finite.
func FuzzFitLine(f *testing.F) {
	f.Add(1.0, 1.0, 2.0, 2.1, 3.0, 2.9, 1.5, uint8(0))
	f.Add(50.0, 0.11, 500.0, 1.02, 2000.0, 4.1, 0.7, uint8(2))
	f.Add(1e-160, 1e160, 1e150, 1e-150, 1e300, 1e308, 1e308, uint8(1))
	f.Add(0.0, 0.0, 5e-324, 5e-324, 1e-323, 1e-323, 5e-324, uint8(0))
	f.Fuzz(func(t *testing.T, x1, y1, x2, y2, x3, y3, y float64, kind uint8) {
		w := []Weighting{Unweighted, InverseX, InverseX2}[kind%3]
		fit, err := FitLine([]Point{{x1, y1}, {x2, y2}, {x3, y3}}, w)
		if err != nil {
			return
		}
		if !fit.finite() || !(fit.B > 0) || fit.S < 0 || fit.R2 > 1 || fit.Sxx <= 0 {
			t.Errorf("%+v", fit)
		}
		p, err := fit.PredictSample(y, 2)
		if err == nil && (!finite(p.X, p.StdU, p.StdULine) || p.StdU < p.StdULine) {
			t.Errorf("%+v from %+v", p, fit)
		}
	})
}

func BenchmarkFitLine(b *testing.B) {
	for _, n := range []int{8, 30, 300} {
		var points []Point
		for i := range n {
			points = append(points, Point{float64(50 + 50*i), 0.1 + 0.1*float64(i)})
		}
		b.Run(fmt.Sprintf("points=%d", n), func(b *testing.B) {
			for b.Loop() {
				if _, err := FitLine(points, InverseX2); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkPredictSample(b *testing.B) {
	f, err := FitLine([]Point{{50, 0.1}, {500, 1.02}, {1000, 2.1}}, InverseX2)
	if err != nil {
		b.Fatal(err)
	}
	b.Run("replicates=3", func(b *testing.B) {
		for b.Loop() {
			if _, err := f.PredictSample(0.7, 3); err != nil {
				b.Fatal(err)
			}
		}
	})
}

func ExampleFitLine() {
	// A made-up calibration with scatter in proportion to the amount.
	f, err := FitLine([]Point{{50, 0.101}, {100, 0.198}, {250, 0.51}, {500, 1.02}, {1000, 1.96}}, InverseX2)
	if err != nil {
		panic(err)
	}
	for _, p := range f.Points {
		fmt.Printf("%5g read back as %6.1f, off by %+.1f %%\n", p.X, p.BackX, *p.RelativeBias*100)
	}
	p, err := f.PredictSample(0.7, 3)
	if err != nil {
		panic(err)
	}
	fmt.Printf("three aliquots with a mean of 0.7: %.1f, u = %.1f\n", p.X, p.StdU)
	_, err = FitLine([]Point{{0, 0.001}, {50, 0.101}, {100, 0.198}, {250, 0.51}}, InverseX2)
	fmt.Println(err)
	// Output:
	//    50 read back as   50.2, off by +0.3 %
	//   100 read back as   98.5, off by -1.5 %
	//   250 read back as  254.2, off by +1.7 %
	//   500 read back as  508.5, off by +1.7 %
	//  1000 read back as  977.4, off by -2.3 %
	// three aliquots with a mean of 0.7: 348.9, u = 5.7
	// calibrator 1: got an amount of 0, want one above zero, as the weights are 1/x2
}

func ExampleFit_Predict() {
	// Massart et al. 1997, chapter 8, example 1.
	f, err := FitLine([]Point{{0, 4.0}, {10, 21.2}, {20, 44.6}, {30, 61.8}, {40, 78.0}, {50, 105.2}}, Unweighted)
	if err != nil {
		panic(err)
	}
	p, err := f.Predict(90, 5, 1)
	if err != nil {
		panic(err)
	}
	fmt.Printf("y = %.4f + %.4f·x; 90 is at %.2f with u = %.3f\n", f.A, f.B, p.X, p.StdU)
	// Output: y = 2.9238 + 1.9817·x; 90 is at 43.94 with u = 1.141
}
