// Package casefile reads and validates the folder that a laboratory writes: case.yaml, method.yaml, sequence.csv.
package casefile

import (
	"assaywrit/evidence/calibration"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

// A Folder is a case as read: everything in it has been checked for form.
type Folder struct {
	Case       Case        `json:"case"`
	Method     Method      `json:"method"`
	Injections []Injection `json:"sequence"`
}

// A Case is case.yaml, format assaywrit-case/1.
type Case struct {
	Format        string `json:"format"`
	Number        string `json:"case"`
	Demonstration bool   `json:"demonstration,omitempty"`

	Laboratory Laboratory `json:"laboratory"`
	Customer   Customer   `json:"customer"`
	Sample     Sample     `json:"sample"`
	Request    Request    `json:"request"`

	MethodFile   string `json:"method"`   // path inside the folder, forward slashes
	SequenceFile string `json:"sequence"` // path inside the folder
	Criteria     string `json:"criteria"` // name of a built-in set, or path of a file inside the folder

	People      []Person            `json:"people"`
	Signatories []Signatory         `json:"signatories"`
	Custody     []CustodyEvent      `json:"custody"`
	InitialTest *InitialTest        `json:"initial_test,omitempty"`
	Materials   []Material          `json:"materials,omitempty"`
	Deviations  []Deviation         `json:"deviations"`
	Manual      []ManualIntegration `json:"manual_integrations,omitempty"`
	Documents   []Document          `json:"documents,omitempty"`
	Supersedes  *Supersedes         `json:"supersedes,omitempty"`
}

type Laboratory struct {
	Code    string `json:"code"`
	Name    string `json:"name"`
	Address string `json:"address"`
	Site    string `json:"site,omitempty"` // where the work was done, if elsewhere
}

type Customer struct {
	Name      string `json:"name"`
	Contact   string `json:"contact"`
	Reference string `json:"reference,omitempty"`
}

// A Sample is known by code numbers only.
type Sample struct {
	Code            string   `json:"code"`
	LaboratoryCode  string   `json:"laboratory_code"`
	Container       string   `json:"container"` // such as "A bottle"
	Matrix          string   `json:"matrix"`
	CollectedAt     string   `json:"collected"` // RFC 3339
	ReceivedAt      string   `json:"received"`  // RFC 3339
	Condition       string   `json:"condition"`
	Irregularities  []string `json:"irregularities,omitempty"`
	VolumeML        *float64 `json:"volume_ml,omitempty"`
	PH              *float64 `json:"ph,omitempty"`
	SpecificGravity *float64 `json:"specific_gravity,omitempty"`
	Appearance      string   `json:"appearance,omitempty"`
	Storage         string   `json:"storage,omitempty"`
}

type Request struct {
	Text     string   `json:"text"`
	TestType string   `json:"test_type,omitempty"`
	Activity string   `json:"activity,omitempty"` // sport and discipline, or workplace
	Analytes []string `json:"analytes"`           // ids of the method's analytes to be reported
}

type Person struct {
	Code     string `json:"code"` // such as "P-03": no names are needed
	Name     string `json:"name,omitempty"`
	Position string `json:"position"`
}

// A Signatory is a person who is to sign, and what the signature means.
type Signatory struct {
	Person  string `json:"person"`
	Meaning string `json:"meaning"` // "analysed", "reviewed", "authorised"
}

type CustodyEvent struct {
	At       string `json:"at"` // RFC 3339
	Item     string `json:"item"`
	Event    string `json:"event"`
	From     string `json:"from,omitempty"`
	To       string `json:"to,omitempty"`
	Location string `json:"location,omitempty"`
	Seal     string `json:"seal,omitempty"`
	Note     string `json:"note,omitempty"`
}

type InitialTest struct {
	At      string `json:"at"`
	Method  string `json:"method"`
	Aliquot string `json:"aliquot"`
	By      string `json:"by"`
	Result  string `json:"result"`
}

type Material struct {
	Name        string `json:"name"`
	Lot         string `json:"lot"`
	Expires     string `json:"expires"` // YYYY-MM-DD
	Certificate string `json:"certificate,omitempty"`
}

type Deviation struct {
	At         string `json:"at,omitempty"`
	Text       string `json:"text"`
	ApprovedBy string `json:"approved_by,omitempty"`
}

// A ManualIntegration replaces the automatic limits of one peak; the automatic result is kept beside it.
type ManualIntegration struct {
	Injection  string  `json:"injection"`
	Compound   string  `json:"compound"` // id of an analyte or internal standard
	Trace      string  `json:"trace"`    // "quantifier", "qualifier-1", …, "internal-standard"
	StartMin   float64 `json:"start_min"`
	EndMin     float64 `json:"end_min"`
	By         string  `json:"by"`
	At         string  `json:"at"`
	Reason     string  `json:"reason"`
	ApprovedBy string  `json:"approved_by"`
}

type Document struct {
	File  string `json:"file"`
	Title string `json:"title"`
}

type Supersedes struct {
	Root   string `json:"root"` // Merkle root of the superseded bundle, hex
	Reason string `json:"reason"`
}

// A Method is method.yaml, format assaywrit-method/1: the validated method.
type Method struct {
	Format        string     `json:"format"`
	ID            string     `json:"id"`
	Version       string     `json:"version"`
	Title         string     `json:"title"`
	EffectiveFrom string     `json:"effective_from,omitempty"` // YYYY-MM-DD
	Technique     string     `json:"technique"`
	Matrix        string     `json:"matrix"`
	Summary       string     `json:"summary"`
	Instrument    Instrument `json:"instrument"`

	Tables []TableLayout `json:"tables,omitempty"` // how delimited text files are laid out

	Integration    peak.Parameters `json:"integration"`
	Identification Identification  `json:"identification"`
	Batch          BatchLimits     `json:"batch"`

	InternalStandards []InternalStandard `json:"internal_standards"`
	Analytes          []Analyte          `json:"analytes"`
}

type Instrument struct {
	ID                string   `json:"id"`
	Description       string   `json:"description,omitempty"`
	Column            string   `json:"column,omitempty"`
	ColumnLengthMM    *float64 `json:"column_length_mm,omitempty"`
	MobilePhase       string   `json:"mobile_phase,omitempty"`
	FlowMLPerMin      *float64 `json:"flow_ml_per_min,omitempty"`
	InjectionVolumeUL *float64 `json:"injection_volume_ul,omitempty"`
	VoidTimeMin       *float64 `json:"void_time_min,omitempty"`
	Ionisation        string   `json:"ionisation,omitempty"`
}

// A TableLayout declares the columns of delimited text files whose path matches Files.
type TableLayout struct {
	Files       string        `json:"files"`     // path pattern, such as "raw/*.csv"
	Separator   string        `json:"separator"` // "comma", "semicolon", "tab"
	DecimalMark string        `json:"decimal_mark"`
	HeaderLines int           `json:"header_lines"`
	TimeColumn  int           `json:"time_column"` // from 1
	TimeUnit    string        `json:"time_unit"`   // "min" or "s"
	Columns     []TableColumn `json:"columns"`
}

type TableColumn struct {
	Column int    `json:"column"` // from 1
	ID     string `json:"id"`
	trace.Transition
}

// Identification says which injections of the batch serve as the reference and how peaks are sought.
type Identification struct {
	ReferenceRoles  []Role  `json:"reference_roles"` // such as calibrator, control
	CoelutionMin    float64 `json:"coelution_min"`   // a qualifier's apex lies within this of the quantifier's
	TransitionTolMZ float64 `json:"transition_tolerance_mz"`
}

// BatchLimits are the method's own limits for batch acceptance. Fractions are of 1.
type BatchLimits struct {
	BlankMaxOfLowest           float64 `json:"blank_max_of_lowest"`            // analyte area in a blank / mean area of the lowest calibrator
	BlankMaxOfInternalStandard float64 `json:"blank_max_of_internal_standard"` // internal-standard area in a blank without it / mean area in the calibrators
	CalibratorBias             float64 `json:"calibrator_bias"`                // |back-calculated/nominal − 1|
	LowestCalibratorBias       float64 `json:"lowest_calibrator_bias"`
	CalibratorShare            float64 `json:"calibrator_share"`  // share of calibrators that must pass
	CalibratorLevels           int     `json:"calibrator_levels"` // levels that must remain
	ControlBias                float64 `json:"control_bias"`
	ControlShare               float64 `json:"control_share"`
	ControlShareEachLevel      float64 `json:"control_share_each_level"`
	InternalStandardLow        float64 `json:"internal_standard_low"` // response / mean of calibrators, lower limit
	InternalStandardHigh       float64 `json:"internal_standard_high"`
	AliquotSpread              float64 `json:"aliquot_spread"` // relative standard deviation of the aliquots, upper limit
	Aliquots                   int     `json:"aliquots"`       // aliquots that a quantitative result needs
}

type InternalStandard struct {
	ID                   string     `json:"id"`
	Name                 string     `json:"name"`
	ExpectedRetentionMin float64    `json:"expected_retention_min"`
	RetentionWindowMin   float64    `json:"retention_window_min"` // half width of the search window
	Transition           Transition `json:"transition"`
}

// A Transition is one monitored reaction, or, for a table, a named column.
type Transition struct {
	trace.Transition
	TraceID string `json:"trace_id,omitempty"` // where the file names the trace instead of its ions
}

// Kind of an analyte: what is asked of it.
type Kind string

const (
	Threshold Kind = "threshold"
	Presence  Kind = "presence"
)

type Analyte struct {
	ID                   string       `json:"id"`
	Name                 string       `json:"name"`
	Kind                 Kind         `json:"kind"`
	InternalStandard     string       `json:"internal_standard"`
	ExpectedRetentionMin float64      `json:"expected_retention_min"`
	RetentionWindowMin   float64      `json:"retention_window_min"`
	Quantifier           Transition   `json:"quantifier"`
	Qualifiers           []Transition `json:"qualifiers"`
	Unit                 string       `json:"unit"` // for people: "ng/mL", "ug/mL"
	Calibration          *Calibration `json:"calibration,omitempty"`
	Uncertainty          *Uncertainty `json:"uncertainty,omitempty"`
}

type Calibration struct {
	Model     string                `json:"model"` // "line"
	Weighting calibration.Weighting `json:"weighting"`
}

// Uncertainty names how repeatability is taken and the components stated by the validation.
type Uncertainty struct {
	Repeatability string            `json:"repeatability"` // "aliquots": from this case; "none": inside a stated component
	Components    []StatedComponent `json:"components"`
}

type StatedComponent struct {
	Name     string   `json:"name"`
	Type     string   `json:"type"`               // "A" or "B"
	Relative *float64 `json:"relative,omitempty"` // standard uncertainty / value
	Absolute *float64 `json:"absolute_ng_per_ml,omitempty"`
	DoF      *float64 `json:"degrees_of_freedom,omitempty"`
	Source   string   `json:"source"`
}

// Role of an injection in the batch.
type Role string

const (
	SolventBlank    Role = "solvent-blank"
	MatrixBlank     Role = "matrix-blank" // matrix without analyte and without internal standard
	ZeroCalibrator  Role = "zero"         // matrix with internal standard, without analyte
	Calibrator      Role = "calibrator"
	Control         Role = "control"          // known amount
	NegativeControl Role = "negative-control" // matrix with internal standard, known to be without analyte
	CarryoverBlank  Role = "carryover-blank"  // the blank right after the highest calibrator, or before a sample
	SampleAliquot   Role = "sample"
	Excluded        Role = "excluded" // acquired, not used; needs a note
)

// An Injection is one row of sequence.csv.
type Injection struct {
	ID         string    `json:"injection"`
	File       string    `json:"file"` // path inside the folder, forward slashes
	Role       Role      `json:"role"`
	Level      string    `json:"level,omitempty"`
	Aliquot    string    `json:"aliquot,omitempty"`
	SampleCode string    `json:"sample_code,omitempty"`
	Dilution   float64   `json:"dilution"` // factor, 1 where not stated
	AcquiredAt string    `json:"acquired"` // RFC 3339
	Operator   string    `json:"operator"`
	Note       string    `json:"note,omitempty"`
	Nominal    []Nominal `json:"nominal,omitempty"`
	Line       int       `json:"line"` // in sequence.csv
}

// A Nominal is the known concentration of one analyte in a calibrator or control.
type Nominal struct {
	Analyte string  `json:"analyte"`
	NGPerML float64 `json:"ng_per_ml"`
}
