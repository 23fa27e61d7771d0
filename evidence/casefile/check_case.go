package casefile

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
)

// checkPeople: everyone who acts is listed, each code stands for one person, and nobody signs twice for the same.
func (l *loader) checkPeople() {
	c := &l.folder.Case
	for i, p := range c.People {
		if slices.ContainsFunc(c.People[:i], func(o Person) bool { return o.Code == p.Code }) {
			l.inCase(fmt.Sprintf("people[%d].code", i), quote(p.Code)+" a second time", "each code once", "")
		}
	}
	if c.InitialTest != nil {
		l.person("initial_test.by", c.InitialTest.By)
	}
	for i, s := range c.Signatories {
		l.person(fmt.Sprintf("signatories[%d].person", i), s.Person)
		if slices.Contains(c.Signatories[:i], s) {
			l.inCase(fmt.Sprintf("signatories[%d]", i), s.Person+" "+s.Meaning+" a second time", "each once", "")
		}
	}
	for i, d := range c.Deviations {
		l.person(fmt.Sprintf("deviations[%d].approved_by", i), d.ApprovedBy)
	}
	for i, m := range c.Manual {
		key := fmt.Sprintf("manual_integrations[%d]", i)
		l.person(key+".by", m.By)
		l.person(key+".approved_by", m.ApprovedBy)
		if m.By == m.ApprovedBy {
			l.inCase(key+".approved_by", quote(m.ApprovedBy), "another person than the one who set the limits", "")
		}
	}
}

// person refuses a code that is not among the people; an empty one stands for nobody.
func (l *loader) person(key, code string) {
	codes := l.folder.Case.codes()
	if code == "" || slices.Contains(codes, code) {
		return
	}
	hint := strictyaml.Suggest(code, codes)
	if hint == "" {
		hint = "everyone who acted in the case is listed under people"
	}
	l.inCase(key, quote(code), "the code of one of the people: "+strings.Join(codes, ", "), hint)
}

func (c *Case) codes() []string {
	codes := make([]string, len(c.People))
	for i, p := range c.People {
		codes[i] = p.Code
	}
	return codes
}

// checkTimes: nothing happens before what it needs.
func (l *loader) checkTimes() {
	c := &l.folder.Case
	if at(c.Sample.ReceivedAt).Before(at(c.Sample.CollectedAt)) {
		l.inCase("sample.received", quote(c.Sample.ReceivedAt), "a time after "+c.Sample.CollectedAt+", when it was collected", "")
	}
	if t := c.InitialTest; t != nil && at(t.At).Before(at(c.Sample.ReceivedAt)) {
		l.inCase("initial_test.at", quote(t.At), "a time after "+c.Sample.ReceivedAt+", when the sample was received", "")
	}
}

// checkRequest: what is asked for is what the method does.
func (l *loader) checkRequest() {
	c, m := &l.folder.Case, &l.folder.Method
	ids := m.analyteIDs()
	for i, id := range c.Request.Analytes {
		key := fmt.Sprintf("request.analytes[%d]", i)
		if !slices.Contains(ids, id) {
			l.inCase(key, quote(id), "an analyte of the method: "+strings.Join(ids, ", "), strictyaml.Suggest(id, ids))
		}
		if slices.Contains(c.Request.Analytes[:i], id) {
			l.inCase(key, quote(id)+" a second time", "each analyte once", "")
		}
	}
	if c.Sample.Matrix != m.Matrix {
		l.inCase("sample.matrix", quote(c.Sample.Matrix), quote(m.Matrix)+", the matrix of the method", "")
	}
}

func (m *Method) analyteIDs() []string {
	ids := make([]string, len(m.Analytes))
	for i, a := range m.Analytes {
		ids[i] = a.ID
	}
	return ids
}
