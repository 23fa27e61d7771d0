package decision

import (
	"fmt"

	"assaywrit/evidence"
	"assaywrit/evidence/uncertainty"
)

// limit weighs the result against its threshold. The caller has made sure that there is one and that every required check holds.
func (b *batchJudge) limit(rule *LimitRule, factor *float64) (*Limit, Outcome, error) {
	r := b.a.Result
	limit := &Limit{
		Value: r.NGPerML, StdU: r.Budget.StdU, K: b.set.Quantity.CoverageFactor.Value, Threshold: rule.Threshold, MaxStdU: rule.MaxStdU,
		StatedLimit: rule.DecisionLimit, Strict: rule.Compare == "greater", DisplayUnit: methodOf(b.rec, b.a.ID).Unit,
		KRule: "k as the criteria set states it: " + b.set.Quantity.CoverageFactor.Clause, RoundingRule: roundingText(rule),
		ThresholdSource: rule.ThresholdSource.or(rule.Cite).text(), LimitSource: rule.DecisionLimitSource.or(rule.Cite).text(),
	}
	limit.ExpU = float64(limit.K * limit.StdU)
	guard(limit, rule)
	if factor != nil {
		limit.Adjustment, limit.AdjustmentRule = factor, gravityText(b.set.Quantity.Gravity)
		limit.DecisionLimit, _ = mul(limit.DecisionLimit, *factor)
	}
	limit.Compared = roundValue(limit.Value, rule.Rounding, rule.Digits)
	if err := probability(limit, r); err != nil {
		return nil, NotDetermined, err
	}
	outcome := outcomeOf(limit, rule)
	b.limitCheck(limit, outcome, rule)
	return limit, outcome, nil
}

// guard fills the guard band and the limit that follows. A stated limit is applied as it stands.
func guard(limit *Limit, rule *LimitRule) {
	switch rule.Guard {
	case "stated":
		limit.DecisionLimit, limit.GuardRule = *rule.DecisionLimit, "decision limit as the edition states it"
	case "k-times-u":
		band, _ := mul(*rule.GuardK, limit.StdU)
		limit.DecisionLimit, _ = add(rule.Threshold, band)
		limit.GuardRule = fmt.Sprintf("threshold + %g × combined standard uncertainty of the result", *rule.GuardK)
	case "k-times-max-u":
		band, _ := mul(*rule.GuardK, *rule.MaxStdU)
		limit.DecisionLimit, _ = add(rule.Threshold, band)
		limit.GuardRule = fmt.Sprintf("threshold + %g × largest combined standard uncertainty allowed", *rule.GuardK)
	case "none":
		limit.DecisionLimit, limit.GuardRule = rule.Threshold, "no guard band: the threshold itself decides"
	default:
		panic("decision: internal error: guard band " + rule.Guard)
	}
	limit.GuardBand, _ = sub(limit.DecisionLimit, limit.Threshold)
}

// probability is that of a true value above the threshold, by the value and its uncertainty alone. Few degrees of freedom make it
// less sure.
func probability(limit *Limit, r *evidence.Result) error {
	p, err := uncertainty.ProbabilityAbove(limit.Value, limit.StdU, limit.Threshold, r.Budget.EffectiveDoF)
	if err != nil {
		return fmt.Errorf("decision: probability above the threshold: %w", err)
	}
	limit.ProbabilityAbove = p
	limit.ProbabilityMethod = "normal distribution about the value with the combined standard uncertainty; nothing assumed beforehand"
	if nu := r.Budget.EffectiveDoF; nu != nil {
		limit.ProbabilityMethod = fmt.Sprintf("Student's distribution about the value with the combined standard uncertainty and %s effective degrees of freedom; nothing assumed beforehand", Text(*nu, 3))
	}
	return nil
}

// outcomeOf compares the rounded value with the decision limit, and the value itself with the threshold.
func outcomeOf(limit *Limit, rule *LimitRule) Outcome {
	reaches := func(v, at float64) bool { return v > at || rule.Compare == "at-or-above" && v == at }
	switch {
	case reaches(limit.Compared, limit.DecisionLimit):
		return AboveLimit
	case reaches(limit.Value, limit.Threshold):
		return WithinGuardBand
	}
	return BelowThreshold
}

func (b *batchJudge) startLimit(name, title string, required bool, evidence ...string) Check {
	c := b.start(name, title, required, evidence...)
	c.Group = "limit"
	return c
}

// limitCheck states the comparison. It passes where it could be made: what comes out of it is the outcome.
func (b *batchJudge) limitCheck(limit *Limit, outcome Outcome, rule *LimitRule) {
	c := b.startLimit("decision-limit", "Value against the decision limit", false, b.at+"/result/ng_per_ml").cited(rule.Cite).passIf(true)
	value, ends := apart(b.amount, limit.Compared, limit.DecisionLimit, limit.Threshold)
	c.Measured, c.High = value, ends[0]
	where := map[Outcome]string{
		AboveLimit:      "lies above the decision limit",
		WithinGuardBand: "lies above the threshold and not above the decision limit",
		BelowThreshold:  "does not lie above the threshold",
	}
	if !limit.Strict {
		where = map[Outcome]string{
			AboveLimit:      "is at or above the decision limit",
			WithinGuardBand: "is at or above the threshold and below the decision limit",
			BelowThreshold:  "lies below the threshold",
		}
	}
	c.Sentence = fmt.Sprintf("The value for the comparison, %s, %s (threshold %s, decision limit %s).", value.Text, where[outcome], ends[1].Text, ends[0].Text)
	if limit.Compared != limit.Value && outcome == WithinGuardBand {
		c.Sentence = fmt.Sprintf("The value, %s before rounding and %s for the comparison, %s (threshold %s, decision limit %s).", b.amount(limit.Value, 2).Text, value.Text, where[outcome], ends[1].Text, ends[0].Text)
	}
	b.add(c)
}

// notCompared says that nothing is made of the value, since something that it needs does not hold.
func (b *batchJudge) notCompared() {
	c := b.startLimit("decision-limit", "Value against the decision limit", false, b.at).custom("a value is compared once everything required holds")
	b.add(c.notApplicable("Nothing is compared with the decision limit, since a required check does not hold."))
}

// plausible compares a stated limit with threshold + k·u_max, rounded up to the digits of the rule. It is advisory: editions have
// rounded otherwise, and the stated limit applies.
func (b *batchJudge) plausible(rule *LimitRule) {
	if rule.Guard != "stated" || rule.GuardK == nil || rule.MaxStdU == nil || rule.Digits == 0 {
		return
	}
	expected := expectedLimit(rule)
	c := b.startLimit("decision-limit-plausible", "Stated limit against its own rule", false, b.at).cited(rule.Cite).passIf(*rule.DecisionLimit == expected)
	c.Measured, c.Low, c.High = b.amount(*rule.DecisionLimit, 0), b.amount(expected, 0), b.amount(expected, 0)
	c.Sentence = fmt.Sprintf("The stated decision limit is %s; threshold + %g × largest uncertainty, rounded up to %d digits, gives %s. The stated limit is applied.", c.Measured.Text, *rule.GuardK, rule.Digits, c.Low.Text)
	b.add(c)
}

// expectedLimit is threshold + k·u_max, rounded up.
func expectedLimit(rule *LimitRule) float64 {
	band := decimal(*rule.GuardK)
	band.Mul(band, decimal(*rule.MaxStdU)).Add(band, decimal(rule.Threshold))
	raw, _ := band.Float64()
	return roundValue(raw, "up", rule.Digits)
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
