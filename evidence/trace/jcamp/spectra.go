package jcamp

import (
	"fmt"

	"assaywrit/evidence/trace"
)

// A Spectrum is one spectrum of a file of reference spectra, or of any kind. What the file does not state is empty.
type Spectrum struct {
	Title          string
	DataType       string // as stated, such as MASS SPECTRUM
	CAS            string // CAS registry number
	Formula        string // molecular formula, as written
	Origin, Owner  string
	XUnits, YUnits string
	Mass           trace.Spectrum // of a mass spectrum, ascending; otherwise empty
	X, Y           []float64      // of any other kind, in the order of the file; otherwise empty
}

// ReadSpectra reads the spectra of a file, one for each table, whatever their kind. The error is a *trace.SyntaxError, or from src.
// Retention times are left out.
func ReadSpectra(name string, src trace.Source) ([]Spectrum, error) {
	r, err := decode(name, src)
	if err != nil {
		return nil, err
	}
	list := make([]Spectrum, 0, len(r.tables))
	for i := range r.tables {
		t := &r.tables[i]
		if len(t.X) == 0 {
			return nil, r.refuse(t.Line, 1, fmt.Sprintf("a spectrum without points in %s", spelt[t.known]), "at least one", exportHint)
		}
		f := t.facts
		s := Spectrum{Title: f.title, DataType: f.dataType, CAS: f.cas, Formula: f.formula, Origin: f.origin, Owner: f.owner, XUnits: t.XUnits, YUnits: t.YUnits}
		if k, _ := r.kind(t); k == massSpectrum {
			if s.Mass, err = r.spectrum(t); err != nil {
				return nil, err
			}
		} else {
			s.X, s.Y = t.X, t.Y
		}
		list = append(list, s)
	}
	return list, nil
}
