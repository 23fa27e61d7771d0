package evidence_test

import (
	"math"
	"testing"

	"assaywrit/evidence/uncertainty"
)

// TestConfirmation: the measurement model, propagated by numerical derivatives, gives the budget that was worked out component by component,
// and a simulation of it agrees within its own scatter.
func TestConfirmation(t *testing.T) {
	ev, err := evaluate(t, exampleFolder(t))
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for _, a := range ev.Record.Analytes {
		r := a.Result
		if r == nil {
			continue
		}
		n++
		c := r.Confirmation
		if c == nil {
			t.Fatalf("%s: %s", a.ID, r.NoConfirmation)
		}
		if math.Abs(c.Propagation.Value/r.NGPerML-1) > 1e-9 || math.Abs(c.Propagation.StdU/r.Budget.StdU-1) > 1e-6 {
			t.Errorf("%s: %g ± %g by the model, %g ± %g by components", a.ID, c.Propagation.Value, c.Propagation.StdU, r.NGPerML, r.Budget.StdU)
		}
		if math.Abs(c.Simulation.Mean/r.NGPerML-1) > 2e-3 || math.Abs(c.Simulation.StdU/r.Budget.StdU-1) > 0.05 || c.Comparison.Use != uncertainty.UseFirstOrder {
			t.Errorf("%s: %+v, %+v", a.ID, c.Simulation, c.Comparison)
		}
	}
	if n == 0 {
		t.Error("no result")
	}
}
