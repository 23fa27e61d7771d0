package casefile

import (
	"errors"
	"fmt"
	"path"
	"reflect"
	"slices"
	"strings"

	"assaywrit/evidence/peak"
	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/units"
)

// checkMethod looks at what method.yaml says about itself.
func (l *loader) checkMethod() {
	m := &l.folder.Method
	var bad *peak.ParameterError
	if err := m.Integration.Validate(); errors.As(err, &bad) {
		l.inMethod("integration."+strings.TrimSuffix(bad.Name, "_min"), bad.Got, bad.Want, "")
	}
	if b := m.Batch; b.InternalStandardLow >= b.InternalStandardHigh {
		l.inMethod("batch.internal_standard_low", written(units.Fraction, b.InternalStandardLow, "%"), "less than "+written(units.Fraction, b.InternalStandardHigh, "%")+", the upper limit", "")
	}
	ids := map[string]bool{}
	once := func(key, id string) {
		if ids[id] {
			l.inMethod(key+".id", quote(id)+" a second time", "an id that no other compound has", "")
		}
		ids[id] = true
	}
	var standards []string
	for i, s := range m.InternalStandards {
		key := fmt.Sprintf("internal_standards[%d]", i)
		once(key, s.ID)
		standards = append(standards, s.ID)
		l.transition(key+".transition", s.Transition)
		l.retention(key, s.ExpectedRetentionMin, s.RetentionWindowMin)
		if !slices.ContainsFunc(m.Analytes, func(a Analyte) bool { return a.InternalStandard == s.ID }) {
			l.inMethod(key+".id", quote(s.ID)+", which no analyte uses", "an internal standard of some analyte", "")
		}
	}
	for i, a := range m.Analytes {
		key := fmt.Sprintf("analytes[%d]", i)
		once(key, a.ID)
		if !slices.Contains(standards, a.InternalStandard) {
			l.inMethod(key+".internal_standard", quote(a.InternalStandard), "the id of an internal standard: "+strings.Join(standards, ", "), strictyaml.Suggest(a.InternalStandard, standards))
		}
		l.transitions(key, a)
		l.spectrum(key, a.Spectrum)
		l.retention(key, a.ExpectedRetentionMin, a.RetentionWindowMin)
		l.quantification(key, a)
	}
	for i, t := range m.Tables {
		l.table(fmt.Sprintf("tables[%d]", i), t)
	}
}

// retention: a peak elutes after the hold-up time, and the window in which it is sought begins after the injection.
func (l *loader) retention(key string, expected, window float64) {
	if void := l.folder.Method.Instrument.VoidTimeMin; void != nil && expected <= *void {
		l.inMethod(key+".expected_retention", minutes(expected), "more than "+minutes(*void)+", the void time of the instrument", "")
	}
	if window >= expected {
		l.inMethod(key+".retention_window", minutes(window), "less than the expected retention, "+minutes(expected), "it is the half width of the window")
	}
}

// transitions: those of one analyte are different from each other.
func (l *loader) transitions(key string, a Analyte) {
	l.transition(key+".quantifier", a.Quantifier)
	for i, q := range a.Qualifiers {
		place := fmt.Sprintf("%s.qualifiers[%d]", key, i)
		l.transition(place, q)
		if reflect.DeepEqual(q, a.Quantifier) || slices.ContainsFunc(a.Qualifiers[:i], func(o Transition) bool { return reflect.DeepEqual(o, q) }) {
			l.inMethod(place, "a transition a second time", "each transition of an analyte once", "")
		}
	}
}

// transition: it needs its ions, the name that the file gives the trace, or an ion to take from spectra; and only one of them.
func (l *loader) transition(key string, t Transition) {
	switch {
	case t.Ion != nil && (t.TraceID != "" || t.ProductMZ != 0):
		l.inMethod(key, "an ion and a recorded trace", "one of them: ion (with precursor for spectra of the second stage), or precursor and product, or trace_id", "")
	case t.Ion == nil && t.TraceID == "" && (t.PrecursorMZ == 0 || t.ProductMZ == 0):
		l.inMethod(key, "neither both ions nor a trace_id nor an ion", "precursor and product, or trace_id, or ion", "")
	}
	if t.Ion == nil {
		return
	}
	if (t.Ion.ToleranceMZ == nil) == (t.Ion.TolerancePPM == nil) {
		l.inMethod(key+".ion", "a window with two half widths or none", "either tolerance or tolerance_ppm", "")
	}
	if from, to := t.Ion.FromMin, t.Ion.ToMin; from != nil && to != nil && *from >= *to {
		l.inMethod(key+".ion.to", minutes(*to), "more than "+minutes(*from)+", where the trace begins", "")
	}
}

// spectrum: background spans have a length and lie outside the peak's apex.
func (l *loader) spectrum(key string, r *SpectrumRule) {
	if r == nil {
		return
	}
	for i, b := range r.Background {
		if b.FromMin >= b.ToMin || b.FromMin <= 0 && b.ToMin >= 0 {
			l.inMethod(fmt.Sprintf("%s.spectrum.background[%d]", key, i), fmt.Sprintf("%s to %s from the apex", minutes(b.FromMin), minutes(b.ToMin)), "a span before the apex, or after it", "")
		}
	}
	if ref := r.Reference; ref != nil {
		if got, hint := l.missing(ref.File); ref.File != "" && got != "" {
			l.inMethod(key+".spectrum.reference.file", got, "the path of a file in the case folder", hint)
		}
	}
}

// quantification: a threshold is compared with a value, and a value needs a calibration and an uncertainty.
func (l *loader) quantification(key string, a Analyte) {
	if a.Kind == Threshold && a.Calibration == nil {
		l.inMethod(key+".calibration", "no such key", "a calibration, as the analyte is compared with a threshold", "")
	}
	if a.Kind == Threshold && a.Uncertainty == nil {
		l.inMethod(key+".uncertainty", "no such key", "an uncertainty, as the analyte is compared with a threshold", "")
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

// table: a layout of delimited text reads each column once.
func (l *loader) table(key string, t TableLayout) {
	if _, err := path.Match(t.Files, ""); err != nil {
		l.inMethod(key+".files", quote(t.Files), "a path pattern such as raw/*.csv", "")
	}
	if t.Separator == "comma" && t.DecimalMark == "comma" {
		l.inMethod(key+".decimal_mark", "comma, which is the separator too", "point", "")
	}
	for i, c := range t.Columns {
		place := fmt.Sprintf("%s.columns[%d]", key, i)
		if c.Column == t.TimeColumn {
			l.inMethod(place+".column", fmt.Sprint(c.Column)+", which is the time column", "another column", "")
		}
		for _, other := range t.Columns[:i] {
			if c.Column == other.Column {
				l.inMethod(place+".column", fmt.Sprint(c.Column)+" a second time", "each column once", "")
			}
			if c.ID == other.ID {
				l.inMethod(place+".id", quote(c.ID)+" a second time", "each name once", "")
			}
		}
	}
}
