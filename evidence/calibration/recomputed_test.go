package calibration

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"
)

// A recomputedLine is a fit in testdata/calibration/expected.json, by 40-digit arithmetic.
type recomputedLine struct {
	N   int     `json:"n"`
	DoF int     `json:"df"`
	A   float64 `json:"b0"`
	B   float64 `json:"b1"`
	SA  float64 `json:"s_b0"`
	SB  float64 `json:"s_b1"`
	Cov float64 `json:"cov_b0_b1"`
	S   float64 `json:"s_residual"`
	RSS float64 `json:"ss_residual"`
	R2  float64 `json:"r2"`
}

// recomputed reads one value of expected.json.
func recomputed(t *testing.T, set, key string, into any) {
	t.Helper()
	data, err := os.ReadFile(filepath.Join("..", "..", "testdata", "calibration", "expected.json"))
	if err != nil {
		t.Fatal(err)
	}
	var sets map[string]struct{ Recomputed map[string]json.RawMessage }
	if err := json.Unmarshal(data, &sets); err != nil {
		t.Fatal(err)
	}
	raw, ok := sets[set].Recomputed[key]
	if !ok {
		t.Fatalf("expected.json has no %s of %s", key, set)
	}
	if err := json.Unmarshal(raw, into); err != nil {
		t.Fatal(err)
	}
}

// TestRecomputedLines holds every statistic of a fit against 40-digit arithmetic on published data, with each kind of weight. The
// reference values have 15 digits.
func TestRecomputedLines(t *testing.T) {
	tests := []struct {
		set, key string
		w        Weighting
		shift    float64 // taken off the amounts
	}{
		{"din32645", "ols", Unweighted, 0},
		{"massart97ex1", "ols", Unweighted, 0},
		{"massart97ex3", "ols_all_points", Unweighted, 0},
		{"rl95_cadmium", "ols", Unweighted, 0},
		{"din38402b1_nitrite", "ols", Unweighted, 0},
		{"din38402b6_carbamazepine_lcmsms", "ols", Unweighted, 0},
		{"din38402b6_carbamazepine_lcmsms", "wls_1/x", InverseX, 0},
		{"din38402b6_carbamazepine_lcmsms", "wls_1/x2", InverseX2, 0},
		{"miller_fluorescein", "ols", Unweighted, 0},
		{"miller_weighted", "ols", Unweighted, 0},
		{"quam_a5_cadmium", "ols", Unweighted, 0},
		{"gum_h3_thermometer", "ols_with_t0=20", Unweighted, 20},
	}
	for _, tt := range tests {
		t.Run(tt.set+" "+tt.key, func(t *testing.T) {
			set := tt.set
			if set == "gum_h3_thermometer" {
				set = "gum_h3"
			}
			var want recomputedLine
			recomputed(t, set, tt.key, &want)
			c := columns(t, tt.set)
			for i := range c[0] {
				c[0][i] -= tt.shift
			}
			f, err := FitLine(pointsOf(c[0], c[1]), tt.w)
			if err != nil {
				t.Fatal(err)
			}
			if len(f.Points) != want.N || f.DoF != want.DoF {
				t.Errorf("%d points and %d degrees of freedom, want %d and %d", len(f.Points), f.DoF, want.N, want.DoF)
			}
			const within = 1e-12
			near(t, "a", f.A, want.A, within*(math.Abs(want.A)+want.SA))
			near(t, "b", f.B, want.B, within*want.B)
			near(t, "s(a)", f.SA, want.SA, within*want.SA)
			near(t, "s(b)", f.SB, want.SB, within*want.SB)
			near(t, "cov(a,b)", f.Cov, want.Cov, within*want.SA*want.SB)
			near(t, "s", f.S, want.S, within*want.S)
			near(t, "r²", f.R2, want.R2, within)
			rss := 0.0
			for _, p := range f.Points {
				rss += p.Weight * p.Residual * p.Residual
			}
			near(t, "Σw·r²", rss, want.RSS, 1e-11*want.RSS)
		})
	}
}

// TestBackCalculated: the amounts of calibrators read back from a line with weights 1/x², in per cent of nominal, for an LC-MS/MS
// calibration of a drug (DIN 38402-51:2017, example B.6, by 40-digit arithmetic, 12 digits).
func TestBackCalculated(t *testing.T) {
	var want []float64
	recomputed(t, "din38402b6_carbamazepine_lcmsms", "back_calculated_1/x2_percent_of_nominal", &want)
	c := columns(t, "din38402b6_carbamazepine_lcmsms")
	f, err := FitLine(pointsOf(c[0], c[1]), InverseX2)
	if err != nil {
		t.Fatal(err)
	}
	if len(want) != len(f.Points) {
		t.Fatalf("%d values for %d points", len(want), len(f.Points))
	}
	for i, p := range f.Points {
		near(t, "back-calculated", 100*p.BackX/p.X, want[i], 1e-9)
		near(t, "relative bias", 100*(1+*p.RelativeBias), want[i], 1e-9)
	}
}

// TestThermometer is JCGM 100:2008, example H.3: a line with published standard uncertainties, their correlation, and the correction at
// 30 °C. y1 = −0.1712, s 0.0029; y2 = 0.00218, s 0.00067; r = −0.930; s = 0.0035; at 30 °C −0.1494, u 0.0041.
func TestThermometer(t *testing.T) {
	c := columns(t, "gum_h3_thermometer")
	for i := range c[0] {
		c[0][i] -= 20
	}
	f, err := FitLine(pointsOf(c[0], c[1]), Unweighted)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "y1", f.A, -0.1712, 0.00005)
	near(t, "s(y1)", f.SA, 0.0029, 0.00005)
	near(t, "y2", f.B, 0.00218, 0.000005)
	near(t, "s(y2)", f.SB, 0.00067, 0.000005)
	near(t, "r", f.Cov/(f.SA*f.SB), -0.930, 0.0005)
	near(t, "s", f.S, 0.0035, 0.00005)
	near(t, "b(30 °C)", f.A+10*f.B, -0.1494, 0.00005)
	near(t, "u(b(30 °C))", math.Sqrt(f.SA*f.SA+100*f.SB*f.SB+20*f.Cov), 0.0041, 0.00005)
}
