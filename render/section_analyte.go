package render

import (
	"fmt"
	"strings"

	"gonum.org/v1/plot/vg"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// analyte is the chapter of one substance.
func (d *document) analyte(k int) {
	a := &d.in.Record.Analytes[k]
	f := d.in.Finding.Analytes[k]
	d.chapter("analyte/"+a.ID, a.Name)
	d.block(f.Label, left, textW, sizeH2, "B", accent)
	d.paragraph(f.Sentence)
	d.identification(k)
	if a.Calibration != nil {
		d.calibration(k)
	} else if a.NoFit != "" {
		d.heading(1, "calibration/"+a.ID, d.words.get("calibration-title"))
		d.paragraph(d.words.get("no-result") + " " + a.NoFit)
	}
	d.controls(k)
	d.blanks(k)
	d.internalStandard(k)
	d.quantity(k)
	if f.Limit != nil {
		d.decision(k)
	}
}

func (d *document) identification(k int) {
	a := &d.in.Record.Analytes[k]
	d.heading(1, "identity/"+a.ID, d.words.get("identity-title"))
	d.paragraph(d.words.with("identity-note", "n", fmt.Sprint(len(a.Reference.Injections)), "list", orNone(strings.Join(a.Reference.Injections, ", "))))
	d.retentionTable(k)
	d.ionTable(k)
}

// shownIn tells whether an injection's identification is printed: samples, controls and negative controls are.
func shownIn(role casefile.Role) bool {
	return role == casefile.SampleAliquot || role == casefile.Control || role == casefile.NegativeControl
}

func (d *document) subject(id *evidence.Identification) (name string, role casefile.Role) {
	inj := d.in.Record.Injections[id.InjectionIndex]
	name = id.Injection
	if id.Aliquot != "" {
		name = id.Aliquot + " (" + id.Injection + ")"
	}
	return name, inj.Role
}

func (d *document) retentionTable(k int) {
	a := &d.in.Record.Analytes[k]
	var rows [][]string
	bold := map[int]bool{}
	if r := a.Reference.RetentionMin; r != nil {
		bold[0] = true
		rows = append(rows, []string{"reference", fmt.Sprintf("mean of %d", r.N), fmt.Sprintf("%.3f", r.Mean), "", statMean(a.Reference.RelativeRetention, 4), "", "", ""})
	}
	for i := range a.Identifications {
		id := &a.Identifications[i]
		name, role := d.subject(id)
		if !shownIn(role) {
			continue
		}
		key := subjectKey(id)
		rows = append(rows, []string{name, string(role), fixed3(id.RetentionMin), signed(id.RetentionDifferenceMin, "%+.3f"), fixed4(id.RelativeRetention), signedPercent(id.RelativeRetentionDeviation),
			d.distanceOf(a.ID + "/retention/" + key), d.resultOf(a.ID + "/retention/" + key)})
	}
	d.table(table{columns: []column{{head: "Injection", share: 1.5}, {head: "Role", share: 1.8}, {head: "RT, min", share: 1.1, right: true}, {head: "less reference, min", share: 1.4, right: true}, {head: "Relative retention", share: 1.4, right: true},
		{head: "from reference", share: 1.3, right: true}, {head: "Distance to limit", share: 1.2, right: true}, {head: "Retention", share: 1.3}}, rows: rows, bold: bold})
}

func subjectKey(id *evidence.Identification) string {
	if id.Aliquot != "" {
		return id.Aliquot
	}
	return id.Injection
}

func (d *document) ionTable(k int) {
	a := &d.in.Record.Analytes[k]
	var rows [][]string
	for i := range a.Identifications {
		id := &a.Identifications[i]
		name, role := d.subject(id)
		if !shownIn(role) {
			continue
		}
		for _, ion := range id.Ions {
			c := d.check(a.ID + "/abundance/" + ion.Trace + "/" + subjectKey(id))
			window, distance, result := "base ion", "", ""
			if c != nil {
				window, distance, result = figureText(c.Low)+" to "+figureText(c.High), percentage(c.Distance, 3), mark(c.Result)
			} else if !ion.Base {
				window = ""
			}
			rows = append(rows, []string{name, ion.Trace, optional(ion.SignalToNoise, 3), signed(ion.ApexOffsetMin, "%+.4f"), percentage(ion.ReferenceAbundance, 3), withU(ion.Abundance, ion.AbundanceStdU), window, distance, result})
			name = ""
		}
	}
	d.table(table{columns: []column{{head: "Injection", share: 1.5}, {head: "Ion", share: 1.4}, {head: "S/N", share: 0.9, right: true}, {head: "Apex from quantifier, min", share: 1.4, right: true}, {head: "Reference abundance", share: 1.3, right: true},
		{head: "Abundance ± u", share: 1.8, right: true}, {head: "Accepted", share: 1.8}, {head: "Distance to limit", share: 1.1, right: true}, {head: "Result", share: 1.2}}, rows: rows, size: 7.4})
}

func (d *document) check(id string) *decision.Check {
	for i := range d.in.Finding.Analytes {
		for j := range d.in.Finding.Analytes[i].Checks {
			if c := &d.in.Finding.Analytes[i].Checks[j]; c.ID == id {
				return c
			}
		}
	}
	return nil
}

func (d *document) distanceOf(id string) string {
	if c := d.check(id); c != nil {
		return percentage(c.Distance, 3)
	}
	return "–"
}

func figureText(f *decision.Figure) string {
	if f == nil {
		return "–"
	}
	return f.Text
}

func statMean(s *evidence.Statistic, decimals int) string {
	if s == nil {
		return "–"
	}
	return fmt.Sprintf("%.*f", decimals, s.Mean)
}

func fixed3(v *float64) string { return signed(v, "%.3f") }
func fixed4(v *float64) string { return signed(v, "%.4f") }

func signed(v *float64, format string) string {
	if v == nil {
		return "–"
	}
	return fmt.Sprintf(format, *v)
}

func signedPercent(v *float64) string {
	if v == nil {
		return "–"
	}
	text := fmt.Sprintf("%+.2f %%", *v*100)
	if text == "-0.00 %" || text == "+0.00 %" {
		return "0.00 %"
	}
	return text
}

func withU(v, u *float64) string {
	if v == nil || u == nil || !(*u > 0) {
		return percentage(v, 3)
	}
	a, b := decision.TextWithU(*v*100, *u*100)
	return a + " ± " + b + " %"
}

func (d *document) calibration(k int) {
	a := &d.in.Record.Analytes[k]
	fit := a.Calibration.Fit
	d.heading(1, "calibration/"+a.ID, d.words.get("calibration-title"))
	d.pairs([][2]string{
		{"Model", fmt.Sprintf("response = a + b·x, weights %s, %d calibrators (%s)", fit.Weighting, len(fit.Points), fit.Algorithm)},
		{"Intercept a", fmt.Sprintf("%s, standard error %s", number(fit.A, 5), number(fit.SA, 2))},
		{"Slope b", fmt.Sprintf("%s mL/ng, standard error %s", number(fit.B, 6), number(fit.SB, 2))},
		{"Covariance of a and b", number(fit.Cov, 4)},
		{"Residual standard deviation", fmt.Sprintf("%s (of a response of weight 1), %d degrees of freedom", number(fit.S, 4), fit.DoF)},
		{"Correlation r, r²", fmt.Sprintf("%.6f, %.6f", fit.R, fit.R2)},
		{"Calibrated range", fmt.Sprintf("%s to %s ng/mL", plain(a.Calibration.LowNGPerML), plain(a.Calibration.HighNGPerML))},
	})
	d.calibrationCharts(k)
	var rows [][]string
	for i, p := range fit.Points {
		rows = append(rows, []string{a.Calibration.Injections[i], a.Calibration.Levels[i], plain(p.X), number(p.Y, 5), number(p.Fitted, 5), number(p.Weight, 4), number(p.BackX, 5), percentage(p.RelativeBias, 3), d.resultOf(a.ID + "/calibrator/" + a.Calibration.Injections[i])})
	}
	d.table(table{columns: []column{{head: "No.", share: 0.7}, {head: "Level", share: 0.8}, {head: "Nominal, ng/mL", share: 1.2, right: true}, {head: "Response", share: 1.2, right: true}, {head: "Fitted", share: 1.2, right: true}, {head: "Weight", share: 1.2, right: true},
		{head: "Back-calculated, ng/mL", share: 1.8, right: true}, {head: "less nominal", share: 1.1, right: true}, {head: "Result", share: 1.2}}, rows: rows})
	d.note(d.words.get("calibration-note"))
}

// calibrationCharts draws the line with its points and the sample's aliquots, and the relative residuals below each amount.
func (d *document) calibrationCharts(k int) {
	a := &d.in.Record.Analytes[k]
	fit := a.Calibration.Fit
	d.room(68)
	y := d.y()
	half := textW/2 - 3
	var xs, ys, rs, sx, sy []float64
	for _, p := range fit.Points {
		if p.RelativeBias != nil {
			xs, ys, rs = append(xs, p.X), append(ys, p.Y), append(rs, *p.RelativeBias*100)
		}
	}
	for _, c := range a.Aliquots {
		if c.ReadNGPerML != nil && c.Response != nil {
			sx, sy = append(sx, *c.ReadNGPerML), append(sy, *c.Response)
		}
	}
	high := a.Calibration.HighNGPerML * 1.06
	p := newPlot()
	axes(p, 0, high, 0, (fit.A+fit.B*high)*1.05, 5, 5)
	p.X.Label.Text = "amount, ng/mL"
	p.Add(polyline([]float64{0, high}, []float64{fit.A, fit.A + fit.B*high}, signal, 0.9), dots(xs, ys, ink, 2, true), dots(sx, sy, accent, 2.2, false))
	d.drawPlot(p, left, y+4, half, 56)
	limit := d.in.Record.Method.Batch.CalibratorBias * 100
	span := limit * 1.3
	for _, r := range rs {
		span = max(span, r*1.1, -r*1.1)
	}
	p = newPlot()
	axes(p, 0, high, -span, span, 5, 5)
	p.X.Label.Text = "amount, ng/mL"
	for _, l := range []float64{-limit, limit} {
		p.Add(polyline([]float64{0, high}, []float64{l, l}, accent, 0.7, 3, 2))
	}
	p.Add(polyline([]float64{0, high}, []float64{0, 0}, soft, 0.5), dots(xs, rs, ink, 2, true))
	d.drawPlot(p, left+half+6, y+4, half, 56)
	d.font("", 6.8)
	d.color(soft)
	d.put(left, y+3, "response, area ratio    ○ calibrators   ● sample aliquots")
	d.put(left+half+6, y+3, "back-calculated less nominal, %    dashed: limits")
	d.pdf.SetY(y + 63)
}

func (d *document) quantity(k int) {
	a := &d.in.Record.Analytes[k]
	d.heading(1, "quantity/"+a.ID, d.words.get("quantity-title"))
	if len(a.Aliquots) == 0 {
		d.paragraph(d.words.get("no-quantity"))
		return
	}
	var rows [][]string
	for _, c := range a.Aliquots {
		in := "–"
		if c.InRange != nil {
			in = map[bool]string{true: "yes", false: "no"}[*c.InRange]
		}
		rows = append(rows, []string{c.Aliquot + " (" + c.Injection + ")", optional(c.Response, 5), optional(c.ReadNGPerML, 5), optional(c.StdU, 2), in, plain(c.Dilution), optional(c.NGPerML, 5), c.Missing})
	}
	d.table(table{columns: []column{{head: "Aliquot", share: 1.3}, {head: "Response", share: 1.2, right: true}, {head: "Read, ng/mL", share: 1.2, right: true}, {head: "u of reading, ng/mL", share: 1.4, right: true}, {head: "In range", share: 0.9}, {head: "Dilution", share: 0.9, right: true}, {head: "Sample, ng/mL", share: 1.3, right: true}, {head: "Note", share: 2}}, rows: rows})
	r := a.Result
	if r == nil {
		d.paragraph(d.words.get("no-result") + " " + a.NoResult + ".")
		return
	}
	v, u := decision.TextWithU(r.NGPerML, r.Budget.StdU)
	d.pairs([][2]string{
		{"Mean of the aliquots", fmt.Sprintf("%s ng/mL (%d aliquots, standard deviation %s ng/mL, %s)", number(r.NGPerML, 6), r.N, optional(r.SD, 3), percentage(r.RSD, 2))},
		{"Value and u", v + " ± " + u + " ng/mL (combined standard uncertainty)"},
		{"Effective degrees of freedom", optional(r.Budget.EffectiveDoF, 4)},
		{"Inverse prediction of the mean", fmt.Sprintf("%s ng/mL before dilution, u = %s ng/mL, of which the line %s ng/mL", number(r.Prediction.X, 6), number(r.Prediction.StdU, 3), number(r.Prediction.StdULine, 3))},
	})
	d.budget(k)
}

func (d *document) budget(k int) {
	a := &d.in.Record.Analytes[k]
	b := a.Result.Budget
	d.heading(1, "budget/"+a.ID, d.words.get("budget-title"))
	var rows [][]string
	for _, c := range b.Components {
		dof := "∞"
		if c.DoF != nil {
			dof = number(*c.DoF, 4)
		}
		rows = append(rows, []string{c.Name, c.Type, number(c.StdU, 3), number(c.Sensitivity, 3), dof, number(c.Share*100, 3) + " %", c.Source})
	}
	dof := "∞"
	if b.EffectiveDoF != nil {
		dof = number(*b.EffectiveDoF, 4)
	}
	rows = append(rows, []string{"combined (" + b.Algorithm + ")", "", number(b.StdU, 3), "", dof, "100 %", ""})
	d.table(table{columns: []column{{head: "Component", share: 3}, {head: "Type", share: 0.8}, {head: "u, ng/mL", share: 1, right: true}, {head: "Sensitivity", share: 1.3, right: true}, {head: "Degrees of freedom", share: 1.1, right: true}, {head: "Share of variance", share: 1.1, right: true}, {head: "Source", share: 3.4}},
		rows: rows, bold: map[int]bool{len(rows) - 1: true}})
	d.budgetBars(k)
	d.note(d.words.get("budget-note"))
}

// budgetBars shows each component's contribution beside the combined uncertainty.
func (d *document) budgetBars(k int) {
	b := d.in.Record.Analytes[k].Result.Budget
	const labelW, step = 62.0, 5.2
	d.room(float64(len(b.Components)+1)*step + 6)
	y := d.y()
	scale := (textW - labelW - 22) / b.StdU
	row := func(name string, u float64, dark bool) {
		d.font("", 7.5)
		d.color(ink)
		lines := d.split(name, labelW-3)
		d.put(left, y+3.4, lines[0])
		c := tint
		if dark {
			c = signal
		}
		d.fill(c)
		d.pdf.Rect(left+labelW, y+0.9, u*scale, 3.2, "F")
		d.put(left+labelW+u*scale+1.5, y+3.4, number(u, 3)+" ng/mL")
		y += step
	}
	for _, c := range b.Components {
		row(c.Name, c.Contribution, false)
	}
	row("combined standard uncertainty", b.StdU, true)
	d.pdf.SetY(y + 3)
}

func (d *document) decision(k int) {
	f := d.in.Finding.Analytes[k]
	l := f.Limit
	d.heading(1, "decision/"+f.Analyte, d.words.get("decision-title"))
	u := l.DisplayUnit
	v, ue := decision.TextWithU(inUnit(l.Value, u), inUnit(l.ExpU, u))
	stated := ""
	if l.StatedLimit != nil {
		stated = number(inUnit(*l.StatedLimit, u), 4) + " " + u
	}
	adjust := ""
	if l.Adjustment != nil {
		adjust = number(*l.Adjustment, 4) + " (" + l.AdjustmentRule + ")"
	}
	largest := ""
	if l.MaxStdU != nil {
		largest = number(inUnit(*l.MaxStdU, u), 3) + " " + u + " at the threshold"
	}
	d.pairs([][2]string{
		{"Value and expanded uncertainty", fmt.Sprintf("%s ± %s %s (k = %g)", v, ue, u, l.K)},
		{"Threshold", number(inUnit(l.Threshold, u), 4) + " " + u},
		{"Largest u allowed", largest},
		{"Decision limit, as stated", stated},
		{"Factor for specific gravity", adjust},
		{"Decision limit applied", fmt.Sprintf("%s %s (guard band %s %s: %s)", number(inUnit(l.DecisionLimit, u), 4), u, number(inUnit(l.GuardBand, u), 3), u, l.GuardRule)},
		{"Value compared", fmt.Sprintf("%s %s, %s", number(inUnit(l.Compared, u), 5), u, l.RoundingRule)},
		{"Comparison", map[bool]string{true: "the value must be greater than the limit", false: "the value must be at or above the limit"}[l.Strict]},
		{"Probability above the threshold", probability(l.ProbabilityAbove) + " (" + l.ProbabilityMethod + ")"},
		{"Outcome", f.Label},
	})
	d.decisionChart(l)
	d.note(d.words.get("decision-note"))
}

// probability writes a probability so that it never looks certain.
func probability(p float64) string {
	switch {
	case p > 0.9999:
		return "more than 99.99 %"
	case p < 0.0001:
		return "less than 0.01 %"
	}
	return number(p*100, 4) + " %"
}

// decisionChart draws the distribution of the value against threshold and decision limit.
func (d *document) decisionChart(l *decision.Limit) {
	if !(l.StdU > 0) {
		return
	}
	d.room(66)
	y := d.y()
	conv := func(v float64) float64 { return inUnit(v, l.DisplayUnit) }
	low, high := min(l.Threshold, l.Value-4.2*l.StdU), max(l.DecisionLimit, l.Value+4.2*l.StdU)
	pad := (high - low) * 0.06
	low, high = max(0, low-pad), high+pad
	xs, ys := bell(l.Value, l.StdU, low, high)
	ax, ay := bell(l.Value, l.StdU, max(low, l.Threshold), high)
	scale := func(list []float64) []float64 {
		out := make([]float64, len(list))
		for i, v := range list {
			out[i] = conv(v)
		}
		return out
	}
	p := newPlot()
	axes(p, conv(low), conv(high), 0, 1.25, 7, 1)
	p.HideY()
	p.X.Label.Text = l.DisplayUnit
	if len(ax) > 1 {
		p.Add(polygon(append(append([]float64{conv(ax[0])}, scale(ax)...), conv(ax[len(ax)-1])), append(append([]float64{0}, ay...), 0), tint))
	}
	p.Add(polyline(scale(xs), ys, signal, 1))
	t, dl, v := conv(l.Threshold), conv(l.DecisionLimit), conv(l.Value)
	p.Add(polyline([]float64{t, t}, []float64{0, 1.12}, ink, 0.9), label(t, 1.13, "threshold "+number(t, 4), ink, 2, 0, 0))
	if l.DecisionLimit > l.Threshold {
		p.Add(polyline([]float64{dl, dl}, []float64{0, 1.02}, accent, 0.9, 4, 2), label(dl, 1.03, "decision limit "+number(dl, 4), accent, 2, 0, 0))
	}
	e := conv(l.ExpU)
	p.Add(polyline([]float64{v - e, v + e}, []float64{0.06, 0.06}, ink, 1.1), polyline([]float64{v - e, v - e}, []float64{0.03, 0.09}, ink, 1.1), polyline([]float64{v + e, v + e}, []float64{0.03, 0.09}, ink, 1.1),
		dots([]float64{v}, []float64{0.06}, ink, 2.6, false))
	vt, ut := decision.TextWithU(v, e)
	p.Add(label(v, 0.10, vt+" ± "+ut, ink, vg.Length(-22), 2, 0))
	d.drawPlot(p, left, y, textW, 60)
	d.pdf.SetY(y + 62)
}
