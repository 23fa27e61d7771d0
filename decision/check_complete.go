package decision

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// complete looks whether the record says something of every injection of the sequence that counts for the analyte: what is left out
// could be what does not fit.
func (b *batchJudge) complete() {
	var gaps []string
	for i := range b.rec.Injections {
		if what := b.gap(i); what != "" {
			gaps = append(gaps, b.rec.Injections[i].ID+" ("+what+")")
		}
	}
	c := b.start("complete", "Every injection accounted for", true, "/sequence", b.at).custom("every injection of the batch is accounted for")
	if len(gaps) > 0 {
		c = c.missing(fmt.Sprintf("The record does not say all of %s that it should of the injections %s.", b.a.Name, strings.Join(gaps, ", ")))
	} else {
		c = c.passIf(true)
		c.Sentence = fmt.Sprintf("The record accounts for each of the %d injections of the sequence.", len(b.rec.Injections))
	}
	b.add(c)
}

// gap names what the record lacks of an injection, or is empty.
func (b *batchJudge) gap(i int) string {
	inj := &b.rec.Injections[i]
	if inj.Role == casefile.Excluded {
		return ""
	}
	if !slices.ContainsFunc(b.a.InternalStandard, func(r evidence.InternalResponse) bool { return r.InjectionIndex == i }) {
		return "internal standard"
	}
	fitted := b.a.Calibration != nil
	switch inj.Role {
	case casefile.SampleAliquot:
		if fitted && !of(b.a.Aliquots, i) {
			return "amount"
		}
		return b.identityGap(i)
	case casefile.Control:
		known := nominal(b.rec, i, b.a.ID)
		if known == nil {
			return "stated amount"
		}
		if fitted && *known > 0 && !of(b.a.Controls, i) {
			return "amount"
		}
		return b.identityGap(i)
	case casefile.Calibrator:
		if known := nominal(b.rec, i, b.a.ID); fitted && known != nil && !slices.Contains(b.a.Calibration.Injections, inj.ID) {
			return "point of the line"
		}
		return ""
	}
	if !slices.ContainsFunc(b.a.Blanks, func(x evidence.Blank) bool { return x.InjectionIndex == i }) {
		return "blank"
	}
	if inj.Role == casefile.NegativeControl {
		return b.identityGap(i)
	}
	return ""
}

// identityGap: an identification, with every ion that the method monitors.
func (b *batchJudge) identityGap(i int) string {
	k := slices.IndexFunc(b.a.Identifications, func(id evidence.Identification) bool { return id.InjectionIndex == i })
	if k < 0 {
		return "identification"
	}
	if len(b.a.Identifications[k].Ions) != 1+len(methodOf(b.rec, b.a.ID).Qualifiers) {
		return "ions"
	}
	return ""
}

func of(list []evidence.Concentration, i int) bool {
	return slices.ContainsFunc(list, func(c evidence.Concentration) bool { return c.InjectionIndex == i })
}

// nominal is the stated amount of an analyte in an injection, or nil.
func nominal(rec *evidence.Record, i int, analyte string) *float64 {
	for k := range rec.Sequence[i].Nominal {
		if n := &rec.Sequence[i].Nominal[k]; n.Analyte == analyte {
			return &n.NGPerML
		}
	}
	return nil
}
