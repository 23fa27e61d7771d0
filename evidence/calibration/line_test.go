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

func BenchmarkFitLine(b *testing.B) {
	var points []Point
	for i := range 30 {
		points = append(points, Point{float64(50 + 50*i), 0.1 + 0.1*float64(i)})
	}
	b.Run(fmt.Sprintf("points=%d", len(points)), func(b *testing.B) {
		for b.Loop() {
			if _, err := FitLine(points, InverseX2); err != nil {
				b.Fatal(err)
			}
		}
	})
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
