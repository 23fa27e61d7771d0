package decision

import (
	"testing"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// TestOneWay: three changes on calibrators and controls that all make areas smaller are raised; two are not, nor are three that differ, nor
// those on the sample.
func TestOneWay(t *testing.T) {
	for _, tt := range []struct {
		name    string
		role    casefile.Role
		changes []float64
		raised  bool
	}{
		{"none", casefile.Calibrator, nil, false},
		{"two", casefile.Calibrator, []float64{-0.1, -0.05}, false},
		{"three smaller", casefile.Calibrator, []float64{-0.1, -0.05, -0.2}, true},
		{"three larger", casefile.Control, []float64{0.1, 0.05, 0.2}, true},
		{"one otherwise", casefile.Calibrator, []float64{-0.1, -0.05, -0.2, 0.01}, false},
		{"sample", casefile.SampleAliquot, []float64{-0.1, -0.05, -0.2}, false},
	} {
		rec := handmade()
		left := tt.changes
		for i := range rec.Injections {
			for k := range rec.Injections[i].Measurements {
				if rec.Injections[i].Role == tt.role && len(left) > 0 {
					rec.Injections[i].Measurements[k].Manual = &evidence.ManualAction{By: "P-2", ApprovedBy: "P-3", AreaChange: &left[0]}
					left = left[1:]
				}
			}
		}
		if len(left) > 0 {
			t.Fatalf("%s: too few measurements", tt.name)
		}
		if c := checkOf(t, decide(t, rec, doping(t)), "case/manual-integration/direction"); (c.Result == Failed) != tt.raised || c.Required {
			t.Errorf("%s: %+v", tt.name, c)
		}
	}
}
