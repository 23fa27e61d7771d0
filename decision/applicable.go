package decision

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence/casefile"
)

// Applicable tells, before anything is evaluated, whether the set can decide what the case asks: a set for another matrix, or
// without a threshold for an analyte that is to be compared with one, cannot. Whether the set was in force is a check of the finding.
func Applicable(set *Set, c casefile.Case, m casefile.Method) casefile.Problems {
	var problems casefile.Problems
	if set.Matrix != c.Sample.Matrix {
		problems = append(problems, casefile.Problem{File: casefile.CaseFile, Key: "criteria", Got: fmt.Sprintf("the set %s for %s", set.ID, set.Matrix), Want: "a set for " + c.Sample.Matrix})
	}
	for _, a := range m.Analytes {
		if !slices.Contains(c.Request.Analytes, a.ID) {
			continue
		}
		switch {
		case a.Kind == casefile.Threshold && set.limitFor(a.ID) == nil:
			problems = append(problems, casefile.Problem{File: casefile.CaseFile, Key: "criteria", Got: fmt.Sprintf("the set %s, which has no threshold for %s", set.ID, a.ID),
				Want: "a set that has one; this one has thresholds for: " + limitNames(set), Hint: "the method calls the analyte one with a threshold (kind: threshold)"})
		case a.Kind == casefile.Presence && set.limitFor(a.ID) != nil:
			problems = append(problems, casefile.Problem{File: casefile.CaseFile, Key: "criteria", Got: fmt.Sprintf("the set %s, which compares %s with a threshold", set.ID, a.ID),
				Want: "a method that does (kind: threshold)", Hint: "the method reports the analyte by presence alone"})
		case a.Kind == casefile.Presence && !set.Presence.Any:
			problems = append(problems, casefile.Problem{File: casefile.CaseFile, Key: "criteria", Got: fmt.Sprintf("the set %s, which reports nothing by presence alone", set.ID),
				Want: "a set that does, or a method with a threshold for " + a.ID})
		}
	}
	return problems
}

func limitNames(set *Set) string {
	var names []string
	for _, l := range set.Limits {
		names = append(names, l.Analyte)
	}
	return strings.Join(names, ", ")
}
