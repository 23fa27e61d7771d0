package render

import (
	"fmt"
	"strings"

	"assaywrit/decision"
	"assaywrit/evidence/casefile"
)

func (d *document) methodAndCriteria() {
	m := d.in.Record.Method
	d.chapter("method", d.words.get("method-title"))
	d.pairs([][2]string{
		{"Procedure", m.ID + ", version " + m.Version + ": " + m.Title},
		{"In force from", m.EffectiveFrom},
		{"Technique", m.Technique + ", " + m.Matrix},
		{"Summary", m.Summary},
		{"Instrument", joined(m.Instrument.ID, m.Instrument.Description)},
		{"As the files say", instruments(d)},
		{"Column", m.Instrument.Column},
		{"Mobile phase", m.Instrument.MobilePhase},
		{"Flow", given(m.Instrument.FlowMLPerMin, "mL/min")},
		{"Injection volume", given(m.Instrument.InjectionVolumeUL, "uL")},
		{"Void time", given(m.Instrument.VoidTimeMin, "min")},
		{"Ionisation", m.Instrument.Ionisation},
	})
	d.heading(1, "transitions", "Transitions")
	d.transitions(m)
	d.heading(1, "parameters", "Integration, reference and batch limits")
	d.parameters(m)
	d.criteria()
}

// instruments lists what the raw files say about instrument and software, each once.
func instruments(d *document) string {
	var list []string
	for _, inj := range d.in.Record.Injections {
		text := joined(inj.Instrument, inj.Software)
		if text != "" && (len(list) == 0 || list[len(list)-1] != text) {
			list = append(list, text)
		}
	}
	return strings.Join(list, " | ")
}

func given(v *float64, u string) string {
	if v == nil {
		return ""
	}
	return plain(*v) + " " + u
}

func (d *document) transitions(m casefile.Method) {
	var rows [][]string
	row := func(name, trace, standard string, rt, window float64, t casefile.Transition) {
		rows = append(rows, []string{name, trace, reaction(t), string(t.Polarity), fmt.Sprintf("%.3f", rt), fmt.Sprintf("± %.3f", window), standard})
	}
	for _, a := range m.Analytes {
		row(a.Name, "quantifier", a.InternalStandard, a.ExpectedRetentionMin, a.RetentionWindowMin, a.Quantifier)
		for i, q := range a.Qualifiers {
			row("", fmt.Sprintf("qualifier-%d", i+1), "", a.ExpectedRetentionMin, a.RetentionWindowMin, q)
		}
	}
	for _, s := range m.InternalStandards {
		row(s.Name, "internal standard", "", s.ExpectedRetentionMin, s.RetentionWindowMin, s.Transition)
	}
	d.table(table{columns: []column{{head: "Substance", share: 2}, {head: "Trace", share: 1.7}, {head: "m/z", share: 1.8, right: true}, {head: "Polarity", share: 1.1},
		{head: "RT expected, min", share: 1.5, right: true}, {head: "Window, min", share: 1.3, right: true}, {head: "Internal standard", share: 2}}, rows: rows})
}

func reaction(t casefile.Transition) string {
	if t.TraceID != "" {
		return t.TraceID
	}
	return fmt.Sprintf("%.1f → %.1f", t.PrecursorMZ, t.ProductMZ)
}

func (d *document) parameters(m casefile.Method) {
	p, b := m.Integration, m.Batch
	var refs []string
	for _, r := range m.Identification.ReferenceRoles {
		refs = append(refs, string(r))
	}
	pc := statedPercent
	rows := [][]string{
		{"Smoothing, for detection only", fmt.Sprintf("%d points", p.SmoothingPoints)},
		{"Smallest signal-to-noise of a peak", plain(p.MinSN)},
		{"Narrowest width at half height", plain(p.MinWidthMin) + " min"},
		{"Shared valleys", fmt.Sprintf("%s, valley fraction %s", p.Shared, plain(p.ValleyFraction))},
		{"Reference injections", strings.Join(refs, ", ")},
		{"Co-elution of qualifiers", "± " + plain(m.Identification.CoelutionMin) + " min"},
		{"Recorded m/z from the method's", "± " + plain(m.Identification.TransitionTolMZ)},
		{"Analyte in a blank", "at most " + pc(b.BlankMaxOfLowest) + " of the lowest calibrator"},
		{"Internal standard in a blank", "at most " + pc(b.BlankMaxOfInternalStandard) + " of the calibrators' mean"},
		{"Back-calculated calibrators", fmt.Sprintf("within ± %s (lowest ± %s); %s of them and %d levels must pass", pc(b.CalibratorBias), pc(b.LowestCalibratorBias), pc(b.CalibratorShare), b.CalibratorLevels)},
		{"Controls", fmt.Sprintf("within ± %s; %s of all and %s at each level must pass", pc(b.ControlBias), pc(b.ControlShare), pc(b.ControlShareEachLevel))},
		{"Response of the internal standard", pc(b.InternalStandardLow) + " to " + pc(b.InternalStandardHigh) + " of the calibrators' mean"},
		{"Aliquots", fmt.Sprintf("at least %d, relative standard deviation at most %s", b.Aliquots, pc(b.AliquotSpread))},
	}
	for _, s := range d.in.Record.Steps {
		rows = append(rows, []string{"Algorithm: " + s.Value, s.Algorithm})
	}
	d.table(table{columns: []column{{head: "Parameter", share: 2}, {head: "Value", share: 4}}, rows: rows})
}

// criteria lists the values of the criteria set with their sources.
func (d *document) criteria() {
	f := d.in.Finding.Criteria
	d.heading(1, "criteria", d.words.get("criteria-title"))
	d.pairs([][2]string{{"Set", f.ID + ": " + f.Title}, {"Edition", f.Edition}, {"In force from", f.EffectiveFrom}})
	d.note("SHA-256 of its file: " + f.SHA256)
	set := d.in.Criteria
	if set == nil {
		return
	}
	for _, n := range set.Notes {
		d.note(n)
	}
	var rows [][]string
	row := func(what, value string, c decision.Cite) {
		rows = append(rows, []string{what, value, c.Clause, c.Tag})
	}
	id := set.Identification
	row("Signal-to-noise", "at least "+plain(id.SignalToNoise.Value), id.SignalToNoise.Cite)
	row("Transitions", "at least "+plain(id.Transitions.Value), id.Transitions.Cite)
	row("Retention time", tolerance(id.Retention.Kind, id.Retention.AbsoluteMin, id.Retention.Relative, "min", 1)+advisory(id.Retention.Required), id.Retention.Cite)
	row("Relative retention", tolerance(id.RelativeRetention.Kind, nil, id.RelativeRetention.Relative, "", 1)+advisory(id.RelativeRetention.Required), id.RelativeRetention.Cite)
	for _, b := range id.Abundance {
		edge := "above "
		if b.FromInclusive {
			edge = "from "
		}
		row("Abundance, reference "+edge+statedPercent(b.From), tolerance(b.Kind, b.Absolute, b.Relative, "percentage points", 100), b.Cite)
	}
	row("Aliquots for a quantity", "at least "+plain(set.Quantity.Aliquots.Value), set.Quantity.Aliquots.Cite)
	row("Coverage factor", "k = "+plain(set.Quantity.CoverageFactor.Value), set.Quantity.CoverageFactor.Cite)
	if g := set.Quantity.Gravity; g != nil {
		row("Specific gravity", fmt.Sprintf("above %g: limit × (SG + %g − 1)/(%g − 1)", g.ApplyAbove, g.Add, g.Reference), g.Cite)
	}
	for _, l := range set.Limits {
		if !requestedHere(d, l.Analyte) {
			continue
		}
		value := "threshold " + plain(l.Threshold) + " ng/mL"
		if l.MaxStdU != nil {
			value += ", largest u " + plain(*l.MaxStdU) + " ng/mL"
		}
		if l.DecisionLimit != nil {
			value += ", decision limit " + plain(*l.DecisionLimit) + " ng/mL"
		}
		row("Limit, "+l.Analyte, value+", "+l.Compare+", rounding: "+l.Rounding, l.Cite)
	}
	row("Presence", "any substance that the method reports by presence", set.Presence.Cite)
	d.table(table{columns: []column{{head: "Rule", share: 2.4}, {head: "Value", share: 3.4}, {head: "Clause", share: 3.6}, {head: "Tag", share: 1.3}}, rows: rows})
	d.note(d.words.get("criteria-note"))
}

func requestedHere(d *document, analyte string) bool {
	for _, a := range d.in.Record.Analytes {
		if a.ID == analyte {
			return true
		}
	}
	return false
}

func advisory(required bool) string {
	if required {
		return ""
	}
	return " (advisory)"
}

func tolerance(kind string, absolute, relative *float64, u string, scale float64) string {
	var parts []string
	if absolute != nil {
		parts = append(parts, "± "+number(*absolute*scale, 6)+" "+u)
	}
	if relative != nil {
		parts = append(parts, "± "+number(*relative*100, 6)+" % of the reference")
	}
	text := strings.Join(parts, " or ")
	switch kind {
	case "greater-of":
		text += ", whichever is greater"
	case "smaller-of":
		text += ", whichever is smaller"
	}
	return text
}
