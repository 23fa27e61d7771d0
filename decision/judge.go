package decision

import (
	"fmt"

	"assaywrit/evidence"
)

// A judge applies one criteria set to one record, and gathers the checks.
type judge struct {
	rec    *evidence.Record
	set    *Set
	checks []Check
}

// Sources of a check that is not in the criteria set.
const (
	fromMethod = "method"
	practice   = "common practice, no source"
)

func (j *judge) add(c Check) Check {
	if c.Evidence == nil {
		c.Evidence = []string{}
	}
	j.checks = append(j.checks, c)
	return c
}

// cited fills where a rule comes from; a value from memory says so wherever it is applied.
func (c Check) cited(from Cite) Check {
	c.Clause, c.Source = from.Clause, from.Tag
	if from.Tag == "from memory" {
		c.Source = "from memory; check against the edition in force"
	}
	return c
}

// byMethod fills that a rule is the method's own.
func (c Check) byMethod(rec *evidence.Record, section string) Check {
	c.Clause, c.Source = fmt.Sprintf("%s, version %s: %s", rec.Method.ID, rec.Method.Version, section), fromMethod
	return c
}

// custom fills that a rule is a fact of the trade.
func (c Check) custom(text string) Check {
	c.Clause, c.Source = text, practice
	return c
}

// passIf sets the result.
func (c Check) passIf(ok bool) Check {
	c.Result = Failed
	if ok {
		c.Result = Passed
	}
	return c
}

// figure is a number with its text for people.
func figure(v float64, unit string, digits int) *Figure {
	text := Text(v, digits)
	if unit != "" {
		text += " " + unit
	}
	return &Figure{Value: v, Unit: unit, Text: text}
}

// percent is a fraction shown in per cent.
func percent(v float64) *Figure {
	return &Figure{Value: v, Unit: "1", Text: Text(float64(v*100), 3) + " %"}
}

// within measures a value against a window and says so.
func (c Check) within(v *float64, w window, show func(float64) *Figure, what string) Check {
	c.Low, c.High = show(w.low), show(w.high)
	if v == nil {
		c.Result = Failed
		c.Sentence = fmt.Sprintf("%s could not be measured; accepted is %s to %s.", what, c.Low.Text, c.High.Text)
		return c
	}
	d := w.distance(*v)
	c.Measured, c.Distance = show(*v), &d
	c = c.passIf(w.holds(*v))
	verb := "lies within"
	if c.Result == Failed {
		verb = "lies outside"
	}
	c.Sentence = fmt.Sprintf("%s is %s and %s %s to %s.", what, c.Measured.Text, verb, c.Low.Text, c.High.Text)
	return c
}

// atMost measures a value against an upper limit.
func (c Check) atMost(v *float64, limit float64, show func(float64) *Figure, what string) Check {
	c.High = show(limit)
	if v == nil {
		c.Result = Failed
		c.Sentence = fmt.Sprintf("%s could not be measured; accepted is at most %s.", what, c.High.Text)
		return c
	}
	c.Measured = show(*v)
	if limit > 0 {
		d := 1 - *v/limit
		c.Distance = &d
	}
	c = c.passIf(*v <= limit)
	c.Sentence = fmt.Sprintf("%s is %s; accepted is at most %s.", what, c.Measured.Text, c.High.Text)
	return c
}

// atLeast measures a value against a lower limit.
func (c Check) atLeast(v *float64, limit float64, show func(float64) *Figure, what string) Check {
	c.Low = show(limit)
	if v == nil {
		c.Result = Failed
		c.Sentence = fmt.Sprintf("%s could not be measured; accepted is at least %s.", what, c.Low.Text)
		return c
	}
	c.Measured = show(*v)
	if limit > 0 {
		d := *v/limit - 1
		c.Distance = &d
	}
	c = c.passIf(*v >= limit)
	c.Sentence = fmt.Sprintf("%s is %s; accepted is at least %s.", what, c.Measured.Text, c.Low.Text)
	return c
}

func count(v float64) *Figure   { return figure(v, "", 12) }
func ratio(v float64) *Figure   { return figure(v, "", 3) }
func minutes(v float64) *Figure { return &Figure{Value: v, Unit: "min", Text: fixed(v, 3) + " min"} }

// failed lists the ids of checks that failed, the required ones and the advisory ones.
func failedIDs(checks []Check) (required, advisory []string) {
	for _, c := range checks {
		switch {
		case c.Result != Failed:
		case c.Required:
			required = append(required, c.ID)
		default:
			advisory = append(advisory, c.ID)
		}
	}
	return required, advisory
}

// holds tells whether every required check passed.
func holds(checks []Check) bool {
	required, _ := failedIDs(checks)
	return len(required) == 0
}
