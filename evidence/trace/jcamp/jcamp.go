// Package jcamp reads JCAMP-DX files (IUPAC: R. S. McDonald, P. A. Wilks, Appl. Spectrosc. 42 (1988) 151, version 4.24; P. Lampen et al.,
// Appl. Spectrosc. 48 (1994) 1545, mass spectrometry, version 5.00; P. Lampen et al., Pure Appl. Chem. 71 (1999) 1549, version 5.01; all
// from memory).
//
// Inside are labelled data records with comments, blocks within LINK blocks, the forms (XY..XY) and (X++(Y..Y)) with ordinates in AFFN,
// PAC, SQZ, DIF and DUP form, and the pages of NTUPLES. Every check that the format offers is made: Y-checks, abscissae of lines and numbers
// of points are errors where they do not hold, the rest are warnings.
//
// Read gives chromatograms in minutes and mass spectra over time. ReadSpectra gives spectra of any kind, such as reference spectra. Decode
// gives the tables as they stand. Units come from the file and are never guessed from the values. What is left out: peak widths and
// multiplicities, structures (JCAMP-CS), and ordinates that the file marks as missing ("?"), which are refused.
package jcamp

import (
	"fmt"

	"assaywrit/evidence/trace"
)

const (
	unitHint    = "export the run with its unit, as in ##XUNITS= MINUTES or ##XUNITS= SECONDS"
	exportHint  = "export the run again and compare its SHA-256"
	spectraHint = "what is no chromatogram or mass spectrum can serve as a reference spectrum only"
)

// Sniff tells whether content begins, after a byte-order mark, blank space and comments, with a ##TITLE= record.
func Sniff(head []byte) bool {
	at, _ := beginning(head)
	label, _, ok := cutLabel(head[at:])
	return ok && label == labelTitle
}

// Read reads chromatograms and mass spectra. Times are in minutes; a chromatogram must state its unit of time. A mass spectrum without a
// retention time is one scan at 0 min. Retention times of pages without a unit are taken as seconds, the default of the mass spectrometry
// protocol (from memory), with the warning "time-unit". Other kinds of data are refused. The error is a *trace.SyntaxError, or from src.
func Read(name string, src trace.Source) (*trace.File, error) {
	r, err := decode(name, src)
	if err != nil {
		return nil, err
	}
	return r.file()
}

// file sorts the tables into chromatograms and scans.
func (r *reader) file() (*trace.File, error) {
	f := &trace.File{Format: "JCAMP-DX", FormatVersion: r.outer.version}
	f.SampleCode = r.agreed(func(f *facts) string { return f.sample })
	f.Instrument = r.agreed(func(f *facts) string { return f.instrument })
	f.StartTime = r.startTime()
	var scans scanList
	ids := map[string]bool{}
	for i := range r.tables {
		t := &r.tables[i]
		kind, err := r.kind(t)
		if err != nil {
			return nil, err
		}
		if kind == massSpectrum {
			if err := scans.add(r, t); err != nil {
				return nil, err
			}
			continue
		}
		c, err := r.chromatogram(t, ids)
		if err != nil {
			return nil, err
		}
		f.Chromatograms = append(f.Chromatograms, c)
	}
	if len(scans.held.Headers) > 0 {
		if err := scans.check(r); err != nil {
			return nil, err
		}
		f.Scans = &scans.held
	}
	f.Warnings = r.warnings.list()
	return f, nil
}

// agreed is a fact of the outermost block, or else what all blocks with data agree on.
func (r *reader) agreed(get func(*facts) string) string {
	if s := get(r.outer); s != "" {
		return s
	}
	common := ""
	for i := range r.tables {
		switch s := get(r.tables[i].facts); {
		case s == "" || s == common:
		case common == "":
			common = s
		default:
			return ""
		}
	}
	return common
}

// refuse is an error at a line of the file.
func (r *reader) refuse(line, column int, got, want, hint string) error {
	return &trace.SyntaxError{File: r.name, Line: line, Column: column, Got: got, Want: want, Hint: hint}
}

// clip shortens text from the file for a message.
func clip(s string) string {
	const most = 60
	if len(s) <= most {
		return s
	}
	return fmt.Sprintf("%.*s…", most, s)
}
