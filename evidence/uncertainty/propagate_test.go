package uncertainty

import (
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// expected is one data set of testdata/calibration/expected.json: facts recomputed there with 40 digits.
func expected(t *testing.T, set string, into any) {
	t.Helper()
	data, err := os.ReadFile(filepath.Join("..", "..", "testdata", "calibration", "expected.json"))
	if err != nil {
		t.Fatal(err)
	}
	var all map[string]struct{ Recomputed json.RawMessage }
	if err := json.Unmarshal(data, &all); err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(all[set].Recomputed, into); err != nil {
		t.Fatalf("%s: %v", set, err)
	}
}

// table reads a file of testdata/uncertainty without its header.
func table(t *testing.T, name string) [][]string {
	t.Helper()
	data, err := os.ReadFile(filepath.Join("..", "..", "testdata", "uncertainty", name))
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(strings.NewReader(string(data))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return rows[1:]
}

func number(t *testing.T, text string) float64 {
	t.Helper()
	if text == "Inf" {
		return math.Inf(1)
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s: %.15g, want %.15g within %g of it", what, got, want, relative)
	}
}

// gaugeBlock is the model of JCGM 100:2008, H.1: a length from that of a standard, its difference, and their thermal expansion.
func gaugeBlock(x []float64) float64 {
	ls, d, d1, d2, as, da, mean, cyclic, dt := x[0], x[1], x[2], x[3], x[4], x[5], x[6], x[7], x[8]
	return ls + d + d1 + d2 - ls*(da*(mean+cyclic)+as*dt)
}

// gaugeInputs reads the inputs; the rectangular ones have the half width 1e-6 and 0.05 (H.1.3.4, H.1.3.6), which the file rounds.
func gaugeInputs(t *testing.T) []Input {
	var inputs []Input
	for _, row := range table(t, "gum_h1_inputs.csv") {
		in := Input{Name: row[0], Type: row[4], Value: number(t, row[1]), StdU: number(t, row[2]), Source: "GUM H.1"}
		switch row[0] {
		case "delta.alpha":
			in.StdU = 1e-6 / math.Sqrt(3)
		case "delta.theta":
			in.StdU = 0.05 / math.Sqrt(3)
		}
		if nu := number(t, row[3]); !math.IsInf(nu, 1) {
			in.DoF = &nu
		}
		inputs = append(inputs, in)
	}
	return inputs
}

// TestGaugeBlockModel: JCGM 100:2008, example H.1: 50 000 838 nm, u = 32 nm with 16.7 degrees of freedom, 34 nm with the terms of second
// order; u and the degrees of freedom as recomputed in expected.json.
func TestGaugeBlockModel(t *testing.T) {
	var want struct {
		U  float64 `json:"u"`
		Nu float64 `json:"nu_eff_with_these_dof"`
	}
	expected(t, "gum_h1", &want)
	p, err := Propagate(gaugeBlock, 0, gaugeInputs(t), nil, true)
	if err != nil {
		t.Fatal(err)
	}
	if p.Value != 50000838 {
		t.Errorf("length %.10g, want 50000838", p.Value)
	}
	near(t, "u, first order", p.FirstOrder, want.U, 1e-6) // the components in the file have six digits
	if p.Freedom.Kind != FreedomEffective {
		t.Fatalf("%+v", p.Freedom)
	}
	near(t, "degrees of freedom", *p.Freedom.Value, want.Nu, 1e-5)
	// δα·θ and αs·δθ: l²[u²(δα)u²(θ) + u²(αs)u²(δθ)], equation in H.1.7.
	more := 50000623.0 * math.Sqrt(1e-12/3*(0.2*0.2+0.35*0.35)+1.2e-6*1.2e-6*0.05*0.05/3)
	near(t, "terms of second order", math.Sqrt(*p.SecondOrderVariance), more, 1e-6)
	if math.Abs(p.StdU-34) > 0.5 {
		t.Errorf("u with the second order %.4g, want 34 nm", p.StdU)
	}
	sum := *p.SecondOrderShare
	for _, term := range p.Terms {
		sum += term.Share
	}
	near(t, "sum of the shares", sum, 1, 1e-12)
}

// impedance are the inputs of JCGM 100:2008, H.2: means of five simultaneous observations of V, I and φ.
func impedance(t *testing.T) ([]Input, []Correlation) {
	columns := make([][]float64, 3)
	for _, row := range table(t, "gum_h2_repeats.csv") {
		for i := range columns {
			columns[i] = append(columns[i], number(t, row[i]))
		}
	}
	n := float64(len(columns[0]))
	var inputs []Input
	var means [3]float64
	names := []string{"V", "I", "phi"}
	for i, c := range columns {
		for _, v := range c {
			means[i] += v / n
		}
		s := 0.0
		for _, v := range c {
			s += (v - means[i]) * (v - means[i])
		}
		inputs = append(inputs, Input{Name: names[i], Type: "A", Value: means[i], StdU: math.Sqrt(s / (n - 1) / n), DoF: dof(n - 1), Together: "five observations"})
	}
	var correlations []Correlation
	for i := range 3 {
		for j := range i {
			s := 0.0
			for k := range columns[i] {
				s += (columns[i][k] - means[i]) * (columns[j][k] - means[j])
			}
			correlations = append(correlations, Correlation{names[i], names[j], s / (n - 1) / n / (inputs[i].StdU * inputs[j].StdU)})
		}
	}
	return inputs, correlations
}

// TestImpedance: JCGM 100:2008, example H.2: resistance, reactance and impedance with their correlations, to the digits recomputed in
// expected.json.
func TestImpedance(t *testing.T) {
	var want struct {
		Y  []float64 `json:"R_X_Z"`
		U  []float64 `json:"u_R_X_Z"`
		RX float64   `json:"r_RX"`
		RZ float64   `json:"r_RZ"`
		XZ float64   `json:"r_XZ"`
	}
	expected(t, "gum_h2", &want)
	inputs, correlations := impedance(t)
	models := []Model{
		func(x []float64) float64 { return x[0] / x[1] * math.Cos(x[2]) },
		func(x []float64) float64 { return x[0] / x[1] * math.Sin(x[2]) },
		func(x []float64) float64 { return x[0] / x[1] },
	}
	var p []Propagation
	for i, f := range models {
		q, err := Propagate(f, 0, inputs, correlations, false)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "value", q.Value, want.Y[i], 1e-13)
		near(t, "u", q.StdU, want.U[i], 1e-9)
		if q.Freedom.Kind != FreedomEffective || math.Abs(*q.Freedom.Value-4) > 1e-9 {
			t.Errorf("degrees of freedom %+v, want the 4 of the observations", q.Freedom)
		}
		p = append(p, q)
	}
	for _, tt := range []struct {
		a, b int
		want float64
	}{{0, 1, want.RX}, {0, 2, want.RZ}, {1, 2, want.XZ}, {2, 2, 1}} {
		r, err := p[tt.a].CorrelationWith(p[tt.b])
		if err != nil {
			t.Fatal(err)
		}
		near(t, fmt.Sprint("correlation ", tt.a, tt.b), r, tt.want, 1e-9)
	}
	for i := range inputs {
		inputs[i].Together = ""
	}
	q, err := Propagate(models[0], 0, inputs, correlations, false)
	if err != nil {
		t.Fatal(err)
	}
	if q.Freedom.Kind != FreedomRefused || !strings.Contains(q.Freedom.Reason, "V, I, phi") {
		t.Errorf("degrees of freedom of correlated inputs: %+v, want them refused by name", q.Freedom)
	}
	if _, _, _, err := q.Interval(0.95); err == nil {
		t.Error("an interval without degrees of freedom")
	}
	if _, err := Propagate(models[0], 0, inputs, correlations, true); !errors.Is(err, ErrSecondOrderCorrelated) {
		t.Errorf("second order with correlations: %v", err)
	}
}

// TestThermometer: JCGM 100:2008, example H.3: the correction at 30 °C from a correlated intercept and slope.
func TestThermometer(t *testing.T) {
	var want struct {
		Line struct {
			B0 float64 `json:"b0"`
			B1 float64 `json:"b1"`
			S0 float64 `json:"s_b0"`
			S1 float64 `json:"s_b1"`
		} `json:"ols_with_t0=20"`
		R  float64 `json:"r"`
		B  float64 `json:"b30"`
		UB float64 `json:"u_b30"`
	}
	expected(t, "gum_h3", &want)
	l := want.Line
	p, err := Propagate(func(x []float64) float64 { return x[0] + 10*x[1] }, 0, []Input{
		{Name: "intercept", Type: "A", Value: l.B0, StdU: l.S0, DoF: dof(9), Together: "fit"},
		{Name: "slope", Type: "A", Value: l.B1, StdU: l.S1, DoF: dof(9), Together: "fit"},
	}, []Correlation{{"intercept", "slope", want.R}}, false)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "correction", p.Value, want.B, 1e-12)
	near(t, "u", p.StdU, want.UB, 1e-11)
	near(t, "degrees of freedom", *p.Freedom.Value, 9, 1e-12)
	near(t, "sum of the shares", p.Terms[0].Share+p.Terms[1].Share, 1, 1e-12)
}

// TestQUAMModels: EURACHEM/CITAC QUAM:2012, examples A1 and A5, with sensitivities from the model, against expected.json.
func TestQUAMModels(t *testing.T) {
	var a1 struct{ C, U float64 }
	expected(t, "quam_a1_standard", &a1)
	p, err := Propagate(func(x []float64) float64 { return 1000 * x[0] * x[1] / x[2] }, 0, []Input{
		{Name: "m", Type: "B", Value: 100.28, StdU: 0.05}, {Name: "P", Type: "B", Value: 0.9999, StdU: 5.8e-5}, {Name: "V", Type: "B", Value: 100, StdU: 0.07},
	}, nil, false)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "A1", p.Value, a1.C, 1e-14)
	near(t, "A1 u", p.StdU, a1.U, 1e-11)
	if p.Freedom.Kind != FreedomInfinite || len(p.TakenAsInfinite) != 3 {
		t.Errorf("%+v %v", p.Freedom, p.TakenAsInfinite)
	}
	var a5 struct {
		R float64 `json:"release_mg_per_dm2"`
		U float64 `json:"u_release"`
	}
	expected(t, "quam_a5_cadmium", &a5)
	p, err = Propagate(func(x []float64) float64 { return x[0] * x[1] / x[2] * x[3] * x[4] * x[5] }, 0, []Input{
		{Name: "c0", Type: "A", Value: 0.26, StdU: 0.018, DoF: dof(13)}, {Name: "VL", Type: "B", Value: 0.332, StdU: 0.0018}, {Name: "aV", Type: "B", Value: 2.37, StdU: 0.06},
		{Name: "acid", Type: "B", Value: 1, StdU: 0.0008}, {Name: "time", Type: "B", Value: 1, StdU: 0.001}, {Name: "temperature", Type: "B", Value: 1, StdU: 0.06},
	}, nil, false)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "A5", p.Value, a5.R, 1e-12)
	near(t, "A5 u", p.StdU, a5.U, 1e-10)
}

// TestSuppliedSensitivities gives what Combine gives.
func TestSuppliedSensitivities(t *testing.T) {
	c := []float64{2, -3, 0.5}
	u := []float64{0.3, 0.2, 1.1}
	var inputs []Input
	var parts []Component
	for i := range c {
		name := string(rune('a' + i))
		inputs = append(inputs, Input{Name: name, Type: "A", StdU: u[i], DoF: dof(float64(5 + i)), Sensitivity: &c[i]})
		parts = append(parts, Component{Name: name, Type: "A", StdU: u[i], DoF: dof(float64(5 + i)), Sensitivity: c[i]})
	}
	p, err := Propagate(nil, 7, inputs, nil, false)
	if err != nil {
		t.Fatal(err)
	}
	b, err := Combine(7, parts)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "u", p.StdU, b.StdU, 1e-15)
	near(t, "degrees of freedom", *p.Freedom.Value, *b.EffectiveDoF, 1e-14)
	low, high, k, err := p.Interval(0.95)
	if err != nil || math.Abs((high-low)/2-k*p.StdU) > 1e-12 || p.Value != 7 {
		t.Errorf("%g to %g, k = %g, %v", low, high, k, err)
	}
}

// TestDerivatives against closed forms, near the edge of where a model is defined too.
func TestDerivatives(t *testing.T) {
	for _, tt := range []struct {
		name string
		f    Model
		x, u float64
		want float64
	}{
		{"exponential", func(x []float64) float64 { return math.Exp(x[0]) }, 1, 0.1, math.E},
		{"logarithm, u as large as x", func(x []float64) float64 { return math.Log(x[0]) }, 2, 2, 0.5},
		{"root near zero", func(x []float64) float64 { return math.Sqrt(x[0]) }, 1e-6, 1e-4, 500},
		{"reciprocal, tiny u", func(x []float64) float64 { return 1 / x[0] }, 3, 1e-9, -1. / 9},
		{"cube at zero", func(x []float64) float64 { return x[0] * x[0] * x[0] }, 0, 1, 0},
	} {
		p, err := Propagate(tt.f, 0, []Input{{Name: "x", Type: "B", Value: tt.x, StdU: tt.u}}, nil, false)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		if math.Abs(p.Terms[0].C-tt.want) > 1e-9*math.Max(1, math.Abs(tt.want)) {
			t.Errorf("%s: %.15g, want %.15g", tt.name, p.Terms[0].C, tt.want)
		}
	}
}

// TestSecondOrderTerms against closed forms for normal inputs: the variance of x² is 4μ²u² + 2u⁴ whole, that of x·y is
// μ²u² + ν²w² + u²w², and of x³ it is, to this order, 9μ⁴u² + (18+18)μ²u⁴.
func TestSecondOrderTerms(t *testing.T) {
	in := []Input{{Name: "x", Type: "B", Value: 3, StdU: 0.5}, {Name: "y", Type: "B", Value: -2, StdU: 0.3}}
	for _, tt := range []struct {
		name string
		f    Model
		want float64
	}{
		{"square", func(x []float64) float64 { return x[0] * x[0] }, 4*9*0.25 + 2*0.0625},
		{"product", func(x []float64) float64 { return x[0] * x[1] }, 9*0.09 + 4*0.25 + 0.25*0.09},
		{"cube", func(x []float64) float64 { return x[0] * x[0] * x[0] }, 9*81*0.25 + 36*9*0.0625},
	} {
		p, err := Propagate(tt.f, 0, in, nil, true)
		if err != nil {
			t.Fatal(err)
		}
		near(t, tt.name, p.StdU*p.StdU, tt.want, 1e-9)
	}
}

func TestRefusedInputs(t *testing.T) {
	good := func() []Input {
		return []Input{{Name: "a", Type: "B", Value: 1, StdU: 1}, {Name: "b", Type: "B", Value: 1, StdU: 1}, {Name: "c", Type: "B", Value: 1, StdU: 1}}
	}
	sum := func(x []float64) float64 { return x[0] + x[1] + x[2] }
	nan := math.NaN()
	for _, tt := range []struct {
		want   string
		change func([]Input) ([]Input, []Correlation, Model)
	}{
		{"at least one", func(in []Input) ([]Input, []Correlation, Model) { return nil, nil, sum }},
		{"has no name", func(in []Input) ([]Input, []Correlation, Model) { in[1].Name = ""; return in, nil, sum }},
		{"second one of that name", func(in []Input) ([]Input, []Correlation, Model) { in[1].Name = "a"; return in, nil, sum }},
		{`"b": type "C"`, func(in []Input) ([]Input, []Correlation, Model) { in[1].Type = "C"; return in, nil, sum }},
		{`"b": 1 with u = NaN`, func(in []Input) ([]Input, []Correlation, Model) { in[1].StdU = nan; return in, nil, sum }},
		{`"c": type A without degrees of freedom`, func(in []Input) ([]Input, []Correlation, Model) { in[2].Type = "A"; return in, nil, sum }},
		{"0 degrees of freedom", func(in []Input) ([]Input, []Correlation, Model) { in[2].DoF = dof(0); return in, nil, sum }},
		{"a sensitivity of NaN", func(in []Input) ([]Input, []Correlation, Model) { in[2].Sensitivity = &nan; return in, nil, sum }},
		{"no sensitivity and no model", func(in []Input) ([]Input, []Correlation, Model) { return in, nil, nil }},
		{"the names of two inputs", func(in []Input) ([]Input, []Correlation, Model) { return in, []Correlation{{"a", "z", 0}}, sum }},
		{"with itself", func(in []Input) ([]Input, []Correlation, Model) { return in, []Correlation{{"a", "a", 1}}, sum }},
		{"a second correlation", func(in []Input) ([]Input, []Correlation, Model) {
			return in, []Correlation{{"a", "b", 0}, {"b", "a", 0}}, sum
		}},
		{"want -1 to 1", func(in []Input) ([]Input, []Correlation, Model) { return in, []Correlation{{"a", "b", 1.01}}, sum }},
		{"contradict each other", func(in []Input) ([]Input, []Correlation, Model) {
			return in, []Correlation{{"a", "b", 0.9}, {"b", "c", 0.9}, {"a", "c", -0.9}}, sum
		}},
		{"want a finite value", func(in []Input) ([]Input, []Correlation, Model) {
			return in, nil, func([]float64) float64 { return nan }
		}},
		{"sensitivity cannot be worked out", func(in []Input) ([]Input, []Correlation, Model) {
			return in, nil, func(x []float64) float64 {
				if x[0] != 1 {
					return nan
				}
				return 1
			}
		}},
	} {
		in, r, f := tt.change(good())
		if p, err := Propagate(f, 0, in, r, false); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("want an error with %q, got %+v, %v", tt.want, p, err)
		}
	}
	// Perfect correlation is allowed, and can cancel.
	p, err := Propagate(func(x []float64) float64 { return x[0] - x[1] + 0*x[2] }, 0, good(), []Correlation{{"a", "b", 1}}, false)
	if err != nil || p.StdU > 1e-7 {
		t.Errorf("%g, %v; want 0", p.StdU, err)
	}
}

func ExamplePropagate() {
	nine := 9.0
	// JCGM 100:2008, example H.3: the correction of a thermometer at 30 °C, from a line through 20 °C.
	p, err := Propagate(func(x []float64) float64 { return x[0] + float64(10*x[1]) }, 0, []Input{
		{Name: "intercept", Type: "A", Value: -0.1712, StdU: 0.0029, DoF: &nine, Together: "fit", Source: "11 readings"},
		{Name: "slope", Type: "A", Value: 0.00218, StdU: 0.00067, DoF: &nine, Together: "fit", Source: "11 readings"},
	}, []Correlation{{"intercept", "slope", -0.930}}, false)
	if err != nil {
		panic(err)
	}
	fmt.Printf("%.4f °C, u = %.4f °C, %.0f degrees of freedom\n", p.Value, p.StdU, *p.Freedom.Value)
	// Output: -0.1494 °C, u = 0.0041 °C, 9 degrees of freedom
}
