package casefile

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/units"
)

// inSequence adds a problem at a field of a row.
func (l *loader) inSequence(row Injection, name, got, want, hint string) {
	l.problems = append(l.problems, Problem{File: l.folder.Case.SequenceFile, Line: row.Line, Column: row.columns[name], Key: name, Got: got, Want: want, Hint: hint})
}

// inHeader adds a problem at the name of a column.
func (l *loader) inHeader(name, got, want, hint string) {
	l.problems = append(l.problems, Problem{File: l.folder.Case.SequenceFile, Line: l.header.line, Column: max(1, l.header.places[name]), Key: name, Got: got, Want: want, Hint: hint})
}

// checkRows looks at the rows together: each injection once, with a file of its own, in order of time.
func (l *loader) checkRows() {
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
		if row.Role == Excluded && row.Note == "" {
			l.inSequence(row, "note", "nothing", "the reason why the injection is excluded", "")
		}
		if row.Role == Calibrator || row.Role == Control || row.Role == Excluded {
			continue
		}
		for _, n := range row.Nominal {
			if n.NGPerML > 0 {
				l.inSequence(row, "nominal "+n.Analyte, written(units.Concentration, n.NGPerML, "ng/mL")+" in a row of the role "+string(row.Role), "an empty field: only calibrators and controls have nominal amounts", "")
			}
		}
	}
	if !slices.ContainsFunc(rows, func(r Injection) bool { return r.Role == SampleAliquot }) {
		l.inHeader("role", "no row with the role sample", "the sample's aliquots", "")
	}
}

// checkRowsOfCase: operators are people of the case, and the sample is the case's, acquired after it was received.
func (l *loader) checkRowsOfCase() {
	c := &l.folder.Case
	codes := c.codes()
	for _, row := range l.folder.Injections {
		if !slices.Contains(codes, row.Operator) {
			l.inSequence(row, "operator", quote(row.Operator), "the code of one of the people in "+CaseFile+": "+strings.Join(codes, ", "), strictyaml.Suggest(row.Operator, codes))
		}
		if row.Role != SampleAliquot {
			continue
		}
		if row.SampleCode != c.Sample.Code {
			l.inSequence(row, "sample_code", quote(row.SampleCode), quote(c.Sample.Code)+", the code of the sample in "+CaseFile, "")
		}
		if at(row.AcquiredAt).Before(at(c.Sample.ReceivedAt)) {
			l.inSequence(row, "acquired", quote(row.AcquiredAt), "a time after "+c.Sample.ReceivedAt+", when the sample was received", "")
		}
	}
}

// checkNominals: calibrators and controls say how much they hold of the analytes, and of no others.
func (l *loader) checkNominals() {
	ids := l.folder.Method.analyteIDs()
	for _, c := range l.header.nominal {
		if !slices.Contains(ids, c.analyte) {
			l.inHeader("nominal "+c.analyte, quote(c.analyte), "an analyte of the method: "+strings.Join(ids, ", "), strictyaml.Suggest(c.analyte, ids))
		}
	}
	for _, a := range l.folder.Method.Analytes {
		needed := slices.ContainsFunc(l.folder.Injections, func(r Injection) bool {
			return r.Role == Control || r.Role == Calibrator && a.Calibration != nil
		})
		hasColumn := slices.ContainsFunc(l.header.nominal, func(c nominalColumn) bool { return c.analyte == a.ID })
		if needed && !hasColumn {
			l.inHeader("nominal "+a.ID, "no such column", "a column nominal "+a.ID+" [ng/mL], as there are calibrators or controls", "")
			continue
		}
		for _, row := range l.folder.Injections {
			if row.Role == Control || row.Role == Calibrator {
				l.checkNominal(row, a)
			}
		}
		l.levels(a)
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
		l.inSequence(row, name, written(units.Concentration, row.Nominal[i].NGPerML, "ng/mL"), fmt.Sprintf("an amount above zero, as the weights are %s", a.Calibration.Weighting),
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
		l.inHeader("nominal "+a.ID, fmt.Sprintf("calibrators at %d different amounts", len(amounts)), "at least three", "")
	}
}
