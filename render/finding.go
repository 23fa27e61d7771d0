package render

import (
	"fmt"
	"io"
	"strings"

	"assaywrit/decision"
)

// Finding writes finding.pdf: the case in plain language, on a page or two. It returns the number of pages.
func Finding(w io.Writer, in Input) (int, error) {
	words, err := loadWords("en")
	if err != nil {
		return 0, err
	}
	d := newDocument(in, words, words.get("finding-title"))
	c := in.Record.Case
	d.newPage()
	d.block(words.get("finding-title")+" on the sample "+c.Sample.Code, left, textW, 19, "B", ink)
	d.line(left, d.y()+0.5, left+28, d.y()+0.5, accent, 0.8)
	d.down(4)
	d.pairs([][2]string{
		{"Case, laboratory", c.Number + ", " + c.Laboratory.Name + " (" + c.Laboratory.Code + ")"},
		{"For", c.Customer.Name},
		{"Collected, received", when(c.Sample.CollectedAt) + ", " + when(c.Sample.ReceivedAt)},
	})
	d.part(words.get("asked"))
	d.paragraph(c.Request.Text + testType(c.Request.TestType, c.Request.Activity))
	d.part(words.get("found"))
	for k, a := range in.Finding.Analytes {
		d.plainOutcome(k, a)
	}
	d.part(words.get("sure"))
	d.howSure()
	d.part(words.get("wrong"))
	d.bullets(d.whatCouldBeWrong())
	d.part(words.get("next"))
	d.paragraph(words.get("next-text"))
	d.part(words.get("cautions-title"))
	d.bullets(in.Finding.Cautions)
	d.part("How to check this finding")
	d.paragraph(words.get("check-intro-finding"))
	d.monospaced(d.checkCommands())
	d.note("Criteria: " + in.Finding.Criteria.ID + ", " + in.Finding.Criteria.Edition + ". SHA-256 of evidence.json: " + in.EvidenceSHA256 + ".")
	d.block("■  "+words.get("end-finding"), left, textW, sizeSmall, "B", ink)
	return d.finish(w)
}

func testType(kind, activity string) string {
	text := strings.Trim(kind+", "+activity, ", ")
	if text == "" {
		return ""
	}
	return " (" + text + ")"
}

// part sets a heading that belongs to what follows.
func (d *document) part(text string) {
	d.room(24)
	d.down(2)
	d.font("B", sizeH2)
	d.color(ink)
	d.down(4)
	d.put(left, d.y(), text)
	d.down(2)
}

func (d *document) plainOutcome(k int, a decision.AnalyteFinding) {
	need := 20.0
	if a.Limit != nil {
		need = 52
	}
	d.room(need)
	y := d.y()
	d.block(a.Name+": "+a.Label, left+4, textW-4, 10.5, "B", accent)
	d.block(a.Sentence, left+4, textW-4, sizeBody, "", ink)
	if a.Limit != nil {
		d.numberLine(a.Limit)
	}
	d.line(left, y+0.5, left, d.y()-1.5, accent, 0.9)
	d.down(1.5)
}

// numberLine draws the value with its interval against threshold and decision limit.
func (d *document) numberLine(l *decision.Limit) {
	conv := func(v float64) float64 { return inUnit(v, l.DisplayUnit) }
	high := max(l.Value+l.ExpU, l.DecisionLimit) * 1.12
	p := newPlot()
	axes(p, 0, conv(high), 0, 1, 8, 1)
	p.HideY()
	p.X.Label.Text = l.DisplayUnit
	t, dl, v, e := conv(l.Threshold), conv(l.DecisionLimit), conv(l.Value), conv(l.ExpU)
	p.Add(polyline([]float64{t, t}, []float64{0, 0.7}, ink, 1), label(t, 0.72, "threshold "+number(t, 4), ink, -1, 0, -1))
	if dl > t {
		p.Add(polyline([]float64{dl, dl}, []float64{0, 0.7}, accent, 1, 4, 2), label(dl, 0.72, "decision limit "+number(dl, 4), accent, 1, 0, 0))
	}
	p.Add(polyline([]float64{v - e, v + e}, []float64{0.3, 0.3}, signal, 1.4), polyline([]float64{v - e, v - e}, []float64{0.2, 0.4}, signal, 1.4),
		polyline([]float64{v + e, v + e}, []float64{0.2, 0.4}, signal, 1.4), dots([]float64{v}, []float64{0.3}, signal, 3, false))
	vt, ut := decision.TextWithU(v, e)
	p.Add(label(v, 0.42, vt+" ± "+ut, signal, 0, 0, -0.5))
	y := d.y()
	d.drawPlot(p, left+4, y, textW-8, 24)
	d.pdf.SetY(y + 26)
}

func (d *document) howSure() {
	ions, aliquots := 0, 0
	for _, a := range d.in.Record.Analytes {
		n := 0
		for _, id := range a.Identifications {
			ions = max(ions, len(id.Ions))
			if id.Aliquot != "" {
				n++
			}
		}
		aliquots = max(aliquots, n)
	}
	d.paragraph(d.words.with("sure-identity", "ions", fmt.Sprint(ions), "aliquots", fmt.Sprint(aliquots)))
	for _, a := range d.in.Finding.Analytes {
		if a.Limit == nil {
			continue
		}
		_, u := decision.TextWithU(inUnit(a.Limit.Value, a.Limit.DisplayUnit), inUnit(a.Limit.ExpU, a.Limit.DisplayUnit))
		d.paragraph(a.Name + ": " + d.words.with("sure-value", "u", u+" "+a.Limit.DisplayUnit, "k", fmt.Sprintf("k = %g", a.Limit.K), "p", probability(a.Limit.ProbabilityAbove)))
	}
}

func (d *document) whatCouldBeWrong() []string {
	items := []string{d.words.get("wrong-general")}
	clauses := map[string]bool{}
	for _, a := range d.in.Finding.Analytes {
		for _, c := range a.Checks {
			if strings.HasPrefix(c.Source, "from memory") {
				clauses[c.Clause] = true
			}
		}
	}
	if len(clauses) > 0 {
		items = append(items, d.words.with("wrong-memory", "n", fmt.Sprint(len(clauses))))
	}
	_, raised := failures(d.in.Finding)
	var names []string
	for _, c := range raised {
		if !contains(names, strings.ToLower(c.Title)) {
			names = append(names, strings.ToLower(c.Title))
		}
	}
	if len(names) > 0 {
		items = append(items, d.words.with("wrong-advisory", "list", strings.Join(names, "; ")))
	}
	return items
}

func contains(list []string, s string) bool {
	for _, x := range list {
		if x == s {
			return true
		}
	}
	return false
}
