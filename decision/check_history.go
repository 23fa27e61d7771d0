package decision

import "fmt"

// history: where the case brings the controls of earlier batches along, the rules of control charts are applied to those of this batch.
func (j *judge) history() {
	h := j.rec.History
	if h == nil {
		return
	}
	c := j.startCase("control-history", "Controls beside those of earlier batches", false, "/control_history/judgement").
		custom("control charts: warning limits of 2 s, action limits of 3 s, runs and drift").passIf(len(h.Judgement.Signals) == 0)
	switch n := len(h.Judgement.Signals); {
	case len(h.Judgement.Results) == 0:
		c = c.notApplicable("No control of this batch has a chart.")
	case n == 0:
		c.Sentence = fmt.Sprintf("The %d controls of this batch lie on the charts of earlier batches without a signal.", len(h.Judgement.Results))
	default:
		x := h.Judgement.Signals[0]
		c.Sentence = fmt.Sprintf("The controls of this batch give %s on the charts of earlier batches; the first, by rule %s: %s.", plural(n, "signal"), x.Rule, x.Text)
	}
	j.add(c)
}
