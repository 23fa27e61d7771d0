package evidence

import (
	"fmt"
	"math"
	"slices"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

// choiceAlgorithm names the rule by which the peak of a compound is chosen among those found; see choose.
const choiceAlgorithm = "nearest-in-window@1"

// InternalStandardTrace and QuantifierTrace name the traces of a compound; qualifiers are "qualifier-1" and so on.
const (
	InternalStandardTrace = "internal-standard"
	QuantifierTrace       = "quantifier"
)

// QualifierTrace names the i-th qualifier, counting from 0.
func QualifierTrace(i int) string { return fmt.Sprintf("qualifier-%d", i+1) }

// measureInjection integrates every compound of the method in one injection and returns the traces it used. An excluded
// injection is read, so that the record tells what the file holds, but not measured.
func measureInjection(row casefile.Injection, file *trace.File, rec *Record) (Injection, []trace.Chromatogram, error) {
	inj := Injection{
		ID: row.ID, File: row.File, Role: row.Role, Level: row.Level, Aliquot: row.Aliquot, Dilution: row.Dilution,
		Format: formatName(file), StartTime: file.StartTime, Instrument: file.Instrument, Software: file.Software,
		FileMethod: file.Method, SampleCode: file.SampleCode, Warnings: file.Warnings, StoredPeaks: file.StoredPeaks,
	}
	if row.Role == casefile.Excluded {
		return inj, nil, nil
	}
	m := measurer{row: row, file: file, rec: rec, inj: &inj}
	if m.ions, m.err = extractAll(row.File, file, &rec.Method); m.err != nil {
		return inj, nil, m.err
	}
	for _, is := range rec.Method.InternalStandards {
		m.measure(is.ID, InternalStandardTrace, is.Transition, is.ExpectedRetentionMin, is.RetentionWindowMin, is.ExpectedRetentionMin)
	}
	for _, a := range rec.Method.Analytes {
		target := a.ExpectedRetentionMin
		if p := m.measure(a.ID, QuantifierTrace, a.Quantifier, target, a.RetentionWindowMin, target); p != nil {
			target = p.ApexMin // the qualifiers belong to the quantifier's peak
			m.spectrum(&a, p)
		}
		for i, q := range a.Qualifiers {
			m.measure(a.ID, QualifierTrace(i), q, a.ExpectedRetentionMin, a.RetentionWindowMin, target)
		}
	}
	inj.Measurements = m.done
	return inj, m.used, m.err
}

func formatName(file *trace.File) string {
	if file.FormatVersion == "" {
		return file.Format
	}
	return file.Format + " " + file.FormatVersion
}

// A measurer gathers the measurements of one injection, up to the first error.
type measurer struct {
	row  casefile.Injection
	file *trace.File
	rec  *Record
	inj  *Injection
	ions map[string]trace.Chromatogram // taken from spectra, by id
	done []Measurement
	used []trace.Chromatogram
	err  error
}

// measure integrates one compound in one trace, within window of expected, and returns the peak in use, or nil.
func (m *measurer) measure(compound, which string, t casefile.Transition, expected, window, target float64) *peak.Peak {
	if m.err != nil {
		return nil
	}
	what := compound + " " + which
	c, how, err := m.trace(t, expected, what)
	if err != nil {
		m.err = err
		return nil
	}
	p := m.rec.Method.Integration.Parameters
	found, err := peak.Detect(c, p)
	if err != nil {
		m.err = fmt.Errorf("%s: trace %q (%s): %w", m.row.File, c.ID, what, err)
		return nil
	}
	mt := Measurement{
		Compound: compound, Trace: which, TraceID: c.ID, Transition: c.Transition, Extraction: how, Unit: c.Unit, Points: len(c.TimeMin),
		FirstMin: c.TimeMin[0], LastMin: c.TimeMin[len(c.TimeMin)-1], Parameters: p,
		WindowStartMin: expected - window, WindowEndMin: expected + window, Choice: choiceAlgorithm, Noise: found.Noise,
	}
	mt.Peak, mt.Others = choose(found.Peaks, mt.WindowStartMin, mt.WindowEndMin, target)
	if err := divide(&mt, c, found, m.rec.Method.Integration.Fused); err != nil {
		m.err = fmt.Errorf("%s: trace %q (%s): %w", m.row.File, c.ID, what, err)
		return nil
	}
	if err := m.applyManual(&mt, c); err != nil {
		m.err = err
		return nil
	}
	if mt.Merit, err = meritOf(c, found, mt.Peak, m.rec); err != nil {
		m.err = fmt.Errorf("%s: trace %q (%s): %w", m.row.File, c.ID, what, err)
		return nil
	}
	mt.Stored = storedMatch(m.inj.StoredPeaks, &mt)
	mt.Warnings = append(traceWarnings(c, &mt), mt.Division.warnings()...)
	m.done = append(m.done, mt)
	m.used = append(m.used, c)
	return mt.Peak
}

// trace finds the chromatogram of a transition, recorded or taken from spectra.
func (m *measurer) trace(t casefile.Transition, expected float64, what string) (trace.Chromatogram, *Extraction, error) {
	tol := m.rec.Method.Identification.TransitionTolMZ
	if t.Ion == nil {
		c, err := findTrace(m.row.File, m.file, t, tol, expected, what)
		return c, nil, err
	}
	x := ionTraceOf(t, tol)
	return m.ions[x.id()], &x.rule, nil
}

// spectrum takes the spectrum of the quantifier's peak just measured, where the method asks for it: in the sample's injections and in
// those that serve as the reference.
func (m *measurer) spectrum(a *casefile.Analyte, p *peak.Peak) {
	if a.Spectrum == nil || m.err != nil || m.row.Role != casefile.SampleAliquot && !slices.Contains(m.rec.Method.Identification.ReferenceRoles, m.row.Role) {
		return
	}
	last := &m.done[len(m.done)-1]
	last.Spectrum, m.err = peakSpectrum(m.row.File, m.file, a.Spectrum, a.Quantifier, p, m.rec.Method.Identification.TransitionTolMZ)
}

// choose returns the peak whose apex is nearest to target among those with their apex in the window, both ends included,
// and the others. Peaks are disjoint, so a bump on a peak's flank cannot come between the peak and its target. Of two at
// the same distance the earlier one is taken.
func choose(peaks []peak.Peak, from, to, target float64) (*peak.Peak, []peak.Peak) {
	best := -1
	for i, p := range peaks {
		if p.ApexMin < from || p.ApexMin > to {
			continue
		}
		if best < 0 || math.Abs(p.ApexMin-target) < math.Abs(peaks[best].ApexMin-target) {
			best = i
		}
	}
	var used *peak.Peak
	var others []peak.Peak
	for i := range peaks {
		if i == best {
			used = &peaks[i]
		} else {
			others = append(others, peaks[i])
		}
	}
	return used, others
}

// applyManual puts a manual integration of the case in the place of the automatic one, which is kept beside it.
func (m *measurer) applyManual(mt *Measurement, c trace.Chromatogram) error {
	for _, e := range m.rec.Case.Manual {
		if e.Injection != m.row.ID || e.Compound != mt.Compound || e.Trace != mt.Trace {
			continue
		}
		p, err := peak.Integrate(c, e.StartMin, e.EndMin, mt.Noise)
		if err != nil {
			return fmt.Errorf("case.yaml: manual integration of %s %s in injection %s: %w", e.Compound, e.Trace, e.Injection, err)
		}
		act := &ManualAction{By: e.By, At: e.At, Reason: e.Reason, ApprovedBy: e.ApprovedBy}
		if mt.Peak != nil && mt.Peak.Area != 0 {
			change := p.Area/mt.Peak.Area - 1
			act.AreaChange = &change
		}
		mt.Automatic, mt.Peak, mt.Manual = mt.Peak, p, act
	}
	return nil
}

// find returns the measurement of one compound by one trace, with its index, or nil.
func (inj *Injection) find(compound, which string) (*Measurement, int) {
	for i := range inj.Measurements {
		if m := &inj.Measurements[i]; m.Compound == compound && m.Trace == which {
			return m, i
		}
	}
	return nil, -1
}

// peakOf returns the peak in use of one compound by one trace, or nil.
func (inj *Injection) peakOf(compound, which string) *peak.Peak {
	if m, _ := inj.find(compound, which); m != nil {
		return m.Peak
	}
	return nil
}
