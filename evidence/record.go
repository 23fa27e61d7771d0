package evidence

import (
	"assaywrit/evidence/calibration"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
	"assaywrit/evidence/uncertainty"
)

// RecordFormat names the format of evidence.json and its version.
const RecordFormat = "assaywrit-evidence/1"

// A Record is everything that was observed and computed in one case: evidence.json. It depends on the bytes of the
// inputs and on the engine's version alone. Times are in minutes, areas in counts·min, concentrations in ng/mL, and
// each field's JSON name says so. What is missing is absent.
type Record struct {
	Format   string               `json:"format"`
	Engine   Engine               `json:"engine"`
	Inputs   []InputFile          `json:"inputs"`
	Steps    []Step               `json:"steps"`
	Case     casefile.Case        `json:"case"`
	Method   casefile.Method      `json:"method"`
	Sequence []casefile.Injection `json:"sequence"`

	Injections  []Injection      `json:"injections"`                 // in acquisition order, one for each row of the sequence
	Separation  *SeparationStudy `json:"separation_study,omitempty"` // why these conditions were chosen
	CrossChecks []CrossCheck     `json:"cross_checks,omitempty"`     // what does not agree between raw files, or between them and the sequence
	History     *ControlHistory  `json:"control_history,omitempty"`
	Suitability []Suitability    `json:"suitability,omitempty"` // of the system over the batch
	Analytes    []Analyte        `json:"analytes"`              // those requested, in the method's order
}

// An Engine is the program that made a record.
type Engine struct {
	Name    string `json:"name"`
	Version string `json:"version"`
}

// A Step names the algorithm, with its version, that one kind of recorded value comes from.
type Step struct {
	Value     string `json:"value"`
	Algorithm string `json:"algorithm"`
}

// An InputFile is one file of the case folder.
type InputFile struct {
	Path   string `json:"path"`
	Bytes  int64  `json:"bytes"`
	SHA256 string `json:"sha256"` // hex
}

// An Injection is what one raw file gave.
type Injection struct {
	ID         string          `json:"injection"`
	File       string          `json:"file"`
	Role       casefile.Role   `json:"role"`
	Level      string          `json:"level,omitempty"`
	Aliquot    string          `json:"aliquot,omitempty"`
	Dilution   float64         `json:"dilution"`
	Format     string          `json:"file_format"`
	StartTime  string          `json:"file_start_time,omitempty"`
	Instrument string          `json:"file_instrument,omitempty"`
	Software   string          `json:"file_software,omitempty"`
	FileMethod string          `json:"file_method,omitempty"`
	SampleCode string          `json:"file_sample_code,omitempty"`
	Warnings   []trace.Warning `json:"warnings,omitempty"`

	StoredPeaks []trace.StoredPeak `json:"stored_peaks,omitempty"` // the file's own peak table: what the instrument said

	Measurements []Measurement `json:"measurements,omitempty"` // none for an excluded injection
}

// A Measurement is one compound followed by one trace in one injection.
type Measurement struct {
	Compound string `json:"compound"` // id of an analyte or internal standard
	Trace    string `json:"trace"`    // "quantifier", "qualifier-1", "qualifier-2", …, "internal-standard"

	TraceID    string           `json:"trace_id"` // in the file
	Transition trace.Transition `json:"transition"`
	Extraction *Extraction      `json:"extraction,omitempty"`     // only for an ion trace taken from spectra
	Unit       string           `json:"intensity_unit,omitempty"` // where the file states one; otherwise detector counts
	Points     int              `json:"points"`
	FirstMin   float64          `json:"first_min"`
	LastMin    float64          `json:"last_min"`

	Parameters     peak.Parameters `json:"parameters"`
	WindowStartMin float64         `json:"window_start_min"` // where the peak was sought
	WindowEndMin   float64         `json:"window_end_min"`
	Choice         string          `json:"choice"` // rule that chose the peak, such as "nearest-in-window@1"
	Noise          float64         `json:"noise_counts"`

	Peak      *peak.Peak    `json:"peak,omitempty"`      // the one used
	Automatic *peak.Peak    `json:"automatic,omitempty"` // only where a manual integration replaced it
	Manual    *ManualAction `json:"manual,omitempty"`
	Others    []peak.Peak   `json:"other_peaks,omitempty"` // found in the trace and not used

	Division *Division `json:"division,omitempty"` // where the method divides peaks by fitting, and the peak in use shares a baseline
	Merit    *Merit    `json:"merit,omitempty"`    // of the peak in use

	Stored   *StoredMatch    `json:"stored_peak,omitempty"` // the instrument's own peak at this place
	Spectrum *PeakSpectrum   `json:"spectrum,omitempty"`
	Warnings []trace.Warning `json:"warnings,omitempty"` // about this trace
}

// An Extraction says how an ion trace was taken from spectra.
type Extraction struct {
	Algorithm string   `json:"algorithm"`
	LowMZ     float64  `json:"low_mz"` // both ends included
	HighMZ    float64  `json:"high_mz"`
	Combine   string   `json:"combine"` // "sum" or "maximum"
	MSLevel   int      `json:"ms_level"`
	FromMin   *float64 `json:"from_min,omitempty"`
	ToMin     *float64 `json:"to_min,omitempty"`
}

// A StoredMatch is the peak of the file's own table whose apex lies within the limits of the peak that was used.
type StoredMatch struct {
	Index           int      `json:"index"`                     // in Injection.StoredPeaks
	AreaDifference  *float64 `json:"area_difference,omitempty"` // ours / the instrument's − 1
	ApexDifference  float64  `json:"apex_difference_min"`       // ours − the instrument's
	StartDifference *float64 `json:"start_difference_min,omitempty"`
	EndDifference   *float64 `json:"end_difference_min,omitempty"`
}

// A PeakSpectrum is the spectrum of a peak, taken from full-scan data.
type PeakSpectrum struct {
	Algorithm   string         `json:"algorithm"`
	Scans       []string       `json:"scans"` // ids of those averaged
	FromMin     float64        `json:"from_min"`
	ToMin       float64        `json:"to_min"`
	ToleranceMZ float64        `json:"tolerance_mz"`
	Background  []string       `json:"background_scans,omitempty"`
	Spectrum    trace.Spectrum `json:"spectrum"`
}

// A ManualAction says who changed an integration and why.
type ManualAction struct {
	By         string   `json:"by"`
	At         string   `json:"at"`
	Reason     string   `json:"reason"`
	ApprovedBy string   `json:"approved_by"`
	AreaChange *float64 `json:"area_change,omitempty"` // manual/automatic − 1; absent where there was no automatic peak
}

// An Analyte is what the batch says about one requested analyte.
type Analyte struct {
	ID   string        `json:"analyte"`
	Name string        `json:"name"`
	Kind casefile.Kind `json:"kind"`

	Reference         Reference          `json:"reference"`
	ReferenceSpectrum *ReferenceSpectrum `json:"reference_spectrum,omitempty"`
	Identifications   []Identification   `json:"identifications"`             // sample aliquots, negative controls and blanks with a peak
	InternalStandard  []InternalResponse `json:"internal_standard_responses"` // whole sequence
	Blanks            []Blank            `json:"blanks"`

	Calibration *Calibration    `json:"calibration,omitempty"` // absent where the method has none, or it could not be fitted
	NoFit       string          `json:"no_fit,omitempty"`      // why a calibration that was asked for could not be fitted
	Controls    []Concentration `json:"controls,omitempty"`
	Aliquots    []Concentration `json:"aliquots,omitempty"`
	Result      *Result         `json:"result,omitempty"` // absent where any aliquot has no concentration
	NoResult    string          `json:"no_result,omitempty"`
}

// A ReferenceSpectrum is the spectrum of a reference material that the method names.
type ReferenceSpectrum struct {
	File     string         `json:"file"`
	Title    string         `json:"title"`      // by the method
	Stated   string         `json:"file_title"` // by the file
	Origin   string         `json:"file_origin,omitempty"`
	Spectrum trace.Spectrum `json:"spectrum"`
}

// A Statistic is a mean with its spread, over named injections.
type Statistic struct {
	Mean float64  `json:"mean"`
	SD   *float64 `json:"sd,omitempty"`
	Min  float64  `json:"min"`
	Max  float64  `json:"max"`
	N    int      `json:"n"`
}

// A Reference is what the reference injections of the same batch show.
type Reference struct {
	Injections        []string         `json:"injections"` // ids that served, in order
	RetentionMin      *Statistic       `json:"retention_min,omitempty"`
	RelativeRetention *Statistic       `json:"relative_retention,omitempty"` // to the internal standard
	Ratios            []ReferenceRatio `json:"ratios"`
}

// A ReferenceRatio is the area of one of the analyte's ions over that of its most abundant one (the base), over the
// reference injections in which both have a peak.
type ReferenceRatio struct {
	Trace string    `json:"trace"`
	Base  bool      `json:"base,omitempty"`
	Ratio Statistic `json:"ratio"`
}

// An Identification is what one injection shows of an analyte, beside the reference.
type Identification struct {
	Injection      string `json:"injection"`
	InjectionIndex int    `json:"injection_index"` // in Record.Injections
	Aliquot        string `json:"aliquot,omitempty"`

	RetentionMin               *float64   `json:"retention_min,omitempty"`
	RetentionDifferenceMin     *float64   `json:"retention_difference_min,omitempty"`     // − reference mean
	RelativeRetention          *float64   `json:"relative_retention,omitempty"`           // to the internal standard
	RelativeRetentionDeviation *float64   `json:"relative_retention_deviation,omitempty"` // / reference mean − 1
	Ions                       []IonMatch `json:"ions"`                                   // quantifier first, then qualifiers
}

// An IonMatch is one monitored ion of an analyte in one injection. Abundances are areas relative to the most abundant
// ion of the reference (1 = 100 %); the same ion serves as base in the injection.
type IonMatch struct {
	Trace              string   `json:"trace"`
	MeasurementIndex   int      `json:"measurement_index"` // in Injection.Measurements
	SignalToNoise      *float64 `json:"signal_to_noise,omitempty"`
	Base               bool     `json:"base,omitempty"`
	Abundance          *float64 `json:"abundance,omitempty"`
	AbundanceStdU      *float64 `json:"abundance_std_u,omitempty"` // from noise on both areas
	ReferenceAbundance *float64 `json:"reference_abundance,omitempty"`
	ApexOffsetMin      *float64 `json:"apex_offset_min,omitempty"` // − apex of the quantifier
}

// An InternalResponse is the area of the internal standard in one injection.
type InternalResponse struct {
	Injection      string        `json:"injection"`
	InjectionIndex int           `json:"injection_index"`
	Role           casefile.Role `json:"role"`
	Area           *float64      `json:"area_counts_min,omitempty"`
	Relative       *float64      `json:"relative,omitempty"` // to the mean over the calibrators
}

// A Blank is what an injection that should hold no analyte shows.
type Blank struct {
	Injection              string        `json:"injection"`
	InjectionIndex         int           `json:"injection_index"`
	Role                   casefile.Role `json:"role"`
	After                  string        `json:"after,omitempty"` // injection before it
	Area                   float64       `json:"area_counts_min"` // of the quantifier; 0 where no peak was found
	OfLowest               *float64      `json:"of_lowest_calibrator,omitempty"`
	InternalStandardArea   float64       `json:"internal_standard_area_counts_min"`
	OfInternalStandard     *float64      `json:"of_internal_standard,omitempty"` // of the mean over the calibrators
	ExpectInternalStandard bool          `json:"expect_internal_standard,omitempty"`
}

// A Calibration is a fitted line and the injections behind its points.
type Calibration struct {
	Fit         calibration.Fit `json:"fit"`
	Injections  []string        `json:"injections"` // one for each point of the fit
	Levels      []string        `json:"levels"`     // likewise
	LowNGPerML  float64         `json:"lowest_ng_per_ml"`
	HighNGPerML float64         `json:"highest_ng_per_ml"`
}

// A Concentration is an amount read from the line.
type Concentration struct {
	Injection      string   `json:"injection"`
	InjectionIndex int      `json:"injection_index"`
	Level          string   `json:"level,omitempty"`
	Aliquot        string   `json:"aliquot,omitempty"`
	Dilution       float64  `json:"dilution"`
	Response       *float64 `json:"response_ratio,omitempty"` // area of the quantifier / area of the internal standard
	ReadNGPerML    *float64 `json:"read_ng_per_ml,omitempty"` // from the line, before dilution
	StdU           *float64 `json:"read_std_u_ng_per_ml,omitempty"`
	NGPerML        *float64 `json:"ng_per_ml,omitempty"` // × dilution
	InRange        *bool    `json:"in_calibrated_range,omitempty"`
	NominalNGPerML *float64 `json:"nominal_ng_per_ml,omitempty"`
	Bias           *float64 `json:"relative_bias,omitempty"`
	Missing        string   `json:"missing,omitempty"` // why there is no concentration
}

// A Result is the sample's concentration: the mean of its aliquots with its uncertainty budget (ng/mL).
type Result struct {
	NGPerML    float64                `json:"ng_per_ml"`
	N          int                    `json:"aliquots"`
	SD         *float64               `json:"sd_ng_per_ml,omitempty"`
	RSD        *float64               `json:"relative_sd,omitempty"`
	Prediction calibration.Prediction `json:"prediction"` // of the mean response, before dilution
	Budget     uncertainty.Budget     `json:"budget"`

	Confirmation   *Confirmation `json:"confirmation,omitempty"` // of the budget, by the measurement model and a simulation
	NoConfirmation string        `json:"no_confirmation,omitempty"`
}
