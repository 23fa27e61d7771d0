package render

import (
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// packageSections lists what a package holds, in its order.
func (d *document) packageSections() []section {
	list := []section{
		{key: "summary", title: d.t("summary.title"), draw: d.summary},
		{key: "not-met", title: d.t("not-met.title"), level: 1, need: 30, draw: d.notMet},
		{key: "cautions", title: d.t("cautions.title"), level: 1, need: 40, draw: d.cautions},
		{key: "sample", title: d.t("sample.title"), draw: d.request},
		{key: "receipt", title: d.t("receipt.title"), level: 1, need: 40, draw: d.receipt},
		{key: "custody", title: d.t("custody.title"), level: 1, need: 40, draw: d.custody},
		{key: "chronology", title: d.t("chronology.title"), level: 1, need: 40, draw: d.chronology},
		{key: "people", title: d.t("people.title"), level: 1, need: 34, draw: d.people},
		{key: "initial", title: d.t("initial.title"), level: 1, need: 34, draw: d.initialTest},
		{key: "materials", title: d.t("materials.title"), level: 1, need: 34, draw: d.materials},
		{key: "documents", title: d.t("documents.title"), level: 1, need: 30, draw: d.documents},
		{key: "method", title: d.t("method.title"), draw: d.method},
		{key: "transitions", title: d.t("transitions.title"), level: 1, need: 40, draw: d.transitions},
		{key: "parameters", title: d.t("parameters.title"), level: 1, need: 40, draw: d.parameters},
		{key: "algorithms", title: d.t("algorithms.title"), level: 1, need: 30, draw: d.algorithms},
	}
	if d.in.Record.Separation != nil {
		list = append(list, section{key: "study", title: d.t("study.title"), level: 1, fresh: true, draw: d.study})
	}
	list = append(list, []section{
		{key: "criteria", title: d.t("criteria.title"), draw: d.criteria},
		{key: "batch", title: d.t("batch.title"), draw: d.sequence},
		{key: "batch-checks", title: d.t("batch-checks.title"), level: 1, need: 60, draw: d.batchAtAGlance},
		{key: "raw-files", title: d.t("raw-files.title"), level: 1, need: 40, draw: d.rawFiles},
		{key: "cross", title: d.t("cross.title"), level: 1, need: 20, draw: d.crossChecks},
	}...)
	if len(d.in.Record.Suitability) > 0 {
		list = append(list, section{key: "suitability", title: d.t("suitability.title"), level: 1, need: 50, draw: d.suitability})
	}
	if d.in.Record.History != nil {
		list = append(list, section{key: "history", title: d.t("history.title"), level: 1, need: 70, draw: d.history})
	}
	if d.hasStored() {
		list = append(list, section{key: "stored", title: d.t("stored.title"), level: 1, need: 50, draw: d.stored})
	}
	analytes := d.in.Record.Analytes
	for k := range analytes {
		list = append(list, d.batchSections(k)...)
	}
	for k := range analytes {
		list = append(list, d.analyteSections(k)...)
	}
	list = append(list,
		section{key: "deviations", title: d.t("deviations.title"), draw: d.deviations},
		section{key: "manual", title: d.t("manual.title"), level: 1, need: 40, draw: d.manual},
		section{key: "checks", title: d.t("checks.title"), draw: d.checksIntro},
		section{key: "checks/case", title: d.t("checks.case"), level: 1, need: 40, draw: func() { d.checkTable("/batch_checks", d.in.Finding.Batch) }})
	for k := range analytes {
		list = append(list, section{key: "checks/" + analytes[k].ID, title: analytes[k].Name, level: 1, need: 50, draw: func() { d.analyteChecks(k) }})
	}
	list = append(list, section{key: "traces", title: d.t("traces.title"), draw: d.tracesIntro})
	list = append(list, d.traceSections()...)
	return append(list,
		section{key: "files", title: d.t("files.title"), draw: d.howToCheck},
		section{key: "manifest", title: d.t("manifest.title"), level: 1, need: 40, draw: d.manifest},
		section{key: "glossary", title: d.t("glossary.title"), draw: d.glossary},
		section{key: "coverage", title: d.t("coverage.title"), draw: d.coverage})
}

func (d *document) batchSections(k int) []section {
	a := &d.in.Record.Analytes[k]
	return []section{
		{key: "standard/" + a.ID, title: d.t("standard.title", "name", a.Name), level: 1, need: 75, draw: func() { d.standard(k) }},
		{key: "blanks/" + a.ID, title: d.t("blanks.title", "name", a.Name), level: 1, need: 45, draw: func() { d.blanks(k) }},
	}
}

func (d *document) analyteSections(k int) []section {
	a, f := &d.in.Record.Analytes[k], &d.in.Finding.Analytes[k]
	list := []section{
		{key: "analyte/" + a.ID, title: a.Name, draw: func() { d.analyteOutcome(k) }},
		{key: "identity/" + a.ID, title: d.t("identity.title"), level: 1, need: 60, draw: func() { d.identity(k) }},
	}
	if d.hasMerit(a.ID) {
		list = append(list, section{key: "merit/" + a.ID, title: d.t("merit.title"), level: 1, need: 60, draw: func() { d.merit(k) }})
	}
	if d.hasSpectra(a.ID) {
		list = append(list, section{key: "spectra/" + a.ID, title: d.t("spectra.title"), level: 1, need: 110, draw: func() { d.spectra(k) }})
	}
	if a.Calibration != nil || a.NoFit != "" {
		list = append(list, section{key: "calibration/" + a.ID, title: d.t("calibration.title"), level: 1, need: 130, draw: func() { d.calibration(k) }})
	}
	if len(a.Controls) > 0 {
		list = append(list, section{key: "controls/" + a.ID, title: d.t("controls.title"), level: 1, need: 40, draw: func() { d.controls(k) }})
	}
	if len(a.Aliquots) > 0 || a.NoResult != "" || a.Kind == casefile.Threshold {
		list = append(list, section{key: "quantity/" + a.ID, title: d.t("quantity.title"), level: 1, need: 40, draw: func() { d.quantity(k) }})
	}
	if a.Result != nil {
		list = append(list, section{key: "budget/" + a.ID, title: d.t("budget.title"), level: 1, need: 60, draw: func() { d.budget(k) }})
	}
	if f.Limit != nil {
		list = append(list, section{key: "decision/" + a.ID, title: d.t("decision.title"), level: 1, need: 110, draw: func() { d.decision(k) }})
	}
	return list
}

// traceSections has the sample's aliquots first and then all other injections, each in the order of acquisition.
func (d *document) traceSections() []section {
	var list []section
	for _, sample := range []bool{true, false} {
		for i := range d.in.Record.Injections {
			inj := &d.in.Record.Injections[i]
			if (inj.Role == casefile.SampleAliquot) != sample || len(inj.Measurements) == 0 {
				continue
			}
			draw := func() { d.injectionTraces(inj) }
			if sample {
				draw = func() { d.aliquotTraces(inj) }
			}
			list = append(list, section{key: injectionKey(inj.ID), title: d.injectionTitle(inj), level: 1, fresh: true, draw: draw})
		}
	}
	return list
}

func injectionKey(id string) string { return "injection/" + id }

// injectionTitle names an injection in a heading.
func (d *document) injectionTitle(inj *evidence.Injection) string {
	text := d.t("injection.title", "id", inj.ID, "role", d.role(inj.Role))
	if inj.Level != "" {
		text += " " + inj.Level
	}
	if inj.Aliquot != "" {
		text += d.t("injection.aliquot", "aliquot", inj.Aliquot)
	}
	return text
}

func (d *document) role(r casefile.Role) string { return d.words.or("role.", string(r)) }

// hasPage tells whether an injection's traces are drawn: excluded injections have none.
func (d *document) hasPage(id string) bool {
	_, ok := d.numbers[injectionKey(id)]
	return ok
}

// toInjection is the key of an injection's page, or "".
func (d *document) toInjection(id string) string {
	if d.hasPage(id) {
		return injectionKey(id)
	}
	return ""
}
