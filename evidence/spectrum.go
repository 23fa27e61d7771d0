package evidence

import (
	"fmt"
	"io/fs"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/formats"
	"assaywrit/evidence/trace/fullscan"
)

// The rules by which the spectrum of a peak is taken.
const (
	apexAlgorithm    = "apex-scan@1"
	averageAlgorithm = "mean-above-half-height@1"
)

// peakSpectrum takes the spectrum of a peak by the method's rule.
func peakSpectrum(name string, file *trace.File, r *casefile.SpectrumRule, t casefile.Transition, p *peak.Peak, tolMZ float64) (*PeakSpectrum, error) {
	if file.Scans == nil {
		return nil, &trace.SyntaxError{File: name, Got: held(file), Want: "spectra, as the method takes that of a peak", Hint: "see what a file holds with: assaywrit show FILE"}
	}
	f := fullscan.Filter{MSLevel: 1, Polarity: t.Polarity}
	if r.MSLevel != nil {
		f.MSLevel = *r.MSLevel
	}
	if f.MSLevel > 1 && t.PrecursorMZ > 0 {
		f.PrecursorMZ, f.PrecursorTolMZ = t.PrecursorMZ, tolMZ
	}
	out := &PeakSpectrum{ToleranceMZ: r.ToleranceMZ, Algorithm: apexAlgorithm}
	var taken *fullscan.Taken
	var err error
	if span, ok := upperHalf(p); r.Take == "average" && ok {
		out.Algorithm = averageAlgorithm
		taken, err = fullscan.Average(file.Scans, f, span, r.ToleranceMZ)
	} else {
		taken, err = fullscan.Apex(file.Scans, f, p.ApexMin)
	}
	if err == nil && len(r.Background) > 0 {
		var spans []fullscan.Span
		for _, b := range r.Background {
			spans = append(spans, fullscan.Span{StartMin: p.ApexMin + b.FromMin, EndMin: p.ApexMin + b.ToMin})
		}
		err = taken.Subtract(file.Scans, f, spans, r.ToleranceMZ)
	}
	if err != nil {
		return nil, fileError(name, fmt.Errorf("the spectrum of the peak at %g min: %w", p.ApexMin, err))
	}
	out.Scans, out.FromMin, out.ToMin, out.Background, out.Spectrum = taken.Scans, taken.FromMin, taken.ToMin, taken.Background, taken.Spectrum
	return out, nil
}

// upperHalf is the stretch of a peak above half its height, taken as even on both sides of the apex.
func upperHalf(p *peak.Peak) (fullscan.Span, bool) {
	if p.WidthHalfMin == nil {
		return fullscan.Span{}, false
	}
	half := *p.WidthHalfMin / 2
	return fullscan.Span{StartMin: p.ApexMin - half, EndMin: p.ApexMin + half}, true
}

// referenceSpectrum reads the spectrum that the method names, or returns nil where it names none.
func referenceSpectrum(fsys fs.FS, a *casefile.Analyte) (*ReferenceSpectrum, error) {
	if a.Spectrum == nil || a.Spectrum.Reference == nil {
		return nil, nil
	}
	ref := a.Spectrum.Reference
	src, done, err := open(fsys, ref.File)
	if err != nil {
		return nil, err
	}
	defer done()
	s, err := formats.ReadSpectrum(ref.File, src)
	if err != nil {
		return nil, err
	}
	return &ReferenceSpectrum{File: ref.File, Title: ref.Title, Stated: s.Title, Origin: s.Origin, Spectrum: s.Mass}, nil
}
