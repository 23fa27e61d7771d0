package decision

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence"
	"assaywrit/evidence/units"
)

// sentence says the outcome in plain words.
func sentence(rec *evidence.Record, f *AnalyteFinding, caseChecks []Check) string {
	sample := "the sample " + rec.Case.Sample.Code
	switch f.Outcome {
	case Identified:
		return fmt.Sprintf("%s was identified in %s: every identification criterion is met in every aliquot.", f.Name, sample)
	case NotIdentified:
		if t := titles(f.Checks, "identification"); t != "peak of the quantifier" {
			return fmt.Sprintf("%s was not identified in %s; criteria not met: %s.", f.Name, sample, t)
		}
		return fmt.Sprintf("%s was not identified in %s: no peak was found where it elutes.", f.Name, sample)
	case AboveLimit, WithinGuardBand, BelowThreshold:
		return compared(f, sample)
	}
	return fmt.Sprintf("No finding can be made on %s in %s; required checks that do not hold: %s.", f.Name, sample, titles(append(slices.Clone(caseChecks), f.Checks...), ""))
}

// titles names the required checks that failed, each title once, the first three of them.
func titles(checks []Check, group string) string {
	var list []string
	for _, c := range checks {
		if c.Result != Failed || !c.Required || group != "" && c.Group != group {
			continue
		}
		if t := strings.ToLower(c.Title[:1]) + c.Title[1:]; !slices.Contains(list, t) {
			list = append(list, t)
		}
	}
	if len(list) > 3 {
		list = append(list[:3], fmt.Sprintf("and %d more", len(list)-3))
	}
	return strings.Join(list, ", ")
}

// compared says where the value lies.
func compared(f *AnalyteFinding, sample string) string {
	l := f.Limit
	unit := " " + l.DisplayUnit
	show := func(v float64, more int) *Figure {
		return &Figure{Text: Text(convert(v, l.DisplayUnit), 4+more)}
	}
	v, u := TextWithU(convert(l.Value, l.DisplayUnit), convert(l.ExpU, l.DisplayUnit))
	decisive := l.DecisionLimit
	if f.Outcome == BelowThreshold {
		decisive = l.Threshold
	}
	value, ends := apart(show, l.Value, decisive, l.Threshold)
	if v == ends[0].Text && l.Value != decisive {
		v = value.Text // rounded to its uncertainty it would read as the limit itself
	}
	text := fmt.Sprintf("%s was identified in %s at %s%s ± %s%s (expanded uncertainty, k = %g), %s of %s%s", f.Name, sample, v, unit, u, unit, l.K, place(l, f.Outcome), ends[0].Text, unit)
	if decisive != l.Threshold {
		text += fmt.Sprintf(" (threshold %s%s)", ends[1].Text, unit)
	}
	return text + "."
}

// place says in words where a value lies. Without a guard band there is a threshold only.
func place(l *Limit, o Outcome) string {
	name := "decision limit"
	if l.DecisionLimit == l.Threshold {
		name = "threshold"
	}
	switch {
	case o == AboveLimit && l.Strict:
		return "above the " + name
	case o == AboveLimit:
		return "at or above the " + name
	case o == WithinGuardBand && l.Strict:
		return "above the threshold, but not above the decision limit"
	case o == WithinGuardBand:
		return "at or above the threshold, but below the decision limit"
	case l.Strict:
		return "not above the threshold"
	}
	return "below the threshold"
}

// convert gives a concentration in another unit than ng/mL, for people.
func convert(v float64, unit string) float64 {
	x, err := units.Concentration.In(v, unit)
	if err != nil {
		return v
	}
	return x
}
