package evidence_test

import (
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"assaywrit/evidence/peak"
	"assaywrit/evidence/simulate/demo"
)

// TestDivisionByFitting: where the method asks for it, peaks that share a baseline are divided by a joint fit, those that stand alone are
// not; the result is still the simulated truth within its uncertainty, and the straight area stays in the record.
func TestDivisionByFitting(t *testing.T) {
	for _, way := range []string{"joint-fit", "joint-fit-one-shape"} {
		m := exampleFolder(t)
		m["method.yaml"] = &fstest.MapFile{Data: []byte(strings.Replace(string(m["method.yaml"].Data), "  valley_fraction: 0\n", "  valley_fraction: 0\n  fused_peaks: "+way+"\n", 1))}
		ev, err := evaluate(t, m)
		if err != nil {
			t.Fatal(err)
		}
		divided := 0
		for _, inj := range ev.Record.Injections {
			for _, mt := range inj.Measurements {
				p := mt.Peak
				shared := p != nil && (p.StartKind == peak.AtValley || p.EndKind == peak.AtValley)
				if shared != (mt.Division != nil) {
					t.Errorf("%s %s %s: shared %t, %+v", inj.ID, mt.Compound, mt.Trace, shared, mt.Division)
				}
				if mt.Division == nil {
					continue
				}
				divided++
				d := mt.Division
				if d.Fit == nil || p.Area != d.Fit.Peaks[d.Index].Area || p.Algorithm != peak.JointFitAlgorithm || math.Abs(p.Area/d.Straight-1) > 0.05 {
					t.Errorf("%s %s %s: area %g, %+v", inj.ID, mt.Compound, mt.Trace, p.Area, d)
				}
			}
		}
		if divided < 5 {
			t.Errorf("%s: only %d peaks divided", way, divided)
		}
		for _, a := range ev.Record.Analytes {
			if a.Result != nil && math.Abs(a.Result.NGPerML-demo.Truth()[a.ID]) > 2*a.Result.Budget.StdU {
				t.Errorf("%s: %g ± %g ng/mL (k = 2), simulated %g", way, a.Result.NGPerML, 2*a.Result.Budget.StdU, demo.Truth()[a.ID])
			}
		}
	}
}
