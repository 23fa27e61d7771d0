package decision

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/units"
)

// Cautions stand in every finding and every rendering.
var Cautions = []string{
	"This finding reports a measurement and the criteria applied to it. It does not say whether anyone broke a rule.",
	"Adjudication belongs to an accredited laboratory's authorised signatory and the competent review body.",
	"Local law, the current edition of the criteria and licensed practice come first.",
	"A value is only as good as the sample, the custody and the validation behind it.",
}

// Decide applies a criteria set to an evidence record. The hashes are those of evidence.json and of the set's file, in hex.
//
// For each analyte:
//
//   - a required check of the case or the batch that fails makes the outcome not-determined;
//   - identity must be shown in every aliquot: in none of them it is not-identified, in some not-determined;
//   - a presence analyte whose identity is shown is identified;
//   - a threshold analyte whose identity is shown is compared, if its required checks of quantity hold; otherwise not-determined.
//
// An identification check that fails is a result, not a fault of the batch: it makes an analyte not identified and not
// not-determined, since the positive controls have shown by the same criteria that it would have been seen.
func Decide(rec *evidence.Record, evidenceSHA256 string, set *Set, setSHA256 string) (*Finding, error) {
	if rec == nil || set == nil {
		return nil, fmt.Errorf("no record or no criteria set to decide on")
	}
	f := &Finding{
		Format: FindingFormat, Evidence: evidenceSHA256, Case: rec.Case.Number, SampleCode: rec.Case.Sample.Code, Cautions: Cautions,
		Criteria: CriteriaRef{ID: set.ID, Title: set.Title, Edition: set.Edition, EffectiveFrom: set.EffectiveFrom, SHA256: setSHA256},
		Analytes: []AnalyteFinding{},
	}
	j := &judge{rec: rec, set: set}
	j.caseChecks()
	f.Batch = j.checks
	for k := range rec.Analytes {
		f.Analytes = append(f.Analytes, decideAnalyte(rec, set, k, holds(f.Batch)))
	}
	return f, nil
}

func decideAnalyte(rec *evidence.Record, set *Set, k int, caseHolds bool) AnalyteFinding {
	a := &rec.Analytes[k]
	j := &judge{rec: rec, set: set}
	out := AnalyteFinding{Analyte: a.ID, Name: a.Name, Kind: string(a.Kind)}
	j.batchChecks(k)
	batchHolds := caseHolds && holds(j.checks)
	shown, aliquots := j.identity(k)
	switch {
	case !batchHolds || aliquots == 0 || shown > 0 && shown < aliquots:
		out.Outcome = NotDetermined
	case shown == 0:
		out.Outcome = NotIdentified
	case a.Kind == casefile.Presence:
		out.Outcome = Identified
	}
	if rule := set.limitFor(a.ID); a.Kind == casefile.Threshold && shown > 0 && shown == aliquots && rule != nil {
		j.quantityChecks(k, rule)
		if a.Result != nil {
			limit, outcome := j.compare(k, rule, unitOf(rec, a.ID))
			out.Limit = limit
			if batchHolds && holds(withoutIdentity(j.checks)) {
				out.Outcome = outcome
			}
		}
	}
	if out.Outcome == "" {
		out.Outcome = NotDetermined
	}
	out.Checks = j.checks
	out.Failed, out.Advisory = failedIDs(j.checks)
	out.Label = set.Labels.Of(out.Outcome)
	out.Sentence = sentence(rec, &out, caseHolds)
	return out
}

// identity adds the checks of every aliquot and counts those in which identity is shown.
func (j *judge) identity(k int) (shown, aliquots int) {
	a := &j.rec.Analytes[k]
	for i := range a.Identifications {
		if j.roleOf(&a.Identifications[i]) != casefile.SampleAliquot {
			continue
		}
		aliquots++
		checks := j.identityChecks(k, i)
		if holds(checks) {
			shown++
		}
		j.checks = append(j.checks, checks...)
	}
	v := float64(aliquots)
	j.add(Check{ID: a.ID + "/aliquots-measured", Group: "identification", Title: "Aliquots of the sample", Required: true,
		Evidence: []string{fmt.Sprintf("/analytes/%d/identifications", k)}}.custom("identity is judged in the sample's aliquots").atLeast(&v, 1, count, "The number of aliquots in which identity was judged"))
	c := Check{ID: a.ID + "/aliquots-agree", Group: "identification", Title: "Agreement of the aliquots on identity", Required: true,
		Evidence: []string{fmt.Sprintf("/analytes/%d/identifications", k)}}.custom("the aliquots of one sample show the same").passIf(shown == 0 || shown == aliquots)
	c.Sentence = fmt.Sprintf("Identity is shown in %d of %d aliquots.", shown, aliquots)
	j.add(c)
	return shown, aliquots
}

func withoutIdentity(checks []Check) []Check {
	var rest []Check
	for _, c := range checks {
		if c.Group != "identification" {
			rest = append(rest, c)
		}
	}
	return rest
}

func unitOf(rec *evidence.Record, analyte string) string {
	i := slices.IndexFunc(rec.Method.Analytes, func(a casefile.Analyte) bool { return a.ID == analyte })
	if i < 0 {
		return "ng/mL"
	}
	return rec.Method.Analytes[i].Unit
}

// sentence says the outcome in plain words.
func sentence(rec *evidence.Record, f *AnalyteFinding, caseHolds bool) string {
	sample := "the sample " + rec.Case.Sample.Code
	switch f.Outcome {
	case Identified:
		return fmt.Sprintf("%s was identified in %s: every identification criterion is met in every aliquot.", f.Name, sample)
	case NotIdentified:
		return fmt.Sprintf("%s was not identified in %s; criteria not met: %s.", f.Name, sample, titles(f.Checks, "identification"))
	case AboveLimit, WithinGuardBand, BelowThreshold:
		return compared(f, sample)
	}
	reason := "a check of the case failed"
	if caseHolds {
		reason = "required checks failed: " + titles(f.Checks, "")
	}
	return fmt.Sprintf("No finding can be made on %s in %s: %s.", f.Name, sample, reason)
}

// titles names the required checks that failed, each title once, the first three of them.
func titles(checks []Check, group string) string {
	var list []string
	for _, c := range checks {
		if c.Result != Failed || !c.Required || group != "" && c.Group != group {
			continue
		}
		if t := strings.ToLower(c.Title[:1]) + c.Title[1:]; !slices.Contains(list, t) {
			list = append(list, t)
		}
	}
	if len(list) > 3 {
		list = append(list[:3], fmt.Sprintf("and %d more", len(list)-3))
	}
	return strings.Join(list, ", ")
}

func compared(f *AnalyteFinding, sample string) string {
	l := f.Limit
	show := func(v float64) float64 {
		x, err := units.Concentration.In(v, l.DisplayUnit)
		if err != nil {
			panic("decision: internal error: " + err.Error())
		}
		return x
	}
	v, u := TextWithU(show(l.Value), show(l.ExpU))
	where := map[Outcome]string{
		AboveLimit:      "above the decision limit",
		WithinGuardBand: "above the threshold, but not above the decision limit",
		BelowThreshold:  "not above the threshold",
	}[f.Outcome]
	return fmt.Sprintf("%s was identified in %s at %s %s ± %s %s (expanded uncertainty, k = %g), %s of %s %s (threshold %s %s).", f.Name, sample, v, l.DisplayUnit, u, l.DisplayUnit, l.K,
		where, Text(show(decisive(f)), 4), l.DisplayUnit, Text(show(l.Threshold), 4), l.DisplayUnit)
}

// decisive is the limit that the outcome's words name.
func decisive(f *AnalyteFinding) float64 {
	if f.Outcome == BelowThreshold {
		return f.Limit.Threshold
	}
	return f.Limit.DecisionLimit
}
