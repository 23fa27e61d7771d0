package uncertainty

import (
	"math"
	"testing"
)

// rectangular and triangular turn a half width into a standard uncertainty (JCGM 100:2008, 4.3.7 and 4.3.9).
func rectangular(a float64) float64 { return a / math.Sqrt(3) }
func triangular(a float64) float64  { return a / math.Sqrt(6) }

// quadrature is the root of the sum of squares.
func quadrature(u ...float64) float64 {
	sum := 0.0
	for _, v := range u {
		sum += v * v
	}
	return math.Sqrt(sum)
}

// TestTitrations holds whole budgets, component by component, against EURACHEM/CITAC QUAM:2012, examples A1, A2 and A3, in the unrounded
// form that an open uncertainty library's documentation gives (six digits).
func TestTitrations(t *testing.T) {
	molar := 8*12.0107 + 5*1.00794 + 4*15.9994 + 39.0983 // potassium hydrogen phthalate, g/mol
	uMolar := quadrature(8*rectangular(0.0008), 5*rectangular(0.00007), 4*rectangular(0.0003), rectangular(0.0001))
	mass := quadrature(rectangular(0.15e-3), rectangular(0.15e-3)) // g, tare and gross
	type input struct {
		name        string
		x, u, power float64 // value, standard uncertainty and exponent in the model, a product of powers
		want        float64 // contribution
	}
	tests := []struct {
		name                   string
		factor, value, u       float64
		withinValue, withinPer float64
		inputs                 []input
	}{
		{"A1, cadmium standard, mg/L", 1000, 1002.7, 0.835199, 5e-4, 2e-6, []input{
			{"volume", 100, quadrature(triangular(0.1), 0.02, rectangular(0.084)), -1, 0.666525},
			{"mass", 100.28, 0.05, 1, 0.49995},
			{"purity", 0.9999, rectangular(0.0001), 1, 0.0578967},
		}},
		{"A2, sodium hydroxide, mol/L", 1000, 0.102136159706, 0.000100500722, 1e-12, 2e-6, []input{
			{"volume", 18.64, quadrature(triangular(0.03), 0.006), -1, 7.47292e-5},
			{"repeatability", 1, 0.0005, 1, 5.10681e-5},
			{"mass", 0.3888, mass, 1, 3.21735e-5},
			{"purity", 1, rectangular(0.0005), 1, 2.94842e-5},
			{"molar mass", molar, uMolar, -1, 1.88312e-6},
		}},
		{"A3, hydrochloric acid, mol/L", 1000, 0.10139, 0.0001843, 5e-6, 3e-4, []input{
			{"repeatability", 1, 0.001, 1, 1.01387e-4},
			{"volume of the second titration", 14.89, quadrature(triangular(0.03), rectangular(15*2.1e-4*4)), 1, 9.69953e-5},
			{"volume of the first titration", 18.64, quadrature(triangular(0.03), rectangular(19*2.1e-4*4)), -1, 8.33653e-5},
			{"volume of the acid", 15, quadrature(triangular(0.02), rectangular(15*2.1e-4*4)), -1, 7.39151e-5},
			{"mass", 0.3888, mass, 1, 3.19376e-5},
			{"purity", 1, rectangular(0.0005), 1, 2.9268e-5},
			{"molar mass", molar, uMolar, -1, 1.88312e-6 / 0.102136159706 * 0.101387}, // as in A2, for this value
		}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			value := tt.factor
			for _, in := range tt.inputs {
				value *= math.Pow(in.x, in.power)
			}
			if math.Abs(value-tt.value) > tt.withinValue {
				t.Fatalf("value %.12g, want %.12g: the test's model is wrong", value, tt.value)
			}
			var parts []Component
			for _, in := range tt.inputs {
				parts = append(parts, Component{Name: in.name, StdU: in.u, Sensitivity: in.power * value / in.x})
			}
			b, err := Combine(value, parts)
			if err != nil {
				t.Fatal(err)
			}
			if math.Abs(b.StdU/tt.u-1) > tt.withinPer {
				t.Errorf("u = %.9g, want %.9g", b.StdU, tt.u)
			}
			if b.EffectiveDoF != nil {
				t.Errorf("%g degrees of freedom, want infinitely many", *b.EffectiveDoF)
			}
			for i, in := range tt.inputs {
				c := b.Components[i]
				if math.Abs(c.Contribution/in.want-1) > 2e-5 {
					t.Errorf("%s contributes %.6g, want %.6g", in.name, c.Contribution, in.want)
				}
				if share := in.want * in.want / (tt.u * tt.u); math.Abs(c.Share-share) > 1e-3 {
					t.Errorf("%s has a share of %.4g, want %.4g", in.name, c.Share, share)
				}
			}
		})
	}
}

// TestReleasedCadmium is EURACHEM/CITAC QUAM:2012, example A5, from its components: 0.0150 mg/dm² with u = 0.0014.
func TestReleasedCadmium(t *testing.T) {
	b, err := Combine(0.0150, []Component{
		{Name: "calibration", StdU: 1.02956e-3, Sensitivity: 1}, {Name: "temperature", StdU: 8.6663e-4, Sensitivity: 1},
		{Name: "area", StdU: 3.98736e-4, Sensitivity: 1}, {Name: "volume", StdU: 8.28714e-5, Sensitivity: 1},
	})
	if err != nil || math.Abs(b.StdU-0.0014) > 0.00005 {
		t.Errorf("u = %.6g, %v; want 0.0014", b.StdU, err)
	}
}

// TestGaugeBlock is JCGM 100:2008, H.1.6: U99 = t99(16)·32 nm = 93 nm; 92.6 nm unrounded, in an open library's documentation.
func TestGaugeBlock(t *testing.T) {
	b, err := Combine(50000838, []Component{
		{Name: "standard", StdU: 25, Sensitivity: 1, DoF: dof(18)}, {Name: "difference", StdU: 9.7, Sensitivity: 1, DoF: dof(25.6)},
		{Name: "expansion", StdU: 2.9, Sensitivity: 1, DoF: dof(50)}, {Name: "temperature", StdU: 16.6, Sensitivity: 1, DoF: dof(2)},
	})
	if err != nil {
		t.Fatal(err)
	}
	k, err := CoverageFactor(0.99, b.EffectiveDoF)
	if err != nil || math.Abs(k-2.92) > 0.005 {
		t.Errorf("k = %g, %v; want 2.92", k, err)
	}
	if u := Expand(b, k); math.Abs(u-92.6) > 0.1 {
		t.Errorf("U99 = %.4g nm, want 92.6", u)
	}
}
