package decision

import (
	"fmt"
	"slices"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/strictmath"
)

// A batchJudge applies what must hold of the batch for one analyte.
type batchJudge struct {
	*judge
	a      *evidence.Analyte
	k      int
	limits casefile.BatchLimits
	at     string // JSON pointer of the analyte

	// The lowest and the highest amount of the calibrators that pass; nil where none does.
	low, high *float64
}

func (j *judge) batch(k int) *batchJudge {
	return &batchJudge{judge: j, a: &j.rec.Analytes[k], k: k, limits: j.rec.Method.Batch, at: fmt.Sprintf("/analytes/%d", k)}
}

// checks are those that must hold for anything to be said about an analyte, positive or negative.
func (b *batchJudge) all() {
	b.rule()
	b.complete()
	b.reference()
	b.blanks()
	b.carryover()
	b.internalStandard()
	b.negativeControl()
	b.positiveControls()
	if methodOf(b.rec, b.a.ID).Calibration != nil {
		b.calibrators()
		b.controls()
	}
	b.bracket()
	b.recorded()
	b.suitability()
}

func (b *batchJudge) start(name, title string, required bool, evidence ...string) Check {
	return Check{ID: b.a.ID + "/" + name, Group: "batch", Title: title, Required: required, Evidence: evidence}
}

// rule: the set must say what is to be done with the analyte.
func (b *batchJudge) rule() {
	c := b.start("rule", "Rule of the criteria set", true, b.at+"/kind")
	if b.a.Kind == casefile.Threshold {
		rule := b.set.limitFor(b.a.ID)
		c = c.custom("a threshold has a source").passIf(rule != nil)
		if rule != nil {
			c = c.cited(rule.ThresholdSource.or(rule.Cite))
		}
		b.add(c.says("The criteria set states a threshold for "+b.a.Name+".", "The criteria set states no threshold for "+b.a.Name+"."))
		return
	}
	if rule := b.set.limitFor(b.a.ID); rule != nil {
		c = c.cited(rule.ThresholdSource.or(rule.Cite)).passIf(false)
		c.Sentence = "The criteria set compares " + b.a.Name + " with a threshold; its presence alone is not reported."
		b.add(c)
		return
	}
	c = c.cited(b.set.Presence.Cite).passIf(b.set.Presence.Any)
	b.add(c.says(b.a.Name+" is reported by presence.", "The criteria set reports nothing by presence alone."))
}

func (b *batchJudge) reference() {
	rule := b.set.Identification.Reference
	n := float64(len(b.a.Reference.Injections))
	c := b.start("reference", "Reference in the same batch", rule.Required, b.at+"/reference/injections").cited(rule.Cite)
	b.add(c.atLeast(&n, 1, count, "The number of reference injections of "+b.a.Name+" in this batch"))
}

// internalStandard: the response in everything that was spiked with it, of the calibrators' mean.
func (b *batchJudge) internalStandard() {
	w := window{low: b.limits.InternalStandardLow, high: b.limits.InternalStandardHigh}
	mean, of := b.meanInternalStandard()
	for i, r := range b.a.InternalStandard {
		switch r.Role {
		case casefile.SolventBlank, casefile.MatrixBlank, casefile.CarryoverBlank:
			continue
		}
		share := r.Relative
		if share == nil && r.Area != nil && mean != nil {
			share = new(*r.Area / *mean)
		}
		required := r.Role == casefile.SampleAliquot || r.Role == casefile.Control || r.Role == casefile.NegativeControl
		at := fmt.Sprintf("%s/internal_standard_responses/%d", b.at, i)
		b.add(b.start("internal-standard/"+r.Injection, "Response of the internal standard", required, field(at, "area_counts_min", r.Area != nil)).
			byMethod(b.rec, "internal standard").within(share, w, percent, fmt.Sprintf("Internal standard in the %s %s, of the %s' mean,", r.Role, r.Injection, of)))
	}
}

// meanInternalStandard is the mean area over the reference injections of a batch that has no calibrators, which would serve otherwise;
// nil where it has some.
func (b *batchJudge) meanInternalStandard() (mean *float64, of string) {
	if slices.ContainsFunc(b.rec.Injections, func(inj evidence.Injection) bool { return inj.Role == casefile.Calibrator }) {
		return nil, "calibrators"
	}
	var areas []float64
	for _, r := range b.a.InternalStandard {
		if r.Area != nil && slices.Contains(b.a.Reference.Injections, r.Injection) {
			areas = append(areas, *r.Area)
		}
	}
	if len(areas) == 0 || !(strictmath.Mean(areas) > 0) {
		return nil, "controls"
	}
	return new(strictmath.Mean(areas)), "controls"
}

// negativeControl must not show the analyte identified, and must have been able to show it.
func (b *batchJudge) negativeControl() {
	n := 0.0
	for i := range b.a.Identifications {
		id := &b.a.Identifications[i]
		if b.rec.Injections[id.InjectionIndex].Role != casefile.NegativeControl {
			continue
		}
		n++
		c := b.start("negative-control/"+id.Injection, "Negative control", true, fmt.Sprintf("%s/identifications/%d", b.at, i)).
			custom("a negative control must not show the analyte")
		b.add(b.without(c, i, "negative control "+id.Injection))
	}
	b.add(b.start("negative-control-present", "Negative control in the batch", true, b.at+"/identifications").custom("a batch holds a negative control").
		atLeast(&n, 1, count, "The number of negative controls"))
}

// without passes a check where an injection is shown not to hold the analyte by the criteria for identity.
func (b *batchJudge) without(c Check, i int, what string) Check {
	switch verdictOf(b.identityChecks(b.k, i)) {
	case refuted:
		c = c.passIf(true)
		c.Sentence = fmt.Sprintf("The %s does not show %s identified.", what, b.a.Name)
	case shown:
		c = c.passIf(false)
		c.Sentence = fmt.Sprintf("The %s shows %s identified.", what, b.a.Name)
	default:
		c = c.missing(fmt.Sprintf("It cannot be told whether the %s shows %s identified.", what, b.a.Name))
	}
	return c
}

// positiveControls must show the analyte identified: otherwise its absence in the sample would say nothing.
func (b *batchJudge) positiveControls() {
	n := 0.0
	for i := range b.a.Identifications {
		id := &b.a.Identifications[i]
		if b.rec.Injections[id.InjectionIndex].Role != casefile.Control || !b.spiked(id.InjectionIndex) {
			continue
		}
		n++
		checks := b.identityChecks(b.k, i)
		bad, _ := failedIDs(checks)
		c := b.start("positive-control/"+id.Injection, "Positive control", true, fmt.Sprintf("%s/identifications/%d", b.at, i)).
			custom("a positive control must show the analyte by the same criteria").passIf(len(bad) == 0)
		c.Missing = verdictOf(checks) == unknown
		c.Sentence = fmt.Sprintf("The control %s shows %s identified by the same criteria.", id.Injection, b.a.Name)
		if c.Result == Failed {
			c.Sentence = fmt.Sprintf("The control %s does not show %s identified; criteria not met: %s.", id.Injection, b.a.Name, titles(checks, ""))
		}
		b.add(c)
	}
	b.add(b.start("positive-control-present", "Positive control in the batch", true, b.at+"/identifications").custom("a batch holds positive controls").
		atLeast(&n, 1, count, "The number of positive controls of "+b.a.Name))
}

// spiked tells whether an injection was made with some of the analyte.
func (b *batchJudge) spiked(injection int) bool {
	n := nominal(b.rec, injection, b.a.ID)
	return n != nil && *n > 0
}

// bracket: a control before the first and after the last aliquot of the sample.
func (b *batchJudge) bracket() {
	first, last := -1, -1
	for i, inj := range b.rec.Injections {
		if inj.Role == casefile.SampleAliquot {
			if first < 0 {
				first = i
			}
			last = i
		}
	}
	before, after := false, false
	for i, inj := range b.rec.Injections {
		if inj.Role == casefile.Control && b.spiked(i) {
			before = before || i < first
			after = after || i > last
		}
	}
	c := b.start("bracket", "Controls around the sample", true, "/injections").custom("controls stand before and after the sample").passIf(first >= 0 && before && after)
	b.add(c.says("Controls were acquired before and after the sample's aliquots.", "The sample's aliquots do not lie between controls."))
}
