package validation

import (
	"fmt"
	"math"
	"slices"
)

// A Rule is a control rule, by the name that its publication gives it.
type Rule string

// The rules. The first six are of J. O. Westgard, P. L. Barry, M. R. Hunt, T. Groth, Clin. Chem. 27 (1981) 493-501; the limits of the
// moving average are of S. W. Roberts, Technometrics 1 (1959) 239-250 (both from memory).
const (
	Rule12s  Rule = "1-2s" // a result beyond 2 s: a warning
	Rule13s  Rule = "1-3s" // a result beyond 3 s
	Rule22s  Rule = "2-2s" // two results after each other beyond 2 s on the same side; or two levels of one batch
	RuleR4s  Rule = "R-4s" // two results of one batch, one above 2 s and one below -2 s
	Rule41s  Rule = "4-1s" // four results after each other beyond 1 s on the same side
	Rule10x  Rule = "10-x" // ten results after each other on the same side of the centre
	RuleEWMA Rule = "moving-average"
)

// Warns tells whether a rule asks for attention only.
func (r Rule) Warns() bool { return r == Rule12s }

// Source is where a rule was published.
func (r Rule) Source() string {
	if r == RuleEWMA {
		return "S. W. Roberts, Technometrics 1 (1959) 239-250 (from memory)"
	}
	return "J. O. Westgard et al., Clin. Chem. 27 (1981) 493-501 (from memory)"
}

// A Signal is a rule that a result breaks, with the results that it takes.
type Signal struct {
	Rule    Rule     `json:"rule"`
	Warning bool     `json:"warning"` // otherwise the rule asks for action
	Source  string   `json:"source"`
	Analyte string   `json:"analyte,omitempty"`
	Batch   string   `json:"batch"`
	Levels  []string `json:"levels"`
	Lines   []int    `json:"lines"` // of the table
	Text    string   `json:"text"`
}

func (c *Chart) signal(rule Rule, points []Point, text string) Signal {
	s := Signal{Rule: rule, Warning: rule.Warns(), Source: rule.Source(), Analyte: c.Analyte, Batch: points[len(points)-1].Batch, Levels: []string{c.Level}, Text: text}
	for _, p := range points {
		s.Lines = append(s.Lines, p.Line)
	}
	return s
}

// signals applies the rules within one level to the points from index first on; those before count as what went before.
func (c *Chart) signals(points []Point, first int) []Signal {
	var used []Point // those that are not excluded
	var found []Signal
	for i, p := range points {
		if p.Excluded != "" {
			continue
		}
		used = append(used, p)
		if i < first {
			continue
		}
		z := math.Abs(p.Z)
		switch {
		case z > 3:
			found = append(found, c.signal(Rule13s, []Point{p}, fmt.Sprintf("%.2f s from the centre", p.Z)))
		case z > 2:
			found = append(found, c.signal(Rule12s, []Point{p}, fmt.Sprintf("%.2f s from the centre", p.Z)))
		}
		for _, run := range []struct {
			rule  Rule
			n     int
			limit float64
		}{{Rule22s, 2, 2}, {Rule41s, 4, 1}, {Rule10x, 10, 0}} {
			if last := tail(used, run.n); sameSide(last, run.n, run.limit) {
				found = append(found, c.signal(run.rule, last, fmt.Sprintf("%d results after each other beyond %g s on one side", run.n, run.limit)))
			}
		}
		for j := len(used) - 2; j >= 0 && used[j].Batch == p.Batch; j-- {
			if opposite(used[j].Z, p.Z) {
				found = append(found, c.signal(RuleR4s, []Point{used[j], p}, fmt.Sprintf("%.2f s and %.2f s in one batch", used[j].Z, p.Z)))
				break
			}
		}
		if a := p.Average; a != nil && (a.Value > a.Limits.High || a.Value < a.Limits.Low) {
			found = append(found, c.signal(RuleEWMA, []Point{p}, fmt.Sprintf("the moving average is %.4g, its limits %.4g and %.4g", a.Value, a.Limits.Low, a.Limits.High)))
		}
	}
	return found
}

func tail(points []Point, n int) []Point { return points[max(0, len(points)-n):] }

// sameSide tells whether there are n points, all beyond the limit on one side.
func sameSide(points []Point, n int, limit float64) bool {
	return len(points) == n && (!slices.ContainsFunc(points, func(p Point) bool { return !(p.Z > limit) }) ||
		!slices.ContainsFunc(points, func(p Point) bool { return !(p.Z < -limit) }))
}

func opposite(a, b float64) bool { return a > 2 && b < -2 || a < -2 && b > 2 }

// A Judgement is what the charts say of the controls of one more batch.
type Judgement struct {
	Batch   string    `json:"batch"`
	Results []Charted `json:"results"`
	Signals []Signal  `json:"signals,omitempty"`
	// NotCharted are controls that have no chart.
	NotCharted []string `json:"not_charted,omitempty"`
}

// A Charted is a result of the new batch at its place on a chart.
type Charted struct {
	Analyte string `json:"analyte,omitempty"`
	Level   string `json:"level"`
	Point
}

// Judge places the controls of a new batch on the charts and applies the rules to them, with the history before them, and across the
// levels of an analyte. Limits stay as they are. All controls must be of one batch that the history does not have.
func Judge(charts []Chart, batch []Control) (Judgement, error) {
	if len(batch) == 0 {
		return Judgement{}, fmt.Errorf("a batch without controls")
	}
	j := Judgement{Batch: batch[0].Batch}
	placed := make([][]Control, len(charts))
	for _, c := range batch {
		if c.Batch != j.Batch {
			return Judgement{}, fmt.Errorf("controls of the batches %q and %q: want those of one", j.Batch, c.Batch)
		}
		if math.IsNaN(c.Found) || math.IsInf(c.Found, 0) {
			return Judgement{}, fmt.Errorf("control %q: %g, want a finite value", c.Level, c.Found)
		}
		i := slices.IndexFunc(charts, func(h Chart) bool { return h.Analyte == c.Analyte && h.Level == c.Level })
		if i < 0 {
			j.NotCharted = append(j.NotCharted, c.Analyte+" "+c.Level)
			continue
		}
		placed[i] = append(placed[i], c)
	}
	fresh := make([][]Point, len(charts))
	for i := range charts {
		c := &charts[i]
		if slices.ContainsFunc(c.Points, func(p Point) bool { return p.Batch == j.Batch }) {
			return Judgement{}, fmt.Errorf("batch %q is in the history already: its limits would be judged by itself", j.Batch)
		}
		fresh[i] = c.place(c.Points, placed[i])
		for _, p := range fresh[i] {
			if !finite(p.Z) {
				return Judgement{}, fmt.Errorf("control %q: %g is too far from the centre for a number", c.Level, p.Found)
			}
			j.Results = append(j.Results, Charted{c.Analyte, c.Level, p})
		}
		j.Signals = append(j.Signals, c.signals(slices.Concat(c.Points, fresh[i]), len(c.Points))...)
	}
	j.across(charts, fresh)
	return j, nil
}

// across applies the rules that take two levels of one analyte in one batch.
func (j *Judgement) across(charts []Chart, fresh [][]Point) {
	for a := range charts {
		for b := a + 1; b < len(charts); b++ {
			if charts[a].Analyte != charts[b].Analyte {
				continue
			}
			for _, p := range fresh[a] {
				for _, q := range fresh[b] {
					rule := Rule("")
					switch {
					case p.Excluded != "" || q.Excluded != "":
					case opposite(p.Z, q.Z):
						rule = RuleR4s
					case min(p.Z, q.Z) > 2 || max(p.Z, q.Z) < -2:
						rule = Rule22s
					}
					if rule != "" {
						s := charts[a].signal(rule, []Point{p, q}, fmt.Sprintf("%.2f s and %.2f s at two levels of one batch", p.Z, q.Z))
						s.Levels = []string{charts[a].Level, charts[b].Level}
						j.Signals = append(j.Signals, s)
					}
				}
			}
		}
	}
}
