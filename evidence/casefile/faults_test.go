package casefile

import (
	"fmt"
	"io/fs"
	"strings"
	"testing"
	"testing/fstest"
)

// A fault is one change to the small case and the one problem that it must give.
type fault struct {
	name    string
	changes []change
	file    string
	at      string // a text that stands once in the file, where the problem is; empty: the problem has no line
	key     string
	want    string // in the message or the hint
}

func one(file, old, replacement string) []change { return []change{{file, old, replacement}} }

var caseFaults = []fault{
	{"unknown version", one("case.yaml", "assaywrit-case/1", "assaywrit-case/2"), "case.yaml", "assaywrit-case/2", "format", "want assaywrit-case/1"},
	{"unknown key", one("case.yaml", "  ph: 6.1", "  ph: 6.1\n  colour: red"), "case.yaml", "colour: red", "sample.colour", "the unknown key"},
	{"key that is near", one("case.yaml", "  volume: 92 mL", "  volumen: 92 mL"), "case.yaml", "volumen: 92 mL", "sample.volumen", `did you mean "volume"?`},
	{"doubled key", one("case.yaml", "sequence: sequence.csv", "sequence: sequence.csv\nmethod: other.yaml"), "case.yaml", "method: other.yaml", "method", "a second time"},
	{"missing key", one("case.yaml", "  condition: sealed\n", ""), "case.yaml", "code: 4410\n", "sample.condition", "no such key"},
	{"volume without a unit", one("case.yaml", "92 mL", "92"), "case.yaml", "92", "sample.volume", "write the unit after the number"},
	{"volume as a concentration", one("case.yaml", "92 mL", "92 ng/mL"), "case.yaml", "92 ng/mL", "sample.volume", "want a volume"},
	{"pH out of range", one("case.yaml", "ph: 6.1", "ph: 14.5"), "case.yaml", "14.5", "sample.ph", "from 0 to 14"},
	{"specific gravity out of range", one("case.yaml", "1.012", "1012"), "case.yaml", "1012", "sample.specific_gravity", "from 1 to 1.1"},
	{"local date", one("case.yaml", "collected: 2026-03-14T16:20:00+01:00", "collected: 14.03.2026"), "case.yaml", "14.03.2026", "sample.collected", "write the year first"},
	{"no signatory", one("case.yaml", "signatories:\n  - {person: P-3, meaning: authorised}", "signatories: []"), "case.yaml", "[]", "signatories", "at least 1"},
	{"other meaning", one("case.yaml", "meaning: authorised", "meaning: approved"), "case.yaml", "approved}\ncustody", "signatories[0].meaning", "one of: analysed, reviewed, authorised"},
	{"no custody", one("case.yaml", smallCase[strings.Index(smallCase, "custody:"):strings.Index(smallCase, "initial_test:")], ""), "case.yaml", "format: assaywrit", "custody", "no such key"},

	{"received before it was collected", one("case.yaml", "received: 2026-03-16", "received: 2026-03-13"), "case.yaml", "2026-03-13", "sample.received", "when it was collected"},
	{"tested before it was received", one("case.yaml", "2026-03-17T15:40:00", "2026-03-15T15:40:00"), "case.yaml", "2026-03-15T15:40:00", "initial_test.at", "when the sample was received"},
	{"person twice", one("case.yaml", "certifying scientist}\n", "certifying scientist}\n  - {code: P-1, position: again}\n"), "case.yaml", "P-1, position: again", "people[3].code", "a second time"},
	{"unknown signatory", one("case.yaml", "person: P-3", "person: P-33"), "case.yaml", "P-33", "signatories[0].person", "listed under people"},
	{"signs twice", one("case.yaml", "meaning: authorised}", "meaning: authorised}\n  - { person: P-3, meaning: authorised}"), "case.yaml", "{ person: P-3", "signatories[1]", "a second time"},
	{"unknown tester", one("case.yaml", "by: P-2, result", "by: nobody, result"), "case.yaml", "nobody", "initial_test.by", "listed under people"},
	{"unknown approver of a deviation", one("case.yaml", "column changed, approved_by: P-3", "column changed, approved_by: someone"), "case.yaml", "someone", "deviations[0].approved_by", "one of the people: P-1, P-2, P-3"},

	{"custody out of order", one("case.yaml", "at: 2026-03-16T09:05:00", "at: 2026-03-14T09:05:00"), "case.yaml", "2026-03-14T09:05:00", "custody[1].at", "that of the event above"},
	{"unknown person in custody", one("case.yaml", "taken, to: P-2", "taken, to: P-9"), "case.yaml", "P-9", "custody[3].to", "one of the people"},
	{"gap in custody", one("case.yaml", "from: P-1, to: P-2", "from: P-3, to: P-2"), "case.yaml", "P-3, to: P-2", "custody[1].from", `want "P-1", who holds A bottle`},
	{"taken without being given", one("case.yaml", "received, from: P-1, to: P-2", "received, to: P-2"), "case.yaml", "P-2}\n  - {at: 2026-03-18T07:00", "custody[1].to", `"from: P-1" beside it`},
	{"given by one who no longer has it", one("case.yaml", "item: aliquot A1, event: taken, to: P-2", "item: A bottle, event: taken, from: P-2, to: P-3"), "case.yaml", "P-2, to: P-3", "custody[3].from", "nobody holds A bottle"},
	{"another spelling of an item", one("case.yaml", "item: A bottle, event: stored, from: P-2", "item: a  Bottle, event: stored, from: P-2"), "case.yaml", "a  Bottle", "custody[2].item", `want "A bottle", as above`},

	{"analyte that the method does not have", one("case.yaml", "[salbutamol]", "[salbutamoll]"), "case.yaml", "salbutamoll", "request.analytes[0]", `did you mean "salbutamol"?`},
	{"analyte twice", one("case.yaml", "[salbutamol]", "[salbutamol, salbutamol ]"), "case.yaml", "salbutamol ]", "request.analytes[1]", "a second time"},
	{"other matrix", one("case.yaml", "matrix: urine", "matrix: blood"), "case.yaml", "blood", "sample.matrix", `want "urine", the matrix of the method`},

	{"criteria that are not there", one("case.yaml", "built-in-set", "criteria/own.yaml"), "case.yaml", "criteria/own.yaml", "criteria", "which is not there"},
	{"criteria file that is not there", one("case.yaml", "built-in-set", "own.yml"), "case.yaml", "own.yml", "criteria", "assaywrit criteria NAME"},
	{"criteria outside", one("case.yaml", "built-in-set", "../own.yaml"), "case.yaml", "../own.yaml", "criteria", "copy it there"},

	{"integration of an unknown injection", one("case.yaml", "injection: S1", "injection: S9"), "case.yaml", "S9", "manual_integrations[0].injection", "an injection of the sequence"},
	{"integration of an excluded injection", one("case.yaml", "injection: S1", "injection: X1"), "case.yaml", "X1", "manual_integrations[0].injection", "not excluded"},
	{"integration of an unknown compound", one("case.yaml", "compound: salbutamol", "compound: salbutamoll"), "case.yaml", "salbutamoll", "manual_integrations[0].compound", `did you mean "salbutamol"?`},
	{"integration of a qualifier too many", one("case.yaml", "qualifier-1", "qualifier-3"), "case.yaml", "qualifier-3", "manual_integrations[0].trace", "quantifier, qualifier-1, qualifier-2"},
	{"integration of the wrong kind of trace", one("case.yaml", "qualifier-1", "internal-standard"), "case.yaml", "internal-standard", "manual_integrations[0].trace", "quantifier, qualifier-1, qualifier-2"},
	{"integration of no trace", one("case.yaml", "qualifier-1", "qualifier"), "case.yaml", "qualifier, start", "manual_integrations[0].trace", "text of the form"},
	{"integration that ends before it starts", one("case.yaml", "end: 2.4 min", "end: 2.1 min"), "case.yaml", "2.1 min", "manual_integrations[0].end", "got 2.1 min, want a time after 2.2 min"},
	{"integration of no width", one("case.yaml", "end: 2.4 min", "end: 132 s"), "case.yaml", "132 s", "manual_integrations[0].end", "after 2.2 min"},
	{"integration approved by oneself", one("case.yaml", "by: P-2, at", "by: P-3, at"), "case.yaml", "P-3}\ndocuments", "manual_integrations[0].approved_by", "another person"},
	{"integration by nobody known", one("case.yaml", "by: P-2, at", "by: P-22, at"), "case.yaml", "P-22", "manual_integrations[0].by", "one of the people"},
	{"integration not approved", one("case.yaml", ", approved_by: P-3}\ndocuments", "}\ndocuments"), "case.yaml", "{injection", "manual_integrations[0].approved_by", "no such key"},
	{"integration before the acquisition", one("case.yaml", "2026-03-18T12:00:00", "2026-03-18T06:00:00"), "case.yaml", "2026-03-18T06:00:00", "manual_integrations[0].at", "when the injection was acquired"},
	{"integration twice", one("case.yaml", "manual_integrations:\n", "manual_integrations:\n  - {injection: S1, compound: salbutamol, trace: qualifier-1, start: 1 min, end: 3 min, by: P-2, at: 2026-03-18T12:00:00Z, reason: rider, approved_by: P-3}\n"),
		"case.yaml", "{injection: S1, compound: salbutamol, trace: qualifier-1, start: 2.2", "manual_integrations[1]", "a second integration of the same peak"},
}

var methodFaults = []fault{
	{"unknown version", one("method.yaml", "assaywrit-method/1", "assaywrit-method/9"), "method.yaml", "assaywrit-method/9", "format", "want assaywrit-method/1"},
	{"unit in a key", one("method.yaml", "    expected_retention: 2.3 min", "    expected_retention_min: 2.3\n    expected_retention: 2.3 min"), "method.yaml", "expected_retention_min", "analytes[0].expected_retention_min", "the unit stands in the value"},
	{"no qualifier", one("method.yaml", "    qualifiers:\n      - {precursor: 240.2, product: 222.1}\n      - {precursor: 240.2, product: 166.1}", "    qualifiers: []"), "method.yaml", "[]", "analytes[0].qualifiers", "at least 1"},
	{"even number of points", one("method.yaml", "smoothing_points: 9", "smoothing_points: 10"), "method.yaml", "10, min_signal", "integration.smoothing_points", "an odd number from 5 to 101"},
	{"fraction above one", one("method.yaml", "calibrator_share: 75 %", "calibrator_share: 175 %"), "method.yaml", "175 %", "batch.calibrator_share", "from 0 % to 100 %"},
	{"fraction without its sign", one("method.yaml", "calibrator_share: 75 %", "calibrator_share: 75"), "method.yaml", "75\n", "batch.calibrator_share", "write 75 %"},
	{"limits that cross", []change{{"method.yaml", "internal_standard_low: 50 %", "internal_standard_low: 100 %"}, {"method.yaml", "150 %", "100 %"}}, "method.yaml", "100 %\n  internal_standard_high", "batch.internal_standard_low", "less than 100 %"},
	{"internal standard twice", one("method.yaml", "analytes:\n", "  - {id: salbutamol-d3, name: again, expected_retention: 2 min, retention_window: 0.1 min, transition: {trace_id: x}}\nanalytes:\n"), "method.yaml", "salbutamol-d3, name: again", "internal_standards[1].id", "a second time"},
	{"internal standard that nothing uses", one("method.yaml", "analytes:\n", "  - {id: spare, name: spare, expected_retention: 2 min, retention_window: 0.1 min, transition: {trace_id: x}}\nanalytes:\n"), "method.yaml", "spare, name", "internal_standards[1].id", "which no analyte uses"},
	{"transition twice", one("method.yaml", "product: 166.1", "product: 222.1 "), "method.yaml", "{precursor: 240.2, product: 222.1 }", "analytes[0].qualifiers[1]", "a second time"},
	{"qualifier like the quantifier", one("method.yaml", "product: 166.1", "product: 148.1 "), "method.yaml", "{precursor: 240.2, product: 148.1 }", "analytes[0].qualifiers[1]", "each transition of an analyte once"},
	{"transition without its product", one("method.yaml", ", product: 148.1", ""), "method.yaml", "{precursor: 240.2}", "analytes[0].quantifier", "precursor and product, or trace_id"},
	{"window wider than the retention", one("method.yaml", "retention_window: 0.1 min", "retention_window: 2.3 min"), "method.yaml", "2.3 min\n    quantifier", "analytes[0].retention_window", "half width"},
	{"threshold without a calibration", one("method.yaml", "    calibration: {model: line, weighting: 1/x2}\n", ""), "method.yaml", "id: salbutamol\n", "analytes[0].calibration", "compared with a threshold"},
	{"threshold without an uncertainty", one("method.yaml", smallMethod[strings.Index(smallMethod, "    uncertainty:"):], ""), "method.yaml", "id: salbutamol\n", "analytes[0].uncertainty", "compared with a threshold"},
	{"component with two values", one("method.yaml", "relative: 4 %", "relative: 4 %, absolute: 1 ng/mL"), "method.yaml", "{name: whole", "analytes[0].uncertainty.components[0]", "either relative or absolute"},
	{"component without a value", one("method.yaml", "relative: 4 %, ", ""), "method.yaml", "{name: whole", "analytes[0].uncertainty.components[0]", "either relative or absolute"},
	{"no component", one("method.yaml", "      components:\n        - {name: whole method, type: B, relative: 4 %, source: validation}\n", "      components: []\n"), "method.yaml", "repeatability: none", "analytes[0].uncertainty", "no component at all"},
	{"other model", one("method.yaml", "model: line", "model: curve"), "method.yaml", "curve", "analytes[0].calibration.model", "want line"},
	{"other weights", one("method.yaml", "1/x2", "1/x^2"), "method.yaml", "1/x^2", "analytes[0].calibration.weighting", `did you mean "1/x2"?`},
	{"unit for people", one("method.yaml", "unit: ng/mL", "unit: ng/ml"), "method.yaml", "ng/ml", "analytes[0].unit", `did you mean "ng/mL"?`},
	{"pattern of files", one("method.yaml", "raw/*.csv", "raw/[.csv"), "method.yaml", "raw/[.csv", "tables[0].files", "a path pattern"},
	{"decimal mark that separates", one("method.yaml", "separator: semicolon", "separator: comma"), "method.yaml", "comma\n    header", "tables[0].decimal_mark", "the separator too"},
	{"column that holds the time", one("method.yaml", "column: 2", "column: 1"), "method.yaml", "1, id: a", "tables[0].columns[0].column", "the time column"},
	{"column twice", one("method.yaml", "column: 3", "column: 2"), "method.yaml", "2, id: b", "tables[0].columns[1].column", "a second time"},
	{"name of a column twice", one("method.yaml", "id: b", "id: a"), "method.yaml", "a}\nintegration", "tables[0].columns[1].id", "each name once"},
}

var sequenceFaults = []fault{
	{"id twice", one("sequence.csv", "X1,", "C3,"), "sequence.csv", "C3,raw/x1", "injection", "each id once"},
	{"no id", one("sequence.csv", "X1,", ","), "sequence.csv", ",raw/x1", "injection", "got nothing"},
	{"unknown role", one("sequence.csv", "matrix-blank", "blank"), "sequence.csv", "blank", "role", "one of: solvent-blank, matrix-blank"},
	{"role with capitals", one("sequence.csv", "matrix-blank", "Matrix Blank"), "sequence.csv", "Matrix Blank", "role", `did you mean "matrix-blank"?`},
	{"not in order of time", one("sequence.csv", "2026-03-18T08:20:00", "2026-03-18T08:05:00"), "sequence.csv", "2026-03-18T08:05:00", "acquired", "the rows stand in the order of acquisition"},
	{"two at one time", one("sequence.csv", "2026-03-18T08:20:00", "2026-03-18T08:10:00"), "sequence.csv", "2026-03-18T08:10:00+01:00,P-2,,1000", "acquired", "a time after 2026-03-18T08:10:00"},
	{"time of a spreadsheet", one("sequence.csv", "2026-03-18T08:20:00+01:00", "18.03.2026 08:20"), "sequence.csv", "18.03.2026 08:20", "acquired", "format the column as text"},
	{"sample before it was received", []change{{"case.yaml", "received: 2026-03-16T09:05:00+01:00\n", "received: 2026-03-18T09:30:00+01:00\n"}, {"case.yaml", "2026-03-17T15:40:00", "2026-03-18T15:40:00"}}, "sequence.csv", "2026-03-18T09:00:00", "acquired", "when the sample was received"},
	{"unknown operator", one("sequence.csv", "2026-03-18T08:20:00+01:00,P-2", "2026-03-18T08:20:00+01:00,P-4"), "sequence.csv", "P-4", "operator", "one of the people in case.yaml: P-1, P-2, P-3"},
	{"excluded without a reason", one("sequence.csv", `"no spray, again"`, ""), "sequence.csv", ",\nQ1", "note", "the reason why"},
	{"other sample", one("sequence.csv", "4410", "4411"), "sequence.csv", "4411", "sample_code", `want "4410"`},
	{"no sample code", one("sequence.csv", "4410", ""), "sequence.csv", ",2.5,", "sample_code", `want "4410"`},
	{"no sample", []change{{"sequence.csv", smallSequence[strings.Index(smallSequence, "S1,"):], ""}, {"raw/s1.mzML", "", ""}, {"case.yaml", "injection: S1", "injection: Q1"}}, "sequence.csv", "role", "role", "the sample's aliquots"},
	{"dilution of zero", one("sequence.csv", ",2.5,", ",0,"), "sequence.csv", "0,2026-03-18T09:00", "dilution", "above zero"},
	{"dilution that is no number", one("sequence.csv", ",2.5,", ",1:2,"), "sequence.csv", "1:2", "dilution", "a factor"},
	{"control without its amount", one("sequence.csv", "1500", ""), "sequence.csv", "\nS1", "nominal salbutamol", "0 where it holds none"},
	{"calibrator of zero with weights", one("sequence.csv", "62.5", "0"), "sequence.csv", "0\nC2", "nominal salbutamol", "above zero, as the weights are 1/x2"},
	{"negative amount", one("sequence.csv", "62.5", "-62.5"), "sequence.csv", "-62.5", "nominal salbutamol", "at least 0"},
	{"amount with its unit", one("sequence.csv", "62.5", "62.5 ng/mL"), "sequence.csv", "62.5 ng/mL", "nominal salbutamol", "without its unit"},
	{"amount with a decimal comma", one("sequence.csv", "62.5", `"62,5"`), "sequence.csv", `"62,5"`, "nominal salbutamol", "the comma separates the columns"},
	{"amount of a blank", one("sequence.csv", "08:00:00+01:00,P-2,,", "08:00:00+01:00,P-2,,5"), "sequence.csv", "5\nC1", "nominal salbutamol", "only calibrators and controls"},
	{"two amounts", one("sequence.csv", "2500", "1000"), "sequence.csv", "nominal salbutamol [ng/mL]", "nominal salbutamol", "calibrators at 2 different amounts"},
	{"unit of another kind", one("sequence.csv", "[ng/mL]", "[mL]"), "sequence.csv", "nominal salbutamol [mL]", "nominal salbutamol [mL]", "want a mass concentration"},
	{"unit in capitals", one("sequence.csv", "[ng/mL]", "[NG/ML]"), "sequence.csv", "nominal salbutamol [NG/ML]", "nominal salbutamol [NG/ML]", "write ng/mL if that is meant"},
	{"amounts without a unit", one("sequence.csv", " [ng/mL]", ""), "sequence.csv", "nominal salbutamol", "nominal salbutamol", "the unit in brackets"},
	{"amounts of another analyte", one("sequence.csv", "nominal salbutamol [ng/mL]", "nominal salbutamol [ng/mL],nominal terbutaline [ng/mL]"), "sequence.csv", "nominal terbutaline", "nominal terbutaline", "an analyte of the method"},
	{"amounts twice", one("sequence.csv", "nominal salbutamol [ng/mL]", "nominal salbutamol [ng/mL],nominal Salbutamol [ug/mL]"), "sequence.csv", "nominal Salbutamol [ug/mL]", "nominal Salbutamol [ug/mL]", "one column for each analyte"},
	{"no amounts", one("sequence.csv", ",nominal salbutamol [ng/mL]", ",level of calibrator"), "sequence.csv", "level of calibrator", "level of calibrator", "the unknown column"},
	{"unknown column", one("sequence.csv", "note,nominal", "notes,nominal"), "sequence.csv", "notes,nominal", "notes", `did you mean "note"?`},
	{"column twice", one("sequence.csv", "level,aliquot", "level,Level"), "sequence.csv", "Level", "Level", "each column once"},
	{"too many fields", one("sequence.csv", "62.5", "62.5,,7"), "sequence.csv", ",7\n", "", "13 fields, want 11"},
	{"field over two lines", one("sequence.csv", ",low,", ",\"lo\nw\","), "sequence.csv", "\"lo\nw\"", "level", "text in one line"},
}

var fileFaults = []fault{
	{"no method", one("method.yaml", "", ""), "case.yaml", "method.yaml", "method", "which is not there"},
	{"no sequence", one("sequence.csv", "", ""), "case.yaml", "sequence.csv", "sequence", "which is not there"},
	{"no raw file", one("raw/c2.mzML", "", ""), "sequence.csv", "raw/c2.mzML", "file", "which is not there"},
	{"raw file outside", one("sequence.csv", "raw/c2.mzML", "../c2.mzML"), "sequence.csv", "../c2.mzML", "file", "copy it there"},
	{"raw file with a drive", one("sequence.csv", "raw/c2.mzML", `D:\raw\c2.mzML`), "sequence.csv", `D:\raw\c2.mzML`, "file", "no drive"},
	{"raw file with an absolute path", one("sequence.csv", "raw/c2.mzML", "/raw/c2.mzML"), "sequence.csv", "/raw/c2.mzML", "file", "no / in front"},
	{"no name of a raw file", one("sequence.csv", "raw/c2.mzML", ""), "sequence.csv", ",calibrator,middle", "file", "the path of a file"},
	{"raw file that nothing names", one("raw/spare.mzML", "", "x"), "raw/spare.mzML", "", "", "the role excluded and a note"},
	{"raw file in a folder of its own", one("raw/more/spare.mzML", "", "x"), "raw/more/spare.mzML", "", "", "has its row in the sequence"},
	{"no document", one("documents/form.pdf", "", ""), "case.yaml", "documents/form.pdf", "documents[0].file", "which is not there"},
	{"document that is hidden", []change{{"case.yaml", "documents/form.pdf", "documents/.form.pdf"}, {"documents/form.pdf", "", ""}, {"documents/.form.pdf", "", "x"}}, "case.yaml", "documents/.form.pdf", "documents[0].file", "hidden files do not become part"},
	{"document twice", one("case.yaml", "title: Custody form}", "title: Custody form}\n  - {file: documents/form.pdf , title: again}"), "case.yaml", "documents/form.pdf ,", "documents[1].file", "each file once"},
	{"document that nothing lists", one("documents/letter.pdf", "", "x"), "documents/letter.pdf", "", "", "list it under documents"},
	{"stray file", one("notes.txt", "", "x"), "notes.txt", "", "", "take it out of the folder"},
	{"name that not every system can hold", []change{{"case.yaml", "documents/form.pdf", "documents/50%.pdf"}, {"documents/form.pdf", "", ""}, {"documents/50%.pdf", "", "x"}}, "documents/50%.pdf", "", "", "rename the file"},
}

// TestFaults: each fault gives exactly its problem, at its place.
func TestFaults(t *testing.T) {
	for group, faults := range map[string][]fault{"case": caseFaults, "method": methodFaults, "sequence": sequenceFaults, "files": fileFaults} {
		for _, f := range faults {
			t.Run(group+"/"+f.name, func(t *testing.T) {
				fsys := changed(t, f.changes...)
				problems := problemsOf(t, fsys)
				if len(problems) != 1 {
					t.Fatalf("%d problems, want one:\n%v", len(problems), problems)
				}
				f.check(t, fsys, problems[0])
			})
		}
	}
}

func (f fault) check(t *testing.T, fsys fs.FS, p Problem) {
	t.Helper()
	where, want := fmt.Sprintf("%d:%d", p.Line, p.Column), "0:0"
	if f.at != "" {
		want = place(t, fsys, f.file, f.at)
	}
	if p.File != f.file || where != want || p.Key != f.key {
		t.Errorf("at %s:%s %q, want %s:%s %q", p.File, where, p.Key, f.file, want, f.key)
	}
	if !strings.Contains(p.Error()+"\n"+p.Hint, f.want) {
		t.Errorf("got %q with the hint %q, want %q in them", p.Error(), p.Hint, f.want)
	}
	if p.Got == "" || p.Want == "" {
		t.Errorf("a problem that does not say what was found and what would be accepted: %+v", p)
	}
}

// TestLinks: links and names that differ in capitals alone would not be the same on every system.
func TestLinks(t *testing.T) {
	fsys := small()
	fsys["raw/c1.mzML"] = &fstest.MapFile{Data: []byte("c2.mzML"), Mode: fs.ModeSymlink}
	if problems := problemsOf(t, fsys); len(problems) != 1 || problems[0].File != "raw/c1.mzML" || !strings.Contains(problems.Error(), "a link") {
		t.Errorf("a link: %v", problems)
	}
	fsys = changed(t, change{"documents/FORM.pdf", "", "x"}, change{"case.yaml", "title: Custody form}", "title: Custody form}\n  - {file: documents/FORM.pdf, title: again}"})
	if problems := problemsOf(t, fsys); len(problems) != 1 || !strings.Contains(problems.Error(), "capitals alone") {
		t.Errorf("two spellings: %v", problems)
	}
}

// TestFaultsWithConsequences: one change that leaves several things wrong, each of them told.
func TestFaultsWithConsequences(t *testing.T) {
	type spot struct{ file, at, key, want string }
	tests := []struct {
		name    string
		changes []change
		spots   []spot // in the order of the list
	}{
		{"two compounds with one id", one("method.yaml", "  - id: salbutamol\n", "  - id: salbutamol-d3 \n"), []spot{
			{"case.yaml", "salbutamol]", "request.analytes[0]", "an analyte of the method"},
			{"case.yaml", "salbutamol, trace", "manual_integrations[0].compound", "an analyte or internal standard of the method"},
			{"method.yaml", "salbutamol-d3 \n", "analytes[0].id", "a second time"},
			{"sequence.csv", "injection", "nominal salbutamol-d3", "no such column"},
			{"sequence.csv", "nominal salbutamol", "nominal salbutamol", "an analyte of the method"}}},
		{"unknown internal standard", one("method.yaml", "internal_standard: salbutamol-d3", "internal_standard: salbutamol-d33"), []spot{
			{"method.yaml", "salbutamol-d3\n    name", "internal_standards[0].id", "which no analyte uses"},
			{"method.yaml", "salbutamol-d33", "analytes[0].internal_standard", "the id of an internal standard: salbutamol-d3"}}},
		{"peak before the hold-up time", one("method.yaml", "2.3 min", "2.4 s"), []spot{
			{"method.yaml", "2.4 s", "analytes[0].expected_retention", "got 0.04 min, want more than 0.5 min"},
			{"method.yaml", "0.1 min", "analytes[0].retention_window", "less than the expected retention, 0.04 min"}}},
		{"unknown holder", one("case.yaml", "sealed, to: P-1", "sealed, to: P-9"), []spot{
			{"case.yaml", "P-9", "custody[0].to", "one of the people"},
			{"case.yaml", "P-1, to: P-2", "custody[1].from", "who holds A bottle"}}},
		{"calibrator without its amount", one("sequence.csv", "1000", ""), []spot{
			{"sequence.csv", "nominal salbutamol", "nominal salbutamol", "calibrators at 2 different amounts"},
			{"sequence.csv", "\nC3", "nominal salbutamol", "the amount of salbutamol in this calibrator"}}},
		{"file twice", one("sequence.csv", "raw/c2.mzML", "raw/C1.mzML "), []spot{
			{"raw/c2.mzML", "", "", "nothing in the case names"},
			{"sequence.csv", "raw/C1.mzML ", "file", "which injection C1 has too"},
			{"sequence.csv", "raw/C1.mzML ", "file", "capital and small letters differ"}}},
		{"column of another name", one("sequence.csv", "operator", "operators"), []spot{
			{"sequence.csv", "injection", "operator", "no such column"},
			{"sequence.csv", "operators", "operators", `did you mean "operator"?`}}},
		{"no column of amounts", []change{{"sequence.csv", ",nominal salbutamol [ng/mL]", ""}, {"sequence.csv", ",62.5", ""}, {"sequence.csv", ",1000", ""}, {"sequence.csv", ",2500", ""}, {"sequence.csv", ",1500", ""}}, []spot{
			{"sequence.csv", "injection", "nominal salbutamol", "a column nominal salbutamol [ng/mL]"}}},
		{"method of another spelling", one("case.yaml", "method: method.yaml", "method: Method.yaml"), []spot{
			{"case.yaml", "Method.yaml", "method", "there is method.yaml: capital and small letters differ"},
			{"method.yaml", "", "", "nothing in the case names"}}},
		{"method that is a folder", one("case.yaml", "method: method.yaml", "method: raw"), []spot{
			{"case.yaml", "raw", "method", `"raw", a folder`},
			{"method.yaml", "", "", "nothing in the case names"}}},
		{"method that is too big", one("method.yaml", "format:", "#"+strings.Repeat(" ", 1<<20)+"\nformat:"), []spot{
			{"case.yaml", "method.yaml", "method", "a file of at most 1048576 bytes"}}},
		{"raw file of another spelling", []change{{"raw/c2.mzML", "", ""}, {"raw/C2.mzML", "", "x"}}, []spot{
			{"raw/C2.mzML", "", "", "nothing in the case names"},
			{"sequence.csv", "raw/c2.mzML", "file", "there is raw/C2.mzML"}}},
		{"case that is no YAML", one("case.yaml", "results desk}", "results desk"), []spot{
			{"case.yaml", ":\n  code: 4410", "", "a bracket is opened and not closed"}}},
		{"sequence that is no table", one("sequence.csv", `"no spray, again"`, `"no spray, "again`), []spot{
			{"sequence.csv", `"again`, "", "a quotation mark that is not closed, or followed by text"}}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			fsys := changed(t, tt.changes...)
			problems := problemsOf(t, fsys)
			if len(problems) != len(tt.spots) {
				t.Fatalf("%d problems, want %d:\n%v", len(problems), len(tt.spots), problems)
			}
			for i, s := range tt.spots {
				fault{file: s.file, at: s.at, key: s.key, want: s.want}.check(t, fsys, problems[i])
			}
		})
	}
}
