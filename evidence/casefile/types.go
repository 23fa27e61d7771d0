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
	Study      *Study      `json:"study,omitempty"` // where the case names one
}

// A Case is case.yaml, format assaywrit-case/1.
type Case struct {
	Format        string `json:"format" key:"format" enum:"assaywrit-case/1" doc:"Format of this file and its version."`
	Number        string `json:"case" key:"case" doc:"Number of the case; it appears on every page." pattern:"^[A-Za-z0-9][A-Za-z0-9._/-]*$"`
	Demonstration bool   `json:"demonstration,omitempty" key:"demonstration,optional" doc:"true marks every page DEMONSTRATION, NOT VALID."`

	Laboratory Laboratory `json:"laboratory" key:"laboratory" doc:"The laboratory that issues the package."`
	Customer   Customer   `json:"customer" key:"customer" doc:"The authority that asked for the analysis."`
	Sample     Sample     `json:"sample" key:"sample" doc:"The sample, by code numbers only."`
	Request    Request    `json:"request" key:"request" doc:"What was asked."`

	MethodFile     string `json:"method" key:"method" format:"path" doc:"The method, a file in this folder."`             // path inside the folder, forward slashes
	SequenceFile   string `json:"sequence" key:"sequence" format:"path" doc:"The injection list, a file in this folder."` // path inside the folder
	Study          string `json:"separation_study,omitempty" key:"separation_study,optional" format:"path" doc:"A study of the separation, a file in this folder."`
	ControlHistory string `json:"control_history,omitempty" key:"control_history,optional" format:"path" doc:"A table of the controls of earlier batches, a file in this folder."`
	Criteria       string `json:"criteria" key:"criteria" doc:"Name of a built-in criteria set, or the path of a file in this folder."` // name of a built-in set, or path of a file inside the folder

	People      []Person            `json:"people" key:"people" minitems:"1" doc:"Everyone who acted in the case, by code."`
	Signatories []Signatory         `json:"signatories" key:"signatories" minitems:"1" doc:"Who is to sign, and what each signature means."`
	Custody     []CustodyEvent      `json:"custody" key:"custody" minitems:"1" doc:"Chain of custody, in order of time."`
	InitialTest *InitialTest        `json:"initial_test,omitempty" key:"initial_test,optional" doc:"The initial (screening) test, if one was made."`
	Materials   []Material          `json:"materials,omitempty" key:"materials,optional" doc:"Reference materials and reagents used."`
	Deviations  []Deviation         `json:"deviations" key:"deviations" doc:"Deviations from the method; [] where there were none."`
	Manual      []ManualIntegration `json:"manual_integrations,omitempty" key:"manual_integrations,optional" doc:"Integrations set by hand."`
	Documents   []Document          `json:"documents,omitempty" key:"documents,optional" doc:"Files in documents/ that belong to the package."`
	Supersedes  *Supersedes         `json:"supersedes,omitempty" key:"supersedes,optional" doc:"The bundle that this one replaces."`
}

type Laboratory struct {
	Code    string `json:"code" key:"code" doc:"Laboratory code."`
	Name    string `json:"name" key:"name" doc:"Name of the laboratory."`
	Address string `json:"address" key:"address" doc:"Postal address of the laboratory."`
	Site    string `json:"site,omitempty" key:"site,optional" doc:"Where the work was done, if elsewhere."` // where the work was done, if elsewhere
}

type Customer struct {
	Name      string `json:"name" key:"name" doc:"Name of the authority."`
	Contact   string `json:"contact" key:"contact" doc:"Whom to write to there."`
	Reference string `json:"reference,omitempty" key:"reference,optional" doc:"The authority's own reference."`
}

// A Sample is known by code numbers only.
type Sample struct {
	Code            string   `json:"code" key:"code" doc:"Sample code, never a name."`
	LaboratoryCode  string   `json:"laboratory_code" key:"laboratory_code" doc:"Code that the laboratory gave it."`
	Container       string   `json:"container" key:"container" doc:"Such as A bottle."` // such as "A bottle"
	Matrix          string   `json:"matrix" key:"matrix" doc:"Such as urine."`
	CollectedAt     string   `json:"collected" key:"collected" format:"rfc3339" doc:"When the sample was taken."`     // RFC 3339
	ReceivedAt      string   `json:"received" key:"received" format:"rfc3339" doc:"When the laboratory received it."` // RFC 3339
	Condition       string   `json:"condition" key:"condition" doc:"Condition at receipt."`
	Irregularities  []string `json:"irregularities,omitempty" key:"irregularities,optional" doc:"What was irregular at receipt, a sentence each."`
	VolumeML        *float64 `json:"volume_ml,omitempty" key:"volume,optional" unit:"mL" above:"0" doc:"Volume received."`
	PH              *float64 `json:"ph,omitempty" key:"ph,optional" min:"0" max:"14" doc:"pH at receipt."`
	SpecificGravity *float64 `json:"specific_gravity,omitempty" key:"specific_gravity,optional" min:"1" max:"1.1" doc:"At 20 °C relative to water."`
	Appearance      string   `json:"appearance,omitempty" key:"appearance,optional" doc:"Colour and clearness."`
	Storage         string   `json:"storage,omitempty" key:"storage,optional" doc:"Where and how it is kept."`
}

type Request struct {
	Text     string   `json:"text" key:"text" doc:"The request in a sentence."`
	TestType string   `json:"test_type,omitempty" key:"test_type,optional" doc:"Such as in-competition."`
	Activity string   `json:"activity,omitempty" key:"activity,optional" doc:"Sport and discipline, or workplace."`    // sport and discipline, or workplace
	Analytes []string `json:"analytes" key:"analytes" minitems:"1" doc:"Ids of the method's analytes to be reported."` // ids of the method's analytes to be reported
}

type Person struct {
	Code     string `json:"code" key:"code" doc:"Such as P-03; no names are needed."` // such as "P-03": no names are needed
	Name     string `json:"name,omitempty" key:"name,optional" doc:"Name, only where it has to be given."`
	Position string `json:"position" key:"position" doc:"Position, such as analyst."`
}

// A Signatory is a person who is to sign, and what the signature means.
type Signatory struct {
	Person  string `json:"person" key:"person" doc:"Code of a person."`
	Meaning string `json:"meaning" key:"meaning" enum:"analysed|reviewed|authorised" doc:"What the signature says."` // "analysed", "reviewed", "authorised"
}

type CustodyEvent struct {
	At       string `json:"at" key:"at" format:"rfc3339" doc:"When it happened."` // RFC 3339
	Item     string `json:"item" key:"item" doc:"What was handed over or worked on, such as A bottle or aliquot A1."`
	Event    string `json:"event" key:"event" doc:"What happened."`
	From     string `json:"from,omitempty" key:"from,optional" doc:"Code of the person who gave it."`
	To       string `json:"to,omitempty" key:"to,optional" doc:"Code of the person who has it now."`
	Location string `json:"location,omitempty" key:"location,optional" doc:"Where the item was then."`
	Seal     string `json:"seal,omitempty" key:"seal,optional" doc:"Number and state of the seal."`
	Note     string `json:"note,omitempty" key:"note,optional" doc:"What else is to be said of the event."`
}

type InitialTest struct {
	At      string `json:"at" key:"at" format:"rfc3339" doc:"When the test was made."`
	Method  string `json:"method" key:"method" doc:"Procedure of the test."`
	Aliquot string `json:"aliquot" key:"aliquot" doc:"Aliquot that was tested."`
	By      string `json:"by" key:"by" doc:"Code of a person."`
	Result  string `json:"result" key:"result" doc:"What the test said."`
}

type Material struct {
	Name        string `json:"name" key:"name" doc:"Name of the material."`
	Lot         string `json:"lot" key:"lot" doc:"Lot number, as on the label."`
	Expires     string `json:"expires" key:"expires" format:"date" doc:"Last day of use."` // YYYY-MM-DD
	Certificate string `json:"certificate,omitempty" key:"certificate,optional" doc:"Its certificate."`
}

type Deviation struct {
	At         string `json:"at,omitempty" key:"at,optional" format:"rfc3339" doc:"When it happened."`
	Text       string `json:"text" key:"text" doc:"What was done otherwise, and why."`
	ApprovedBy string `json:"approved_by,omitempty" key:"approved_by,optional" doc:"Code of a person."`
}

// A ManualIntegration replaces the automatic limits of one peak; the automatic result is kept beside it.
type ManualIntegration struct {
	Injection  string  `json:"injection" key:"injection" doc:"Id of the injection."`
	Compound   string  `json:"compound" key:"compound" doc:"Id of an analyte or internal standard."`                                                                                           // id of an analyte or internal standard
	Trace      string  `json:"trace" key:"trace" pattern:"^(quantifier|qualifier-[1-9][0-9]*|internal-standard)$" doc:"quantifier, qualifier-1, qualifier-2 and so on, or internal-standard."` // "quantifier", "qualifier-1", …, "internal-standard"
	StartMin   float64 `json:"start_min" key:"start" unit:"min" min:"0" doc:"Where the peak begins."`
	EndMin     float64 `json:"end_min" key:"end" unit:"min" above:"0" doc:"Where the peak ends."`
	By         string  `json:"by" key:"by" doc:"Code of the person who set the limits."`
	At         string  `json:"at" key:"at" format:"rfc3339" doc:"When the limits were set."`
	Reason     string  `json:"reason" key:"reason" doc:"Why they were set by hand."`
	ApprovedBy string  `json:"approved_by" key:"approved_by" doc:"Code of another person, who approved it."`
}

type Document struct {
	File  string `json:"file" key:"file" format:"path" doc:"The document, a file in this folder."`
	Title string `json:"title" key:"title" doc:"Its title in the package."`
}

type Supersedes struct {
	Root   string `json:"root" key:"root" pattern:"^[0-9a-f]{64}$" doc:"Merkle root of the bundle that is replaced."` // Merkle root of the superseded bundle, hex
	Reason string `json:"reason" key:"reason" doc:"Why it is replaced."`
}

// A Method is method.yaml, format assaywrit-method/1: the validated method.
type Method struct {
	Format        string     `json:"format" key:"format" enum:"assaywrit-method/1" doc:"Format of this file and its version."`
	ID            string     `json:"id" key:"id" doc:"Number of the procedure."`
	Version       string     `json:"version" key:"version" doc:"Version of the procedure."`
	Title         string     `json:"title" key:"title" doc:"Title of the procedure."`
	EffectiveFrom string     `json:"effective_from,omitempty" key:"effective_from,optional" format:"date" doc:"First day on which it was in force."` // YYYY-MM-DD
	Technique     string     `json:"technique" key:"technique" doc:"Such as LC-MS/MS."`
	Matrix        string     `json:"matrix" key:"matrix" doc:"Such as urine; the same as that of the sample."`
	Summary       string     `json:"summary" key:"summary" doc:"The procedure in a few sentences."`
	Instrument    Instrument `json:"instrument" key:"instrument" doc:"The instrument and the separation."`

	Tables []TableLayout `json:"tables,omitempty" key:"tables,optional" doc:"How delimited text files are laid out."` // how delimited text files are laid out

	Integration    Integration    `json:"integration" key:"integration" doc:"How peaks are found and integrated."`
	Identification Identification `json:"identification" key:"identification" doc:"What serves as the reference."`
	Batch          BatchLimits    `json:"batch" key:"batch" doc:"Limits for accepting the batch."`

	Suitability *SuitabilityLimits `json:"suitability,omitempty" key:"suitability,optional" doc:"Limits for the system over the batch."`

	InternalStandards []InternalStandard `json:"internal_standards" key:"internal_standards" minitems:"1" doc:"Every internal standard."`
	Analytes          []Analyte          `json:"analytes" key:"analytes" minitems:"1" doc:"Every analyte."`
}

type Instrument struct {
	ID                string   `json:"id" key:"id" doc:"Name of the instrument in the laboratory."`
	Description       string   `json:"description,omitempty" key:"description,optional" doc:"What it is."`
	Column            string   `json:"column,omitempty" key:"column,optional" doc:"The column."`
	ColumnLengthMM    *float64 `json:"column_length_mm,omitempty" key:"column_length,optional" unit:"mm" above:"0" doc:"Length of the column."`
	MobilePhase       string   `json:"mobile_phase,omitempty" key:"mobile_phase,optional" doc:"The mobile phases, and the gradient."`
	FlowMLPerMin      *float64 `json:"flow_ml_per_min,omitempty" key:"flow,optional" unit:"mL/min" above:"0" doc:"Flow of the mobile phase."`
	InjectionVolumeUL *float64 `json:"injection_volume_ul,omitempty" key:"injection_volume,optional" unit:"uL" above:"0" doc:"Volume injected."`
	VoidTimeMin       *float64 `json:"void_time_min,omitempty" key:"void_time,optional" unit:"min" above:"0" doc:"Hold-up time of the column."`
	Ionisation        string   `json:"ionisation,omitempty" key:"ionisation,optional" doc:"Ion source and polarity."`
}

// Integration says how peaks are found and integrated.
type Integration struct {
	peak.Parameters
	Fused Fused `json:"fused_peaks,omitempty" key:"fused_peaks,optional" enum:"joint-fit|joint-fit-one-shape" doc:"How peaks on a common baseline are divided, instead of shared_valley: by curves fitted to all of them at once."`
}

// Fused is a way to divide peaks on a common baseline by fitting curves (exponentially modified Gaussians).
type Fused string

const (
	JointFit         Fused = "joint-fit"           // each peak with a shape of its own
	JointFitOneShape Fused = "joint-fit-one-shape" // one shape for all peaks of a cluster
)

// A TableLayout declares the columns of delimited text files whose path matches Files.
type TableLayout struct {
	Files       string        `json:"files" key:"files" doc:"Path pattern, such as raw/*.csv."` // path pattern, such as "raw/*.csv"
	Separator   string        `json:"separator" key:"separator" enum:"comma|semicolon|tab|space" doc:"What stands between the columns."`
	DecimalMark string        `json:"decimal_mark" key:"decimal_mark" enum:"point|comma" doc:"Point or comma in numbers."`
	Encoding    string        `json:"encoding,omitempty" key:"encoding,optional" enum:"utf-8|utf-16|latin-1" doc:"Encoding of the text; utf-8 without it."`
	HeaderLines int           `json:"header_lines" key:"header_lines" min:"0" doc:"Lines before the first row of numbers."`
	TimeColumn  int           `json:"time_column" key:"time_column" min:"1" doc:"Counted from 1."`           // from 1
	TimeUnit    string        `json:"time_unit" key:"time_unit" enum:"min|s" doc:"Unit of the time column."` // "min" or "s"
	Columns     []TableColumn `json:"columns" key:"columns" minitems:"1" doc:"The columns that hold traces."`
}

type TableColumn struct {
	Column int    `json:"column" key:"column" min:"1" doc:"Counted from 1."` // from 1
	ID     string `json:"id" key:"id" doc:"Name of the trace."`
	Unit   string `json:"unit,omitempty" key:"unit,optional" doc:"Unit of the intensity, such as mAU; counts without it."`
	trace.Transition
}

// Identification says which injections of the batch serve as the reference and how peaks are sought.
type Identification struct {
	ReferenceRoles  []Role  `json:"reference_roles" key:"reference_roles" minitems:"1" enum:"calibrator|control" doc:"Roles of the injections that serve as the reference."` // such as calibrator, control
	CoelutionMin    float64 `json:"coelution_min" key:"coelution" unit:"min" above:"0" max:"1" doc:"How far a qualifier's apex may lie from the quantifier's."`              // a qualifier's apex lies within this of the quantifier's
	TransitionTolMZ float64 `json:"transition_tolerance_mz" key:"transition_tolerance" above:"0" max:"1" doc:"How far recorded m/z may lie from those of the method."`
}

// BatchLimits are the method's own limits for batch acceptance. Fractions are of 1.
type BatchLimits struct {
	BlankMaxOfLowest           float64 `json:"blank_max_of_lowest" key:"blank_max_of_lowest" unit:"fraction" min:"0" max:"1" doc:"Analyte in a blank, of the lowest calibrator."`                                            // analyte area in a blank / mean area of the lowest calibrator
	BlankMaxOfInternalStandard float64 `json:"blank_max_of_internal_standard" key:"blank_max_of_internal_standard" unit:"fraction" min:"0" max:"1" doc:"Internal standard in a blank without it, of the calibrators' mean."` // internal-standard area in a blank without it / mean area in the calibrators
	CalibratorBias             float64 `json:"calibrator_bias" key:"calibrator_bias" unit:"fraction" min:"0" max:"1" doc:"Back-calculated from nominal."`                                                                    // |back-calculated/nominal − 1|
	LowestCalibratorBias       float64 `json:"lowest_calibrator_bias" key:"lowest_calibrator_bias" unit:"fraction" min:"0" max:"1" doc:"Back-calculated from nominal, for the lowest level."`
	CalibratorShare            float64 `json:"calibrator_share" key:"calibrator_share" unit:"fraction" min:"0" max:"1" doc:"Share of calibrators that must pass."` // share of calibrators that must pass
	CalibratorLevels           int     `json:"calibrator_levels" key:"calibrator_levels" min:"3" doc:"Levels that must remain."`                                   // levels that must remain
	ControlBias                float64 `json:"control_bias" key:"control_bias" unit:"fraction" min:"0" max:"1" doc:"Found from nominal."`
	ControlShare               float64 `json:"control_share" key:"control_share" unit:"fraction" min:"0" max:"1" doc:"Share of all controls that must pass."`
	ControlShareEachLevel      float64 `json:"control_share_each_level" key:"control_share_each_level" unit:"fraction" min:"0" max:"1" doc:"Share of the controls of each level that must pass."`
	InternalStandardLow        float64 `json:"internal_standard_low" key:"internal_standard_low" unit:"fraction" min:"0" max:"1" doc:"Response over the calibrators' mean, lower limit."` // response / mean of calibrators, lower limit
	InternalStandardHigh       float64 `json:"internal_standard_high" key:"internal_standard_high" unit:"fraction" min:"1" max:"100" doc:"Response over the calibrators' mean, upper limit."`
	AliquotSpread              float64 `json:"aliquot_spread" key:"aliquot_spread" unit:"fraction" min:"0" max:"1" doc:"Relative standard deviation of the aliquots."` // relative standard deviation of the aliquots, upper limit
	Aliquots                   int     `json:"aliquots" key:"aliquots" min:"1" doc:"Aliquots that a quantitative result needs."`                                       // aliquots that a quantitative result needs
}

// SuitabilityLimits are the method's own limits for the system; each applies where it is stated. Fractions are of 1.
type SuitabilityLimits struct {
	RetentionDrift *float64 `json:"retention_drift,omitempty" key:"retention_drift,optional" unit:"fraction" above:"0" max:"1" doc:"Change of retention over the batch, at most."`
	ResponseDrift  *float64 `json:"response_drift,omitempty" key:"response_drift,optional" unit:"fraction" above:"0" max:"10" doc:"Change of the area of an internal standard over the batch, at most."`
	ReplicateSD    *float64 `json:"replicate_relative_sd,omitempty" key:"replicate_relative_sd,optional" unit:"fraction" above:"0" max:"1" doc:"Relative standard deviation of the responses of one level, at most."`
	Resolution     *float64 `json:"resolution,omitempty" key:"resolution,optional" above:"0" max:"20" doc:"Resolution from neighbours in the same trace, at least."`
	SymmetryLow    *float64 `json:"symmetry_low,omitempty" key:"symmetry_low,optional" above:"0" max:"1" doc:"Symmetry factor at 5 % height, at least."`
	SymmetryHigh   *float64 `json:"symmetry_high,omitempty" key:"symmetry_high,optional" min:"1" max:"10" doc:"Symmetry factor at 5 % height, at most."`
	Plates         *float64 `json:"plates,omitempty" key:"plates,optional" above:"0" doc:"Plate number by the width at half height, at least."`
}

type InternalStandard struct {
	ID                   string     `json:"id" key:"id" pattern:"^[a-z0-9][a-z0-9-]*$" doc:"Short name without blanks, used to refer to it."`
	Name                 string     `json:"name" key:"name" doc:"Name in the package."`
	ExpectedRetentionMin float64    `json:"expected_retention_min" key:"expected_retention" unit:"min" above:"0" doc:"Where its peak is expected."`
	RetentionWindowMin   float64    `json:"retention_window_min" key:"retention_window" unit:"min" above:"0" doc:"Half width of the search window."` // half width of the search window
	Transition           Transition `json:"transition" key:"transition" doc:"What is monitored for it."`
}

// A Transition is one trace: a monitored reaction or ion, a trace by the name that the file gives it, or an ion trace that is taken
// from full-scan data.
type Transition struct {
	trace.Transition
	TraceID string    `json:"trace_id,omitempty" key:"trace_id,optional" doc:"Where the file names the trace instead of its ions."` // where the file names the trace instead of its ions
	Ion     *IonTrace `json:"ion,omitempty" key:"ion,optional" doc:"An ion trace, taken from the spectra of full-scan data."`
}

// An IonTrace is taken from spectra: of the first stage, or, with a precursor beside it, of the second.
type IonTrace struct {
	MZ           float64  `json:"mz" key:"mz" above:"0" doc:"m/z of the ion."`
	ToleranceMZ  *float64 `json:"tolerance_mz,omitempty" key:"tolerance,optional" above:"0" max:"5" doc:"Half width of its window in m/z; either this or tolerance_ppm."`
	TolerancePPM *float64 `json:"tolerance_ppm,omitempty" key:"tolerance_ppm,optional" above:"0" max:"1000" doc:"Half width of its window in millionths of m/z."`
	Combine      string   `json:"combine" key:"combine" enum:"sum|maximum" doc:"What becomes of several points in the window."`
	FromMin      *float64 `json:"from_min,omitempty" key:"from,optional" unit:"min" min:"0" doc:"Where the trace begins; without it, with the run."`
	ToMin        *float64 `json:"to_min,omitempty" key:"to,optional" unit:"min" above:"0" doc:"Where the trace ends; without it, with the run."`
}

// A SpectrumRule says how the spectrum of an analyte's peak is taken from full-scan data, and what it is shown beside.
type SpectrumRule struct {
	Take        string             `json:"take" key:"take" enum:"apex|average" doc:"apex: the scan nearest to the apex; average: the mean over the upper half of the peak."`
	MSLevel     *int               `json:"ms_level,omitempty" key:"ms_level,optional" min:"1" max:"10" doc:"Stage of the spectra; 1 without it."`
	ToleranceMZ float64            `json:"tolerance_mz" key:"tolerance" above:"0" max:"1" doc:"How far the m/z of one peak may lie apart in two scans."`
	Background  []BackgroundSpan   `json:"background,omitempty" key:"background,optional" doc:"Where the background is taken that is subtracted."`
	Reference   *ReferenceSpectrum `json:"reference,omitempty" key:"reference,optional" doc:"A spectrum of the reference material, in a file of this folder."`
}

// A BackgroundSpan lies so far before (negative) or after the apex.
type BackgroundSpan struct {
	FromMin float64 `json:"from_min" key:"from" unit:"min" doc:"Start, from the apex; before it, below zero."`
	ToMin   float64 `json:"to_min" key:"to" unit:"min" doc:"End, from the apex."`
}

type ReferenceSpectrum struct {
	File  string `json:"file" key:"file" format:"path" doc:"A JCAMP-DX file with the mass spectrum, in this folder."`
	Title string `json:"title" key:"title" doc:"What it is a spectrum of, and where it comes from."`
}

// Transitions lists every trace that the method follows: those of the internal standards, then of the analytes, quantifier first.
func (m *Method) Transitions() []Transition {
	var list []Transition
	for _, s := range m.InternalStandards {
		list = append(list, s.Transition)
	}
	for _, a := range m.Analytes {
		list = append(append(list, a.Quantifier), a.Qualifiers...)
	}
	return list
}

// Kind of an analyte: what is asked of it.
type Kind string

const (
	Threshold Kind = "threshold"
	Presence  Kind = "presence"
)

type Analyte struct {
	ID                   string        `json:"id" key:"id" pattern:"^[a-z0-9][a-z0-9-]*$" doc:"Short name without blanks, used to refer to it."`
	Name                 string        `json:"name" key:"name" doc:"Name in the package."`
	Kind                 Kind          `json:"kind" key:"kind" enum:"threshold|presence" doc:"threshold: compared with a limit; presence: reported where it is found."`
	InternalStandard     string        `json:"internal_standard" key:"internal_standard" doc:"Id of an internal standard."`
	ExpectedRetentionMin float64       `json:"expected_retention_min" key:"expected_retention" unit:"min" above:"0" doc:"Where its peak is expected."`
	RetentionWindowMin   float64       `json:"retention_window_min" key:"retention_window" unit:"min" above:"0" doc:"Half width of the search window."`
	Quantifier           Transition    `json:"quantifier" key:"quantifier" doc:"The transition that is measured."`
	Qualifiers           []Transition  `json:"qualifiers" key:"qualifiers" minitems:"1" doc:"The transitions that confirm the identity."`
	Spectrum             *SpectrumRule `json:"spectrum,omitempty" key:"spectrum,optional" doc:"How its spectrum is taken from full-scan data."`
	Unit                 string        `json:"unit" key:"unit" enum:"ng/mL|ug/mL|mg/mL|pg/mL|ug/L|mg/L" doc:"Unit that people read."` // for people: "ng/mL", "ug/mL"
	Calibration          *Calibration  `json:"calibration,omitempty" key:"calibration,optional" doc:"Needed for a threshold analyte."`
	Uncertainty          *Uncertainty  `json:"uncertainty,omitempty" key:"uncertainty,optional" doc:"Needed for a threshold analyte."`
}

type Calibration struct {
	Model     string                `json:"model" key:"model" enum:"line" doc:"line: a straight line."` // "line"
	Weighting calibration.Weighting `json:"weighting" key:"weighting" enum:"none|1/x|1/x2" doc:"Weights of the points: none, 1/x or 1/x2."`
}

// Uncertainty names how repeatability is taken and the components stated by the validation.
type Uncertainty struct {
	Repeatability string            `json:"repeatability" key:"repeatability" enum:"aliquots|none" doc:"aliquots: from this case; none: inside a stated component."` // "aliquots": from this case; "none": inside a stated component
	Components    []StatedComponent `json:"components" key:"components" doc:"The components that the validation states."`
}

type StatedComponent struct {
	Name     string   `json:"name" key:"name" doc:"What it comes from."`
	Type     string   `json:"type" key:"type" enum:"A|B" doc:"A: from repeated measurement; B: otherwise."`                                                   // "A" or "B"
	Relative *float64 `json:"relative,omitempty" key:"relative,optional" unit:"fraction" min:"0" max:"1" doc:"Standard uncertainty as a share of the value."` // standard uncertainty / value
	Absolute *float64 `json:"absolute_ng_per_ml,omitempty" key:"absolute,optional" unit:"ng/mL" min:"0" doc:"Standard uncertainty as an amount."`
	DoF      *float64 `json:"degrees_of_freedom,omitempty" key:"degrees_of_freedom,optional" above:"0" doc:"Degrees of freedom; without it they are infinite."`
	Source   string   `json:"source" key:"source" doc:"Where it is documented."`
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
	ID         string    `json:"injection" key:"injection" doc:"Id of the injection, unique."`
	File       string    `json:"file" key:"file" format:"path" doc:"The raw file, a path in this folder."` // path inside the folder, forward slashes
	Role       Role      `json:"role" key:"role" enum:"solvent-blank|matrix-blank|zero|calibrator|control|negative-control|carryover-blank|sample|excluded" doc:"What the injection is in the batch."`
	Level      string    `json:"level,omitempty" key:"level,optional" doc:"Level of a calibrator or control."`
	Aliquot    string    `json:"aliquot,omitempty" key:"aliquot,optional" doc:"Aliquot that was injected."`
	SampleCode string    `json:"sample_code,omitempty" key:"sample_code,optional" doc:"Code of the sample; needed in rows of the role sample."`
	Dilution   float64   `json:"dilution"`                                                                 // factor, 1 where not stated
	AcquiredAt string    `json:"acquired" key:"acquired" format:"rfc3339" doc:"Start of the acquisition."` // RFC 3339
	Operator   string    `json:"operator" key:"operator" doc:"Code of a person."`
	Note       string    `json:"note,omitempty" key:"note,optional" doc:"Needed for an excluded injection."`
	Nominal    []Nominal `json:"nominal,omitempty"`
	Line       int       `json:"line"` // in sequence.csv

	columns map[string]int // places of the fields in the line
}

// A Nominal is the known concentration of one analyte in a calibrator or control.
type Nominal struct {
	Analyte string  `json:"analyte"`
	NGPerML float64 `json:"ng_per_ml"`
}
