package render

import (
	"strings"

	"assaywrit/decision"
)

// criteria lists the values of the criteria set that was applied, each with its source.
func (d *document) criteria() {
	f := d.in.Finding.Criteria
	d.pairs([]pair{
		{d.t("label.set"), f.ID + ": " + f.Title}, {d.t("label.edition"), f.Edition}, {d.t("label.in-force"), d.inForce(f)},
		{d.t("label.sha256"), f.SHA256},
	})
	set := d.in.Criteria
	if set == nil {
		d.paragraph(d.t("criteria.absent"))
		return
	}
	for _, n := range set.Notes {
		d.note(n)
	}
	rows := append(d.identityRules(set), d.quantityRules(set)...)
	d.table(table{name: "criteria", columns: "wwwl", rows: rows})
	d.note(d.t("criteria.note"))
}

func (d *document) inForce(f decision.CriteriaRef) string {
	text := d.t("criteria.from", "date", f.EffectiveFrom)
	if set := d.in.Criteria; set != nil && set.EffectiveTo != "" {
		text += d.t("criteria.to", "date", set.EffectiveTo)
	}
	return text
}

func ruleRow(what, value string, c decision.Cite) row {
	return row{cells: cells(what, value, c.Clause, c.Tag)}
}

func (d *document) identityRules(set *decision.Set) []row {
	id := set.Identification
	rows := []row{
		{over: d.t("rule.identification")},
		ruleRow(d.t("rule.signal-to-noise"), d.t("rule.at-least", "v", plain(id.SignalToNoise.Value)), id.SignalToNoise.Cite),
		ruleRow(d.t("rule.transitions"), d.t("rule.at-least", "v", plain(id.Transitions.Value)), id.Transitions.Cite),
		ruleRow(d.t("rule.retention"), d.tolerance(id.Retention.Kind, id.Retention.AbsoluteMin, id.Retention.Relative, "rule.minutes", 1)+d.advisory(id.Retention.Required), id.Retention.Cite),
		ruleRow(d.t("rule.relative-retention"), d.tolerance(id.RelativeRetention.Kind, nil, id.RelativeRetention.Relative, "rule.minutes", 1)+d.advisory(id.RelativeRetention.Required), id.RelativeRetention.Cite),
	}
	for _, b := range id.Abundance {
		key := "rule.abundance-above"
		if b.FromInclusive {
			key = "rule.abundance-from"
		}
		rows = append(rows, ruleRow(d.t(key, "v", statedPercent(b.From)), d.tolerance(b.Kind, b.Absolute, b.Relative, "rule.points", 100), b.Cite))
	}
	return rows
}

func (d *document) quantityRules(set *decision.Set) []row {
	q := set.Quantity
	rows := []row{
		{over: d.t("rule.quantity")},
		ruleRow(d.t("rule.aliquots"), d.t("rule.at-least", "v", plain(q.Aliquots.Value)), q.Aliquots.Cite),
		ruleRow(d.t("rule.coverage"), "k = "+plain(q.CoverageFactor.Value), q.CoverageFactor.Cite),
	}
	if g := q.Gravity; g != nil {
		rows = append(rows, ruleRow(d.t("rule.gravity"), d.t("rule.gravity-value", "above", plain(g.ApplyAbove), "add", plain(g.Add), "reference", plain(g.Reference)), g.Cite))
	}
	for _, l := range set.Limits {
		if name := d.requested(l.Analyte); name != "" {
			rows = append(rows, ruleRow(d.t("rule.limit", "analyte", name), d.limitRule(l), l.Cite))
		}
	}
	return append(rows, ruleRow(d.t("rule.presence"), d.t("rule.presence-value"), set.Presence.Cite))
}

// limitRule says how a substance is compared with its threshold.
func (d *document) limitRule(l decision.LimitRule) string {
	parts := []string{d.t("rule.threshold", "v", plain(l.Threshold))}
	if l.MaxStdU != nil {
		parts = append(parts, d.t("rule.max-u", "v", plain(*l.MaxStdU)))
	}
	if l.DecisionLimit != nil {
		parts = append(parts, d.t("rule.decision-limit", "v", plain(*l.DecisionLimit)))
	}
	parts = append(parts, d.words.or("guard.", l.Guard), d.words.or("compare.", l.Compare), d.words.or("rounding.", l.Rounding))
	if l.Digits > 0 {
		parts[len(parts)-1] += d.t("rule.digits", "n", itoa(l.Digits))
	}
	if l.Gravity {
		parts = append(parts, d.t("rule.with-gravity"))
	}
	return strings.Join(parts, "; ")
}

// requested is the name of an analyte that the case asks for, or "".
func (d *document) requested(id string) string {
	for _, a := range d.in.Record.Analytes {
		if a.ID == id {
			return a.Name
		}
	}
	return ""
}

func (d *document) advisory(required bool) string {
	if required {
		return ""
	}
	return " (" + d.t("advisory") + ")"
}

// tolerance says how far a value may lie from its reference. unit is the key of the words for the absolute part.
func (d *document) tolerance(kind string, absolute, relative *float64, unit string, scale float64) string {
	var parts []string
	if absolute != nil {
		parts = append(parts, "± "+d.t(unit, "v", number(*absolute*scale, 6)))
	}
	if relative != nil {
		parts = append(parts, "± "+d.t("rule.of-reference", "v", number(*relative*100, 6)))
	}
	text := strings.Join(parts, d.t("or"))
	if len(parts) == 2 {
		text += d.words.or("which.", kind)
	}
	return text
}
