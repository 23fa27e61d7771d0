package evidence_test

import (
	"math"
	"testing"

	"assaywrit/evidence"
	"assaywrit/evidence/peak"
)

// TestAlternatives: a peak that shares a valley has its area by every way, and by the method's own way the area in use; a peak that stands
// alone has none.
func TestAlternatives(t *testing.T) {
	ev, err := evaluate(t, exampleFolder(t))
	if err != nil {
		t.Fatal(err)
	}
	shared := 0
	for _, inj := range ev.Record.Injections {
		for _, m := range inj.Measurements {
			if m.Peak == nil || m.Peak.StartKind != peak.AtValley && m.Peak.EndKind != peak.AtValley {
				if len(alternativesOf(m)) > 0 {
					t.Errorf("%s %s %s stands alone: %+v", inj.ID, m.Compound, m.Trace, alternativesOf(m))
				}
				continue
			}
			shared++
			if len(alternativesOf(m)) != 6 {
				t.Fatalf("%s %s %s: %d ways", inj.ID, m.Compound, m.Trace, len(alternativesOf(m)))
			}
			if a := alternativesOf(m)[0]; a.Method != peak.SeparateDrop || a.Difference == nil || math.Abs(*a.Difference) > 1e-2 { // the lowest point between two apexes, and that of the smoothed trace
				t.Errorf("%s %s %s: by the method's own way %v", inj.ID, m.Compound, m.Trace, *a.Difference)
			}
			for _, a := range alternativesOf(m) {
				if (a.Area == nil) != (a.Refused != "") {
					t.Errorf("%s %s %s: %+v", inj.ID, m.Compound, m.Trace, a)
				}
			}
		}
	}
	if shared < 5 {
		t.Errorf("only %d shared peaks", shared)
	}
}

func alternativesOf(m evidence.Measurement) []evidence.Alternative {
	if m.Merit == nil {
		return nil
	}
	return m.Merit.Alternatives
}
