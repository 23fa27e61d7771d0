// Package render turns an evidence record and a finding into pages. It decides nothing and computes nothing that is reported:
// charts are scaled, and numbers rounded for people, in one place.
//
// The PDFs are the same bytes for the same input and the same build of the program; another release of the compiler may compress
// them otherwise, so they are checked by their hash and never drawn again.
package render

import (
	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/trace"
)

// Traces gives the chromatograms behind a record, by the raw file's path and the trace's id in it.
type Traces interface {
	Chromatogram(file, traceID string) (trace.Chromatogram, bool)
}

// A File is one file of the bundle, for the printed list.
type File struct {
	Path   string
	Bytes  int64
	SHA256 string // hex
}

// Input is everything that is drawn.
type Input struct {
	Record         *evidence.Record
	Finding        *decision.Finding
	Traces         Traces
	Criteria       *decision.Set // for listing its values; may be absent
	Files          []File        // the bundle's other files known so far
	EvidenceSHA256 string
	FindingSHA256  string
}
