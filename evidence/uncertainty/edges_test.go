package uncertainty

import (
	"math"
	"math/rand/v2"
	"testing"
)

// TestTableG2: JCGM 100:2008, table G.2 (from memory): Student's factors by degrees of freedom, 0 standing for infinitely many.
func TestTableG2(t *testing.T) {
	levels := []float64{0.682689492, 0.90, 0.95, 0.954499736, 0.99, 0.997300204} // 68.27 %, 95.45 % and 99.73 % are k = 1, 2 and 3
	for nu, row := range map[float64][]float64{
		1:  {1.84, 6.31, 12.71, 13.97, 63.66, 235.80},
		2:  {1.32, 2.92, 4.30, 4.53, 9.92, 19.21},
		3:  {1.20, 2.35, 3.18, 3.31, 5.84, 9.22},
		4:  {1.14, 2.13, 2.78, 2.87, 4.60, 6.62},
		5:  {1.11, 2.02, 2.57, 2.65, 4.03, 5.51},
		10: {1.05, 1.81, 2.23, 2.28, 3.17, 3.96},
		20: {1.03, 1.72, 2.09, 2.13, 2.85, 3.42},
		50: {1.01, 1.68, 2.01, 2.05, 2.68, 3.16},
		0:  {1.000, 1.645, 1.960, 2.000, 2.576, 3.000},
	} {
		for i, want := range row {
			degrees := dof(nu)
			within := 0.00501
			if nu == 0 {
				degrees, within = nil, 0.000501
			}
			if got, err := CoverageFactor(levels[i], degrees); err != nil || math.Abs(got-want) > within {
				t.Errorf("k(%.4g; %g) = %.4f, %v; the table says %g", levels[i], nu, got, err, want)
			}
			// Half of what lies outside lies above.
			if got, err := OneSidedFactor(0.5+levels[i]/2, degrees); err != nil || math.Abs(got-want) > within {
				t.Errorf("one-sided k(%.4g; %g) = %.4f, %v; the table says %g", 0.5+levels[i]/2, nu, got, err, want)
			}
		}
	}
}

// TestProbabilityAboveStudent: closed forms of the distribution for one, two and four degrees of freedom (Abramowitz and Stegun
// 26.7.3, 26.7.4).
func TestProbabilityAboveStudent(t *testing.T) {
	for _, z := range []float64{-7, -1.6, -0.2, 0, 0.5, 1, 2.3, 12} {
		for nu, want := range map[float64]float64{
			1: 0.5 + math.Atan(z)/math.Pi,
			2: 0.5 + z/(2*math.Sqrt(2+z*z)),
			4: 0.5 + z/(2*math.Sqrt(4+z*z))*(1+2/(4+z*z)),
		} {
			got, err := ProbabilityAbove(100+4*z, 4, 100, dof(nu))
			if err != nil || math.Abs(got-want) > 1e-15 {
				t.Errorf("P above, z = %g, %g degrees of freedom: %.17g, %v; want %.17g", z, nu, got, err, want)
			}
		}
	}
}

// TestProbabilityAboveRefuses numbers that mean nothing, with u of zero too.
func TestProbabilityAboveRefuses(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for _, tt := range []struct {
		value, u, limit float64
		nu              *float64
	}{
		{nan, 1, 0, nil}, {inf, 1, 0, nil}, {1, 1, nan, nil}, {1, 1, inf, nil}, {1, -1, 0, nil}, {1, nan, 0, nil}, {math.MaxFloat64, 1, -math.MaxFloat64, nil},
		{1, 1, 0, dof(0)}, {1, 1, 0, dof(-2)}, {1, 1, 0, dof(nan)}, {1, 0, 0, dof(0)},
	} {
		if p, err := ProbabilityAbove(tt.value, tt.u, tt.limit, tt.nu); err == nil {
			t.Errorf("%+v gave %g", tt, p)
		}
	}
	// Finite numbers whose quotient is not: the answer is certain all the same.
	if p, err := ProbabilityAbove(1e300, 1e-300, 0, nil); err != nil || p != 1 {
		t.Errorf("%g, %v; want 1", p, err)
	}
	if p, err := ProbabilityAbove(0, 1e-300, 1e300, dof(3)); err != nil || p != 0 {
		t.Errorf("%g, %v; want 0", p, err)
	}
	if p, err := ProbabilityAbove(1.2, 0.1, 1, dof(inf)); err != nil || math.Abs(p-0.97725) > 5e-6 {
		t.Errorf("infinitely many degrees of freedom: %g, %v; want 0.97725", p, err)
	}
}

// TestFewerDegreesAreLessSure: Student's distribution is nearer to 1/2 than the normal one, the more so the fewer the degrees of freedom.
func TestFewerDegreesAreLessSure(t *testing.T) {
	before := 0.5
	for _, nu := range []*float64{dof(0.5), dof(1), dof(2), dof(5), dof(30), dof(1e6), nil} {
		p, err := ProbabilityAbove(12, 1, 10, nu)
		if err != nil || p <= before {
			t.Errorf("%g after %g, %v", p, before, err)
		}
		before = p
	}
}

// TestBudgetsOfAllSizes: the root of the sum of squares, whatever the magnitude of the parts.
func TestBudgetsOfAllSizes(t *testing.T) {
	for _, scale := range []float64{1e-300, 1e-160, 1, 1e160, 1e300} {
		b, err := Combine(1, []Component{{Name: "a", StdU: 3 * scale, Sensitivity: 1, DoF: dof(4)}, {Name: "b", StdU: 4 * scale, Sensitivity: -1, DoF: dof(9)}})
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(b.StdU/(5*scale)-1) > 4e-16 {
			t.Errorf("3 and 4 times %g make %g", scale, b.StdU)
		}
		// 5⁴/(3⁴/4 + 4⁴/9)
		if want := 625 / (81./4 + 256./9); b.EffectiveDoF == nil || math.Abs(*b.EffectiveDoF/want-1) > 1e-15 {
			t.Errorf("effective degrees of freedom %v, want %g", b.EffectiveDoF, want)
		}
		if b.Components[1].Contribution != 4*scale || math.Abs(b.Components[1].Share-0.64) > 1e-15 {
			t.Errorf("%+v", b.Components[1])
		}
	}
	for name, c := range map[string][]Component{
		"a part that overflows":    {{StdU: 1e200, Sensitivity: 1e200}},
		"a sum that overflows":     {{StdU: math.MaxFloat64, Sensitivity: 1}, {StdU: math.MaxFloat64, Sensitivity: 1}},
		"infinite times nothing":   {{StdU: 0, Sensitivity: math.Inf(1)}},
		"infinite u, no effect":    {{StdU: math.Inf(1), Sensitivity: 0}},
		"sensitivity not a number": {{StdU: 1, Sensitivity: math.NaN()}},
	} {
		if b, err := Combine(1, c); err == nil {
			t.Errorf("%s: %+v", name, b)
		}
	}
	for _, v := range []float64{math.NaN(), math.Inf(-1)} {
		if b, err := Combine(v, nil); err == nil {
			t.Errorf("a value of %g: %+v", v, b)
		}
	}
	b, err := Combine(1, []Component{{StdU: 1, Sensitivity: 1, DoF: dof(math.MaxFloat64)}, {StdU: 1, Sensitivity: 1, DoF: dof(math.Inf(1))}, {StdU: 0, Sensitivity: 1, DoF: dof(1)}})
	if err != nil || b.EffectiveDoF != nil {
		t.Errorf("%+v, %v; want infinitely many degrees of freedom", b, err)
	}
}

// TestWelchSatterthwaiteBounds: the effective degrees of freedom lie between the fewest of the components and the sum of all (JCGM
// 100:2008, G.4.1), and do not depend on the order by more than rounding.
func TestWelchSatterthwaiteBounds(t *testing.T) {
	rnd := rand.New(rand.NewPCG(4, 1))
	for range 500 {
		n := 1 + rnd.IntN(8)
		parts := make([]Component, n)
		fewest, sum := math.Inf(1), 0.0
		for i := range parts {
			nu := 1 + 30*rnd.Float64()
			fewest, sum = min(fewest, nu), sum+nu
			parts[i] = Component{StdU: math.Pow(10, 4*rnd.Float64()-2), Sensitivity: rnd.NormFloat64(), DoF: &nu}
		}
		b, err := Combine(0, parts)
		if err != nil {
			t.Fatal(err)
		}
		if nu := *b.EffectiveDoF; nu < fewest*(1-1e-12) || nu > sum*(1+1e-12) {
			t.Errorf("%g effective degrees of freedom, want %g to %g", nu, fewest, sum)
		}
		rnd.Shuffle(n, func(i, j int) { parts[i], parts[j] = parts[j], parts[i] })
		c, err := Combine(0, parts)
		if err != nil || math.Abs(c.StdU/b.StdU-1) > 1e-15 || math.Abs(*c.EffectiveDoF / *b.EffectiveDoF - 1) > 1e-14 {
			t.Errorf("in another order %g with %g, not %g with %g", c.StdU, *c.EffectiveDoF, b.StdU, *b.EffectiveDoF)
		}
	}
}
