// Package trace holds what an instrument recorded, as types: chromatograms in minutes and detector counts, and the
// facts that a raw file states about itself. It reads nothing; each file format has a sub-package that does, and
// package formats tells which one a file needs.
package trace

import "fmt"

// A RetentionTime is a time since injection, in minutes.
type RetentionTime float64

// Polarity of the ions that were monitored.
type Polarity string

const (
	Positive Polarity = "positive"
	Negative Polarity = "negative"
)

// A Transition names what a chromatogram followed: precursor and product ion by their m/z (dimensionless, as the file
// gives them), and the polarity. The zero values mean that the file does not say.
type Transition struct {
	PrecursorMZ float64  `json:"precursor_mz,omitempty" key:"precursor,optional" above:"0" doc:"m/z of the precursor ion."`
	ProductMZ   float64  `json:"product_mz,omitempty" key:"product,optional" above:"0" doc:"m/z of the product ion."`
	Polarity    Polarity `json:"polarity,omitempty" key:"polarity,optional" enum:"positive|negative"`
}

// A Chromatogram is one recorded trace. TimeMin and Intensity have the same length; times are in minutes and strictly
// increase; every value is finite.
type Chromatogram struct {
	ID         string // as in the file, unique in it
	Kind       Kind
	Transition Transition
	Unit       string // of the intensity, as the file states it ("mAU"), or empty
	TimeMin    []float64
	Intensity  []float64 // as acquired: detector counts, or the unit that the file states
}

// Kind of a chromatogram.
type Kind string

const (
	SRM        Kind = "srm"        // selected reaction monitoring
	SIM        Kind = "sim"        // selected ion monitoring, or an extracted ion
	TIC        Kind = "tic"        // total ion current
	Absorption Kind = "absorption" // ultraviolet or visible detector
	Other      Kind = "other"
)

// A Warning is something wrong in a file that did not stop it from being read.
type Warning struct {
	Code   string `json:"code"` // stable name, such as "index-offset"
	Detail string `json:"detail"`
}

// A File is what one raw file holds. What the file does not state is empty.
type File struct {
	Format        string // "mzML", "ANDI chromatography", "JCAMP-DX", "delimited text", …
	FormatVersion string // as the file states it
	StartTime     string // acquisition start as the file states it (RFC 3339, without offset where the file gives none)
	Instrument    string // model and serial number as the file states them
	Software      string // acquisition software and version as the file states them
	Method        string // acquisition method or scan settings, as the file names them
	SampleCode    string // sample name as the file states it
	Chromatograms []Chromatogram
	Scans         Scans        // spectra over time; nil where the file has none
	StoredPeaks   []StoredPeak // the file's own peak table
	Warnings      []Warning
}

// A StoredPeak is a row of the peak table that a file brings along, made by the instrument's software. It is what the instrument
// said: nothing is computed from it. Absent values are nil. Times are in minutes, areas in the trace's unit times minutes.
type StoredPeak struct {
	TraceID          string   `json:"trace_id"`
	Name             string   `json:"name,omitempty"`
	RetentionMin     float64  `json:"retention_min"`
	StartMin         *float64 `json:"start_min,omitempty"`
	EndMin           *float64 `json:"end_min,omitempty"`
	Area             *float64 `json:"area_counts_min,omitempty"`
	Height           *float64 `json:"height_counts,omitempty"`
	BaselineStartMin *float64 `json:"baseline_start_min,omitempty"`
	BaselineEndMin   *float64 `json:"baseline_end_min,omitempty"`
	BaselineStart    *float64 `json:"baseline_start_counts,omitempty"`
	BaselineEnd      *float64 `json:"baseline_end_counts,omitempty"`
	ByHand           bool     `json:"integrated_by_hand,omitempty"` // as the file says
	DetectionCodes   string   `json:"detection_codes,omitempty"`    // how the software drew the limits, in its own letters
}

// A SyntaxError says where a file is wrong, what was found and what would be accepted. Line and Column count from 1;
// 0 means that they are not known.
type SyntaxError struct {
	File         string
	Line, Column int
	Got, Want    string
	Hint         string
}

func (e *SyntaxError) Error() string {
	where := e.File
	if e.Line > 0 {
		where = fmt.Sprintf("%s:%d", where, e.Line)
		if e.Column > 0 {
			where = fmt.Sprintf("%s:%d", where, e.Column)
		}
	}
	return fmt.Sprintf("%s: got %s, want %s", where, e.Got, e.Want)
}
