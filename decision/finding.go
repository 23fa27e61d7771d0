// Package decision says what may be reported: it applies a criteria set to an evidence record and gives a finding made
// of checks. It reads the record and the criteria, and nothing else; missing information never makes an outcome firmer.
package decision

// FindingFormat names the format of finding.json and its version.
const FindingFormat = "assaywrit-finding/1"

// Outcome for one analyte. The zero value is NotDetermined.
type Outcome string

const (
	NotDetermined   Outcome = "not-determined"
	AboveLimit      Outcome = "above-limit"
	WithinGuardBand Outcome = "within-guard-band"
	BelowThreshold  Outcome = "below-threshold"
	Identified      Outcome = "identified"
	NotIdentified   Outcome = "not-identified"
)

// A Finding is finding.json.
type Finding struct {
	Format     string           `json:"format"`
	Evidence   string           `json:"evidence_sha256"` // of evidence.json, hex
	Criteria   CriteriaRef      `json:"criteria"`
	Case       string           `json:"case"`
	SampleCode string           `json:"sample_code"`
	Batch      []Check          `json:"batch_checks"` // those that do not belong to one analyte
	Analytes   []AnalyteFinding `json:"analytes"`
	Cautions   []string         `json:"cautions"`
}

// A CriteriaRef names the criteria set that was applied.
type CriteriaRef struct {
	ID            string `json:"id"`
	Title         string `json:"title"`
	Edition       string `json:"edition"`
	EffectiveFrom string `json:"effective_from"`
	SHA256        string `json:"sha256"` // of the file
}

// An AnalyteFinding is the outcome for one analyte and the checks it is made of.
type AnalyteFinding struct {
	Analyte  string   `json:"analyte"`
	Name     string   `json:"name"`
	Kind     string   `json:"kind"`
	Outcome  Outcome  `json:"outcome"`
	Label    string   `json:"label"`              // what a reader sees, from the criteria set
	Sentence string   `json:"sentence"`           // the outcome in one plain sentence
	Meaning  string   `json:"meaning,omitempty"`  // what such an outcome means, from the criteria set; the same for every sample
	Failed   []string `json:"failed,omitempty"`   // ids of required checks that failed, those of the case among them
	Advisory []string `json:"advisory,omitempty"` // ids of the analyte's advisory checks that failed
	Checks   []Check  `json:"checks"`
	Limit    *Limit   `json:"limit,omitempty"` // only where a value was compared with a threshold: every required check holds
}

// Result of a check.
type Result string

const (
	Passed        Result = "passed"
	Failed        Result = "failed"
	NotApplicable Result = "not-applicable"
)

// A Check is one criterion applied to one set of values.
type Check struct {
	ID       string   `json:"id"`    // unique in the finding, such as "salbutamol/ratio/qualifier-1/A2"
	Group    string   `json:"group"` // "case", "batch", "identification", "quantity", "limit"
	Title    string   `json:"title"`
	Clause   string   `json:"clause"`   // of the criteria set or the method
	Source   string   `json:"source"`   // "read", "from memory", "method", "common practice, no source"
	Evidence []string `json:"evidence"` // JSON pointers into the evidence record
	Measured *Figure  `json:"measured,omitempty"`
	Low      *Figure  `json:"low,omitempty"` // accepted range, whichever side applies
	High     *Figure  `json:"high,omitempty"`
	Distance *float64 `json:"distance,omitempty"` // to the nearest limit as a share of the tolerance: 1 at the centre, 0 at the limit, negative outside
	Result   Result   `json:"result"`
	Missing  bool     `json:"missing,omitempty"` // failed since something that it needs is not in the record, not by what was measured
	Required bool     `json:"required"`
	Sentence string   `json:"sentence"`
}

// A Figure is a number with its unit and the text that people read.
type Figure struct {
	Value float64 `json:"value"`
	Unit  string  `json:"unit,omitempty"`
	Text  string  `json:"text"`
}

// A Limit is the comparison of a result with the threshold, all in ng/mL. DecisionLimit is Threshold + GuardBand, times
// Adjustment where there is one.
type Limit struct {
	Value             float64  `json:"value_ng_per_ml"` // as measured
	StdU              float64  `json:"combined_std_u_ng_per_ml"`
	K                 float64  `json:"coverage_factor"`
	KRule             string   `json:"coverage_rule"`
	ExpU              float64  `json:"expanded_u_ng_per_ml"`
	MaxStdU           *float64 `json:"max_std_u_ng_per_ml,omitempty"` // the largest allowed at the threshold
	Threshold         float64  `json:"threshold_ng_per_ml"`
	ThresholdSource   string   `json:"threshold_source"` // clause, and whether it was read or comes from memory
	GuardBand         float64  `json:"guard_band_ng_per_ml"`
	GuardRule         string   `json:"guard_band_rule"`
	DecisionLimit     float64  `json:"decision_limit_ng_per_ml"` // the one applied
	LimitSource       string   `json:"decision_limit_source"`    // of the decision limit, or of the rule that gives it
	StatedLimit       *float64 `json:"stated_decision_limit_ng_per_ml,omitempty"`
	Adjustment        *float64 `json:"limit_adjustment_factor,omitempty"` // for specific gravity
	AdjustmentRule    string   `json:"limit_adjustment_rule,omitempty"`
	Compared          float64  `json:"compared_ng_per_ml"` // after the rounding rule
	RoundingRule      string   `json:"rounding_rule"`
	Strict            bool     `json:"strictly_greater"`
	ProbabilityAbove  float64  `json:"probability_above_threshold"` // that the true value exceeds the threshold
	ProbabilityMethod string   `json:"probability_method"`
	DisplayUnit       string   `json:"display_unit"` // for people
}
