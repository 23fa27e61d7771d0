package calibration

import (
	"encoding/csv"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"assaywrit/evidence/strictmath"
	"gonum.org/v1/gonum/stat"
)

// columns reads a data set of testdata/calibration.
func columns(t testing.TB, name string) [][]float64 {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "..", "testdata", "calibration", name+".csv"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil || len(rows) < 4 {
		t.Fatalf("%s: %d rows, %v", name, len(rows), err)
	}
	cols := make([][]float64, len(rows[0]))
	for _, row := range rows[1:] {
		for j, text := range row {
			v, err := strconv.ParseFloat(text, 64)
			if err != nil {
				t.Fatal(err)
			}
			cols[j] = append(cols[j], v)
		}
	}
	return cols
}

func pointsOf(x, y []float64) []Point {
	points := make([]Point, len(x))
	for i := range x {
		points[i] = Point{x[i], y[i]}
	}
	return points
}

func near(t *testing.T, what string, got, want, within float64) {
	t.Helper()
	if !(math.Abs(got-want) <= within) {
		t.Errorf("%s: %.12g, want %.12g ± %g", what, got, want, within)
	}
}

// TestPublishedLines holds unweighted lines against published worked examples, to the digits printed, and against the same
// recomputed in 40-digit arithmetic (testdata/calibration/expected.json).
func TestPublishedLines(t *testing.T) {
	type prediction struct {
		y       float64
		m       int
		p       float64 // confidence
		x, half float64 // recomputed
		px, ph  float64 // as printed
		within  float64 // half the last printed digit
		rough   float64 // relative accuracy of half where it has fewer digits than 15
	}
	tests := []struct {
		name, source         string
		a, b, sa, sb, cov, s float64
		predictions          []prediction
	}{
		{"din32645", "DIN 32645:1994, example: a = 2481, b = 9662; x at y = 3500: half width 0.07434 (99 %)",
			2480.86666666667, 9661.93939393939, 131.361757806987, 423.41728414244, -49302.604040404, 192.293923539729,
			[]prediction{{3500, 1, 0.99, 0.105479168496192, 0.0743426124132454, 0.1055, 0.07434, 0.00005, 0}}},
		{"massart97ex1", "Massart et al. 1997, ch. 8, example 1: 6.1 ± 4.9; 43.9 ± 4.9; mean of 5: 43.9 ± 3.2",
			2.92380952380952, 1.98171428571429, 2.16484381719201, 0.0715024379965871, -0.127814965986395, 2.99116158357378,
			[]prediction{
				{15, 1, 0.95, 6.09381007304883, 4.90675126994947, 6.1, 4.9, 0.05, 0},
				{90, 1, 0.95, 43.9398308342945, 4.90805306938866, 43.9, 4.9, 0.05, 0},
				{90, 5, 0.95, 43.9398308342945, 3.16848925728194, 43.9, 3.2, 0.05, 0}}},
		{"miller_fluorescein", "Miller and Miller, ch. 5 (from memory): b = 1.93, a = 1.52, s = 0.4329; 0.72 ± 0.68, 6.21 ± 0.62, 11.13 ± 0.68",
			1.51785714285714, 1.93035714285714, 0.294936001359548, 0.0409002644570064, -0.0100369897959184, 0.432847713240053,
			[]prediction{
				{2.9, 1, 0.95, 0.716003700277521, 0.680098247513698, 0.72, 0.68, 0.005, 0},
				{13.5, 1, 0.95, 6.20721554116559, 0.616307849897412, 6.21, 0.62, 0.005, 0},
				{23.0, 1, 0.95, 11.1285846438483, 0.676559811501912, 11.13, 0.68, 0.005, 0},
				{13.5, 4, 0.95, 6.20721554116559, 0.3614581537262, 6.21, 0.36, 0.005, 0}}},
		{"quam_a5_cadmium", "EURACHEM/CITAC QUAM:2012, example A5 (from memory): B0 = 0.0087, B1 = 0.2410, S = 0.005486",
			0.0087, 0.241, 0.00287669682368244, 0.0050076863996184, -1.25384615384615e-05, 0.00548564560396565,
			// Mean of 0.0712 and 0.0716: 0.260, u = 0.018 (printed); 0.2601660 and 0.01784461 by the closed form. t(0.975; 13) = 2.160369.
			[]prediction{{0.0714, 2, 0.95, 0.0627 / 0.241, 0.01784461 * 2.1603686565, 0.260, 0.018 * 2.1603686565, 0.0005 * 2.16, 1e-6}}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			c := columns(t, tt.name)
			f, err := FitLine(pointsOf(c[0], c[1]), Unweighted)
			if err != nil {
				t.Fatal(err)
			}
			for _, v := range []struct {
				what      string
				got, want float64
			}{{"a", f.A, tt.a}, {"b", f.B, tt.b}, {"s(a)", f.SA, tt.sa}, {"s(b)", f.SB, tt.sb}, {"cov(a,b)", f.Cov, tt.cov}, {"s", f.S, tt.s}} {
				near(t, v.what, v.got, v.want, 1e-12*math.Abs(v.want)+1e-14)
			}
			for _, p := range tt.predictions {
				got, err := f.Predict(p.y, p.m, 1)
				if err != nil {
					t.Fatal(err)
				}
				half := got.StdU * strictmath.TQuantile(0.5+p.p/2, float64(got.DoF))
				near(t, "x0", got.X, p.x, 1e-12*p.x)
				near(t, "half width", half, p.half, max(1e-12, p.rough)*p.half)
				near(t, "x0 as printed", got.X, p.px, p.within)
				near(t, "half width as printed", half, p.ph, p.within)
			}
		})
	}
}

// TestMassart3 is the weighted example: weights 1/s² of the levels (s to two, weights to three decimals) on the means of five
// replicates. Massart et al. 1997, ch. 8, pp. 188, 200: 5.9 ± 2.5 at y = 15 (weight 1.67), 44.1 ± 7.9 at y = 90 (weight 0.145).
func TestMassart3(t *testing.T) {
	c := columns(t, "massart97ex3")
	var points []Point
	levels := map[float64][]float64{}
	var order []float64
	for i, x := range c[0] {
		if levels[x] == nil {
			order = append(order, x)
		}
		levels[x] = append(levels[x], c[1][i])
	}
	var weights []float64
	for _, x := range order {
		mean, sd := stat.MeanStdDev(levels[x], nil)
		points = append(points, Point{x, mean})
		sd = math.Round(sd*100) / 100
		weights = append(weights, math.Round(1000/(sd*sd))/1000)
	}
	f, err := FitLineWeights(points, weights)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "a", f.A, 3.48268320773344, 1e-12)
	near(t, "b", f.B, 1.9636139984539, 1e-12)
	near(t, "s", f.S, 1.92126660110975, 1e-12)
	near(t, "s(a)", f.SA, 1.16081485396777, 1e-12)
	near(t, "s(b)", f.SB, 0.0676708525371727, 1e-13)
	near(t, "cov", f.Cov, -0.0548355693867182, 1e-13)
	for _, p := range []struct{ y, w, x, u, half, px, ph float64 }{
		{15, 1.67, 5.86536702291542, 0.89261094060842, 2.47828527689825, 5.9, 2.5},
		{90, 0.145, 44.0602464946717, 2.82916159743994, 7.8550118690257, 44.1, 7.9},
	} {
		got, err := f.Predict(p.y, 1, p.w)
		if err != nil {
			t.Fatal(err)
		}
		half := got.StdU * strictmath.TQuantile(0.975, float64(got.DoF))
		near(t, "x0", got.X, p.x, 1e-12*p.x)
		near(t, "u", got.StdU, p.u, 1e-11*p.u)
		near(t, "half width", half, p.half, 1e-11*p.half)
		near(t, "x0 as printed", got.X, p.px, 0.05)
		near(t, "half width as printed", half, p.ph, 0.05)
	}
}

// TestMillerWeighted: Miller and Miller, ch. 5 (from memory): weighted b = 0.0738, a = 0.0091; x at 0.100 and 0.600: 1.23 and 8.01.
func TestMillerWeighted(t *testing.T) {
	c := columns(t, "miller_weighted")
	weights := make([]float64, len(c[0]))
	for i, s := range c[2] {
		weights[i] = 1 / (s * s)
	}
	f, err := FitLineWeights(pointsOf(c[0], c[1]), weights)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "b", f.B, 0.0738, 0.00005)
	near(t, "a", f.A, 0.0091, 0.00005)
	near(t, "a", f.A, 0.00908390777317043, 1e-13)
	near(t, "b", f.B, 0.0737599662370502, 1e-13)
	for _, p := range [][3]float64{{0.1, 1.23, 1.23259400546148}, {0.6, 8.01, 8.01133897387832}} {
		got, err := f.Predict(p[0], 1, 1)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "x as printed", got.X, p[1], 0.005)
		near(t, "x", got.X, p[2], 1e-11)
	}
}

// TestAgainstGonum fits random designs with a general-purpose library beside, with each weighting.
func TestAgainstGonum(t *testing.T) {
	rnd := rand.New(rand.NewPCG(5, 5))
	for range 300 {
		n := 5 + rnd.IntN(10)
		x, y, w := make([]float64, n), make([]float64, n), make([]float64, n)
		for i := range x {
			x[i] = 1 + 100*rnd.Float64()
			y[i] = 0.1 + 2*x[i]*(1+0.05*rnd.NormFloat64())
		}
		for _, kind := range []Weighting{Unweighted, InverseX, InverseX2} {
			for i := range w {
				w[i] = weightAt(x[i], kind)
			}
			f, err := FitLine(pointsOf(x, y), kind)
			if err != nil {
				t.Fatal(err)
			}
			a, b := stat.LinearRegression(x, y, w, false)
			near(t, "a", f.A, a, 1e-8)
			near(t, "b", f.B, b, 1e-9)
			near(t, "r²", f.R2, stat.RSquared(x, y, w, a, b), 1e-8)
		}
	}
}

// TestPredictionBySimulation draws calibrations and samples with the scatter that the weights suppose, and compares the spread of the
// amounts with the stated uncertainty (fixed seed; 3 % is about four standard errors of 10,000 draws).
func TestPredictionBySimulation(t *testing.T) {
	levels := []float64{50, 100, 250, 500, 1000, 1500, 2000}
	for _, kind := range []Weighting{Unweighted, InverseX, InverseX2} {
		rnd := rand.New(rand.NewPCG(7, 7))
		const truth, m, trials = 700.0, 3, 10000
		scatter := func(x float64) float64 { return 0.01 / math.Sqrt(weightAt(x, kind)/weightAt(500, kind)) }
		var xs, us []float64
		for range trials {
			points := make([]Point, len(levels))
			for i, x := range levels {
				points[i] = Point{x, 0.02 + 0.002*x + scatter(x)*rnd.NormFloat64()}
			}
			f, err := FitLine(points, kind)
			if err != nil {
				t.Fatal(err)
			}
			y := 0.0
			for range m {
				y += (0.02 + 0.002*truth + scatter(truth)*rnd.NormFloat64()) / m
			}
			p, err := f.PredictSample(y, m)
			if err != nil {
				t.Fatal(err)
			}
			xs, us = append(xs, p.X), append(us, p.StdU*p.StdU)
		}
		_, sd := stat.MeanStdDev(xs, nil)
		stated := math.Sqrt(stat.Mean(us, nil))
		t.Logf("weights %-5s spread %.4g, stated %.4g", kind, sd, stated)
		if math.Abs(stated/sd-1) > 0.03 {
			t.Errorf("weights %s: the amounts scatter by %g, stated is %g", kind, sd, stated)
		}
	}
}
