package decision

import (
	"fmt"
	"slices"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// blanks: analyte and internal standard in everything that should hold none.
func (b *batchJudge) blanks() {
	carryover, matrix := 0, 0
	mean, of := b.meanInternalStandard()
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
		b.add(b.analyteIn(x, b.start(name+"/"+x.Injection, title, true, at+"/area_counts_min")))
		if x.ExpectInternalStandard {
			continue
		}
		v := x.OfInternalStandard
		switch {
		case x.InternalStandardArea == 0:
			v = new(float64) // nothing was found: below any share
		case v == nil && mean != nil:
			v = new(x.InternalStandardArea / *mean)
		}
		b.add(b.start("blank-internal-standard/"+x.Injection, "Internal standard in a blank", true, at+"/internal_standard_area_counts_min").byMethod(b.rec, "blanks").
			atMost(v, b.limits.BlankMaxOfInternalStandard, percent, fmt.Sprintf("Internal standard in the %s %s, of the %s' mean,", x.Role, x.Injection, of)))
	}
	one := func(name, title, what string, n int) {
		v := float64(n)
		b.add(b.start(name, title, true, b.at+"/blanks").custom("a batch holds blanks and shows its carry-over").atLeast(&v, 1, count, what))
	}
	one("blanks-present", "Matrix blanks in the batch", "The number of injections of matrix without analyte", matrix)
	one("carry-over-present", "Carry-over measured", "The number of blanks that show carry-over", carryover)
}

// analyteIn compares a blank with the lowest calibrator. A batch for presence alone may have no calibrators with stated amounts: its
// blanks must then not show the analyte by the criteria for identity.
func (b *batchJudge) analyteIn(x evidence.Blank, c Check) Check {
	what := fmt.Sprintf("%s in the %s %s, of the lowest calibrator,", b.a.Name, x.Role, x.Injection)
	if x.Area == 0 {
		return c.byMethod(b.rec, "blanks").atMost(new(float64), b.limits.BlankMaxOfLowest, percent, what)
	}
	if x.OfLowest != nil || methodOf(b.rec, b.a.ID).Calibration != nil || b.calibratorsStated() {
		return c.byMethod(b.rec, "blanks").atMost(x.OfLowest, b.limits.BlankMaxOfLowest, percent, what)
	}
	c = c.custom("a blank must not show the analyte")
	i := slices.IndexFunc(b.a.Identifications, func(id evidence.Identification) bool { return id.InjectionIndex == x.InjectionIndex })
	if i < 0 {
		return c.missing(fmt.Sprintf("The %s %s has a peak of %s that nothing else is recorded of.", x.Role, x.Injection, b.a.Name))
	}
	return b.without(c, i, fmt.Sprintf("%s %s", x.Role, x.Injection))
}

func (b *batchJudge) calibratorsStated() bool {
	for i, inj := range b.rec.Injections {
		if inj.Role == casefile.Calibrator && b.spiked(i) {
			return true
		}
	}
	return false
}

// carryover: a blank shows carry-over only where it follows what could carry over, the highest calibrator or the sample.
func (b *batchJudge) carryover() {
	highest := 0.0
	for i, inj := range b.rec.Injections {
		if n := nominal(b.rec, i, b.a.ID); inj.Role == casefile.Calibrator && n != nil {
			highest = max(highest, *n)
		}
	}
	c := b.start("carry-over-place", "Carry-over blank after the highest calibrator", false, b.at+"/blanks").custom("carry-over is measured right after the highest calibrator")
	if highest == 0 {
		b.add(c.notApplicable("No calibrator of the batch has a stated amount of " + b.a.Name + "."))
		return
	}
	found := false
	for i, inj := range b.rec.Injections {
		if i == 0 || inj.Role != casefile.CarryoverBlank {
			continue
		}
		n := nominal(b.rec, i-1, b.a.ID)
		found = found || b.rec.Injections[i-1].Role == casefile.Calibrator && n != nil && *n == highest
	}
	b.add(c.passIf(found).says("A blank follows the highest calibrator of "+b.a.Name+".", "No carry-over blank follows the highest calibrator of "+b.a.Name+"."))
}
