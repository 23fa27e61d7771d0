package evidence

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/stat"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
)

// TestDrift: on a line the median slope is the line's, and one odd value does not bend it; fewer than three values have none.
func TestDrift(t *testing.T) {
	places := []float64{0, 1, 3, 4, 7, 9, 10}
	var line []float64
	for _, x := range places {
		line = append(line, 5+0.02*x)
	}
	near := func(what string, got *float64, want float64) {
		t.Helper()
		if got == nil || math.Abs(*got-want) > 1e-12 {
			t.Errorf("%s: %v, want %g", what, got, want)
		}
	}
	near("line", drift(places, line), 0.2/(5+0.02*4))
	line[2] = 8
	near("line with an odd value", drift(places, line), 0.2/(5+0.02*7))
	near("level", drift(places, []float64{2, 2, 2, 2, 2, 2, 2}), 0)
	if drift(places[:2], line[:2]) != nil || drift(places, make([]float64, 7)) != nil {
		t.Error("a drift of too few values, or of none above zero")
	}
	v := []float64{3, 4, 4.5, 7}
	near("relative standard deviation", relativeSD(v), stat.StdDev(v, nil)/stat.Mean(v, nil)) // gonum
}

// TestSuitability by hand: what should show a compound is counted, groups of replicates are those of one role and level, extremes name
// their injection.
func TestSuitability(t *testing.T) {
	rec := &Record{Method: casefile.Method{InternalStandards: []casefile.InternalStandard{{ID: "is"}}, Analytes: []casefile.Analyte{{ID: "a", InternalStandard: "is"}}}}
	add := func(id string, role casefile.Role, level string, area, standard, rt float64, rs, symmetry *float64) {
		inj := Injection{ID: id, Role: role, Level: level}
		if area > 0 {
			inj.Measurements = append(inj.Measurements, Measurement{Compound: "a", Trace: QuantifierTrace, Peak: &peak.Peak{Area: area, ApexMin: rt, ResolutionPre: rs, Symmetry: symmetry}})
		}
		if standard > 0 {
			inj.Measurements = append(inj.Measurements, Measurement{Compound: "is", Trace: InternalStandardTrace, Peak: &peak.Peak{Area: standard, ApexMin: rt - 0.1}})
		}
		rec.Injections = append(rec.Injections, inj)
		row := casefile.Injection{ID: id, Role: role}
		if role == casefile.Calibrator || role == casefile.Control {
			row.Nominal = []casefile.Nominal{{Analyte: "a", NGPerML: 1}}
		}
		rec.Sequence = append(rec.Sequence, row)
	}
	add("1", casefile.MatrixBlank, "", 5, 5, 1, ptr(0.1), ptr(9.0)) // a blank says nothing of the system
	add("2", casefile.Calibrator, "low", 10, 100, 2.00, ptr(3.0), ptr(1.1))
	add("3", casefile.Calibrator, "low", 12, 100, 2.01, ptr(2.5), ptr(1.2))
	add("4", casefile.Control, "low", 30, 100, 2.02, nil, ptr(0.9))
	add("5", casefile.SampleAliquot, "", 30, 90, 2.03, ptr(0.2), nil) // what is in the sample is not known
	add("6", casefile.Control, "high", 60, 120, 2.04, nil, nil)
	list := suitability(rec)
	is, a := list[0], list[1]
	if is.Compound != "is" || is.Injections != 5 || a.Injections != 4 {
		t.Errorf("%d of the internal standard, %d of the analyte", is.Injections, a.Injections)
	}
	if len(a.Replicates) != 1 || a.Replicates[0].Level != "low" || math.Abs(a.Replicates[0].ResponseSD-stat.StdDev([]float64{0.10, 0.12}, nil)/0.11) > 1e-12 {
		t.Errorf("replicates %+v", a.Replicates)
	}
	if a.Resolution.Value != 2.5 || a.Resolution.Injection != "3" || a.SymmetryLow.Value != 0.9 || a.SymmetryTop.Injection != "3" || a.Plates != nil {
		t.Errorf("extremes %+v %+v %+v %+v", a.Resolution, a.SymmetryLow, a.SymmetryTop, a.Plates)
	}
	if a.RetentionDrift == nil || math.Abs(*a.RetentionDrift-0.01*4/2.015) > 1e-9 || a.ResponseDrift != nil || is.ResponseDrift == nil {
		t.Errorf("drifts %v %v %v", a.RetentionDrift, a.ResponseDrift, is.ResponseDrift)
	}
}
