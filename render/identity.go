package render

import (
	"strings"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// analyteOutcome begins the chapter of a substance: its outcome, in a sentence.
func (d *document) analyteOutcome(k int) {
	f := &d.in.Finding.Analytes[k]
	d.font(bold, sizeH2)
	d.block(signOf(f.Outcome)+"  "+f.Label, left, textW, bold, sizeH2, ink)
	d.down(1.5)
	d.paragraph(f.Sentence)
	d.unmet(f)
	if d.known("quantity/"+f.Analyte) == "" {
		d.paragraph(d.t("quantity.presence"))
	}
	d.linked(d.t("analyte.where", "checks", d.ref("checks/"+f.Analyte), "k", itoa(k)), "checks/"+f.Analyte)
}

// identity sets an analyte's retention and ions beside the reference of the same batch.
func (d *document) identity(k int) {
	a := &d.in.Record.Analytes[k]
	list := strings.Join(a.Reference.Injections, ", ")
	if list == "" {
		list = d.t("none")
	}
	d.paragraph(d.t("identity.note", "n", itoa(len(a.Reference.Injections)), "list", list))
	d.windowChart(&d.in.Finding.Analytes[k])
	d.retentionTable(a)
	d.ionTable(a)
}

// shownIn tells whether an injection's identification is printed: those of samples, controls and negative controls are; blanks and
// calibrators stand in identification.csv.
func shownIn(role casefile.Role) bool {
	return role == casefile.SampleAliquot || role == casefile.Control || role == casefile.NegativeControl
}

// subjects are the identifications to print: the sample's aliquots first, then controls, negative ones last.
func (d *document) subjects(a *evidence.Analyte) []*evidence.Identification {
	var list []*evidence.Identification
	for _, role := range []casefile.Role{casefile.SampleAliquot, casefile.Control, casefile.NegativeControl} {
		for i := range a.Identifications {
			if id := &a.Identifications[i]; d.in.Record.Injections[id.InjectionIndex].Role == role {
				list = append(list, id)
			}
		}
	}
	return list
}

// subjectName names the injection in a table.
func (d *document) subjectName(id *evidence.Identification) string {
	inj := &d.in.Record.Injections[id.InjectionIndex]
	return joined(" ", id.Injection, d.role(inj.Role), joined(" ", inj.Level, inj.Aliquot))
}

// subjectKey is how checks name the injection.
func subjectKey(id *evidence.Identification) string {
	if id.Aliquot != "" {
		return id.Aliquot
	}
	return id.Injection
}

func (d *document) retentionTable(a *evidence.Analyte) {
	var rows []row
	if r := a.Reference.RetentionMin; r != nil {
		relative := missing
		if s := a.Reference.RelativeRetention; s != nil {
			relative = fixed(s.Mean, 4)
		}
		rows = append(rows, row{cells: cells(d.t("identity.reference", "n", itoa(r.N)), fixed(r.Mean, 3), "", "", "", relative, "", ""), bold: true})
	}
	for _, id := range d.subjects(a) {
		c := d.check(a.ID + "/retention/" + subjectKey(id))
		rows = append(rows, row{cells: cells(d.subjectName(id), optFixed(id.RetentionMin, 3), optSigned(id.RetentionDifferenceMin, 3), window(c), d.verdictOf(c),
			optFixed(id.RelativeRetention, 4), opt(id.RelativeRetentionDeviation, func(v float64) string { return signed(v*100, 2) }), d.verdictOf(d.check(a.ID+"/relative-retention/"+subjectKey(id)))),
			to: d.toInjection(id.Injection)})
	}
	d.table(table{name: "retention", columns: "wddlldd l", rows: rows})
}

// window is the accepted range of a check.
func window(c *decision.Check) string {
	if c == nil || c.Low == nil && c.High == nil {
		return missing
	}
	text := func(f *decision.Figure) string {
		if f == nil {
			return ""
		}
		return typeset(strings.TrimSuffix(strings.TrimSuffix(f.Text, " min"), " %"))
	}
	return joined(" – ", text(c.Low), text(c.High))
}

func (d *document) verdictOf(c *decision.Check) string {
	if c == nil {
		return missing
	}
	return d.verdict(c.Result)
}

// ionTable lists every monitored ion: signal-to-noise, co-elution and abundance with its window.
func (d *document) ionTable(a *evidence.Analyte) {
	var rows []row
	for _, id := range d.subjects(a) {
		name := d.subjectName(id)
		for i, ion := range id.Ions {
			c := d.check(a.ID + "/abundance/" + ion.Trace + "/" + subjectKey(id))
			abundance, accepted, result := d.abundance(&ion), window(c), d.verdictOf(c)
			if ion.Base {
				accepted, result = d.t("identity.base"), ""
			}
			rows = append(rows, row{cells: cells(name, d.words.or("trace.", ion.Trace), optNumber(ion.SignalToNoise, 3), optSigned(ion.ApexOffsetMin, 4), optPercent(ion.ReferenceAbundance, 3),
				abundance, accepted, distanceText(c), result), keep: i > 0, open: i > 0, to: map[bool]string{true: d.toInjection(id.Injection)}[i == 0]})
			name = ""
		}
	}
	d.table(table{name: "ions", columns: "wldddldrl", rows: rows, size: 7.6})
	d.note(d.t("identity.ions-note"))
}

// abundance writes an ion's abundance in per cent with its uncertainty from noise.
func (d *document) abundance(ion *evidence.IonMatch) string {
	switch {
	case ion.Abundance == nil:
		return missing
	case ion.Base:
		return "100"
	case ion.AbundanceStdU == nil || !(*ion.AbundanceStdU > 0):
		return percent(*ion.Abundance, 3)
	}
	v, u := withU(*ion.Abundance*100, *ion.AbundanceStdU*100)
	return v + " ± " + u
}
