package decision

import (
	"fmt"
	"slices"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// batchChecks are those that must hold for anything to be said about an analyte, positive or negative.
func (j *judge) batchChecks(k int) {
	a := &j.rec.Analytes[k]
	b := batchJudge{j, a, k, j.rec.Method.Batch, fmt.Sprintf("/analytes/%d", k)}
	b.reference()
	b.blanks()
	b.internalStandard()
	b.negativeControl()
	b.positiveControls()
	if b.hasCalibration() {
		b.calibrators()
		b.controls()
	}
	b.bracket()
}

type batchJudge struct {
	*judge
	a      *evidence.Analyte
	k      int
	limits casefile.BatchLimits
	at     string // JSON pointer of the analyte
}

func (b *batchJudge) start(name, title string, required bool, evidence ...string) Check {
	return Check{ID: b.a.ID + "/" + name, Group: "batch", Title: title, Required: required, Evidence: evidence}
}

func (b *batchJudge) hasCalibration() bool {
	return slices.ContainsFunc(b.rec.Method.Analytes, func(m casefile.Analyte) bool { return m.ID == b.a.ID && m.Calibration != nil })
}

func (b *batchJudge) reference() {
	n := float64(len(b.a.Reference.Injections))
	c := b.start("reference", "Reference in the same batch", true, b.at+"/reference/injections").byMethod(b.rec, "identification")
	j := c.atLeast(&n, 1, count, "The number of reference injections of "+b.a.Name+" in this batch")
	b.add(j)
}

// blanks: analyte and internal standard in everything that should hold none, and carry-over.
func (b *batchJudge) blanks() {
	carryover, matrix := 0, 0
	for i, x := range b.a.Blanks {
		at := fmt.Sprintf("%s/blanks/%d", b.at, i)
		name, title := "blank", "Analyte in a blank"
		switch x.Role {
		case casefile.CarryoverBlank:
			name, title = "carry-over", "Carry-over"
			carryover++
		case casefile.SolventBlank:
		default:
			matrix++
		}
		v := x.OfLowest
		if x.Area == 0 {
			v = new(float64) // nothing was found: below any share
		}
		b.add(b.start(name+"/"+x.Injection, title, true, at+"/area_counts_min").byMethod(b.rec, "blanks").
			atMost(v, b.limits.BlankMaxOfLowest, percent, fmt.Sprintf("%s in the %s %s, of the lowest calibrator,", b.a.Name, x.Role, x.Injection)))
		if x.ExpectInternalStandard {
			continue
		}
		v = x.OfInternalStandard
		if x.InternalStandardArea == 0 {
			v = new(float64)
		}
		b.add(b.start("blank-internal-standard/"+x.Injection, "Internal standard in a blank", true, at+"/internal_standard_area_counts_min").byMethod(b.rec, "blanks").
			atMost(v, b.limits.BlankMaxOfInternalStandard, percent, fmt.Sprintf("Internal standard in the %s %s, of the calibrators' mean,", x.Role, x.Injection)))
	}
	one := func(name, title, what string, n int) {
		v := float64(n)
		b.add(b.start(name, title, true, b.at+"/blanks").custom("a batch holds blanks and shows its carry-over").atLeast(&v, 1, count, what))
	}
	one("blanks-present", "Matrix blanks in the batch", "The number of injections of matrix without analyte", matrix)
	one("carry-over-present", "Carry-over measured", "The number of blanks that show carry-over", carryover)
}

// internalStandard: the response in everything that was spiked with it, of the calibrators' mean.
func (b *batchJudge) internalStandard() {
	w := window{b.limits.InternalStandardLow, b.limits.InternalStandardHigh}
	for i, r := range b.a.InternalStandard {
		switch r.Role {
		case casefile.SolventBlank, casefile.MatrixBlank, casefile.CarryoverBlank:
			continue
		}
		required := r.Role == casefile.SampleAliquot || r.Role == casefile.Control || r.Role == casefile.NegativeControl
		b.add(b.start("internal-standard/"+r.Injection, "Response of the internal standard", required, fmt.Sprintf("%s/internal_standard_responses/%d", b.at, i)).
			byMethod(b.rec, "internal standard").within(r.Relative, w, percent, fmt.Sprintf("Internal standard in the %s %s, of the calibrators' mean,", r.Role, r.Injection)))
	}
}

// negativeControl must not show the analyte identified.
func (b *batchJudge) negativeControl() {
	n := 0.0
	for i := range b.a.Identifications {
		id := &b.a.Identifications[i]
		if b.roleOf(id) != casefile.NegativeControl {
			continue
		}
		n++
		c := b.start("negative-control/"+id.Injection, "Negative control", true, fmt.Sprintf("%s/identifications/%d", b.at, i)).
			custom("a negative control must not show the analyte").passIf(!holds(b.identityChecks(b.k, i)))
		c.Sentence = fmt.Sprintf("The negative control %s does not show %s identified.", id.Injection, b.a.Name)
		if c.Result == Failed {
			c.Sentence = fmt.Sprintf("The negative control %s shows %s identified.", id.Injection, b.a.Name)
		}
		b.add(c)
	}
	b.add(b.start("negative-control-present", "Negative control in the batch", true, b.at+"/identifications").custom("a batch holds a negative control").
		atLeast(&n, 1, count, "The number of negative controls"))
}

// positiveControls must show the analyte identified: otherwise its absence in the sample would say nothing.
func (b *batchJudge) positiveControls() {
	n := 0.0
	for i := range b.a.Identifications {
		id := &b.a.Identifications[i]
		if b.roleOf(id) != casefile.Control || !b.spiked(id.InjectionIndex) {
			continue
		}
		n++
		bad, _ := failedIDs(b.identityChecks(b.k, i))
		c := b.start("positive-control/"+id.Injection, "Positive control", true, fmt.Sprintf("%s/identifications/%d", b.at, i)).
			custom("a positive control must show the analyte by the same criteria").passIf(len(bad) == 0)
		c.Sentence = fmt.Sprintf("The control %s shows %s identified by the same criteria.", id.Injection, b.a.Name)
		if c.Result == Failed {
			c.Sentence = fmt.Sprintf("The control %s does not show %s identified: %s.", id.Injection, b.a.Name, bad[0])
		}
		b.add(c)
	}
	b.add(b.start("positive-control-present", "Positive control in the batch", true, b.at+"/identifications").custom("a batch holds positive controls").
		atLeast(&n, 1, count, "The number of positive controls of "+b.a.Name))
}

// spiked tells whether an injection was made with some of the analyte.
func (b *batchJudge) spiked(injection int) bool {
	for _, n := range b.rec.Sequence[injection].Nominal {
		if n.Analyte == b.a.ID {
			return n.NGPerML > 0
		}
	}
	return false
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
	c.Sentence = "Controls were acquired before and after the sample's aliquots."
	if c.Result == Failed {
		c.Sentence = "The sample's aliquots do not lie between controls."
	}
	b.add(c)
}
