package render

import (
	"fmt"

	"assaywrit/decision"
)

// signOf marks an outcome by its shape: filled where something is reported, open where not, with a bar where nothing can be said.
func signOf(o decision.Outcome) string {
	switch o {
	case decision.AboveLimit, decision.Identified:
		return "■"
	case decision.WithinGuardBand:
		return "◧"
	case decision.BelowThreshold, decision.NotIdentified:
		return "□"
	}
	return "╳"
}

func (d *document) summary() {
	f := d.in.Finding
	d.paragraph(d.t("summary.intro", "criteria", f.Criteria.ID, "edition", f.Criteria.Edition))
	d.down(1)
	for k := range f.Analytes {
		d.outcome(k, true)
	}
	d.note(d.t("summary.signs"))
}

// outcome is the block of one analyte: its label, the sentence, the decision drawn, and where it stands in the package.
func (d *document) outcome(k int, inPackage bool) {
	a := &d.in.Finding.Analytes[k]
	need := 22 + d.height(a.Sentence, textW-5, regular, sizeBody)
	if a.Limit != nil {
		need += 42
	}
	d.room(need)
	startPage, start := d.page(), d.y
	d.down(5)
	d.font(bold, sizeH2)
	label := signOf(a.Outcome) + "  " + a.Label
	d.textRight(pageW-right, d.y, label, ink)
	d.fit(left+5, d.y, textW-12-d.wide(label), a.Name, ink)
	d.down(1.8)
	d.block(a.Sentence, left+5, textW-5, regular, sizeBody, ink)
	d.down(1)
	if a.Limit != nil {
		d.limitTiles(a.Limit)
		d.numberLine(a.Limit, left+5, textW-5, 23)
	}
	d.unmet(a)
	where := d.t("outcome.pointers", "finding", fmt.Sprintf("/analytes/%d", k), "evidence", fmt.Sprintf("/analytes/%d", k))
	if inPackage {
		met := d.t("outcome.all-met")
		if n := len(a.Failed); n > 0 {
			met = d.t("outcome.some-not-met", "n", itoa(n))
		}
		where = d.t("outcome.checks", "n", itoa(applied(a.Checks)), "met", met, "section", d.ref("analyte/"+a.Analyte), "checks", d.ref("checks/"+a.Analyte)) + " " + where
	}
	d.block(where, left+5, textW-5, regular, sizeSmall, soft)
	if d.page() == startPage {
		d.line(left+1, start+1.2, left+1, d.y, signal, 2.2, whole)
		if inPackage {
			d.leadTo("analyte/"+a.Analyte, left, start, textW, d.y-start)
		}
	}
	d.down(4)
}

// limitTiles sets the numbers of a decision side by side.
func (d *document) limitTiles(limit *decision.Limit) {
	l := shown(limit)
	v, e := withU(l.value, l.expanded)
	tiles := []pair{
		{d.t("tile.value", "k", plain(limit.K)), v + " ± " + e + " " + l.unit},
		{d.t("tile.threshold"), number(l.threshold, 4) + " " + l.unit},
		{d.t("tile.decision-limit"), number(l.decisionAt, 4) + " " + l.unit},
		{d.t("tile.probability"), probability(limit.ProbabilityAbove)},
	}
	d.room(14)
	x, w := left+5, (textW-5)/4
	for _, t := range tiles {
		d.font(regular, sizeSmall)
		d.fit(x, d.y+3.2, w-2, t.label, soft)
		d.font(bold, 10.5)
		d.fit(x, d.y+8.3, w-2, t.value, ink)
		x += w
	}
	d.down(11)
}

// unmet names the required checks that keep a finding from being made, the first few of them.
func (d *document) unmet(a *decision.AnalyteFinding) {
	if a.Outcome != decision.NotDetermined {
		return
	}
	const most = 5
	failed := failures(d.in.Finding.Batch, true)
	failed = append(failed, failures(a.Checks, true)...)
	for i, c := range failed {
		if i == most {
			d.block(d.t("outcome.more", "n", itoa(len(failed)-most)), left+9, textW-9, regular, sizeBody, ink)
			break
		}
		d.room(lead(sizeBody))
		d.font(bold, sizeBody)
		d.text(left+5, d.y+lead(sizeBody)*0.74, "✗", accent)
		d.block(c.Sentence, left+9, textW-9, regular, sizeBody, ink)
	}
	d.down(1)
}

func applied(checks []decision.Check) int {
	n := 0
	for _, c := range checks {
		if c.Result != decision.NotApplicable {
			n++
		}
	}
	return n
}

// failures are the checks that were not met, required or advisory.
func failures(checks []decision.Check, required bool) []decision.Check {
	var list []decision.Check
	for _, c := range checks {
		if c.Result == decision.Failed && c.Required == required {
			list = append(list, c)
		}
	}
	return list
}

// notMet lists every check that was not met.
func (d *document) notMet() {
	var rows []row
	add := func(checks []decision.Check) {
		for _, required := range []bool{true, false} {
			for _, c := range failures(checks, required) {
				rows = append(rows, row{cells: []cell{{text: d.requirement(c.Required)}, found(&c), {text: c.Clause, note: c.Source}, d.place(&c)}})
			}
		}
	}
	add(d.in.Finding.Batch)
	for _, a := range d.in.Finding.Analytes {
		add(a.Checks)
	}
	if len(rows) == 0 {
		d.paragraph(d.t("not-met.none"))
		return
	}
	d.paragraph(d.t("not-met.intro"))
	d.table(table{name: "not-met", columns: "lwwl", rows: rows})
}

func (d *document) requirement(required bool) string {
	if required {
		return d.t("required")
	}
	return d.t("advisory")
}

func (d *document) cautions() { d.bullets(d.in.Finding.Cautions) }
