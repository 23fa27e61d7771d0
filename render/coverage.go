package render

import (
	"fmt"
	"strings"
)

// A required is one thing that published requirements ask of such a package: its words stand in the templates under "coverage." and its
// code, with the document that asks for it and a tag that says whether that was read there.
type required struct {
	code    string
	keys    []string // sections in which it stands; "cover" is the first page
	file    string   // where it lies in the bundle
	missing string   // key of the words that say why it is not there; "": it is there
}

// requirements lists what is asked for, and whether the case has it.
func (d *document) requirements() []required {
	rec := d.in.Record
	c := rec.Case
	lacks := func(ok bool, why string) string {
		if ok {
			return ""
		}
		return why
	}
	const (
		caseFile, methodFile, evidenceFile, findingFile = "case.yaml", "method.yaml", "evidence.json", "finding.json"
	)
	var identity, calibration, quantity, budget, decided, standards, blanks, controls []string
	for _, a := range rec.Analytes {
		identity, standards, blanks = append(identity, "identity/"+a.ID), append(standards, "standard/"+a.ID), append(blanks, "blanks/"+a.ID)
		for _, x := range []struct {
			key  string
			list *[]string
		}{{"calibration/", &calibration}, {"budget/", &budget}, {"decision/", &decided}, {"controls/", &controls}, {"quantity/", &quantity}} {
			if key := d.known(x.key + a.ID); key != "" {
				*x.list = append(*x.list, key)
			}
		}
	}
	return []required{
		{"A1", []string{"cover"}, "package.pdf", ""},
		{"A2", []string{"cover"}, caseFile, ""},
		{"A3", []string{"cover"}, caseFile, lacks(c.Laboratory.Site != "", "coverage.site")},
		{"A4", []string{"cover"}, "package.pdf", ""},
		{"A5", []string{"cover", "sample"}, caseFile, ""},
		{"A6", []string{"cover", "receipt"}, caseFile, ""},
		{"A7", []string{"cover"}, "seal/signatures/", ""},
		{"A8", []string{"cover"}, "package.pdf", ""},
		{"A9", []string{"contents"}, "package.pdf", ""},
		{"A10", []string{"glossary"}, "package.pdf", ""},
		{"A11", []string{"cover"}, "package.pdf", ""},
		{"B1", []string{"people"}, caseFile, ""},
		{"B2", []string{"custody"}, caseFile, ""},
		{"B3", []string{"receipt"}, caseFile, ""},
		{"B4", []string{"receipt"}, caseFile, ""},
		{"B5", []string{"custody"}, caseFile, ""},
		{"B6", []string{"receipt"}, caseFile, lacks(c.Sample.Storage != "", "coverage.not-recorded")},
		{"B7", []string{"receipt"}, caseFile, lacks(c.Sample.VolumeML != nil && c.Sample.PH != nil && c.Sample.SpecificGravity != nil, "coverage.partly")},
		{"C1", []string{"initial"}, caseFile, lacks(c.InitialTest != nil, "coverage.not-recorded")},
		{"C2", []string{"documents"}, "documents/", "coverage.initial-data"},
		{"D1", []string{"method"}, methodFile, ""},
		{"D2", []string{"deviations"}, caseFile, ""},
		{"D3", []string{"method", "raw-files"}, evidenceFile, lacks(d.instruments() != "", "coverage.files-silent")},
		{"D4", []string{"documents"}, "documents/", "coverage.tune"},
		{"D5", []string{"batch"}, "sequence.csv", ""},
		{"D6", []string{"materials"}, caseFile, lacks(len(c.Materials) > 0, "coverage.not-recorded")},
		{"D7", blanks, evidenceFile, ""},
		{"D8", calibration, evidenceFile, lacks(len(calibration) > 0, "coverage.presence")},
		{"D9", append(controls, identity...), evidenceFile, ""},
		{"D10", []string{"traces"}, "raw/", ""},
		{"D11", []string{"traces"}, "raw/", ""},
		{"D12", identity, evidenceFile, ""},
		{"D13", identity, evidenceFile, ""},
		{"D14", []string{"parameters", "manual"}, evidenceFile, ""},
		{"D15", standards, evidenceFile, ""},
		{"D16", calibration, evidenceFile, lacks(len(calibration) > 0, "coverage.presence")},
		{"D17", quantity, evidenceFile, lacks(len(quantity) > 0, "coverage.presence")},
		{"D18", append(decided, quantity...), evidenceFile, lacks(len(quantity) > 0, "coverage.presence")},
		{"D19", append([]string{"summary"}, quantity...), findingFile, ""},
		{"D20", budget, evidenceFile, lacks(len(budget) > 0, "coverage.no-result")},
		{"D21", append([]string{"criteria"}, decided...), findingFile, ""},
		{"D22", decided, findingFile, lacks(len(decided) > 0, "coverage.no-result")},
		{"E1", nil, "", "coverage.b-sample"},
		{"F1", []string{"summary"}, "finding.pdf", ""},
		{"F2", nil, "", "coverage.opinion"},
		{"F3", []string{"chronology"}, caseFile, ""},
		{"F4", []string{"cover", "people"}, "seal/signatures/", ""},
		{"F5", nil, "", "coverage.external"},
		{"F6", []string{"cover"}, "seal/statement.json", ""},
		{"F7", []string{"files", "manifest", "algorithms"}, "manifest-sha256.txt", ""},
		{"F8", nil, "", "coverage.redaction"},
	}
}

// coverage says where each thing stands that published requirements ask for, or that it is not there and why.
func (d *document) coverage() {
	d.paragraph(d.t("coverage.intro"))
	d.anchors["contents"] = place{2, top}
	var rows []row
	group := ""
	for _, r := range d.requirements() {
		if g := r.code[:1]; g != group {
			group = g
			rows = append(rows, row{over: d.t("coverage.group." + g)})
		}
		parts := d.words.list("coverage." + r.code)
		if len(parts) != 3 {
			panic(fmt.Sprintf("render: internal error: coverage.%s needs text, basis and tag", r.code))
		}
		where := cell{text: d.standsIn(r.keys), note: r.file}
		if len(r.keys) > 0 {
			where.to = r.keys[0]
		}
		if r.missing != "" {
			where.text, where.note = d.t(r.missing), ""
			if len(r.keys) > 0 {
				where.note = d.standsIn(r.keys)
			}
		}
		rows = append(rows, row{cells: []cell{{text: r.code}, {text: parts[0]}, {text: parts[1], note: parts[2]}, where}})
	}
	d.table(table{name: "coverage", columns: "lwww", rows: rows})
}

// standsIn names sections with their pages.
func (d *document) standsIn(keys []string) string {
	var list []string
	for _, key := range keys {
		at, ok := d.anchors[key]
		if !ok {
			panic(fmt.Sprintf("render: internal error: no place %q", key))
		}
		switch key {
		case "cover", "contents":
			list = append(list, d.t("coverage.page", "what", d.t(key), "page", itoa(at.page)))
		default:
			list = append(list, d.t("coverage.section", "section", d.ref(key), "page", itoa(at.page)))
		}
	}
	return strings.Join(list, "; ")
}
