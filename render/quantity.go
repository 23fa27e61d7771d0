package render

import (
	"fmt"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/uncertainty"
)

func (d *document) calibration(k int) {
	a := &d.in.Record.Analytes[k]
	if a.Calibration == nil {
		d.paragraph(d.t("calibration.none", "why", a.NoFit))
		return
	}
	fit := a.Calibration.Fit
	d.pairs([]pair{
		{d.t("label.model"), d.t("calibration.model", "weights", d.words.or("weighting.", string(fit.Weighting)), "n", itoa(len(fit.Points)), "algorithm", fit.Algorithm)},
		{d.t("label.intercept"), d.t("calibration.intercept", "v", number(fit.A, 5), "se", number(fit.SA, 2))},
		{d.t("label.slope"), d.t("calibration.slope", "v", number(fit.B, 6), "se", number(fit.SB, 2))},
		{d.t("label.covariance"), d.t("calibration.covariance", "v", number(fit.Cov, 4))},
		{d.t("label.residual-sd"), d.t("calibration.residual-sd", "v", number(fit.S, 4), "dof", itoa(fit.DoF))},
		{d.t("label.correlation"), fixed(fit.R, 6) + ", " + fixed(fit.R2, 6)},
		{d.t("label.range"), d.t("calibration.range", "low", plain(a.Calibration.LowNGPerML), "high", plain(a.Calibration.HighNGPerML))},
	})
	d.calibrationCharts(a)
	var rows []row
	for i, p := range fit.Points {
		id := a.Calibration.Injections[i]
		rows = append(rows, row{cells: cells(id, a.Calibration.Levels[i], plain(p.X), number(p.Y, 5), number(p.Fitted, 5), number(p.Residual, 2), number(p.Weight, 4), number(p.BackX, 5),
			opt(p.RelativeBias, func(v float64) string { return signed(v*100, 2) }), d.resultOf(a.ID+"/calibrator/"+id)), to: d.toInjection(id)})
	}
	d.table(table{name: "calibrators", columns: "lldddddddl", rows: rows})
	d.note(d.t("calibration.note"))
}

func (d *document) quantity(k int) {
	a := &d.in.Record.Analytes[k]
	if len(a.Aliquots) == 0 {
		d.paragraph(d.t("quantity.no-result", "why", joined(": ", a.NoResult, a.NoFit)))
		return
	}
	var rows []row
	for _, c := range a.Aliquots {
		in := missing
		if c.InRange != nil {
			in = map[bool]string{true: "✓ " + d.t("yes"), false: "✗ " + d.t("no")}[*c.InRange]
		}
		rows = append(rows, row{cells: cells(c.Aliquot, c.Injection, optNumber(c.Response, 5), optNumber(c.ReadNGPerML, 5), optNumber(c.StdU, 2), in, plain(c.Dilution), optNumber(c.NGPerML, 5), c.Missing),
			to: d.toInjection(c.Injection)})
	}
	d.table(table{name: "aliquots", columns: "lldddlddw", rows: rows, bare: true})
	r := a.Result
	if r == nil {
		d.paragraph(d.t("quantity.no-result", "why", a.NoResult))
		return
	}
	v, u := withU(r.NGPerML, r.Budget.StdU)
	d.pairs([]pair{
		{d.t("label.mean"), d.t("quantity.mean", "v", number(r.NGPerML, 6), "n", itoa(r.N), "sd", optNumber(r.SD, 3), "rsd", optPercent(r.RSD, 3))},
		{d.t("label.value-u"), d.t("quantity.value-u", "v", v, "u", u)},
		{d.t("label.prediction"), d.t("quantity.prediction", "v", number(r.Prediction.X, 6), "u", number(r.Prediction.StdU, 3), "line", number(r.Prediction.StdULine, 3))},
	})
	d.note(d.t("quantity.note"))
}

func (d *document) budget(k int) {
	b := d.in.Record.Analytes[k].Result.Budget
	dof := func(v *float64) string {
		if v == nil {
			return "∞"
		}
		return number(*v, 4)
	}
	var rows []row
	for _, c := range b.Components {
		rows = append(rows, row{cells: cells(c.Name, c.Type, number(c.StdU, 3), number(c.Sensitivity, 3), number(c.Contribution, 3), percent(c.Share, 3), dof(c.DoF), c.Source)})
	}
	rows = append(rows, row{cells: cells(d.t("budget.combined"), "", "", "", number(b.StdU, 3), "100", dof(b.EffectiveDoF), b.Algorithm), bold: true})
	d.table(table{name: "budget", columns: "wldddddw", rows: rows})
	d.budgetBars(b, "ng/mL")
	d.note(d.t("budget.note"))
	d.confirmation(d.in.Record.Analytes[k].Result)
}

// confirmation sets the budget beside the simulation of the same measurement model.
func (d *document) confirmation(r *evidence.Result) {
	c := r.Confirmation
	if c == nil {
		if r.NoConfirmation != "" {
			d.note(d.t("budget.not-confirmed", "why", r.NoConfirmation))
		}
		return
	}
	rows := []row{{cells: cells(d.t("budget.propagated"), number(c.Propagation.Value, 5), number(c.Propagation.StdU, 3), interval(c.Comparison.Propagated))},
		{cells: cells(d.t("budget.simulated", "n", itoa(c.Simulation.Trials), "generator", c.Simulation.Generator, "seed", fmt.Sprint(c.Simulation.Seed)), number(c.Simulation.Mean, 5), number(c.Simulation.StdU, 3), interval(&c.Simulation.Symmetric))}}
	d.table(table{name: "confirmation", columns: "wddl", rows: rows})
	key := "budget.agree"
	if c.Comparison.Use != uncertainty.UseFirstOrder {
		key = "budget.differ"
	}
	d.note(d.t("budget.model", "model", c.Model) + " " + d.t(key, "tolerance", number(c.Comparison.Tolerance, 2)))
}

func interval(c *uncertainty.Coverage) string {
	if c == nil {
		return missing
	}
	return number(c.Low, 5) + " – " + number(c.High, 5)
}

func (d *document) decision(k int) {
	f := &d.in.Finding.Analytes[k]
	l := f.Limit
	in := shown(l)
	val := func(v float64, digits int) string { return number(inUnit(v, l.DisplayUnit), digits) + " " + in.unit }
	v, e := withU(in.value, in.expanded)
	list := []pair{
		{d.t("label.value-expanded"), d.t("decision.value", "v", v, "u", e, "unit", in.unit, "k", plain(l.K))},
		{d.t("label.coverage"), l.KRule},
		{d.t("label.threshold"), val(l.Threshold, 4)},
	}
	if l.MaxStdU != nil {
		list = append(list, pair{d.t("label.largest-u"), d.t("decision.at-threshold", "v", val(*l.MaxStdU, 3))})
	}
	if l.StatedLimit != nil {
		list = append(list, pair{d.t("label.stated-limit"), val(*l.StatedLimit, 4)})
	}
	if l.Adjustment != nil {
		list = append(list, pair{d.t("label.gravity-factor"), number(*l.Adjustment, 4) + "\n" + l.AdjustmentRule})
	}
	d.pairs(append(list,
		pair{d.t("label.decision-limit"), d.t("decision.limit", "v", val(l.DecisionLimit, 4), "guard", val(l.GuardBand, 3), "rule", l.GuardRule)},
		pair{d.t("label.compared"), val(l.Compared, 5) + ", " + l.RoundingRule},
		pair{d.t("label.comparison"), d.t(map[bool]string{true: "decision.strict", false: "decision.at-or-above"}[l.Strict])},
		pair{d.t("label.probability"), probability(l.ProbabilityAbove) + "\n" + l.ProbabilityMethod},
		pair{d.t("label.outcome"), signOf(f.Outcome) + " " + f.Label}))
	d.room(64)
	d.decisionChart(l, 58)
	d.note(d.t("decision.note"))
	d.ruleStated(f)
}

// ruleStated repeats the check that compared value and limit, with the clause it comes from: the decision rule (ISO/IEC 17025, 7.8.6).
func (d *document) ruleStated(f *decision.AnalyteFinding) {
	if c := d.check(f.Analyte + "/decision-limit"); c != nil {
		d.linked(d.t("decision.rule", "sentence", c.Sentence, "clause", c.Clause, "source", c.Source), "checks/"+f.Analyte)
	}
}
