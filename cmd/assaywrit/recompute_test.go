package main

import (
	"encoding/json"
	"math"
	"testing"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"
)

// The record as an outside reader would decode it: none of the program's types.
type plainRecord struct {
	Sequence []struct {
		Injection string
		Role      string
		Dilution  float64
		Nominal   []struct {
			Analyte string
			NG      float64 `json:"ng_per_ml"`
		}
	}
	Injections []struct {
		Injection    string
		Role         string
		Measurements []struct {
			Compound, Trace string
			Peak            *struct {
				Area float64 `json:"area_counts_min"`
			}
		}
	}
	Method struct {
		Analytes []struct {
			ID          string `json:"id"`
			IS          string `json:"internal_standard"`
			Calibration *struct{ Weighting string }
			Uncertainty *struct {
				Components []struct {
					Relative, Absolute *float64
					DoF                *float64 `json:"degrees_of_freedom"`
				}
			}
		}
	}
	Analytes []struct {
		ID     string `json:"analyte"`
		Result *struct {
			NG     float64 `json:"ng_per_ml"`
			SD     float64 `json:"sd_ng_per_ml"`
			Budget struct {
				StdU         float64 `json:"combined_std_u"`
				EffectiveDoF float64 `json:"effective_degrees_of_freedom"`
			}
		}
	}
}

func (r *plainRecord) area(i int, compound, trace string) float64 {
	for _, m := range r.Injections[i].Measurements {
		if m.Compound == compound && m.Trace == trace && m.Peak != nil {
			return m.Peak.Area
		}
	}
	return math.NaN()
}

// TestRecomputedByHand computes the quantity, its uncertainty and the decision limit again from the recorded areas:
//
//   - the weighted line by a general-purpose statistics library (gonum stat.LinearRegression),
//   - the uncertainty of the line by the published closed form (Massart et al. 1997, eq. 8.28, without the term of the
//     sample's own scatter): u = (s/b)·√(1/Σw + (x−x̄w)²/Σw(x−x̄w)²),
//   - the combination by the GUM's root of squares (JCGM 100:2008, 5.1.2) and its degrees of freedom by Welch and Satterthwaite (G.4.1),
//   - the probability above the threshold by gonum's Student distribution,
//   - the decision limit as threshold + 1.645·u_max, rounded up to two significant figures (the rule of the edition that the
//     criteria set names; the published limit for salbutamol is 1200 ng/mL).
func TestRecomputedByHand(t *testing.T) {
	a := demoAssessment(t)
	var rec plainRecord
	if err := json.Unmarshal(a.evidenceJSON, &rec); err != nil {
		t.Fatal(err)
	}
	checked := 0
	for k, analyte := range rec.Analytes {
		if analyte.Result == nil {
			continue
		}
		checked++
		value, u, nu := byHand(t, &rec, analyte.ID)
		near(t, analyte.ID+" quantity", analyte.Result.NG, value, 1e-11)
		near(t, analyte.ID+" combined standard uncertainty", analyte.Result.Budget.StdU, u, 1e-9)

		limit := a.finding.Analytes[k].Limit
		if limit == nil || limit.MaxStdU == nil {
			t.Fatalf("%s: the finding states no limit", analyte.ID)
		}
		raw := limit.Threshold + 1.645**limit.MaxStdU
		unit := math.Pow(10, math.Floor(math.Log10(raw))-1)
		near(t, analyte.ID+" decision limit", limit.DecisionLimit, math.Ceil(raw/unit)*unit, 1e-12)
		student := distuv.StudentsT{Mu: value, Sigma: u, Nu: nu}
		near(t, analyte.ID+" probability above the threshold", limit.ProbabilityAbove, student.Survival(limit.Threshold), 1e-9)
		near(t, analyte.ID+" effective degrees of freedom", analyte.Result.Budget.EffectiveDoF, nu, 1e-9)
	}
	if checked == 0 {
		t.Fatal("no quantity was checked")
	}
}

func byHand(t *testing.T, rec *plainRecord, analyte string) (value, u, nu float64) {
	t.Helper()
	var is, weighting string
	var relative, freedom []float64
	for _, m := range rec.Method.Analytes {
		if m.ID == analyte {
			is, weighting = m.IS, m.Calibration.Weighting
			for _, c := range m.Uncertainty.Components {
				if c.Relative == nil {
					t.Fatal("this check knows relative components only")
				}
				relative = append(relative, *c.Relative)
				freedom = append(freedom, math.Inf(1))
				if c.DoF != nil {
					freedom[len(freedom)-1] = *c.DoF
				}
			}
		}
	}
	var x, y, w, sample, dilution []float64
	for i, row := range rec.Sequence {
		ratio := rec.area(i, analyte, "quantifier") / rec.area(i, is, "internal-standard")
		switch row.Role {
		case "calibrator":
			for _, n := range row.Nominal {
				if n.Analyte == analyte {
					x, y = append(x, n.NG), append(y, ratio)
					w = append(w, map[string]float64{"none": 1, "1/x": 1 / n.NG, "1/x2": 1 / (n.NG * n.NG)}[weighting])
				}
			}
		case "sample":
			sample, dilution = append(sample, ratio), append(dilution, row.Dilution)
		}
	}
	alpha, beta := stat.LinearRegression(x, y, w, false)
	var ss, sumW, meanX, sxx float64
	for i := range x {
		r := y[i] - alpha - beta*x[i]
		ss += w[i] * r * r
		sumW += w[i]
		meanX += w[i] * x[i]
	}
	meanX /= sumW
	for i := range x {
		sxx += w[i] * (x[i] - meanX) * (x[i] - meanX)
	}
	var values []float64
	for i, r := range sample {
		values = append(values, (r-alpha)/beta*dilution[i])
	}
	mean, sd := stat.MeanStdDev(values, nil)
	s := math.Sqrt(ss / float64(len(x)-2))
	line := s / beta * math.Sqrt(1/sumW+math.Pow(mean/dilution[0]-meanX, 2)/sxx) * dilution[0]
	repeat := sd * sd / float64(len(values))
	variance := line*line + repeat
	fourths := math.Pow(line, 4)/float64(len(x)-2) + repeat*repeat/float64(len(values)-1)
	for i, c := range relative {
		variance += c * c * mean * mean
		fourths += math.Pow(c*mean, 4) / freedom[i]
	}
	return mean, math.Sqrt(variance), variance * variance / fourths
}

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s: the program says %v, by hand %v", what, got, want)
	}
}
