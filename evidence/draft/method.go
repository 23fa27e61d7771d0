package draft

import (
	"fmt"
	"path"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/trace"
)

// A form is how the traces of a draft's compounds are told from others.
type form int

const (
	byIons form = iota // precursor and product
	byName             // the name that the file gives the trace
	bySpectra
)

// A plan is what the raw files say of the method.
type plan struct {
	form      form
	compounds []compound         // by their ions
	names     []string           // by name
	rest      []trace.Transition // recorded in some files alone
}

// planOf: recorded reactions say most, then traces that have a name and belong to one ion or wavelength, then spectra; a total ion
// current is taken where there is nothing else.
func planOf(raws []Raw) plan {
	read := readable(raws)
	if len(read) == 0 {
		return plan{form: byName}
	}
	compounds, rest := compoundsOf(read)
	p := plan{compounds: compounds, rest: rest}
	if len(compounds) > 0 || len(rest) > 0 {
		return p
	}
	p.form = byName
	if p.names = namesOf(read, trace.SIM, trace.Absorption, trace.SRM); len(p.names) > 0 {
		return p
	}
	if scanned(read) {
		p.form = bySpectra
		return p
	}
	if p.names = namesOf(read, trace.Other); len(p.names) == 0 {
		p.names = namesOf(read, trace.TIC)
	}
	return p
}

// analytes is how many there are in the draft of a method; one, to be filled in, where the files tell of none.
func (p plan) analytes() int { return max(1, len(p.compounds), len(p.names)) }

func methodOf(raws []Raw, p plan) strictyaml.Template {
	m := methodDraft{Template: strictyaml.Template{
		Head:   head,
		Values: map[string]any{"format": "assaywrit-method/1"},
		Lists:  map[string]int{"analytes": p.analytes()},
		Notes:  map[string][]string{},
	}, plan: p}
	m.instruments(raws)
	m.tables(raws)
	m.wanted("internal_standards[0].transition")
	m.Notes["analytes"] = []string{
		"What was recorded in all files, by precursor or by the name of the trace. Which compound each is, and which of them are internal standards",
		"(move those to internal_standards, and take their columns out of " + SequenceFile + "), the files do not say.",
	}
	for _, t := range m.rest {
		m.note("analytes", "Not recorded in all files, and left out: %g > %g%s", t.PrecursorMZ, t.ProductMZ, polarity(t))
	}
	for i := range m.Lists["analytes"] {
		m.analyte(i)
	}
	return m.Template
}

type methodDraft struct {
	strictyaml.Template
	plan
}

func (m *methodDraft) note(key, format string, args ...any) {
	m.Notes[key] = append(m.Notes[key], fmt.Sprintf(format, args...))
}

// instruments tells what the files say of the instrument; its name in the laboratory is another thing.
func (m *methodDraft) instruments(raws []Raw) {
	var list []string
	for _, r := range raws {
		if r.File != nil && r.File.Instrument != "" && !slices.Contains(list, r.File.Instrument) {
			list = append(list, r.File.Instrument)
		}
	}
	for _, name := range list {
		m.note("instrument", "The files state: %s", name)
	}
}

// tables asks for the layout of delimited text, once for each folder and extension.
func (m *methodDraft) tables(raws []Raw) {
	count := map[string]int{}
	for _, r := range raws {
		if r.File == nil {
			count[path.Join(path.Dir(r.Path), "*"+path.Ext(r.Path))]++
		}
	}
	var patterns []string
	for p := range count {
		patterns = append(patterns, p)
	}
	slices.Sort(patterns)
	for i, p := range patterns {
		key := fmt.Sprintf("tables[%d]", i)
		m.Lists["tables"] = i + 1
		m.Lists[key+".columns"] = 1
		m.note(key, "Delimited text: %d of %s, say. One item for each layout, one column for each trace.", count[p], p)
	}
}

// analyte fills in the traces of one compound.
func (m *methodDraft) analyte(i int) {
	key := fmt.Sprintf("analytes[%d]", i)
	m.Values[key+".calibration.model"] = "line" // there is no other
	m.Lists[key+".uncertainty.components"] = 1
	m.Values[key+".uncertainty.components[0].relative"] = strictyaml.Mark
	if i == 0 {
		m.note(key+".calibration", "Calibration and uncertainty are for threshold analytes; take them out where presence alone is reported.")
	}
	qualifiers := key + ".qualifiers"
	m.Lists[qualifiers] = 1
	switch {
	case i < len(m.compounds):
		m.recorded(key, m.compounds[i].reactions)
	case i < len(m.names):
		m.Values[key+".quantifier.trace_id"] = m.names[i]
		m.wanted(qualifiers + "[0]")
	default:
		m.wanted(key + ".quantifier")
		m.wanted(qualifiers + "[0]")
	}
}

// recorded fills in the reactions of one precursor.
func (m *methodDraft) recorded(key string, list []reaction) {
	first := list[0]
	m.note(key, "Precursor %g%s: highest at %.2f min (%.3g in %s)", first.PrecursorMZ, polarity(first.Transition), first.topMin, first.top, first.topIn)
	m.ions(key+".quantifier", first.Transition)
	if len(list) == 1 {
		m.note(key, "One transition alone was recorded, as for many an internal standard.")
		m.wanted(key + ".qualifiers[0]")
		return
	}
	m.note(key, "The most abundant transition is put as the quantifier; another may be the method's.")
	m.Lists[key+".qualifiers"] = len(list) - 1
	for k, r := range list[1:] {
		m.ions(fmt.Sprintf("%s.qualifiers[%d]", key, k), r.Transition)
	}
}

func (m *methodDraft) ions(key string, t trace.Transition) {
	m.Values[key+".precursor"], m.Values[key+".product"] = t.PrecursorMZ, t.ProductMZ
	if t.Polarity != "" {
		m.Values[key+".polarity"] = string(t.Polarity)
	}
}

// wanted puts marks where a transition is to be filled in, in the form that the files' traces have.
func (m *methodDraft) wanted(key string) {
	switch m.form {
	case byIons:
		m.Values[key+".precursor"], m.Values[key+".product"] = strictyaml.Mark, strictyaml.Mark
	case byName:
		m.Values[key+".trace_id"] = strictyaml.Mark
	case bySpectra:
		m.Values[key+".ion.mz"], m.Values[key+".ion.tolerance"] = strictyaml.Mark, strictyaml.Mark
	}
}

func polarity(t trace.Transition) string { return strings.TrimRight(" "+string(t.Polarity), " ") }
