package decision

import (
	"fmt"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// identityChecks compares what one injection shows of an analyte with the reference. It adds nothing: the caller does.
func (j *judge) identityChecks(k int, at int) []Check {
	a := &j.rec.Analytes[k]
	id := &a.Identifications[at]
	subject := id.Aliquot
	if subject == "" {
		subject = id.Injection
	}
	base := fmt.Sprintf("/analytes/%d/identifications/%d", k, at)
	start := func(name, title string, evidence ...string) Check {
		return Check{ID: a.ID + "/" + name + "/" + subject, Group: "identification", Title: title, Required: true, Evidence: evidence}
	}
	var list []Check
	present := start("peak", "Peak of the quantifier", base).byMethod(j.rec, "retention window").passIf(id.RetentionMin != nil)
	present.Sentence = fmt.Sprintf("%s: the quantifier of %s has a peak at its retention.", subject, a.Name)
	if id.RetentionMin == nil {
		present.Sentence = fmt.Sprintf("%s: the quantifier of %s has no peak in the retention window.", subject, a.Name)
		return append(list, present)
	}
	list = append(list, present, j.retention(a, id, start("retention", "Retention time", base+"/retention_min", fmt.Sprintf("/analytes/%d/reference/retention_min", k)), subject),
		j.relativeRetention(a, id, start("relative-retention", "Relative retention", base+"/relative_retention", fmt.Sprintf("/analytes/%d/reference/relative_retention", k)), subject))

	enough := start("transitions", "Number of transitions", base+"/ions").cited(j.set.Identification.Transitions.Cite)
	n := float64(len(id.Ions))
	list = append(list, enough.atLeast(&n, j.set.Identification.Transitions.Value, count, subject+": the number of transitions"))
	for i := range id.Ions {
		list = append(list, j.ionChecks(a, id, i, fmt.Sprintf("%s/ions/%d", base, i), subject)...)
	}
	return list
}

func (j *judge) retention(a *evidence.Analyte, id *evidence.Identification, c Check, subject string) Check {
	rule := j.set.Identification.Retention
	c.Required = rule.Required
	c = c.cited(rule.Cite)
	if a.Reference.RetentionMin == nil {
		c.Result, c.Sentence = Failed, subject+": there is no reference retention in the batch."
		return c
	}
	ref := a.Reference.RetentionMin.Mean
	return c.within(id.RetentionMin, around(ref, halfWidth(rule.Kind, rule.AbsoluteMin, rule.Relative, ref)), minutes, subject+": the retention time of "+a.Name)
}

func (j *judge) relativeRetention(a *evidence.Analyte, id *evidence.Identification, c Check, subject string) Check {
	rule := j.set.Identification.RelativeRetention
	c.Required = rule.Required
	c = c.cited(rule.Cite)
	if a.Reference.RelativeRetention == nil {
		c.Result, c.Sentence = Failed, subject+": there is no reference for relative retention in the batch."
		return c
	}
	ref := a.Reference.RelativeRetention.Mean
	show := func(v float64) *Figure { return &Figure{Value: v, Text: fixed(v, 4)} }
	return c.within(id.RelativeRetention, around(ref, halfWidth(rule.Kind, nil, rule.Relative, ref)), show, subject+": the retention of "+a.Name+" relative to its internal standard")
}

// ionChecks: signal-to-noise of each ion, and of all but the base ion its abundance; of qualifiers, that they elute with the quantifier.
func (j *judge) ionChecks(a *evidence.Analyte, id *evidence.Identification, i int, at, subject string) []Check {
	ion := &id.Ions[i]
	start := func(name, title string, evidence ...string) Check {
		return Check{ID: fmt.Sprintf("%s/%s/%s/%s", a.ID, name, ion.Trace, subject), Group: "identification", Title: title, Required: true, Evidence: evidence}
	}
	what := func(quantity string) string { return fmt.Sprintf("%s: the %s of the %s", subject, quantity, ion.Trace) }
	rules := j.set.Identification
	list := []Check{start("signal-to-noise", "Signal-to-noise", at+"/signal_to_noise").cited(rules.SignalToNoise.Cite).
		atLeast(ion.SignalToNoise, rules.SignalToNoise.Value, ratio, what("signal-to-noise"))}
	if ion.Trace != evidence.QuantifierTrace {
		tol := j.rec.Method.Identification.CoelutionMin
		list = append(list, start("co-elution", "Co-elution with the quantifier", at+"/apex_offset_min").byMethod(j.rec, "co-elution").
			within(ion.ApexOffsetMin, around(0, tol), minutes, what("distance from the quantifier's apex")))
	}
	if ion.Base {
		return list
	}
	c := start("abundance", "Relative abundance", at+"/abundance", at+"/reference_abundance")
	if ion.ReferenceAbundance == nil {
		c.Result, c.Sentence = Failed, fmt.Sprintf("%s: there is no reference abundance of the %s in the batch.", subject, ion.Trace)
		return append(list, c.cited(rules.Abundance[0].Cite))
	}
	ref := *ion.ReferenceAbundance
	band := bandFor(rules.Abundance, ref)
	w := around(ref, halfWidth(band.Kind, band.Absolute, band.Relative, ref))
	w.low = max(w.low, 0)
	return append(list, c.cited(band.Cite).within(ion.Abundance, w, percent, what("relative abundance")))
}

// roleOf is the role of the injection that an identification describes.
func (j *judge) roleOf(id *evidence.Identification) casefile.Role {
	return j.rec.Injections[id.InjectionIndex].Role
}
