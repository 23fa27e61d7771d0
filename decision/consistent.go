package decision

import (
	"fmt"
	"math"
	"reflect"
	"slices"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// consistent refuses a record that contradicts itself: nothing can be decided on it. That something is missing is no contradiction
// but a matter of the checks.
func consistent(rec *evidence.Record) error {
	if path, ok := finite(reflect.ValueOf(rec).Elem(), ""); !ok {
		return fmt.Errorf("decision: the record holds a number that is not finite, at %s", path)
	}
	if len(rec.Injections) != len(rec.Sequence) {
		return fmt.Errorf("decision: the record holds %d injections for a sequence of %d", len(rec.Injections), len(rec.Sequence))
	}
	for i := range rec.Injections {
		if err := sameInjection(&rec.Injections[i], &rec.Sequence[i]); err != nil {
			return fmt.Errorf("decision: the record contradicts itself at /injections/%d: %w", i, err)
		}
	}
	for k := range rec.Analytes {
		if err := consistentAnalyte(rec, k); err != nil {
			return fmt.Errorf("decision: the record contradicts itself at /analytes/%d: %w", k, err)
		}
	}
	for _, id := range rec.Case.Request.Analytes {
		if !slices.ContainsFunc(rec.Analytes, func(a evidence.Analyte) bool { return a.ID == id }) {
			return fmt.Errorf("decision: %q was asked for and is not in the record", id)
		}
	}
	return nil
}

var roles = []casefile.Role{casefile.SolventBlank, casefile.MatrixBlank, casefile.ZeroCalibrator, casefile.Calibrator, casefile.Control,
	casefile.NegativeControl, casefile.CarryoverBlank, casefile.SampleAliquot, casefile.Excluded}

func sameInjection(inj *evidence.Injection, row *casefile.Injection) error {
	switch {
	case inj.ID != row.ID:
		return fmt.Errorf("injection %q in the place of %q", inj.ID, row.ID)
	case inj.Role != row.Role || !slices.Contains(roles, inj.Role):
		return fmt.Errorf("role %q where the sequence says %q", inj.Role, row.Role)
	case inj.Aliquot != row.Aliquot:
		return fmt.Errorf("aliquot %q where the sequence says %q", inj.Aliquot, row.Aliquot)
	case inj.Dilution != row.Dilution:
		return fmt.Errorf("dilution %g where the sequence says %g", inj.Dilution, row.Dilution)
	}
	return nil
}

func consistentAnalyte(rec *evidence.Record, k int) error {
	a := &rec.Analytes[k]
	if slices.ContainsFunc(rec.Analytes[:k], func(o evidence.Analyte) bool { return o.ID == a.ID }) {
		return fmt.Errorf("%q a second time", a.ID)
	}
	if !slices.ContainsFunc(rec.Method.Analytes, func(m casefile.Analyte) bool { return m.ID == a.ID && m.Kind == a.Kind }) {
		return fmt.Errorf("the method has no %q of kind %q", a.ID, a.Kind)
	}
	if a.Kind != casefile.Threshold && a.Kind != casefile.Presence {
		return fmt.Errorf("kind %q", a.Kind)
	}
	seen := newLister(rec)
	for i := range a.Identifications {
		id := &a.Identifications[i]
		seen.add("identifications", i, id.Injection, id.InjectionIndex, nil)
		if seen.err == nil {
			seen.err = consistentIons(rec, a, id)
		}
	}
	for i, r := range a.InternalStandard {
		seen.add("internal_standard_responses", i, r.Injection, r.InjectionIndex, &r.Role)
	}
	for i, b := range a.Blanks {
		seen.add("blanks", i, b.Injection, b.InjectionIndex, &b.Role)
	}
	for i, c := range a.Controls {
		seen.add("controls", i, c.Injection, c.InjectionIndex, new(casefile.Control))
	}
	for i, c := range a.Aliquots {
		seen.add("aliquots", i, c.Injection, c.InjectionIndex, new(casefile.SampleAliquot))
	}
	if seen.err != nil {
		return seen.err
	}
	return consistentReference(rec, a)
}

// A lister sees that the entries of a list belong to the injections they name, each once.
type lister struct {
	rec  *evidence.Record
	seen map[string]bool
	err  error
}

func newLister(rec *evidence.Record) *lister { return &lister{rec: rec, seen: map[string]bool{}} }

func (l *lister) add(list string, i int, injection string, index int, role *casefile.Role) {
	at := fmt.Sprintf("%s/%d", list, i)
	key := list + "/" + injection
	switch {
	case l.err != nil:
	case index < 0 || index >= len(l.rec.Injections) || l.rec.Injections[index].ID != injection:
		l.err = fmt.Errorf("%s: injection %q is not number %d of the sequence", at, injection, index)
	case l.rec.Injections[index].Role == casefile.Excluded || role != nil && l.rec.Injections[index].Role != *role:
		l.err = fmt.Errorf("%s: injection %q has the role %q", at, injection, l.rec.Injections[index].Role)
	case l.seen[key]:
		l.err = fmt.Errorf("%s: injection %q a second time", at, injection)
	}
	l.seen[key] = true
}

// consistentIons: each ion has its measurement, and one of them at most is the base, that of the reference.
func consistentIons(rec *evidence.Record, a *evidence.Analyte, id *evidence.Identification) error {
	base := ""
	for _, r := range a.Reference.Ratios {
		if r.Base {
			base = r.Trace
		}
	}
	for i, ion := range id.Ions {
		m := measurementOf(rec, id, &ion)
		switch {
		case m == nil || m.Compound != a.ID || m.Trace != ion.Trace:
			return fmt.Errorf("%s %s: measurement %d is another one", id.Injection, ion.Trace, ion.MeasurementIndex)
		case m.Peak == nil && (ion.SignalToNoise != nil || ion.Abundance != nil || ion.ApexOffsetMin != nil || ion.Trace == evidence.QuantifierTrace && id.RetentionMin != nil):
			return fmt.Errorf("%s %s: figures of a peak that is not there", id.Injection, ion.Trace)
		case ion.Base && ion.Trace != base:
			return fmt.Errorf("%s %s: the base ion of the reference is %q", id.Injection, ion.Trace, base)
		case slices.ContainsFunc(id.Ions[:i], func(o evidence.IonMatch) bool { return o.Trace == ion.Trace }):
			return fmt.Errorf("%s: %s a second time", id.Injection, ion.Trace)
		}
	}
	return nil
}

func measurementOf(rec *evidence.Record, id *evidence.Identification, ion *evidence.IonMatch) *evidence.Measurement {
	list := rec.Injections[id.InjectionIndex].Measurements
	if ion.MeasurementIndex < 0 || ion.MeasurementIndex >= len(list) {
		return nil
	}
	return &list[ion.MeasurementIndex]
}

// consistentReference: what serves as the reference is of known amount and never the sample; each point of a line has its injection.
func consistentReference(rec *evidence.Record, a *evidence.Analyte) error {
	for _, id := range a.Reference.Injections {
		i := slices.IndexFunc(rec.Injections, func(inj evidence.Injection) bool { return inj.ID == id })
		if i < 0 || rec.Injections[i].Role != casefile.Calibrator && rec.Injections[i].Role != casefile.Control {
			return fmt.Errorf("reference %q is neither a calibrator nor a control of the batch", id)
		}
	}
	if c := a.Calibration; c != nil && len(c.Injections) != len(c.Fit.Points) {
		return fmt.Errorf("a calibration of %d points by %d injections", len(c.Fit.Points), len(c.Injections))
	}
	return nil
}

// finite looks for a number that is not, and tells where it is.
func finite(v reflect.Value, at string) (string, bool) {
	switch v.Kind() {
	case reflect.Float64:
		return at, !math.IsNaN(v.Float()) && !math.IsInf(v.Float(), 0)
	case reflect.Pointer:
		if !v.IsNil() {
			return finite(v.Elem(), at)
		}
	case reflect.Struct:
		for i := range v.NumField() {
			if where, ok := finite(v.Field(i), at+"/"+v.Type().Field(i).Name); !ok {
				return where, false
			}
		}
	case reflect.Slice:
		for i := range v.Len() {
			if where, ok := finite(v.Index(i), fmt.Sprintf("%s/%d", at, i)); !ok {
				return where, false
			}
		}
	}
	return "", true
}
