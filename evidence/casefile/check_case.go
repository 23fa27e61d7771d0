package casefile

import (
	"fmt"
	"path"
	"slices"
	"strings"
	"time"
)

// checkCase looks at what case.yaml says about itself and about the method.
func (l *loader) checkCase() {
	c := &l.folder.Case
	if at(c.Sample.ReceivedAt).Before(at(c.Sample.CollectedAt)) {
		l.inCase("sample.received", quote(c.Sample.ReceivedAt), "a time after "+c.Sample.CollectedAt+", when it was collected", "")
	}
	var codes []string
	for i, p := range c.People {
		if slices.Contains(codes, p.Code) {
			l.inCase(fmt.Sprintf("people[%d].code", i), quote(p.Code)+" a second time", "each code once", "")
		}
		codes = append(codes, p.Code)
	}
	l.person("initial_test.by", func() string {
		if c.InitialTest == nil {
			return ""
		}
		return c.InitialTest.By
	}())
	for i, s := range c.Signatories {
		l.person(fmt.Sprintf("signatories[%d].person", i), s.Person)
		if slices.Contains(c.Signatories[:i], s) {
			l.inCase(fmt.Sprintf("signatories[%d]", i), s.Person+" "+s.Meaning+" a second time", "each once", "")
		}
	}
	for i, d := range c.Deviations {
		l.person(fmt.Sprintf("deviations[%d].approved_by", i), d.ApprovedBy)
	}
	for i, id := range c.Request.Analytes {
		key := fmt.Sprintf("request.analytes[%d]", i)
		if !slices.ContainsFunc(l.folder.Method.Analytes, func(a Analyte) bool { return a.ID == id }) {
			l.inCase(key, quote(id), "an analyte of the method: "+analyteIDs(l.folder.Method), "")
		}
		if slices.Contains(c.Request.Analytes[:i], id) {
			l.inCase(key, quote(id)+" a second time", "each analyte once", "")
		}
	}
	if c.Sample.Matrix != l.folder.Method.Matrix {
		l.inCase("sample.matrix", quote(c.Sample.Matrix), quote(l.folder.Method.Matrix)+", the matrix of the method", "")
	}
}

// person refuses a code that is not among the people; an empty one is left to the binder.
func (l *loader) person(key, code string) {
	if code == "" {
		return
	}
	var codes []string
	for _, p := range l.folder.Case.People {
		if p.Code == code {
			return
		}
		codes = append(codes, p.Code)
	}
	l.inCase(key, quote(code), "the code of one of the people: "+strings.Join(codes, ", "), "everyone who acted in the case is listed under people")
}

// checkCustody follows each item from hand to hand.
func (l *loader) checkCustody() {
	c := &l.folder.Case
	holder := map[string]string{}
	for i, e := range c.Custody {
		key := fmt.Sprintf("custody[%d]", i)
		if i > 0 && at(e.At).Before(at(c.Custody[i-1].At)) {
			l.inCase(key+".at", quote(e.At), "a time not before "+c.Custody[i-1].At+", that of the event above", "")
		}
		l.person(key+".from", e.From)
		l.person(key+".to", e.To)
		if had := holder[e.Item]; e.From != "" && had != "" && e.From != had {
			l.inCase(key+".from", quote(e.From), quote(had)+", who holds "+e.Item+" since the event before", "every hand-over is an event of its own")
		}
		if e.To != "" {
			holder[e.Item] = e.To
		}
	}
}

// checkManual looks at integrations set by hand.
func (l *loader) checkManual() {
	for i, m := range l.folder.Case.Manual {
		key := fmt.Sprintf("manual_integrations[%d]", i)
		row := slices.IndexFunc(l.folder.Injections, func(r Injection) bool { return r.ID == m.Injection })
		if row < 0 || l.folder.Injections[row].Role == Excluded {
			l.inCase(key+".injection", quote(m.Injection), "the id of an injection of the sequence that is not excluded", "")
		}
		if traces := l.tracesOf(m.Compound); traces == nil {
			l.inCase(key+".compound", quote(m.Compound), "the id of an analyte or internal standard of the method", "")
		} else if !slices.Contains(traces, m.Trace) {
			l.inCase(key+".trace", quote(m.Trace), "one of: "+strings.Join(traces, ", "), "")
		}
		if m.EndMin <= m.StartMin {
			l.inCase(key+".end", fmt.Sprintf("%g min", m.EndMin), fmt.Sprintf("a time after %g min, where it starts", m.StartMin), "")
		}
		l.person(key+".by", m.By)
		l.person(key+".approved_by", m.ApprovedBy)
		if m.By == m.ApprovedBy {
			l.inCase(key+".approved_by", quote(m.ApprovedBy), "another person than the one who set the limits", "")
		}
		for _, other := range l.folder.Case.Manual[:i] {
			if other.Injection == m.Injection && other.Compound == m.Compound && other.Trace == m.Trace {
				l.inCase(key, "a second integration of the same peak", "one for each peak", "keep the one that counts, and tell of the other in its reason")
			}
		}
	}
}

// tracesOf names the traces of a compound, or nil for one that the method does not have.
func (l *loader) tracesOf(compound string) []string {
	for _, s := range l.folder.Method.InternalStandards {
		if s.ID == compound {
			return []string{"internal-standard"}
		}
	}
	for _, a := range l.folder.Method.Analytes {
		if a.ID == compound {
			names := []string{"quantifier"}
			for i := range a.Qualifiers {
				names = append(names, fmt.Sprintf("qualifier-%d", i+1))
			}
			return names
		}
	}
	return nil
}

// checkFiles compares the folder with what the case and the sequence name.
func (l *loader) checkFiles() error {
	present, err := listFiles(l.fsys)
	if err != nil {
		return err
	}
	c := &l.folder.Case
	known := []string{CaseFile, c.MethodFile, c.SequenceFile}
	for i, d := range c.Documents {
		known = append(known, d.File)
		if d.File != "" && !slices.Contains(present, d.File) {
			l.inCase(fmt.Sprintf("documents[%d].file", i), quote(d.File)+", which is not there", "the path of a file in the case folder", "")
		}
	}
	if slices.Contains(present, c.Criteria) {
		known = append(known, c.Criteria)
	}
	for _, row := range l.folder.Injections {
		known = append(known, row.File)
		if row.File != "" && !slices.Contains(present, row.File) {
			l.inSequence(row, "file", quote(row.File)+", which is not there", "the path of a file in the case folder", "")
		}
	}
	for _, p := range present {
		if slices.Contains(known, p) {
			continue
		}
		hint := "list it under documents in " + CaseFile + ", or take it out of the folder"
		if path.Dir(p) == "raw" {
			hint = "every acquired file has its row in the sequence; one that is not used has the role excluded and a note with the reason"
		}
		l.problems = append(l.problems, Problem{File: p, Got: "a file that nothing in the case names", Want: "every file of the folder to be named", Hint: hint})
	}
	return nil
}

func at(text string) time.Time {
	t, _ := time.Parse(time.RFC3339, text) // the binder has checked it
	return t
}

func quote(s string) string { return fmt.Sprintf("%q", s) }

func analyteIDs(m Method) string {
	var ids []string
	for _, a := range m.Analytes {
		ids = append(ids, a.ID)
	}
	return strings.Join(ids, ", ")
}
