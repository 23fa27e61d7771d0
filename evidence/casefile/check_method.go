package casefile

import (
	"fmt"
	"path"
	"slices"
	"strings"
)

// checkMethod looks at what method.yaml says about itself.
func (l *loader) checkMethod() {
	m := &l.folder.Method
	if m.Integration.SmoothingPoints%2 == 0 {
		l.inMethod("integration.smoothing_points", fmt.Sprint(m.Integration.SmoothingPoints), "an odd number", "")
	}
	if m.Batch.InternalStandardLow >= m.Batch.InternalStandardHigh {
		l.inMethod("batch.internal_standard_low", fmt.Sprint(m.Batch.InternalStandardLow), fmt.Sprintf("less than the upper limit, %g", m.Batch.InternalStandardHigh), "")
	}
	ids := map[string]bool{}
	once := func(key, id string) {
		if ids[id] {
			l.inMethod(key, quote(id)+" a second time", "an id that no other compound has", "")
		}
		ids[id] = true
	}
	standards := map[string]bool{}
	for i, s := range m.InternalStandards {
		key := fmt.Sprintf("internal_standards[%d]", i)
		once(key+".id", s.ID)
		standards[s.ID] = false
		l.transition(key+".transition", s.Transition)
	}
	for i, a := range m.Analytes {
		key := fmt.Sprintf("analytes[%d]", i)
		once(key+".id", a.ID)
		if _, ok := standards[a.InternalStandard]; !ok {
			l.inMethod(key+".internal_standard", quote(a.InternalStandard), "the id of one of the internal_standards", "")
		}
		standards[a.InternalStandard] = true
		l.transition(key+".quantifier", a.Quantifier)
		for j, q := range a.Qualifiers {
			l.transition(fmt.Sprintf("%s.qualifiers[%d]", key, j), q)
			if q == a.Quantifier || slices.Contains(a.Qualifiers[:j], q) {
				l.inMethod(fmt.Sprintf("%s.qualifiers[%d]", key, j), "a transition a second time", "each transition of an analyte once", "")
			}
		}
		l.quantification(key, a)
	}
	for i, s := range m.InternalStandards {
		if !standards[s.ID] {
			l.inMethod(fmt.Sprintf("internal_standards[%d].id", i), quote(s.ID)+", which no analyte uses", "an internal standard of some analyte", "")
		}
	}
	for i, t := range m.Tables {
		if _, err := path.Match(t.Files, ""); err != nil {
			l.inMethod(fmt.Sprintf("tables[%d].files", i), quote(t.Files), "a path pattern such as raw/*.csv", "")
		}
		if t.Separator == "comma" && t.DecimalMark == "comma" {
			l.inMethod(fmt.Sprintf("tables[%d].decimal_mark", i), "comma, which is the separator too", "point", "")
		}
	}
}

// transition needs its ions, or the name that the file gives the trace.
func (l *loader) transition(key string, t Transition) {
	if t.TraceID == "" && (t.PrecursorMZ == 0 || t.ProductMZ == 0) {
		l.inMethod(key, "neither both ions nor a trace_id", "precursor and product, or trace_id", "")
	}
}

// quantification: a threshold is compared with a value, and a value needs a calibration and an uncertainty.
func (l *loader) quantification(key string, a Analyte) {
	if a.Kind == Threshold && a.Calibration == nil {
		l.inMethod(key, "no calibration", "a calibration, as the analyte is compared with a threshold", "")
	}
	if a.Kind == Threshold && a.Uncertainty == nil {
		l.inMethod(key, "no uncertainty", "an uncertainty, as the analyte is compared with a threshold", "")
	}
	if a.Uncertainty == nil {
		return
	}
	for i, c := range a.Uncertainty.Components {
		if (c.Relative == nil) == (c.Absolute == nil) {
			l.inMethod(fmt.Sprintf("%s.uncertainty.components[%d]", key, i), "a component with two values or none", "either relative or absolute", "")
		}
	}
	if a.Uncertainty.Repeatability == "none" && len(a.Uncertainty.Components) == 0 {
		l.inMethod(key+".uncertainty", "no component at all", "repeatability: aliquots, or components that hold it", "")
	}
}

func (l *loader) inSequence(row Injection, name, got, want, hint string) {
	l.problems = append(l.problems, Problem{File: l.folder.Case.SequenceFile, Line: row.Line, Column: row.column(name), Key: name, Got: got, Want: want, Hint: hint})
}

// checkSequence looks at the rows together, and at the method and the case beside them.
func (l *loader) checkSequence() {
	l.nominalColumns()
	files, ids := map[string]string{}, map[string]bool{}
	rows := l.folder.Injections
	for i, row := range rows {
		folded := strings.ToLower(row.File)
		if other, twice := files[folded]; twice {
			l.inSequence(row, "file", quote(row.File)+", which injection "+other+" has too", "a file of its own for each injection", "")
		}
		files[folded] = row.ID
		if ids[row.ID] {
			l.inSequence(row, "injection", quote(row.ID)+" a second time", "each id once", "")
		}
		ids[row.ID] = true
		if i > 0 && !at(row.AcquiredAt).After(at(rows[i-1].AcquiredAt)) {
			l.inSequence(row, "acquired", quote(row.AcquiredAt), "a time after "+rows[i-1].AcquiredAt+", that of the injection before", "the rows stand in the order of acquisition")
		}
		if !slices.ContainsFunc(l.folder.Case.People, func(p Person) bool { return p.Code == row.Operator }) {
			l.inSequence(row, "operator", quote(row.Operator), "the code of one of the people in "+CaseFile, "")
		}
		l.checkRole(row)
	}
	for _, a := range l.folder.Method.Analytes {
		l.levels(a)
	}
	if !slices.ContainsFunc(rows, func(r Injection) bool { return r.Role == SampleAliquot }) {
		l.problems = append(l.problems, Problem{File: l.folder.Case.SequenceFile, Line: 1, Got: "no row with the role sample", Want: "the sample's aliquots"})
	}
}

func (l *loader) nominalColumns() {
	for _, c := range l.header.nominal {
		if !slices.ContainsFunc(l.folder.Method.Analytes, func(a Analyte) bool { return a.ID == c.analyte }) {
			l.problems = append(l.problems, Problem{File: l.folder.Case.SequenceFile, Line: 1, Key: l.header.names[c.index], Got: quote(c.analyte), Want: "an analyte of the method: " + analyteIDs(l.folder.Method)})
		}
	}
}

func (l *loader) checkRole(row Injection) {
	switch row.Role {
	case Calibrator, Control:
		for _, a := range l.folder.Method.Analytes {
			l.checkNominal(row, a)
		}
	case Excluded:
		if row.Note == "" {
			l.inSequence(row, "note", "nothing", "the reason why the injection is excluded", "")
		}
	case SampleAliquot:
		if row.SampleCode != l.folder.Case.Sample.Code {
			l.inSequence(row, "sample_code", quote(row.SampleCode), quote(l.folder.Case.Sample.Code)+", the code of the sample in "+CaseFile, "")
		}
		fallthrough
	default:
		for _, n := range row.Nominal {
			if n.NGPerML > 0 {
				l.inSequence(row, "nominal "+n.Analyte, fmt.Sprintf("%g ng/mL in a row of role %s", n.NGPerML, row.Role), "an empty field: only calibrators and controls have nominal amounts", "")
			}
		}
	}
}

func (l *loader) checkNominal(row Injection, a Analyte) {
	i := slices.IndexFunc(row.Nominal, func(n Nominal) bool { return n.Analyte == a.ID })
	name := "nominal " + a.ID
	switch {
	case i < 0 && row.Role == Calibrator && a.Calibration == nil:
	case i < 0:
		l.inSequence(row, name, "nothing", fmt.Sprintf("the amount of %s in this %s", a.ID, row.Role), "0 where it holds none")
	case row.Role == Calibrator && a.Calibration != nil && a.Calibration.Weighting != "none" && row.Nominal[i].NGPerML <= 0:
		l.inSequence(row, name, fmt.Sprintf("%g", row.Nominal[i].NGPerML), fmt.Sprintf("an amount above zero, as the weights are %s", a.Calibration.Weighting),
			"a zero calibrator has the role zero and is not fitted")
	}
}

// levels: a line with a test of its fit needs three different amounts.
func (l *loader) levels(a Analyte) {
	if a.Calibration == nil {
		return
	}
	amounts := map[float64]bool{}
	for _, row := range l.folder.Injections {
		for _, n := range row.Nominal {
			if row.Role == Calibrator && n.Analyte == a.ID {
				amounts[n.NGPerML] = true
			}
		}
	}
	if len(amounts) < 3 {
		l.problems = append(l.problems, Problem{File: l.folder.Case.SequenceFile, Line: 1, Key: "nominal " + a.ID, Got: fmt.Sprintf("calibrators at %d different amounts", len(amounts)), Want: "at least three"})
	}
}
