package decision

import (
	"testing"

	"assaywrit/evidence"
	"assaywrit/evidence/uncertainty"
)

// TestConfirmationIsRaised: a budget that the simulation does not confirm, or that none was made for, is raised and decides nothing.
func TestConfirmationIsRaised(t *testing.T) {
	for _, tt := range []struct {
		name   string
		c      *evidence.Confirmation
		passed bool
	}{
		{"agrees", &evidence.Confirmation{Comparison: uncertainty.Comparison{Use: uncertainty.UseFirstOrder}}, true},
		{"differs", &evidence.Confirmation{Comparison: uncertainty.Comparison{Use: uncertainty.UseMonteCarlo}}, false},
		{"none", nil, false},
	} {
		rec := handmade()
		before := decide(t, rec, doping(t)).Analytes[0].Outcome
		rec.Analytes[0].Result.Confirmation = tt.c
		f := decide(t, rec, doping(t))
		if c := checkOf(t, f, rec.Analytes[0].ID+"/confirmation"); (c.Result == Passed) != tt.passed || c.Required || f.Analytes[0].Outcome != before {
			t.Errorf("%s: %+v, %s", tt.name, c, f.Analytes[0].Outcome)
		}
	}
}
