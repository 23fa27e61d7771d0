package render

import (
	"strings"

	"assaywrit/decision"
	"assaywrit/evidence/casefile"
)

// plainFinding says in plain language what was asked, what was found, how sure that is, what could be wrong and who decides next.
func (d *document) plainFinding() {
	c := d.in.Record.Case
	d.newPage()
	d.down(1)
	d.block(d.t("finding.heading", "sample", c.Sample.Code), left, textW, bold, 19, ink)
	d.line(left, d.y+1, left+28, d.y+1, accent, 2.2, whole)
	d.down(5)
	d.facts()
	d.part("asked")
	d.paragraph(joined(" ", c.Request.Text, bracketed(joined(", ", c.Request.TestType, c.Request.Activity))))
	d.part("found")
	for k := range d.in.Finding.Analytes {
		d.outcome(k, false)
	}
	d.part("sure")
	d.howSure()
	d.part("wrong")
	d.bullets(d.couldBeWrong())
	d.part("next")
	d.paragraph(d.t("finding.next"))
	d.part("cautions")
	d.bullets(d.in.Finding.Cautions)
	d.part("check")
	d.paragraph(d.t("finding.check"))
	d.commands(d.checkCommands())
	d.note(d.t("finding.refers", "criteria", d.in.Finding.Criteria.ID, "edition", d.in.Finding.Criteria.Edition, "engine", d.in.Record.Engine.Name+" "+d.in.Record.Engine.Version))
	d.pairs([]pair{{d.t("label.evidence-sha256"), d.in.EvidenceSHA256}, {d.t("label.finding-sha256"), d.in.FindingSHA256}})
}

// facts sets who, what and when in two columns.
func (d *document) facts() {
	c := d.in.Record.Case
	pairs := [][2]pair{
		{{d.t("label.case"), c.Number}, {d.t("label.collected"), when(c.Sample.CollectedAt)}},
		{{d.t("label.laboratory"), c.Laboratory.Name + " (" + c.Laboratory.Code + ")"}, {d.t("label.received"), when(c.Sample.ReceivedAt)}},
		{{d.t("label.customer"), c.Customer.Name}, {d.t("label.acquired"), d.acquired()}},
		{{d.t("label.codes"), c.Sample.Code + " ↔ " + c.Sample.LaboratoryCode}, {d.t("label.container"), joined(", ", c.Sample.Container, c.Sample.Matrix)}},
	}
	const w = textW / 2
	for _, p := range pairs {
		high := 1
		for i, one := range p {
			x := left + float64(i)*w
			d.font(regular, sizeSmall)
			d.fit(x, d.y+3.2, w-4, one.label, soft)
			lines := d.lines(regular, sizeBody, w-4, one.value)
			high = max(high, len(lines))
			d.font(regular, sizeBody)
			for j, l := range lines {
				d.text(x, d.y+7.4+float64(j)*lead(sizeBody), l, ink)
			}
		}
		d.down(5.6 + float64(high)*lead(sizeBody))
	}
	d.down(1)
}

func bracketed(text string) string {
	if text == "" {
		return ""
	}
	return "(" + text + ")"
}

// part sets a heading that belongs to what follows.
func (d *document) part(key string) {
	d.room(26)
	d.down(2.5)
	d.chapter = ""
	d.mark(0, d.t("finding."+key+"-title"))
	d.heading(1, "", d.t("finding."+key+"-title"))
}

func (d *document) howSure() {
	ions, aliquots := 0, 0
	for _, a := range d.in.Record.Analytes {
		n := 0
		for _, id := range a.Identifications {
			ions = max(ions, len(id.Ions))
			if d.in.Record.Injections[id.InjectionIndex].Role == casefile.SampleAliquot {
				n++
			}
		}
		aliquots = max(aliquots, n)
	}
	d.paragraph(d.t("finding.sure-identity", "ions", itoa(ions), "aliquots", itoa(aliquots)))
	for _, a := range d.in.Finding.Analytes {
		if a.Limit == nil {
			continue
		}
		l := shown(a.Limit)
		_, u := withU(l.value, l.expanded)
		d.paragraph(d.t("finding.sure-value", "name", a.Name, "u", u+" "+l.unit, "k", plain(a.Limit.K), "rule", a.Limit.KRule, "p", probability(a.Limit.ProbabilityAbove), "method", a.Limit.ProbabilityMethod))
	}
}

// couldBeWrong lists what a reader should weigh: what holds for every case, and what is special about this one.
func (d *document) couldBeWrong() []string {
	items := []string{d.t("finding.wrong-general")}
	clauses := map[string]bool{}
	for _, a := range d.in.Finding.Analytes {
		for _, c := range a.Checks {
			if strings.HasPrefix(c.Source, "from memory") {
				clauses[c.Clause] = true
			}
		}
		if a.Outcome == decision.WithinGuardBand {
			items = append(items, d.t("finding.wrong-guard", "name", a.Name))
		}
	}
	if n := len(clauses); n > 0 {
		items = append(items, d.t("finding.wrong-memory", "n", itoa(n)))
	}
	c := d.in.Record.Case
	if n := len(d.handSets()); n > 0 {
		items = append(items, d.t("finding.wrong-manual", "n", itoa(n)))
	}
	if n := len(c.Deviations); n > 0 {
		items = append(items, d.t("finding.wrong-deviations", "n", itoa(n)))
	}
	if len(c.Sample.Irregularities) > 0 {
		items = append(items, d.t("finding.wrong-irregular", "list", strings.Join(c.Sample.Irregularities, "; ")))
	}
	if raised := d.raised(); len(raised) > 0 {
		items = append(items, d.t("finding.wrong-advisory", "list", strings.Join(raised, "; ")))
	}
	return items
}

// raised names the advisory checks that were not met, each title once with the substances that it concerns.
func (d *document) raised() []string {
	var order []string
	names := map[string][]string{}
	add := func(title, name string) {
		if names[title] == nil {
			order = append(order, title)
			names[title] = []string{}
		}
		if name == "" {
			return
		}
		for _, n := range names[title] {
			if n == name {
				return
			}
		}
		names[title] = append(names[title], name)
	}
	for _, c := range failures(d.in.Finding.Batch, false) {
		add(c.Title, "")
	}
	for _, a := range d.in.Finding.Analytes {
		for _, c := range failures(a.Checks, false) {
			add(c.Title, a.Name)
		}
	}
	for i, title := range order {
		if len(names[title]) > 0 {
			order[i] = title + " (" + strings.Join(names[title], ", ") + ")"
		}
	}
	return order
}
