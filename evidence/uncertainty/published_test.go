package uncertainty

import (
	"fmt"
	"math"
	"testing"
)

func dof(v float64) *float64 { return &v }

// TestPublishedBudgets holds combined uncertainties against published worked examples.
func TestPublishedBudgets(t *testing.T) {
	root3, root6 := math.Sqrt(3), math.Sqrt(6)
	cd := 1002.7 // mg/L
	bread := 1.11
	tests := []struct {
		name, source string
		value        float64
		parts        []Component
		u, within    float64
		nu           *float64
		nuWithin     float64
	}{
		{"cadmium standard", "EURACHEM/CITAC QUAM:2012, example A1 (read in an open library's documentation): u = 0.835199 mg/L", cd, []Component{
			{Name: "mass", StdU: 0.05, Sensitivity: cd / 100.28},
			{Name: "purity", StdU: 0.0001 / root3, Sensitivity: cd / 0.9999},
			{Name: "flask", StdU: 0.1 / root6, Sensitivity: cd / 100},
			{Name: "filling", StdU: 0.02, Sensitivity: cd / 100},
			{Name: "temperature", StdU: 0.084 / root3, Sensitivity: cd / 100},
		}, 0.835199, 5e-5, nil, 0},
		{"pesticide in bread", "EURACHEM/CITAC QUAM:2012, example A4: relative 0.34", bread, []Component{
			{Name: "repeatability", StdU: 0.27 * bread, Sensitivity: 1},
			{Name: "recovery", StdU: 0.043 / 0.9 * bread, Sensitivity: 1},
			{Name: "homogeneity", StdU: 0.2 * bread, Sensitivity: 1},
		}, 0.34 * bread, 0.005 * bread, nil, 0},
		{"three components", "JCGM 100:2008, G.4.1 (from memory): 1.03 %, 19 degrees of freedom", 100, []Component{
			{Name: "1", StdU: 0.25, Sensitivity: 1, DoF: dof(9)}, {Name: "2", StdU: 0.57, Sensitivity: 1, DoF: dof(4)}, {Name: "3", StdU: 0.82, Sensitivity: 1, DoF: dof(14)},
		}, 1.03, 0.005, dof(18.999), 0.001},
		{"gauge block", "JCGM 100:2008, example H.1: u = 32 nm, 16.7 effective degrees of freedom (16 when cut)", 0, []Component{
			{Name: "standard", StdU: 25, Sensitivity: 1, DoF: dof(18)}, {Name: "difference", StdU: 9.7, Sensitivity: 1, DoF: dof(25.6)},
			{Name: "expansion", StdU: 2.9, Sensitivity: 1, DoF: dof(50)}, {Name: "temperature", StdU: 16.6, Sensitivity: 1, DoF: dof(2)},
		}, 32, 0.5, dof(16.76), 0.01},
		{"sensitivities", "Welch-Satterthwaite in 40-digit arithmetic: u = 1.016120, 15.608 degrees of freedom", 0, []Component{
			{Name: "1", StdU: 0.1, Sensitivity: 1}, {Name: "2", StdU: 0.3, Sensitivity: 2, DoF: dof(6)}, {Name: "3", StdU: 0.2, Sensitivity: 3, DoF: dof(8)}, {Name: "4", StdU: 1.1, Sensitivity: 0.5, DoF: dof(3)},
		}, 1.016120, 5e-7, dof(15.608), 0.0005},
		{"four inputs of unit variance", "JCGM 101:2008, 9.2.2: u = 2.0", 0, []Component{
			{Name: "1", StdU: 1, Sensitivity: 1}, {Name: "2", StdU: 1, Sensitivity: 1}, {Name: "3", StdU: 1, Sensitivity: 1}, {Name: "4", StdU: 1, Sensitivity: 1},
		}, 2, 1e-15, nil, 0},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			b, err := Combine(tt.value, tt.parts)
			if err != nil {
				t.Fatal(err)
			}
			if math.Abs(b.StdU-tt.u) > tt.within {
				t.Errorf("u = %.7g, want %.7g ± %g (%s)", b.StdU, tt.u, tt.within, tt.source)
			}
			if (b.EffectiveDoF == nil) != (tt.nu == nil) || tt.nu != nil && math.Abs(*b.EffectiveDoF-*tt.nu) > tt.nuWithin {
				t.Errorf("effective degrees of freedom %v, want %v (%s)", b.EffectiveDoF, tt.nu, tt.source)
			}
			share := 0.0
			for _, c := range b.Components {
				share += c.Share
			}
			if math.Abs(share-1) > 1e-12 {
				t.Errorf("the shares add up to %g", share)
			}
		})
	}
}

func TestFactors(t *testing.T) {
	tests := []struct {
		name   string
		got    func() (float64, error)
		want   float64
		within float64
	}{
		{"95 %, infinite (tables)", func() (float64, error) { return CoverageFactor(0.95, nil) }, 1.960, 0.0005},
		{"95 %, 19 (tables)", func() (float64, error) { return CoverageFactor(0.95, dof(19)) }, 2.093, 0.0005},
		{"95 %, 19.9 is cut to 19 (GUM G.4.1)", func() (float64, error) { return CoverageFactor(0.95, dof(19.9)) }, 2.093, 0.0005},
		{"99 %, 16 (GUM H.1.6: 2.92)", func() (float64, error) { return CoverageFactor(0.99, dof(16.7)) }, 2.92, 0.005},
		{"one-sided 95 %, infinite", func() (float64, error) { return OneSidedFactor(0.95, nil) }, 1.645, 0.0005},
		{"one-sided 95 %, 8 (tables)", func() (float64, error) { return OneSidedFactor(0.95, dof(8)) }, 1.860, 0.0005},
	}
	for _, tt := range tests {
		if got, err := tt.got(); err != nil || math.Abs(got-tt.want) > tt.within {
			t.Errorf("%s: %g, %v; want %g", tt.name, got, err, tt.want)
		}
	}
	for _, p := range []float64{0, 1, -1, math.NaN()} {
		if k, err := CoverageFactor(p, nil); err == nil {
			t.Errorf("coverage %g gave %g", p, k)
		}
	}
	if k, err := CoverageFactor(0.95, dof(0.5)); err == nil {
		t.Errorf("half a degree of freedom gave %g", k)
	}
}

// TestProbabilityAbove: closed form of the normal distribution; the two-sided specific risk N(10.5, 0.4) against limits 9 and 11 is
// 0.10574 = 0.00009 + 0.10565 (published vector, read in a secondary source).
func TestProbabilityAbove(t *testing.T) {
	tests := []struct{ value, u, limit, want, within float64 }{
		{1.1645, 0.1, 1, 0.9500, 0.00005}, {1.2, 0.1, 1, 0.97725, 5e-6}, {1, 0.1, 1, 0.5, 0},
		{10.5, 0.4, 11, 0.10565, 5e-6}, {10, 0.4, 11, 0.00621, 5e-6}, {12, 0.4, 11, 0.99379, 5e-6},
		{1, 0, 2, 0, 0}, {3, 0, 2, 1, 0}, {2, 0, 2, 0.5, 0},
	}
	for _, tt := range tests {
		if got, err := ProbabilityAbove(tt.value, tt.u, tt.limit, nil); err != nil || math.Abs(got-tt.want) > tt.within {
			t.Errorf("P(%g ± %g > %g) = %g, %v; want %g", tt.value, tt.u, tt.limit, got, err, tt.want)
		}
	}
	// t(0.975; 4) = 2.776 (tables): that many u above the limit leaves 2.5 % below it.
	if got, err := ProbabilityAbove(2.7764451, 1, 0, dof(4)); err != nil || math.Abs(got-0.975) > 1e-8 {
		t.Errorf("Student: %g, %v", got, err)
	}
	for _, u := range []float64{-1, math.NaN(), math.Inf(1)} {
		if p, err := ProbabilityAbove(1, u, 0, nil); err == nil {
			t.Errorf("u = %g gave %g", u, p)
		}
	}
}

func TestRefusedComponents(t *testing.T) {
	for name, c := range map[string]Component{
		"negative u":  {StdU: -1, Sensitivity: 1},
		"NaN":         {StdU: math.NaN(), Sensitivity: 1},
		"infinite":    {StdU: 1, Sensitivity: math.Inf(1)},
		"no freedom":  {StdU: 1, Sensitivity: 1, DoF: dof(0)},
		"NaN freedom": {StdU: 1, Sensitivity: 1, DoF: dof(math.NaN())},
	} {
		if b, err := Combine(1, []Component{c}); err == nil {
			t.Errorf("%s: %+v", name, b)
		}
	}
	if b, err := Combine(1, nil); err != nil || b.StdU != 0 || b.EffectiveDoF != nil {
		t.Errorf("no component: %+v, %v", b, err)
	}
}

func ExampleCombine() {
	// EURACHEM/CITAC QUAM:2012, example A4: 1.11 mg/kg.
	b, err := Combine(1.11, []Component{
		{Name: "repeatability", Type: "A", StdU: 0.27 * 1.11, Sensitivity: 1, Source: "duplicate tests"},
		{Name: "recovery", Type: "A", StdU: 0.048 * 1.11, Sensitivity: 1, Source: "recovery study"},
		{Name: "homogeneity", Type: "B", StdU: 0.2 * 1.11, Sensitivity: 1, Source: "model"},
	})
	if err != nil {
		panic(err)
	}
	fmt.Printf("u = %.2f mg/kg, U = %.2f mg/kg (k = 2)\n", b.StdU, Expand(b, 2))
	// Output: u = 0.38 mg/kg, U = 0.75 mg/kg (k = 2)
}

func ExampleCoverageFactor() {
	nu := 16.7 // cut to 16
	k, err := CoverageFactor(0.99, &nu)
	if err != nil {
		panic(err)
	}
	normal, err := CoverageFactor(0.95, nil)
	if err != nil {
		panic(err)
	}
	fmt.Printf("%.2f %.2f\n", k, normal)
	// Output: 2.92 1.96
}

func ExampleProbabilityAbove() {
	// 1.2 with u = 0.1 against a limit of 1.0: by the normal distribution, and with four effective degrees of freedom.
	p, err := ProbabilityAbove(1.2, 0.1, 1.0, nil)
	if err != nil {
		panic(err)
	}
	nu := 4.0
	q, err := ProbabilityAbove(1.2, 0.1, 1.0, &nu)
	if err != nil {
		panic(err)
	}
	fmt.Printf("%.4f %.4f\n", p, q)
	// Output: 0.9772 0.9419
}

func BenchmarkCombine(b *testing.B) {
	for _, n := range []int{4, 8, 100} {
		parts := make([]Component, n)
		for i := range parts {
			parts[i] = Component{StdU: float64(i + 1), Sensitivity: 1, DoF: dof(float64(10 + i))}
		}
		b.Run(fmt.Sprintf("components=%d", n), func(b *testing.B) {
			for b.Loop() {
				if _, err := Combine(1, parts); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkCoverageFactor(b *testing.B) {
	for _, nu := range []float64{4, 16, 1000} {
		b.Run(fmt.Sprintf("degrees=%g", nu), func(b *testing.B) {
			for b.Loop() {
				if _, err := CoverageFactor(0.95, &nu); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
