package decision

import (
	"errors"
	"slices"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// Cautions stand in every finding and every rendering.
var Cautions = []string{
	"This finding reports a measurement and the criteria applied to it. It does not say whether anyone broke a rule.",
	"Adjudication belongs to an accredited laboratory's authorised signatory and the competent review body.",
	"Local law, the current edition of the criteria and licensed practice come first.",
	"A value is only as good as the sample, the custody and the validation behind it.",
}

// Decide applies a criteria set to an evidence record. The hashes are those of evidence.json and of the set's file, in hex. It
// reads nothing else, and gives the same finding for the same record and set. A record that contradicts itself is an error.
//
// For each analyte:
//
//   - a required check of the case or the batch that fails makes the outcome not-determined;
//   - so does identity that is shown in some aliquots only, or cannot be judged in any of them;
//   - identity that is refuted in every aliquot makes it not-identified;
//   - a presence analyte whose identity is shown in every aliquot is identified;
//   - a threshold analyte whose identity is shown in every aliquot is compared, once its required checks of quantity and of the
//     limit hold; otherwise it is not-determined.
//
// Identity is refuted in an aliquot by a required criterion that what was measured does not meet. That is a result, not a fault of
// the batch: the positive controls have shown by the same criteria that the analyte would have been seen. A criterion that could
// not be judged, since something is missing from the record, refutes nothing and shows nothing (Check.Missing).
func Decide(rec *evidence.Record, evidenceSHA256 string, set *Set, setSHA256 string) (*Finding, error) {
	if rec == nil || set == nil {
		return nil, errors.New("decision: no record or no criteria set to decide on")
	}
	if err := consistent(rec); err != nil {
		return nil, err
	}
	f := &Finding{
		Format: FindingFormat, Evidence: evidenceSHA256, Case: rec.Case.Number, SampleCode: rec.Case.Sample.Code, Cautions: slices.Clone(Cautions),
		Criteria: CriteriaRef{ID: set.ID, Title: set.Title, Edition: set.Edition, EffectiveFrom: set.EffectiveFrom, SHA256: setSHA256},
		Analytes: []AnalyteFinding{},
	}
	j := &judge{rec: rec, set: set}
	j.caseChecks()
	f.Batch = j.checks
	for k := range rec.Analytes {
		a, err := decideAnalyte(rec, set, k, f.Batch)
		if err != nil {
			return nil, err
		}
		f.Analytes = append(f.Analytes, a)
	}
	return f, nil
}

func decideAnalyte(rec *evidence.Record, set *Set, k int, caseChecks []Check) (AnalyteFinding, error) {
	a := &rec.Analytes[k]
	j := &judge{rec: rec, set: set}
	out := AnalyteFinding{Analyte: a.ID, Name: a.Name, Kind: string(a.Kind), Outcome: NotDetermined}
	b := j.batch(k)
	b.all()
	batchHolds := holds(caseChecks) && holds(j.checks)
	switch v := j.identity(k).verdict(); {
	case v == refuted && batchHolds:
		out.Outcome = NotIdentified
	case v == shown && a.Kind == casefile.Presence && batchHolds && holds(j.checks):
		out.Outcome = Identified
	case v == shown && a.Kind == casefile.Threshold:
		if err := b.compare(&out, batchHolds); err != nil {
			return AnalyteFinding{}, err
		}
	}
	out.Checks = j.checks
	out.Failed, _ = failedIDs(caseChecks)
	own, advisory := failedIDs(j.checks)
	out.Failed, out.Advisory = append(out.Failed, own...), advisory
	out.Label = set.Labels.Of(out.Outcome)
	if set.Meanings != nil {
		out.Meaning = set.Meanings.Of(out.Outcome)
	}
	out.Sentence = sentence(rec, &out, caseChecks)
	return out, nil
}

// compare makes the checks of quantity and limit, and the comparison where they and all others hold.
func (b *batchJudge) compare(out *AnalyteFinding, batchHolds bool) error {
	rule := b.set.limitFor(b.a.ID)
	if rule == nil {
		return nil // the check of the rule has failed
	}
	b.quantity(rule)
	factor := b.gravity(rule)
	b.plausible(rule)
	if !batchHolds || !holds(b.checks) || b.a.Result == nil {
		b.notCompared()
		return nil
	}
	limit, outcome, err := b.limit(rule, factor)
	if err != nil {
		return err
	}
	out.Limit, out.Outcome = limit, outcome
	return nil
}
