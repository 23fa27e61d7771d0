package decision

import (
	"fmt"

	"assaywrit/evidence/uncertainty"
)

// confirmation: the budget, which is what the finding uses, is held against a simulation of the same measurement model. Where the two
// differ the reader is told; the standard uncertainty in use stays that of the budget, which everybody can work out again.
func (b *batchJudge) confirmation() {
	r := b.a.Result
	if r == nil {
		return
	}
	at := b.at + "/result"
	c := b.startQuantity("confirmation", "Budget confirmed by simulation", field(at, "confirmation", r.Confirmation != nil)).
		custom("JCGM 101:2008, clause 8 (from memory): the law of propagation is validated by the Monte Carlo method")
	c.Required = false
	if r.Confirmation == nil {
		why := r.NoConfirmation
		if why == "" {
			why = "the record has none"
		}
		b.add(c.missing("The budget was not held against a simulation: " + why + "."))
		return
	}
	x := &r.Confirmation.Comparison
	c = c.passIf(x.Use == uncertainty.UseFirstOrder)
	low, high := b.amount(x.Simulated.Low, 0), b.amount(x.Simulated.High, 0)
	_, budget := b.withU(r.NGPerML, r.Budget.StdU)
	_, simulated := b.withU(r.NGPerML, r.Confirmation.Simulation.StdU)
	agree := fmt.Sprintf("A simulation of %d trials gives the standard uncertainty %s and a 95 %% interval from %s to %s", r.Confirmation.Simulation.Trials, simulated, low.Text, high.Text)
	b.add(c.says(agree+", within the tolerance of the law of propagation.",
		agree+fmt.Sprintf(", which differs from that of the law of propagation by more than the tolerance. The finding uses the standard uncertainty of the budget, %s.", budget)))
}
