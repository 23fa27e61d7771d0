package decision

import (
	"fmt"
	"math"
	"slices"

	"assaywrit/evidence"
)

// quantity: what a quantitative result needs beyond an accepted batch. These checks apply where identity is shown.
func (b *batchJudge) quantity(rule *LimitRule) {
	b.ranges()
	b.aliquots()
	b.dilution()
	b.result()
	b.maxUncertainty(rule)
	b.confirmation()
}

func (b *batchJudge) startQuantity(name, title string, evidence ...string) Check {
	c := b.start(name, title, true, evidence...)
	c.Group = "quantity"
	return c
}

// ranges: each aliquot, before dilution, lies between the lowest and the highest calibrator that pass.
func (b *batchJudge) ranges() {
	for i, x := range b.a.Aliquots {
		at := fmt.Sprintf("%s/aliquots/%d", b.at, i)
		name := subjectOf(b.rec, x.InjectionIndex)
		c := b.startQuantity("range/"+name, "Within the calibrated range", field(at, "read_ng_per_ml", x.ReadNGPerML != nil)).custom("a value is read between the lowest and the highest calibrator that pass")
		if b.low == nil || b.high == nil {
			b.add(c.missing("No calibrator passes, so that nothing is read from the line."))
			continue
		}
		b.add(c.within(x.ReadNGPerML, window{low: *b.low, high: *b.high}, b.amount, fmt.Sprintf("Aliquot %s, read from the line before dilution,", name)))
	}
}

// aliquots counts those that are known to differ: a second injection of one aliquot is no second aliquot.
func (b *batchJudge) aliquots() {
	var names []string
	for _, x := range b.a.Aliquots {
		if name := b.rec.Injections[x.InjectionIndex].Aliquot; !slices.Contains(names, name) {
			names = append(names, name)
		}
	}
	n := float64(len(names))
	need := b.set.Quantity.Aliquots
	c := b.startQuantity("aliquots", "Number of aliquots", field(b.at, "aliquots", len(b.a.Aliquots) > 0)).cited(need.Cite)
	limit := need.Value
	if own := float64(b.limits.Aliquots); own > limit {
		c, limit = c.byMethod(b.rec, "aliquots"), own
	}
	b.add(c.atLeast(&n, limit, count, "The number of different aliquots"))
}

// dilution: the factor that values are multiplied by must be stated and above zero.
func (b *batchJudge) dilution() {
	var factors []float64
	good := len(b.a.Aliquots) > 0
	for _, x := range b.a.Aliquots {
		good = good && x.Dilution > 0 && x.Dilution == b.rec.Injections[x.InjectionIndex].Dilution
		if !slices.Contains(factors, x.Dilution) {
			factors = append(factors, x.Dilution)
		}
	}
	c := b.startQuantity("dilution", "Dilution stated", field(b.at, "aliquots", len(b.a.Aliquots) > 0)).custom("a dilution is stated and the value multiplied by it").passIf(good && len(factors) == 1)
	switch {
	case c.Result == Failed:
		c = c.missing("The dilution of the aliquots is not stated as one factor above zero.")
	case factors[0] == 1:
		c.Sentence = "The aliquots were not diluted."
	default:
		c.Sentence = fmt.Sprintf("The aliquots were diluted by the factor %s; their values are multiplied by it.", Text(factors[0], 6))
	}
	b.add(c)
}

// result: a value with an uncertainty above zero, and aliquots that agree.
func (b *batchJudge) result() {
	r := b.a.Result
	c := b.startQuantity("result", "Result", field(b.at, "result", r != nil)).custom("a value needs every aliquot and a stated uncertainty")
	switch {
	case r == nil:
		b.add(c.missing("There is no quantitative result: " + b.a.NoResult + "."))
		return
	case !(r.Budget.StdU > 0):
		b.add(c.missing("The result has no uncertainty above zero."))
	default:
		c = c.passIf(true)
		c.Evidence = []string{b.at + "/result/ng_per_ml", b.at + "/result/budget/combined_std_u"}
		v, u := b.withU(r.NGPerML, r.Budget.StdU)
		c.Sentence = fmt.Sprintf("The mean of %d values is %s, with a combined standard uncertainty of %s.", r.N, v, u)
		b.add(c)
	}
	spread := b.startQuantity("spread", "Agreement of the aliquots", field(b.at+"/result", "relative_sd", r.RSD != nil)).byMethod(b.rec, "aliquots")
	if r.N < 2 {
		b.add(spread.notApplicable("One value has no spread."))
		return
	}
	b.add(spread.atMost(r.RSD, b.limits.AliquotSpread, percent, "The relative standard deviation of the aliquots"))
}

// maxUncertainty scales the relative uncertainty of the result to the threshold, where the edition states the largest one allowed
// there. Scaling is proportional: for a value below the threshold this is the larger of what constant and proportional uncertainty
// would give.
func (b *batchJudge) maxUncertainty(rule *LimitRule) {
	r := b.a.Result
	c := b.startQuantity("max-uncertainty", "Uncertainty at the threshold", field(b.at, "result", r != nil)).cited(rule.MaxStdUSource.or(rule.Cite))
	if rule.MaxStdU == nil {
		b.add(c.notApplicable("The criteria set states no largest uncertainty."))
		return
	}
	if r != nil {
		c.Evidence = []string{b.at + "/result/budget/combined_std_u", b.at + "/result/ng_per_ml"}
	}
	b.add(c.atMost(atThreshold(r, rule.Threshold), *rule.MaxStdU, b.amount, "The combined standard uncertainty, scaled to the threshold,"))
}

// atThreshold is the relative uncertainty of the result times the threshold, or nil for a result that is not above zero.
func atThreshold(r *evidence.Result, threshold float64) *float64 {
	if r == nil || !(r.NGPerML > 0) {
		return nil
	}
	u := float64(r.Budget.StdU / r.NGPerML * threshold)
	if math.IsInf(u, 0) || math.IsNaN(u) {
		return nil
	}
	return &u
}

// withU writes a concentration and its uncertainty in the unit of the method.
func (b *batchJudge) withU(v, u float64) (value, uncertainty string) {
	unit := methodOf(b.rec, b.a.ID).Unit
	value, uncertainty = TextWithU(convert(v, unit), convert(u, unit))
	return value + " " + unit, uncertainty + " " + unit
}
