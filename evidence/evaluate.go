// Package evidence works out what was observed in one case: from the files that a laboratory wrote and its instruments
// recorded to the evidence record. It says what was measured, never whether that is enough.
//
// Evaluate is a pure function of the bytes of the inputs and of the engine's version. Times are in minutes, intensities in
// detector counts, areas in counts·min, concentrations in ng/mL.
package evidence

import (
	"errors"
	"io/fs"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
	"assaywrit/evidence/uncertainty"
)

// An Evaluation is the evidence record and the traces behind it, kept for drawing.
type Evaluation struct {
	Record *Record
	traces map[traceKey]trace.Chromatogram
}

type traceKey struct{ file, id string }

// Chromatogram returns a trace that the record names, by the file's path in the case folder and the trace's id in it.
func (e *Evaluation) Chromatogram(file, traceID string) (trace.Chromatogram, bool) {
	c, ok := e.traces[traceKey{file, traceID}]
	return c, ok
}

// Evaluate reads the raw files of a case that casefile.Load has accepted and computes the evidence record. The error joins
// one error for each raw file that could not be used; most are *trace.SyntaxError.
func Evaluate(fsys fs.FS, folder *casefile.Folder, engine Engine) (*Evaluation, error) {
	rec := &Record{
		Format:   RecordFormat,
		Engine:   engine,
		Steps:    steps(),
		Case:     folder.Case,
		Method:   folder.Method,
		Sequence: folder.Injections,
	}
	inputs, err := hashInputs(fsys, folder)
	if err != nil {
		return nil, err
	}
	rec.Inputs = inputs

	ev := &Evaluation{Record: rec, traces: map[traceKey]trace.Chromatogram{}}
	if err := ev.readInjections(fsys); err != nil {
		return nil, err
	}
	if folder.Study != nil {
		if rec.Separation, err = Scout(fsys, folder.Case.Study, folder.Study); err != nil {
			return nil, err
		}
	}
	rec.CrossChecks = crossChecks(rec, ev)
	rec.Suitability = suitability(rec)
	for _, a := range folder.Method.Analytes {
		if !requested(folder.Case.Request.Analytes, a.ID) {
			continue
		}
		out := assay(rec, a)
		if out.ReferenceSpectrum, err = referenceSpectrum(fsys, &a); err != nil {
			return nil, err
		}
		rec.Analytes = append(rec.Analytes, out)
	}
	if rec.History, err = controlHistory(fsys, folder, rec); err != nil {
		return nil, err
	}
	return ev, nil
}

// readInjections fills Record.Injections, file by file, and joins what is wrong with any of them.
func (e *Evaluation) readInjections(fsys fs.FS) error {
	var problems []error
	for _, row := range e.Record.Sequence {
		if err := e.readInjection(fsys, row); err != nil {
			problems = append(problems, err)
		}
	}
	return errors.Join(problems...)
}

func (e *Evaluation) readInjection(fsys fs.FS, row casefile.Injection) error {
	src, done, err := open(fsys, row.File)
	if err != nil {
		return err
	}
	defer done()
	file, err := readRaw(row.File, src, e.Record.Method.Tables)
	if err != nil {
		return err
	}
	inj, used, err := measureInjection(row, file, e.Record)
	if err != nil {
		return err
	}
	e.Record.Injections = append(e.Record.Injections, inj)
	for _, c := range used {
		e.traces[traceKey{row.File, c.ID}] = c
	}
	return nil
}

func hashInputs(fsys fs.FS, folder *casefile.Folder) ([]InputFile, error) {
	paths, err := folder.Files(fsys)
	if err != nil {
		return nil, err
	}
	inputs := make([]InputFile, 0, len(paths))
	for _, p := range paths {
		n, sum, err := hashFile(fsys, p)
		if err != nil {
			return nil, err
		}
		inputs = append(inputs, InputFile{Path: p, Bytes: n, SHA256: sum})
	}
	return inputs, nil
}

func requested(ids []string, id string) bool {
	for _, r := range ids {
		if r == id {
			return true
		}
	}
	return false
}

// steps lists the algorithms behind the recorded values. A published version never changes its results.
func steps() []Step {
	return []Step{
		{"ion trace from spectra", ionAlgorithm},
		{"spectrum of a peak", apexAlgorithm + ", " + averageAlgorithm},
		{"noise", peak.NoiseAlgorithm},
		{"peak limits", peak.DetectionAlgorithm},
		{"area", peak.AreaAlgorithm},
		{"noise by the pharmacopoeias", peak.PharmacopoeiaAlgorithm},
		{"noise as it depends on the signal", peak.CountingAlgorithm},
		{"uncertainty of an area", peak.AreaUncertaintyAlgorithm},
		{"area by other ways", peak.SeparateDrop + ", " + peak.SeparateValley + ", " + peak.SeparateTangent + ", " + peak.SeparateExponent + ", " + peak.SeparateFit + ", " + peak.SeparateFitAlike},
		{"choice of the peak", choiceAlgorithm},
		{"drift over the batch", suitabilityAlgorithm},
		{"uncertainty of an abundance", abundanceAlgorithm},
		{"calibration", "wls-line-qr@1"},
		{"inverse prediction", "line-inverse@1"},
		{"uncertainty budget", "gum-first-order@1"},
		{"confirmation of the budget", uncertainty.PropagateAlgorithm + ", " + uncertainty.MonteCarloAlgorithm + " (" + uncertainty.GeneratorName + "), " + uncertainty.ComparisonAlgorithm},
	}
}
