package uncertainty

import (
	"fmt"
	"math"
	"reflect"
	"strings"
	"testing"
)

func sum4(x []float64) float64 { return x[0] + x[1] + x[2] + x[3] }

func four(shape Shape, u ...float64) []Input {
	var inputs []Input
	for i, v := range u {
		inputs = append(inputs, Input{Name: fmt.Sprint("X", i+1), Type: "B", StdU: v, Distribution: Distribution{Shape: shape}})
	}
	return inputs
}

func within(t *testing.T, what string, got, want, d float64) {
	t.Helper()
	if !(math.Abs(got-want) <= d) {
		t.Errorf("%s: %.7g, want %.7g ± %.2g", what, got, want, d)
	}
}

// TestAdditive: JCGM 101:2008, 9.2: four inputs of unit variance. The ends for rectangular ones are those of the Irwin-Hall distribution
// in closed form, ±2√3·(2 − (3/5)^¼) = ±3.8794; published ±3.88 (from memory). With 10⁶ trials the standard deviation of an end is
// 0.005, that of the mean 0.002 and of u 0.0014: limits are four times that.
func TestAdditive(t *testing.T) {
	end := 2 * math.Sqrt(3) * (2 - math.Pow(0.6, 0.25))
	for _, tt := range []struct {
		name   string
		inputs []Input
		u, end float64
		use    string
	}{
		{"normal", four(Normal, 1, 1, 1, 1), 2, 2 * 1.959964, UseFirstOrder},
		{"rectangular", four(Rectangular, 1, 1, 1, 1), 2, end, UseFirstOrder},
		{"one ten times as wide", four(Rectangular, 1, 1, 1, 10), math.Sqrt(103), 17.0, UseMonteCarlo}, // 9.2.4: ±17.0 (from memory)
	} {
		t.Run(tt.name, func(t *testing.T) {
			s, err := Simulate(sum4, tt.inputs, nil, Run{Seed: 1, Probability: 0.95, Trials: 1e6})
			if err != nil {
				t.Fatal(err)
			}
			scale := tt.u / 2
			within(t, "mean", s.Mean, 0, 0.008*scale)
			within(t, "u", s.StdU, tt.u, 0.006*scale)
			for _, end := range []float64{s.Symmetric.High, -s.Symmetric.Low} {
				within(t, "end", end, tt.end, 0.02*scale)
			}
			if width := s.Shortest.High - s.Shortest.Low; width > s.Symmetric.High-s.Symmetric.Low || width < 2*tt.end-0.08*scale {
				t.Errorf("the shortest interval is %g wide", width)
			}
			p, err := Propagate(sum4, 0, tt.inputs, nil, false)
			if err != nil {
				t.Fatal(err)
			}
			c, err := Compare(p, s, 2)
			if err != nil {
				t.Fatal(err)
			}
			if tt.name == "normal" && *c.DifferenceHigh > c.Tolerance || tt.name != "normal" && tt.use == UseMonteCarlo && c.Use != tt.use {
				t.Errorf("%+v", c)
			}
			if tt.name == "rectangular" && c.Use == UseMonteCarlo && *c.DifferenceHigh < 0.03 {
				t.Errorf("%+v", c)
			}
		})
	}
}

// TestMassCalibration: JCGM 101:2008, 9.3 (from memory): deviation 1.234 mg, u 0.0754 mg by simulation and 0.0539 by the law of
// propagation, 0.0750 with the terms of second order; shortest interval 1.0834 to 1.3825. One significant digit settles for the
// simulation.
func TestMassCalibration(t *testing.T) {
	rect := func(name string, low, high float64) Input {
		d := Distribution{Shape: Rectangular}
		u, _ := d.StandardUncertainty((high - low) / 2)
		return Input{Name: name, Type: "B", Value: (low + high) / 2, StdU: u, Distribution: d}
	}
	inputs := []Input{
		{Name: "reference", Type: "B", Value: 100000, StdU: 0.05}, {Name: "balance", Type: "B", Value: 1.234, StdU: 0.02},
		rect("air", 1.1, 1.3), rect("weight", 7000, 9000), rect("reference weight", 7950, 8050),
	}
	f := func(x []float64) float64 { return (x[0]+x[1])*(1+(x[2]-1.2)*(1/x[3]-1/x[4])) - 100000 }
	s, err := Simulate(f, inputs, nil, Run{Seed: 7, Probability: 0.95, Trials: 1e6})
	if err != nil {
		t.Fatal(err)
	}
	within(t, "mean", s.Mean, 1.234, 0.0005)
	within(t, "u", s.StdU, 0.0754, 0.0004)
	within(t, "low", s.Shortest.Low, 1.0834, 0.002)
	within(t, "high", s.Shortest.High, 1.3825, 0.002)
	first, err := Propagate(f, 0, inputs, nil, false)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "u, first order", first.StdU, 0.0539, 0.00005)
	second, err := Propagate(f, 0, inputs, nil, true)
	if err != nil {
		t.Fatal(err)
	}
	within(t, "u, second order", second.StdU, 0.0750, 0.00005)
	for _, tt := range []struct {
		p    Propagation
		use  string
		d    float64
		low  float64
		high float64
	}{{first, UseMonteCarlo, 0.05, 1.1285, 1.3395}, {second, UseFirstOrder, 0.005, 1.0870, 1.3810}} {
		c, err := Compare(tt.p, s, 1)
		if err != nil {
			t.Fatal(err)
		}
		if c.Use != tt.use || *c.DifferenceLow > tt.d || c.Tolerance != 0.005 {
			t.Errorf("%+v", c)
		}
		within(t, "low", c.Propagated.Low, tt.low, 0.00015)
		within(t, "high", c.Propagated.High, tt.high, 0.00015)
	}
}

// TestPowerLoss: JCGM 101:2008, 9.4: y = x₁² + x₂² at zero, u = 0.005 each. y/u² is chi-squared with two degrees of freedom: mean and
// standard deviation 2u² = 50e-6, and the shortest 95 % interval from 0 to 2u²·ln 20 = 149.8e-6. First order gives no uncertainty at
// all; with the second, 50e-6.
func TestPowerLoss(t *testing.T) {
	inputs := four(Normal, 0.005, 0.005)
	f := func(x []float64) float64 { return x[0]*x[0] + x[1]*x[1] }
	s, err := Simulate(f, inputs, nil, Run{Seed: 3, Probability: 0.95, Trials: 1e6})
	if err != nil {
		t.Fatal(err)
	}
	within(t, "mean", s.Mean, 50e-6, 0.2e-6)
	within(t, "u", s.StdU, 50e-6, 0.3e-6)
	within(t, "low", s.Shortest.Low, 0, 0.2e-6)
	within(t, "high", s.Shortest.High, 50e-6*math.Log(20), 1e-6)
	within(t, "symmetric low", s.Symmetric.Low, -50e-6*math.Log(0.975), 0.1e-6)
	within(t, "symmetric high", s.Symmetric.High, -50e-6*math.Log(0.025), 1.5e-6)
	first, err := Propagate(f, 0, inputs, nil, false)
	if err != nil || first.StdU > 1e-12 {
		t.Fatalf("%g, %v", first.StdU, err)
	}
	if c, err := Compare(first, s, 1); err != nil || c.Use != UseMonteCarlo {
		t.Errorf("%+v, %v", c, err)
	}
	second, err := Propagate(f, 0, inputs, nil, true)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "u, second order", second.StdU, 50e-6, 1e-9)
}

// TestGaugeBlockSimulation: JCGM 101:2008, 9.5 (from memory): 838 nm and u = 36 nm. Two inputs have curvilinear trapezoids there
// (6.4.3: rectangles whose limits lie within d of their nominal ones), which the model makes here from two rectangles each.
func TestGaugeBlockSimulation(t *testing.T) {
	inputs := gaugeInputs(t)
	inputs[1].StdU, inputs[2].StdU, inputs[2].DoF, inputs[3].StdU = 6, 4, dof(5), 7
	for i, s := range []Shape{Student, Student, Student, Student, Rectangular, Rectangular, Normal, UShaped, Rectangular} {
		inputs[i].Distribution.Shape = s
	}
	for _, i := range []int{5, 8} { // unit rectangles
		inputs[i].StdU = 1 / math.Sqrt(3)
		inputs = append(inputs, Input{Name: inputs[i].Name + " limits", Type: "B", StdU: 1 / math.Sqrt(3), Distribution: Distribution{Shape: Rectangular}})
	}
	f := func(x []float64) float64 {
		y := [9]float64(x)
		y[5] *= 1e-6 + 1e-7*x[9]
		y[8] *= 0.05 + 0.025*x[10]
		return gaugeBlock(y[:])
	}
	s, err := Simulate(f, inputs, nil, Run{Seed: 11, Probability: 0.99, Trials: 2e6})
	if err != nil {
		t.Fatal(err)
	}
	t.Logf("%.1f to %.1f, shortest %.1f to %.1f", s.Symmetric.Low-5e7, s.Symmetric.High-5e7, s.Shortest.Low-5e7, s.Shortest.High-5e7)
	within(t, "mean", s.Mean, 50000838, 0.2)
	within(t, "u", s.StdU, 36, 0.5)
}

// TestShapes: mean, standard deviation, kurtosis and the 97.5 % quantile of each shape, in closed form.
func TestShapes(t *testing.T) {
	for _, tt := range []struct {
		d        Distribution
		nu       float64
		sd       float64
		kurtosis float64 // fourth moment over the square of the variance
		high     float64
	}{
		{Distribution{}, 0, 1, 3, 1.959964},
		{Distribution{Shape: Student}, 12, math.Sqrt(12. / 10), 3 + 6./8, 2.178813},
		{Distribution{Shape: Student}, 9.5, math.Sqrt(9.5 / 7.5), 3 + 6/5.5, 0},
		{Distribution{Shape: Rectangular}, 0, 1, 1.8, math.Sqrt(3) * 0.95},
		{Distribution{Shape: Triangular}, 0, 1, 2.4, math.Sqrt(6) * (1 - math.Sqrt(0.05))},
		{Distribution{Shape: Trapezoidal, Top: 0}, 0, 1, 2.4, math.Sqrt(6) * (1 - math.Sqrt(0.05))},
		{Distribution{Shape: Trapezoidal, Top: 1}, 0, 1, 1.8, math.Sqrt(3) * 0.95},
		// Sum of rectangles of half width (1±β)/2: the tail beyond z is (1−z)²/(2(1−β²)).
		{Distribution{Shape: Trapezoidal, Top: 0.5}, 0, 1, 3 - 1.2*(math.Pow(0.75, 4)+math.Pow(0.25, 4))/math.Pow(0.75*0.75+0.25*0.25, 2), math.Sqrt(6/1.25) * (1 - math.Sqrt(0.05*0.75))},
		{Distribution{Shape: UShaped}, 0, 1, 1.5, math.Sqrt2 * math.Cos(math.Pi*0.025)},
	} {
		in := Input{Name: "x", Type: "B", Value: 5, StdU: 2, Distribution: tt.d}
		if tt.nu > 0 {
			in.DoF = dof(tt.nu)
		}
		s, err := Simulate(func(x []float64) float64 { return x[0] }, []Input{in}, nil, Run{Seed: 5, Probability: 0.95, Trials: 1e6})
		if err != nil {
			t.Fatal(err)
		}
		within(t, fmt.Sprint(tt.d, " mean"), s.Mean, 5, 0.01)
		within(t, fmt.Sprint(tt.d, " u"), s.StdU, 2*tt.sd, 0.012)
		if tt.high > 0 {
			within(t, fmt.Sprint(tt.d, " high"), s.Symmetric.High, 5+2*tt.high, 0.025)
			within(t, fmt.Sprint(tt.d, " low"), s.Symmetric.Low, 5-2*tt.high, 0.025)
		}
		fourth, err := Simulate(func(x []float64) float64 { return math.Pow((x[0]-5)/2/tt.sd, 4) }, []Input{in}, nil, Run{Seed: 6, Probability: 0.95, Trials: 1e6})
		if err != nil {
			t.Fatal(err)
		}
		within(t, fmt.Sprint(tt.d, " kurtosis"), fourth.Mean, tt.kurtosis, 5*fourth.StdU/1000)
	}
}

// TestJoint: the variance of a sum of correlated normal inputs, in closed form; impedance (GUM H.2) against first order.
func TestJoint(t *testing.T) {
	inputs := four(Normal, 1, 2, 3, 1)
	s, err := Simulate(sum4, inputs, []Correlation{{"X1", "X2", 0.5}, {"X2", "X3", -0.8}}, Run{Seed: 2, Probability: 0.95, Trials: 1e6})
	if err != nil {
		t.Fatal(err)
	}
	within(t, "u", s.StdU, math.Sqrt(15+2*0.5*2-2*0.8*6), 0.012)
	one, err := Simulate(func(x []float64) float64 { return x[0] - x[1] }, four(Normal, 1, 1), []Correlation{{"X1", "X2", 1}}, Run{Seed: 2, Probability: 0.95, Trials: 1e4})
	if err != nil || one.StdU != 0 {
		t.Errorf("perfectly correlated: %g, %v", one.StdU, err)
	}
	in, r := impedance(t)
	f := func(x []float64) float64 { return x[0] / x[1] * math.Cos(x[2]) }
	z, err := Simulate(f, in, r, Run{Seed: 2, Probability: 0.95, Trials: 1e6})
	if err != nil {
		t.Fatal(err)
	}
	within(t, "R", z.Mean, 127.732, 0.0005)
	within(t, "u(R)", z.StdU, 0.0711, 0.0003)
}

// TestWorkers: the same bits for any number of workers, fixed and adaptive.
func TestWorkers(t *testing.T) {
	inputs := four(Triangular, 1, 2, 3, 1)
	inputs[0].Distribution.Shape, inputs[1].Distribution.Shape, inputs[2].Distribution.Shape = Normal, Student, UShaped
	inputs[1].DoF = dof(7)
	for _, run := range []Run{{Seed: 9, Probability: 0.95, Trials: 123457}, {Seed: 9, Probability: 0.95, Trials: 5e6, Digits: 2}, {Seed: 10, Probability: 0.9, Trials: 2000}} {
		var first Simulation
		for i, workers := range []int{1, 2, 7, 0} {
			run.Workers = workers
			s, err := Simulate(sum4, inputs, nil, run)
			if err != nil {
				t.Fatal(err)
			}
			if i == 0 {
				first = s
			} else if !reflect.DeepEqual(s, first) {
				t.Errorf("%d workers: %+v, one: %+v", workers, s, first)
			}
		}
	}
}

// TestGeneratorRegression guards the published generator: these numbers were printed by this code, on amd64.
func TestGeneratorRegression(t *testing.T) {
	s, err := Simulate(sum4, four(Normal, 1, 1, 1, 1), nil, Run{Seed: 1, Probability: 0.95, Trials: 10000, Workers: 1})
	if err != nil {
		t.Fatal(err)
	}
	got := fmt.Sprintf("%v %v %v %v", s.Mean, s.StdU, s.Symmetric, s.Shortest)
	if want := regressionLine; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
}

// TestAdaptive ends for its tolerance, or says that it did not.
func TestAdaptive(t *testing.T) {
	s, err := Simulate(sum4, four(Normal, 1, 1, 1, 1), nil, Run{Seed: 4, Probability: 0.95, Trials: 10e6, Digits: 2})
	if err != nil {
		t.Fatal(err)
	}
	if !*s.Stable || *s.Tolerance != 0.05 || s.Trials < 20000 || s.Trials%10000 != 0 {
		t.Errorf("%+v", s)
	}
	within(t, "u", s.StdU, 2, 0.05)
	few, err := Simulate(sum4, four(Normal, 1, 1, 1, 1), nil, Run{Seed: 4, Probability: 0.95, Trials: 50_000, Digits: 3})
	if err != nil || *few.Stable || few.Trials != 50_000 {
		t.Errorf("%+v, %v", few, err)
	}
	p, err := Propagate(sum4, 0, four(Normal, 1, 1, 1, 1), nil, false)
	if err != nil {
		t.Fatal(err)
	}
	if c, err := Compare(p, few, 2); err != nil || c.Use != UseUndetermined {
		t.Errorf("%+v, %v", c, err)
	}
	if c, err := Compare(p, s, 1); err != nil || c.Use != UseFirstOrder {
		t.Errorf("%+v, %v", c, err)
	}
	constant, err := Simulate(sum4, four(Normal, 0, 0, 0, 0), nil, Run{Seed: 4, Probability: 0.95, Trials: 50_000, Digits: 3})
	if err != nil || !*constant.Stable || constant.StdU != 0 {
		t.Errorf("%+v, %v", constant, err)
	}
	still, err := Propagate(sum4, 0, four(Normal, 0, 0, 0, 0), nil, false)
	if err != nil {
		t.Fatal(err)
	}
	if c, err := Compare(still, constant, 2); err != nil || c.Use != UseFirstOrder {
		t.Errorf("%+v, %v", c, err)
	}
}

// TestTolerance: JCGM 101:2008, 7.9.2, examples (from memory), and rounding up to the next power of ten.
func TestTolerance(t *testing.T) {
	for _, tt := range []struct {
		u      float64
		digits int
		want   float64
	}{{0.00035, 2, 0.000005}, {2, 2, 0.05}, {2.0, 1, 0.5}, {10.1, 2, 0.5}, {0.0754, 1, 0.005}, {0.996, 2, 0.05}, {0.994, 2, 0.005}, {50, 2, 0.5}} {
		if got, err := Tolerance(tt.u, tt.digits); err != nil || got != tt.want {
			t.Errorf("u = %g with %d digits: %g, %v; want %g", tt.u, tt.digits, got, err, tt.want)
		}
	}
	for _, u := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if d, err := Tolerance(u, 2); err == nil {
			t.Errorf("u = %g gave %g", u, d)
		}
	}
}

func TestRefusedRuns(t *testing.T) {
	good := Run{Seed: 1, Probability: 0.95, Trials: 10000}
	for _, tt := range []struct {
		want   string
		change func(in []Input, r *Run) ([]Correlation, Model)
	}{
		{"coverage probability", func(_ []Input, r *Run) ([]Correlation, Model) { r.Probability = 0.999; return nil, sum4 }},
		{"want 2000 to", func(_ []Input, r *Run) ([]Correlation, Model) { r.Trials = 1999; return nil, sum4 }},
		{"60000000 trials", func(_ []Input, r *Run) ([]Correlation, Model) { r.Trials = 6e7; return nil, sum4 }},
		{"significant digits", func(_ []Input, r *Run) ([]Correlation, Model) { r.Digits, r.Trials = 9, 1e6; return nil, sum4 }},
		{"without a model", func([]Input, *Run) ([]Correlation, Model) { return nil, nil }},
		{`"X2": the distribution "beta"`, func(in []Input, _ *Run) ([]Correlation, Model) { in[1].Distribution.Shape = "beta"; return nil, sum4 }},
		{"top is 2", func(in []Input, _ *Run) ([]Correlation, Model) {
			in[1].Distribution = Distribution{Trapezoidal, 2}
			return nil, sum4
		}},
		{"without finite degrees", func(in []Input, _ *Run) ([]Correlation, Model) { in[1].Distribution.Shape = Student; return nil, sum4 }},
		{"has no standard deviation", func(in []Input, _ *Run) ([]Correlation, Model) {
			in[1].Distribution.Shape, in[1].DoF = Student, dof(2)
			return nil, sum4
		}},
		{"only normal inputs can be drawn jointly", func(in []Input, _ *Run) ([]Correlation, Model) {
			in[1].Distribution.Shape = Rectangular
			return []Correlation{{"X1", "X2", 0.1}}, sum4
		}},
		{"trial ", func([]Input, *Run) ([]Correlation, Model) {
			return nil, func(x []float64) float64 { return math.Log(x[0] + 3) }
		}},
	} {
		in, run := four(Normal, 1, 1, 1, 1), good
		r, f := tt.change(in, &run)
		if s, err := Simulate(f, in, r, run); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("want an error with %q, got %+v, %v", tt.want, s, err)
		}
	}
}

// eight is a model like that of a quantification: eight inputs.
func eight() (Model, []Input) {
	shapes := []Shape{Normal, Normal, Rectangular, Triangular, Normal, Student, UShaped, Trapezoidal}
	var inputs []Input
	for i, s := range shapes {
		inputs = append(inputs, Input{Name: fmt.Sprint(i), Type: "B", Value: 10 + float64(i), StdU: 0.3, DoF: dof(10), Distribution: Distribution{Shape: s, Top: 0.4}})
	}
	return func(x []float64) float64 { return (x[0] - x[1]) / x[2] * x[3] / x[4] * x[5] * x[6] / x[7] }, inputs
}

// TestAllocations: memory is had for blocks and workers, not for trials.
func TestAllocations(t *testing.T) {
	f, inputs := eight()
	count := func(trials int) float64 {
		return testing.AllocsPerRun(1, func() {
			if _, err := Simulate(f, inputs, nil, Run{Seed: 1, Probability: 0.95, Trials: trials, Workers: 1}); err != nil {
				t.Fatal(err)
			}
		})
	}
	if few, many := count(10_000), count(100_000); many-few > 60 {
		t.Errorf("%g allocations for 10,000 trials, %g for 100,000", few, many)
	}
}

func BenchmarkSimulate(b *testing.B) {
	f, inputs := eight()
	for _, workers := range []int{1, 2} {
		b.Run(fmt.Sprintf("trials=1000000/inputs=8/workers=%d", workers), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := Simulate(f, inputs, nil, Run{Seed: 1, Probability: 0.95, Trials: 1e6, Workers: workers}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func ExampleCompare() {
	// JCGM 101:2008, 9.4: the square of a quantity near zero.
	inputs := []Input{{Name: "x", Type: "B", StdU: 0.005}, {Name: "y", Type: "B", StdU: 0.005}}
	f := func(x []float64) float64 { return float64(x[0]*x[0]) + float64(x[1]*x[1]) }
	s, err := Simulate(f, inputs, nil, Run{Seed: 1, Probability: 0.95, Trials: 1_000_000})
	if err != nil {
		panic(err)
	}
	p, err := Propagate(f, 0, inputs, nil, false)
	if err != nil {
		panic(err)
	}
	c, err := Compare(p, s, 1)
	if err != nil {
		panic(err)
	}
	fmt.Printf("%.0e %s\n", s.StdU, c.Use)
	// Output: 5e-05 monte-carlo
}

const regressionLine = "0.04796038915526035 1.983512641715024 {-3.8841505589376246 3.8842130731810096} {-3.8460078807837355 3.892966664642775}"
