package decision

import (
	"fmt"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
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
	c.Clause, c.Source = from.Clause, from.source()
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

// says sets the sentence: one for a check that passed, one for a check that failed.
func (c Check) says(passed, failed string) Check {
	c.Sentence = passed
	if c.Result == Failed {
		c.Sentence = failed
	}
	return c
}

// missing makes a check fail for want of information.
func (c Check) missing(sentence string) Check {
	c.Result, c.Missing, c.Sentence = Failed, true, sentence
	return c
}

// notApplicable says why a check is not applied.
func (c Check) notApplicable(sentence string) Check {
	c.Result, c.Sentence = NotApplicable, sentence
	return c
}

// within measures a value against a window and says so.
func (c Check) within(v *float64, w window, show shower, what string) Check {
	if v == nil {
		c.Low, c.High = show(w.shownLow(), 0), show(w.high, 0)
		return c.missing(fmt.Sprintf("%s could not be measured; accepted is %s to %s.", what, c.Low.Text, c.High.Text))
	}
	value, ends := apart(show, *v, w.shownLow(), w.high)
	d := w.distance(*v)
	c.Measured, c.Low, c.High, c.Distance = value, ends[0], ends[1], &d
	c = c.passIf(w.holds(*v))
	verb := "lies within"
	if c.Result == Failed {
		verb = "lies outside"
	}
	c.Sentence = fmt.Sprintf("%s is %s and %s %s to %s.", what, c.Measured.Text, verb, c.Low.Text, c.High.Text)
	return c
}

// atMost measures a value against an upper limit.
func (c Check) atMost(v *float64, limit float64, show shower, what string) Check {
	if v == nil {
		c.High = show(limit, 0)
		return c.missing(fmt.Sprintf("%s could not be measured; accepted is at most %s.", what, c.High.Text))
	}
	value, ends := apart(show, *v, limit)
	c.Measured, c.High = value, ends[0]
	if limit > 0 {
		d := 1 - *v/limit
		c.Distance = &d
	}
	c = c.passIf(*v <= limit)
	c.Sentence = fmt.Sprintf("%s is %s; accepted is at most %s.", what, c.Measured.Text, c.High.Text)
	return c
}

// atLeast measures a value against a lower limit.
func (c Check) atLeast(v *float64, limit float64, show shower, what string) Check {
	if v == nil {
		c.Low = show(limit, 0)
		return c.missing(fmt.Sprintf("%s could not be measured; accepted is at least %s.", what, c.Low.Text))
	}
	value, ends := apart(show, *v, limit)
	c.Measured, c.Low = value, ends[0]
	if limit > 0 {
		d := *v/limit - 1
		c.Distance = &d
	}
	c = c.passIf(*v >= limit)
	c.Sentence = fmt.Sprintf("%s is %s; accepted is at least %s.", what, c.Measured.Text, c.Low.Text)
	return c
}

// field is the pointer to a field of the record, or to what holds it where the field is absent.
func field(holder, name string, present bool) string {
	if present {
		return holder + "/" + name
	}
	return holder
}

// failedIDs lists the ids of checks that failed, the required ones and the advisory ones.
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

// methodOf returns what the method says of an analyte; consistent has made sure that it says something.
func methodOf(rec *evidence.Record, analyte string) *casefile.Analyte {
	for i := range rec.Method.Analytes {
		if rec.Method.Analytes[i].ID == analyte {
			return &rec.Method.Analytes[i]
		}
	}
	panic("decision: internal error: no analyte " + analyte + " in the method")
}
