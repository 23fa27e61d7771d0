package decision

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
)

// A verdict is what one injection says of an analyte's identity. The zero value is unknown.
type verdict int

const (
	unknown verdict = iota // no criterion speaks against it, and not all could be judged
	refuted                // something measured does not meet a required criterion
	shown                  // every required criterion is met
)

// verdictOf: one criterion that is not met by what was measured refutes; a criterion that could not be judged leaves it open.
func verdictOf(checks []Check) verdict {
	v := shown
	for _, c := range checks {
		switch {
		case !c.Required || c.Result != Failed:
		case !c.Missing:
			return refuted
		default:
			v = unknown
		}
	}
	return v
}

// An identityJudge compares what one injection shows of an analyte with the reference.
type identityJudge struct {
	*judge
	a       *evidence.Analyte
	id      *evidence.Identification
	k       int
	at      string // JSON pointer of the identification
	subject string
}

// identityChecks gives the checks of one identification. It adds nothing: the caller does.
func (j *judge) identityChecks(k, i int) []Check {
	a := &j.rec.Analytes[k]
	id := &a.Identifications[i]
	d := identityJudge{j, a, id, k, fmt.Sprintf("/analytes/%d/identifications/%d", k, i), subjectOf(j.rec, id.InjectionIndex)}
	present, found := d.present()
	list := []Check{present}
	if !found {
		return list
	}
	retention, relative := d.retention(), d.relativeRetention()
	list = append(list, j.replaced(retention, relative)...)
	n := float64(len(id.Ions))
	list = append(list, d.start("transitions", "Number of transitions", d.at+"/ions").cited(j.set.Identification.Transitions.Cite).
		atLeast(&n, j.set.Identification.Transitions.Value, count, d.subject+": the number of transitions"))
	for i := range id.Ions {
		list = append(list, d.ion(i)...)
	}
	return list
}

// replaced lets relative retention take the place of a retention that is not met, where the set allows it. As long as relative
// retention is missing, retention refutes nothing.
func (j *judge) replaced(retention, relative Check) []Check {
	rule := j.set.Identification.Replacement
	if rule.Allowed && retention.Result == Failed {
		switch {
		case relative.Result == Passed:
			retention.Required, relative.Required = false, true
			retention.Sentence += " Relative retention takes its place: " + rule.text() + "."
		case relative.Missing:
			retention.Missing = true
		}
	}
	return []Check{retention, relative}
}

// subjectOf names an injection of the sample by its aliquot, or by itself where that would not tell it from another.
func subjectOf(rec *evidence.Record, index int) string {
	inj := &rec.Injections[index]
	same := 0
	for i := range rec.Injections {
		if rec.Injections[i].Aliquot == inj.Aliquot {
			same++
		}
	}
	if inj.Aliquot == "" || same > 1 {
		return inj.ID
	}
	return inj.Aliquot
}

func (d *identityJudge) start(name, title string, evidence ...string) Check {
	return Check{ID: d.a.ID + "/" + name + "/" + d.subject, Group: "identification", Title: title, Required: true, Evidence: evidence}
}

// peakOf is the peak in use of one ion, or nil.
func (d *identityJudge) peakOf(ion *evidence.IonMatch) *peak.Peak {
	return measurementOf(d.rec, d.id, ion).Peak
}

// base is the ion that abundances are relative to, or nil.
func (d *identityJudge) base() *evidence.IonMatch {
	for i := range d.id.Ions {
		if d.id.Ions[i].Base {
			return &d.id.Ions[i]
		}
	}
	return nil
}

// present: whether the quantifier has a peak. That it has none is an observation only where the trace was acquired all over the
// window in which the peak was sought.
func (d *identityJudge) present() (Check, bool) {
	c := d.start("peak", "Peak of the quantifier", field(d.at, "retention_min", d.id.RetentionMin != nil)).byMethod(d.rec, "retention window")
	c = c.passIf(d.id.RetentionMin != nil)
	c.Sentence = fmt.Sprintf("%s: the quantifier of %s has a peak at its retention.", d.subject, d.a.Name)
	if c.Result == Passed {
		return c, true
	}
	i := slices.IndexFunc(d.id.Ions, func(ion evidence.IonMatch) bool { return ion.Trace == evidence.QuantifierTrace })
	if i < 0 {
		return c.missing(fmt.Sprintf("%s: nothing is recorded of the quantifier of %s.", d.subject, d.a.Name)), false
	}
	m := measurementOf(d.rec, d.id, &d.id.Ions[i])
	c.Evidence = append(c.Evidence, fmt.Sprintf("/injections/%d/measurements/%d/window_start_min", d.id.InjectionIndex, d.id.Ions[i].MeasurementIndex))
	switch {
	case m.Peak != nil:
		c = c.missing(fmt.Sprintf("%s: the retention of %s is not recorded.", d.subject, d.a.Name))
	case m.FirstMin > m.WindowStartMin || m.LastMin < m.WindowEndMin:
		c = c.missing(fmt.Sprintf("%s: the quantifier of %s has no peak, and its trace does not cover the retention window: %s to %s was acquired, %s to %s is the window.", d.subject, d.a.Name,
			minutes(m.FirstMin, 0).Text, minutes(m.LastMin, 0).Text, minutes(m.WindowStartMin, 0).Text, minutes(m.WindowEndMin, 0).Text))
	default:
		c.Sentence = fmt.Sprintf("%s: the quantifier of %s has no peak in the retention window.", d.subject, d.a.Name)
	}
	return c, false
}

func (d *identityJudge) retention() Check {
	rule := d.set.Identification.Retention
	ref := d.a.Reference.RetentionMin
	c := d.start("retention", "Retention time", field(d.at, "retention_min", d.id.RetentionMin != nil), field(fmt.Sprintf("/analytes/%d/reference", d.k), "retention_min", ref != nil)).cited(rule.Cite)
	c.Required = rule.Required
	if ref == nil {
		return c.missing(d.subject + ": there is no reference retention in the batch.")
	}
	return c.within(d.id.RetentionMin, around(ref.Mean, halfWidth(rule.Kind, rule.AbsoluteMin, rule.Relative, ref.Mean)), minutes, d.subject+": the retention time of "+d.a.Name)
}

func (d *identityJudge) relativeRetention() Check {
	rule := d.set.Identification.RelativeRetention
	ref := d.a.Reference.RelativeRetention
	c := d.start("relative-retention", "Relative retention", field(d.at, "relative_retention", d.id.RelativeRetention != nil), field(fmt.Sprintf("/analytes/%d/reference", d.k), "relative_retention", ref != nil)).cited(rule.Cite)
	c.Required = rule.Required
	if ref == nil {
		return c.missing(d.subject + ": there is no reference for relative retention in the batch.")
	}
	return c.within(d.id.RelativeRetention, around(ref.Mean, halfWidth(rule.Kind, nil, rule.Relative, ref.Mean)), relative, d.subject+": the retention of "+d.a.Name+" relative to its internal standard")
}

// ion: signal-to-noise of each ion; of qualifiers, that they elute with the quantifier; of all but the base ion its abundance.
func (d *identityJudge) ion(i int) []Check {
	ion := &d.id.Ions[i]
	at := fmt.Sprintf("%s/ions/%d", d.at, i)
	start := func(name, title string, evidence ...string) Check {
		return d.start(name+"/"+ion.Trace, title, evidence...)
	}
	what := func(quantity string) string {
		return fmt.Sprintf("%s: the %s of the %s", d.subject, quantity, ion.Trace)
	}
	rules := d.set.Identification
	found := d.peakOf(ion) != nil
	absent := func(c Check) Check {
		c = c.passIf(false)
		c.Sentence = fmt.Sprintf("%s: no peak of the %s was found.", d.subject, ion.Trace)
		return c
	}
	sn := start("signal-to-noise", "Signal-to-noise", field(at, "signal_to_noise", ion.SignalToNoise != nil)).cited(rules.SignalToNoise.Cite)
	if !found {
		sn.Low = ratio(rules.SignalToNoise.Value, 0)
		return []Check{absent(sn)}
	}
	list := []Check{sn.atLeast(ion.SignalToNoise, rules.SignalToNoise.Value, ratio, what("signal-to-noise"))}
	if ion.Trace != evidence.QuantifierTrace {
		list = append(list, start("co-elution", "Co-elution with the quantifier", field(at, "apex_offset_min", ion.ApexOffsetMin != nil)).byMethod(d.rec, "co-elution").
			within(ion.ApexOffsetMin, around(0, d.rec.Method.Identification.CoelutionMin), minutes, fmt.Sprintf("%s: the distance of the %s from the quantifier's apex", d.subject, ion.Trace)))
	}
	if ion.Base {
		return list
	}
	c := start("abundance", "Relative abundance", field(at, "abundance", ion.Abundance != nil), field(at, "reference_abundance", ion.ReferenceAbundance != nil))
	return append(list, d.abundance(c, ion, what("relative abundance")))
}

func (d *identityJudge) abundance(c Check, ion *evidence.IonMatch, what string) Check {
	bands := d.set.Identification.Abundance
	if ion.ReferenceAbundance == nil {
		return c.cited(bands[0].Cite).missing(fmt.Sprintf("%s: there is no reference abundance of the %s in the batch.", d.subject, ion.Trace))
	}
	ref := *ion.ReferenceAbundance
	band := bandFor(bands, ref)
	w := around(ref, halfWidth(band.Kind, band.Absolute, band.Relative, ref))
	w.floor = new(float64)
	c = c.cited(band.Cite)
	base := d.base()
	if ion.Abundance == nil && base != nil && d.peakOf(base) == nil {
		c = c.passIf(false)
		c.Sentence = fmt.Sprintf("%s: no peak of the base ion was found, so that nothing is relative to it.", d.subject)
		return c
	}
	c = c.within(ion.Abundance, w, percent, what)
	if c.Result == Failed && !c.Missing && (base != nil && distorted(d.peakOf(base)) || distorted(d.peakOf(ion))) {
		c.Missing = true // a peak that is cut or saturated has no area to speak against identity
		c.Sentence += " One of the two peaks is cut or saturated, so that its area says little."
	}
	return c
}

// distorted tells whether a peak's area is not its own.
func distorted(p *peak.Peak) bool {
	return p != nil && slices.ContainsFunc(p.Flags, func(f string) bool {
		return f == peak.FlagSaturated || f == peak.FlagCutAtStart || f == peak.FlagCutAtEnd
	})
}

// raised gives what of an aliquot deserves a look although it decides nothing: flags of peaks, and abundances nearer to a limit than
// their own noise.
func (d *identityJudge) raised() []Check {
	shape := d.start("peak-shape", "Peaks as they should be", d.at+"/ions").custom("cut, saturated and otherwise odd peaks are raised")
	near := d.start("near-limit", "Abundances near their limits", d.at+"/ions").custom("an abundance nearer to a limit than its own noise is raised")
	shape.Required, near.Required = false, false
	var odd, close []string
	for i := range d.id.Ions {
		ion := &d.id.Ions[i]
		if p := d.peakOf(ion); p != nil && len(p.Flags) > 0 {
			odd = append(odd, ion.Trace+" ("+strings.Join(p.Flags, ", ")+")")
		}
		if d.nearLimit(ion) {
			close = append(close, ion.Trace)
		}
	}
	shape, near = shape.passIf(len(odd) == 0), near.passIf(len(close) == 0)
	return []Check{
		shape.says(d.subject+": no peak of "+d.a.Name+" raised a flag.", d.subject+": flags were raised by the "+strings.Join(odd, ", the ")+"."),
		near.says(d.subject+": every abundance is farther from its limits than its own noise.", d.subject+": nearer to a limit than its own noise is the abundance of the "+strings.Join(close, ", the ")+"."),
	}
}

func (d *identityJudge) nearLimit(ion *evidence.IonMatch) bool {
	if ion.Base || ion.Abundance == nil || ion.ReferenceAbundance == nil || ion.AbundanceStdU == nil {
		return false
	}
	band := bandFor(d.set.Identification.Abundance, *ion.ReferenceAbundance)
	w := around(*ion.ReferenceAbundance, halfWidth(band.Kind, band.Absolute, band.Relative, *ion.ReferenceAbundance))
	return w.holds(*ion.Abundance) && min(*ion.Abundance-w.low, w.high-*ion.Abundance) < *ion.AbundanceStdU
}

// Identity over the aliquots of the sample.
type identity struct{ shown, refuted, aliquots int }

// outcome: what all aliquots say, or unknown.
func (s identity) verdict() verdict {
	switch {
	case s.aliquots == 0:
		return unknown
	case s.shown == s.aliquots:
		return shown
	case s.refuted == s.aliquots:
		return refuted
	}
	return unknown
}

// identity adds the checks of every aliquot and counts what they say.
func (j *judge) identity(k int) identity {
	a := &j.rec.Analytes[k]
	var s identity
	for i := range a.Identifications {
		id := &a.Identifications[i]
		if j.rec.Injections[id.InjectionIndex].Role != casefile.SampleAliquot {
			continue
		}
		s.aliquots++
		checks := j.identityChecks(k, i)
		switch verdictOf(checks) {
		case shown:
			s.shown++
		case refuted:
			s.refuted++
		}
		d := identityJudge{j, a, id, k, fmt.Sprintf("/analytes/%d/identifications/%d", k, i), subjectOf(j.rec, id.InjectionIndex)}
		for _, c := range append(checks, d.raised()...) {
			j.add(c)
		}
	}
	at := fmt.Sprintf("/analytes/%d/identifications", k)
	v := float64(s.aliquots)
	j.add(Check{ID: a.ID + "/aliquots-measured", Group: "identification", Title: "Aliquots of the sample", Required: true, Evidence: []string{at}}.
		custom("identity is judged in the sample's aliquots").atLeast(&v, 1, count, "The number of aliquots in which identity was judged"))
	c := Check{ID: a.ID + "/aliquots-agree", Group: "identification", Title: "Agreement of the aliquots on identity", Required: true, Evidence: []string{at}}.
		custom("the aliquots of one sample show the same").passIf(s.verdict() != unknown)
	c.Sentence = fmt.Sprintf("Identity is shown in %d of %d aliquots and not met in %d.", s.shown, s.aliquots, s.refuted)
	if open := s.aliquots - s.shown - s.refuted; open > 0 {
		c.Missing = true
		c.Sentence = fmt.Sprintf("Identity is shown in %d of %d aliquots, not met in %d, and could not be judged in %d.", s.shown, s.aliquots, s.refuted, open)
	}
	j.add(c)
	return s
}
