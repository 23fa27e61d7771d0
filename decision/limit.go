package decision

import (
	"fmt"

	"assaywrit/evidence"
	"assaywrit/evidence/uncertainty"
)

// compare weighs a result against its threshold and gives the outcome. Where something that the rule needs is missing, a
// required check fails, and the caller makes the outcome not determined.
func (j *judge) compare(k int, rule *LimitRule, unit string) (*Limit, Outcome) {
	a := &j.rec.Analytes[k]
	r := a.Result
	at := fmt.Sprintf("/analytes/%d", k)
	limit := &Limit{
		Value: r.NGPerML, StdU: r.Budget.StdU, K: j.set.Quantity.CoverageFactor.Value, Threshold: rule.Threshold, MaxStdU: rule.MaxStdU,
		StatedLimit: rule.DecisionLimit, Strict: rule.Compare == "greater", DisplayUnit: unit,
		KRule: "k as the criteria set states it: " + j.set.Quantity.CoverageFactor.Clause, RoundingRule: roundingText(rule),
	}
	limit.ExpU = float64(limit.K * limit.StdU)
	j.decisionLimit(limit, rule)
	if rule.Gravity {
		j.adjustForGravity(a, limit, at)
	}
	limit.GuardBand, _ = sub(limit.DecisionLimit, limit.Threshold)
	limit.Compared = roundValue(limit.Value, rule.Rounding, rule.Digits)
	p, err := uncertainty.ProbabilityAbove(limit.Value, limit.StdU, limit.Threshold, nil)
	if err == nil {
		limit.ProbabilityAbove = p
		limit.ProbabilityMethod = "normal distribution about the value with the combined standard uncertainty; nothing assumed beforehand"
	}
	outcome := outcomeOf(limit, rule)
	j.limitCheck(a, limit, outcome, rule, at)
	return limit, outcome
}

// decisionLimit fills the limit that is applied. A stated one is applied as it stands; what threshold and k·u_max would give is
// only compared with it.
func (j *judge) decisionLimit(limit *Limit, rule *LimitRule) {
	switch rule.Guard {
	case "stated":
		limit.DecisionLimit, limit.GuardRule = *rule.DecisionLimit, "decision limit as the edition states it"
	case "k-times-u":
		band := float64(*rule.GuardK * limit.StdU)
		limit.DecisionLimit, _ = add(rule.Threshold, band)
		limit.GuardRule = fmt.Sprintf("threshold + %g × combined standard uncertainty of the result", *rule.GuardK)
	default:
		limit.DecisionLimit, limit.GuardRule = rule.Threshold, "no guard band: the threshold itself decides"
	}
}

// adjustForGravity raises the limit for concentrated urine. Without a recorded specific gravity it cannot be known whether the
// limit stands as it is.
func (j *judge) adjustForGravity(a *evidence.Analyte, limit *Limit, at string) {
	g := j.set.Quantity.Gravity
	sg := j.rec.Case.Sample.SpecificGravity
	c := Check{ID: a.ID + "/specific-gravity", Group: "limit", Title: "Specific gravity", Required: true, Evidence: []string{"/case/sample/specific_gravity"}}
	c = c.cited(g.Cite).passIf(sg != nil)
	limit.AdjustmentRule = fmt.Sprintf("above a specific gravity of %g the limit is multiplied by (SG + %g − 1)/(%g − 1)", g.ApplyAbove, g.Add, g.Reference)
	if sg == nil {
		c.Evidence = []string{"/case/sample"}
		c.Sentence = "The specific gravity of the sample is not recorded, so that the limit that applies is not known."
		j.add(c)
		return
	}
	factor := gravityFactor(*sg, g)
	limit.Adjustment = &factor
	c.Measured = &Figure{Value: *sg, Text: fixed(*sg, 3)}
	c.Sentence = fmt.Sprintf("The specific gravity is %s; the limit is not adjusted (it is above %g).", c.Measured.Text, g.ApplyAbove)
	if factor > 1 {
		limit.DecisionLimit = float64(limit.DecisionLimit * factor)
		c.Sentence = fmt.Sprintf("The specific gravity is %s; the decision limit is raised by the factor %s.", c.Measured.Text, Text(factor, 4))
	}
	j.add(c)
}

// gravityFactor is (SG + add − 1)/(reference − 1) in exact decimals, and never below 1.
func gravityFactor(sg float64, g *SpecificGravityRule) float64 {
	if sg <= g.ApplyAbove {
		return 1
	}
	num := decimal(sg)
	num.Add(num, decimal(g.Add)).Sub(num, decimal(1))
	den := decimal(g.Reference)
	den.Sub(den, decimal(1))
	f, _ := num.Quo(num, den).Float64()
	return max(1, f)
}

// outcomeOf compares the rounded value with the decision limit, and the value itself with the threshold.
func outcomeOf(limit *Limit, rule *LimitRule) Outcome {
	above := limit.Compared > limit.DecisionLimit || rule.Compare == "at-or-above" && limit.Compared == limit.DecisionLimit
	over := limit.Value > limit.Threshold || rule.Compare == "at-or-above" && limit.Value == limit.Threshold
	switch {
	case above:
		return AboveLimit
	case over:
		return WithinGuardBand
	}
	return BelowThreshold
}

func (j *judge) limitCheck(a *evidence.Analyte, limit *Limit, outcome Outcome, rule *LimitRule, at string) {
	c := Check{ID: a.ID + "/decision-limit", Group: "limit", Title: "Value against the decision limit", Result: Passed, Measured: nanograms(limit.Compared),
		High: nanograms(limit.DecisionLimit), Evidence: []string{at + "/result/ng_per_ml"}}
	c = c.cited(rule.Cite)
	words := map[Outcome]string{
		AboveLimit:      "lies above the decision limit",
		WithinGuardBand: "lies above the threshold and not above the decision limit",
		BelowThreshold:  "does not lie above the threshold",
	}
	if rule.Compare == "at-or-above" {
		words[AboveLimit] = "is at or above the decision limit"
		words[BelowThreshold] = "lies below the threshold"
	}
	c.Sentence = fmt.Sprintf("The value for the comparison, %s, %s (threshold %s, decision limit %s).", c.Measured.Text, words[outcome], nanograms(limit.Threshold).Text, c.High.Text)
	j.add(c)
	if rule.Guard == "stated" && rule.MaxStdU != nil {
		j.plausible(a, limit, rule)
	}
}

// plausible compares the stated limit with threshold + k·u_max, rounded up to the digits of the rule. It is advisory: editions
// have rounded otherwise, and the stated limit applies.
func (j *judge) plausible(a *evidence.Analyte, limit *Limit, rule *LimitRule) {
	k := 1.645
	if rule.GuardK != nil {
		k = *rule.GuardK
	}
	raw, _ := add(rule.Threshold, float64(k**rule.MaxStdU))
	expected := roundValue(raw, "up", max(rule.Digits, 2))
	c := Check{ID: a.ID + "/decision-limit-plausible", Group: "limit", Title: "Stated limit against its own rule", Measured: nanograms(*rule.DecisionLimit), Low: nanograms(expected), High: nanograms(expected)}
	c = c.cited(rule.Cite).passIf(*rule.DecisionLimit == expected)
	c.Sentence = fmt.Sprintf("The stated decision limit is %s; threshold + %g × largest uncertainty, rounded up, gives %s. The stated limit is applied.", c.Measured.Text, k, nanograms(expected).Text)
	j.add(c)
}

func roundingText(rule *LimitRule) string {
	switch rule.Rounding {
	case "truncate":
		return fmt.Sprintf("truncated to %d significant digits before the comparison", rule.Digits)
	case "half-even":
		return fmt.Sprintf("rounded to %d significant digits (half to even) before the comparison", rule.Digits)
	}
	return "compared as measured, without rounding"
}
