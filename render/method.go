package render

import (
	"fmt"
	"strings"

	"assaywrit/evidence/casefile"
)

func (d *document) method() {
	m := d.in.Record.Method
	given := func(v *float64, u string) string {
		if v == nil {
			return ""
		}
		return plain(*v) + " " + u
	}
	d.pairs([]pair{
		{d.t("label.procedure"), d.methodLine()},
		{d.t("label.in-force"), m.EffectiveFrom},
		{d.t("label.technique"), joined(", ", m.Technique, m.Matrix)},
		{d.t("label.method-summary"), m.Summary},
		{d.t("label.instrument"), joined(", ", m.Instrument.ID, m.Instrument.Description)},
		{d.t("label.instrument-files"), d.instruments()},
		{d.t("label.column"), m.Instrument.Column},
		{d.t("label.column-length"), given(m.Instrument.ColumnLengthMM, "mm")},
		{d.t("label.mobile-phase"), m.Instrument.MobilePhase},
		{d.t("label.flow"), given(m.Instrument.FlowMLPerMin, "mL/min")},
		{d.t("label.injection-volume"), given(m.Instrument.InjectionVolumeUL, "µL")},
		{d.t("label.void-time"), given(m.Instrument.VoidTimeMin, "min")},
		{d.t("label.ionisation"), m.Instrument.Ionisation},
		{d.t("label.method-file"), d.fileLine(d.in.Record.Case.MethodFile)},
	})
}

func (d *document) methodLine() string {
	m := d.in.Record.Method
	return d.t("method.line", "id", m.ID, "version", m.Version, "title", m.Title)
}

// fileLine names a file of the case folder with the beginning of its hash.
func (d *document) fileLine(file string) string {
	return inputPath(file) + "\nSHA-256 " + d.shortHash(file)
}

// instruments lists what the raw files say about instrument and software, each once.
func (d *document) instruments() string {
	var list []string
	seen := map[string]bool{}
	for _, inj := range d.in.Record.Injections {
		text := joined("; ", inj.Instrument, inj.Software)
		if text != "" && !seen[text] {
			seen[text] = true
			list = append(list, text)
		}
	}
	return strings.Join(list, "\n")
}

func (d *document) transitions() {
	m := d.in.Record.Method
	var rows []row
	add := func(name, trace, standard string, rt, window float64, t casefile.Transition, keep bool) {
		rows = append(rows, row{cells: cells(name, trace, reaction(t), d.words.or("polarity.", string(t.Polarity)), fixed(rt, 3), "± "+fixed(window, 3), standard), keep: keep, open: keep})
	}
	for _, a := range m.Analytes {
		add(a.Name, d.t("trace.quantifier"), a.InternalStandard, a.ExpectedRetentionMin, a.RetentionWindowMin, a.Quantifier, false)
		for i, q := range a.Qualifiers {
			add("", d.words.or("trace.", fmt.Sprintf("qualifier-%d", i+1)), "", a.ExpectedRetentionMin, a.RetentionWindowMin, q, true)
		}
	}
	for _, s := range m.InternalStandards {
		add(s.Name, d.t("trace.internal-standard"), "", s.ExpectedRetentionMin, s.RetentionWindowMin, s.Transition, false)
	}
	d.table(table{name: "transitions", columns: "wlllddl", rows: rows, bare: true})
}

func reaction(t casefile.Transition) string {
	if t.TraceID != "" {
		return t.TraceID
	}
	if t.Ion != nil {
		return ionWindow(t)
	}
	return fmt.Sprintf("%.1f → %.1f", t.PrecursorMZ, t.ProductMZ)
}

// ionWindow writes an ion that is taken from spectra, with its window and, for the second stage, its precursor.
func ionWindow(t casefile.Transition) string {
	text := plain(t.Ion.MZ)
	if t.PrecursorMZ > 0 {
		text = plain(t.PrecursorMZ) + " → " + text
	}
	if t.Ion.TolerancePPM != nil {
		return text + " ± " + plain(*t.Ion.TolerancePPM) + " ppm, " + t.Ion.Combine
	}
	return text + " ± " + plain(*t.Ion.ToleranceMZ) + ", " + t.Ion.Combine
}

func (d *document) parameters() {
	m := d.in.Record.Method
	p, b, pc := m.Integration, m.Batch, statedPercent
	var refs []string
	for _, r := range m.Identification.ReferenceRoles {
		refs = append(refs, d.role(r))
	}
	edge := d.t("parameter.edge-default")
	if p.EdgeFraction > 0 {
		edge = pc(p.EdgeFraction)
	}
	say := func(key string, pairs ...string) row {
		return row{cells: cells(d.t("parameter."+key), d.t("parameter."+key+".value", pairs...))}
	}
	shared := say("shared", "kind", d.words.or("shared.", string(p.Shared)), "fraction", pc(p.ValleyFraction))
	if p.ValleyFraction == 0 {
		shared.cells[1].text = d.t("parameter.shared-always", "kind", d.words.or("shared.", string(p.Shared)))
	}
	if p.Fused != "" {
		shared.cells[1].text = d.words.or("fused.", string(p.Fused))
	}
	d.table(table{name: "parameters", columns: "lw", rows: []row{
		{over: d.t("parameter.integration")},
		say("smoothing", "n", itoa(p.SmoothingPoints)),
		say("min-sn", "v", plain(p.MinSN)),
		say("min-width", "v", plain(p.MinWidthMin)),
		shared,
		say("edge", "v", edge),
		{over: d.t("parameter.identification")},
		say("reference", "roles", strings.Join(refs, ", ")),
		say("coelution", "v", plain(m.Identification.CoelutionMin)),
		say("tolerance", "v", plain(m.Identification.TransitionTolMZ)),
		{over: d.t("parameter.batch")},
		say("blank", "v", pc(b.BlankMaxOfLowest)),
		say("blank-standard", "v", pc(b.BlankMaxOfInternalStandard)),
		say("calibrators", "v", pc(b.CalibratorBias), "lowest", pc(b.LowestCalibratorBias), "share", pc(b.CalibratorShare), "levels", itoa(b.CalibratorLevels)),
		say("controls", "v", pc(b.ControlBias), "share", pc(b.ControlShare), "each", pc(b.ControlShareEachLevel)),
		say("standard", "low", pc(b.InternalStandardLow), "high", pc(b.InternalStandardHigh)),
		say("aliquots", "n", itoa(b.Aliquots), "spread", pc(b.AliquotSpread)),
	}})
}

func (d *document) algorithms() {
	var rows []row
	for _, s := range d.in.Record.Steps {
		rows = append(rows, row{cells: cells(d.words.or("step.", s.Value), s.Algorithm)})
	}
	d.note(d.t("algorithms.note", "engine", d.in.Record.Engine.Name+" "+d.in.Record.Engine.Version))
	d.table(table{name: "algorithms", columns: "ww", rows: rows})
}
