package casefile

import (
	"fmt"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/units"
)

// checkManual looks at integrations set by hand: each replaces the limits of one peak that there is.
func (l *loader) checkManual() {
	for i, m := range l.folder.Case.Manual {
		key := fmt.Sprintf("manual_integrations[%d]", i)
		row := slices.IndexFunc(l.folder.Injections, func(r Injection) bool { return r.ID == m.Injection })
		switch {
		case row < 0 || l.folder.Injections[row].Role == Excluded:
			l.inCase(key+".injection", quote(m.Injection), "the id of an injection of the sequence that is not excluded", "")
		case at(m.At).Before(at(l.folder.Injections[row].AcquiredAt)):
			l.inCase(key+".at", quote(m.At), "a time after "+l.folder.Injections[row].AcquiredAt+", when the injection was acquired", "")
		}
		if traces := l.folder.Method.tracesOf(m.Compound); traces == nil {
			l.inCase(key+".compound", quote(m.Compound), "the id of an analyte or internal standard of the method", strictyaml.Suggest(m.Compound, l.folder.Method.compoundIDs()))
		} else if !slices.Contains(traces, m.Trace) {
			l.inCase(key+".trace", quote(m.Trace), "one of: "+strings.Join(traces, ", "), "")
		}
		if m.EndMin <= m.StartMin {
			l.inCase(key+".end", minutes(m.EndMin), "a time after "+minutes(m.StartMin)+", where it starts", "")
		}
		for _, other := range l.folder.Case.Manual[:i] {
			if other.Injection == m.Injection && other.Compound == m.Compound && other.Trace == m.Trace {
				l.inCase(key, "a second integration of the same peak", "one for each peak", "keep the one that counts, and tell of the other in its reason")
			}
		}
	}
}

// tracesOf names the traces of a compound, or nil for one that the method does not have.
func (m *Method) tracesOf(compound string) []string {
	for _, s := range m.InternalStandards {
		if s.ID == compound {
			return []string{"internal-standard"}
		}
	}
	for _, a := range m.Analytes {
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

func (m *Method) compoundIDs() []string {
	ids := m.analyteIDs()
	for _, s := range m.InternalStandards {
		ids = append(ids, s.ID)
	}
	return ids
}

// minutes writes a time as people write it.
func minutes(v float64) string { return written(units.Time, v, "min") }

func written(f units.Family, v float64, unit string) string {
	text, err := f.Format(v, unit)
	if err != nil {
		panic("casefile: internal error: " + err.Error())
	}
	return text
}
