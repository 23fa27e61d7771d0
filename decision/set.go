package decision

// A Set is a criteria set, format assaywrit-criteria/1: the rules of one edition as data. Every rule names its source and whether it
// was read there or comes from memory; a rule without a source is not loaded. Fractions are of 1, times in minutes, amounts in ng/mL.
type Set struct {
	Format        string   `key:"format" enum:"assaywrit-criteria/1" doc:"Format of this file and its version."`
	ID            string   `key:"id" pattern:"^[a-z0-9][a-z0-9-]*$" doc:"Name of the set."`
	Title         string   `key:"title"`
	Edition       string   `key:"edition" doc:"Documents and editions that the set is made after."`
	EffectiveFrom string   `key:"effective_from" format:"date"`
	EffectiveTo   string   `key:"effective_to,optional" format:"date" doc:"Last day; absent while in force."`
	Matrix        string   `key:"matrix" doc:"Such as urine."`
	Notes         []string `key:"notes,optional"`

	Case           CaseRules           `key:"case" doc:"What is asked of the case as a whole."`
	Identification IdentificationRules `key:"identification"`
	Quantity       QuantityRules       `key:"quantity"`
	Limits         []LimitRule         `key:"limits" doc:"Substances that are compared with a threshold."`
	Presence       PresenceRule        `key:"presence" doc:"Substances that are reported by presence alone."`
	Labels         Labels              `key:"labels" doc:"What readers see for each outcome."`
	Meanings       *Labels             `key:"meanings,optional" doc:"A sentence for each outcome on what it means, the same for every sample."`
}

// A Cite says where a rule comes from.
type Cite struct {
	Clause string `key:"clause" doc:"Document and clause."`
	Tag    string `key:"tag" enum:"read|read-2|from memory|common practice, no source" doc:"read: seen in the source; read-2: in a secondary source."`
}

// source is the tag as it stands beside a value that is applied.
func (c Cite) source() string {
	if c.Tag == "from memory" {
		return "from memory; check against the edition in force"
	}
	return c.Tag
}

// text is the clause and the source in one.
func (c Cite) text() string { return c.Clause + " (" + c.source() + ")" }

// or returns the citation, or another where there is none.
func (c *Cite) or(other Cite) Cite {
	if c == nil {
		return other
	}
	return *c
}

// CaseRules are about the case and not about a substance.
type CaseRules struct {
	Receipt  Rule `key:"receipt" doc:"The chain of custody must hold the receipt of the container."`
	Material Rule `key:"material_in_date" doc:"Reference materials must be used before they expire."`
}

// A Rule is required or advisory.
type Rule struct {
	Required bool `key:"required" doc:"false: advisory."`
	Cite
}

// A Tolerance is how far a value may lie from its reference. With both an absolute and a relative part, the kind says which counts.
type Tolerance struct {
	Kind        string   `key:"kind" enum:"absolute|relative|greater-of|smaller-of"`
	AbsoluteMin *float64 `key:"absolute,optional" unit:"min" above:"0" doc:"Minutes either side."`
	Relative    *float64 `key:"relative,optional" unit:"fraction" above:"0" doc:"Share of the reference either side."`
	Required    bool     `key:"required" doc:"false: advisory."`
	Cite
}

// A Band is the tolerance of an ion's abundance for references within it. Fractions of the base ion.
type Band struct {
	From          float64  `key:"from" unit:"fraction" min:"0" max:"1"`
	FromInclusive bool     `key:"from_inclusive" doc:"true: the lower edge belongs to this band."`
	Kind          string   `key:"kind" enum:"absolute|relative|greater-of|smaller-of"`
	Absolute      *float64 `key:"absolute,optional" unit:"fraction" above:"0" doc:"Percentage points of the base ion either side."`
	Relative      *float64 `key:"relative,optional" unit:"fraction" above:"0" doc:"Share of the reference either side."`
	Cite
}

// A NumberRule is one number.
type NumberRule struct {
	Value float64 `key:"value" min:"0"`
	Cite
}

// IdentificationRules are the criteria for identity.
type IdentificationRules struct {
	Reference         Rule       `key:"reference_in_batch" doc:"A reference must have been measured in the same batch."`
	SignalToNoise     NumberRule `key:"signal_to_noise" doc:"At least, for each ion."`
	Transitions       NumberRule `key:"transitions" doc:"Transitions that must be monitored, the quantifier among them."`
	Retention         Tolerance  `key:"retention"`
	RelativeRetention Tolerance  `key:"relative_retention" doc:"To the internal standard."`
	Replacement       Allowance  `key:"relative_replaces_retention" doc:"Whether relative retention may take the place of retention."`
	Abundance         []Band     `key:"abundance" minitems:"1" doc:"Bands from the highest reference abundance down."`
}

// An Allowance is something that a set allows or not.
type Allowance struct {
	Allowed bool `key:"allowed"`
	Cite
}

// QuantityRules are those for every amount.
type QuantityRules struct {
	Aliquots       NumberRule           `key:"aliquots" doc:"Aliquots that a quantitative result needs."`
	CoverageFactor NumberRule           `key:"coverage_factor" doc:"k of the expanded uncertainty."`
	Gravity        *SpecificGravityRule `key:"specific_gravity,optional" doc:"Adjusts a limit upwards for concentrated urine."`
}

// A SpecificGravityRule multiplies a decision limit by (SG + add − 1)/(reference − 1) where the measured SG lies above apply_above.
type SpecificGravityRule struct {
	ApplyAbove float64 `key:"apply_above" min:"1" max:"1.1"`
	Add        float64 `key:"add" min:"0" max:"0.1"`
	Reference  float64 `key:"reference" above:"1" max:"1.1"`
	Cite
}

// A LimitRule is the comparison with a threshold. Its citation stands for every value in it that has none of its own.
type LimitRule struct {
	Analyte       string   `key:"analyte" doc:"Id, as in methods."`
	Threshold     float64  `key:"threshold" unit:"ng/mL" above:"0"`
	MaxStdU       *float64 `key:"max_std_u,optional" unit:"ng/mL" above:"0" doc:"Largest combined standard uncertainty allowed at the threshold."`
	DecisionLimit *float64 `key:"decision_limit,optional" unit:"ng/mL" above:"0" doc:"As the edition states it; it is applied as it stands."`
	Guard         string   `key:"guard" enum:"none|stated|k-times-u|k-times-max-u" doc:"none: the threshold itself decides; stated: the stated limit; k-times-u: threshold + k·u of the result; k-times-max-u: threshold + k·max_std_u."`
	GuardK        *float64 `key:"guard_k,optional" above:"0" doc:"k of the guard band; beside a stated limit it serves to see whether the limit is plausible."`
	Compare       string   `key:"compare" enum:"greater|at-or-above"`
	Rounding      string   `key:"rounding" enum:"none|truncate|half-even" doc:"What is done to the value before it is compared."`
	Digits        int      `key:"significant_digits,optional" min:"1" max:"6" doc:"Digits that the rounding leaves."`
	Gravity       bool     `key:"specific_gravity" doc:"true: the limit is adjusted for specific gravity."`
	Cite

	ThresholdSource     *Cite `key:"threshold_source,optional" doc:"Source of the threshold, where it differs."`
	MaxStdUSource       *Cite `key:"max_std_u_source,optional" doc:"Source of the largest uncertainty, where it differs."`
	DecisionLimitSource *Cite `key:"decision_limit_source,optional" doc:"Source of the decision limit, where it differs."`
}

// A PresenceRule says which analytes may be reported by presence.
type PresenceRule struct {
	Any bool `key:"any" doc:"true: any analyte that the method reports by presence."`
	Cite
}

// Labels is a text for each outcome.
type Labels struct {
	NotDetermined   string `key:"not_determined"`
	AboveLimit      string `key:"above_limit"`
	WithinGuardBand string `key:"within_guard_band"`
	BelowThreshold  string `key:"below_threshold"`
	Identified      string `key:"identified"`
	NotIdentified   string `key:"not_identified"`
}

// Of returns the label of an outcome.
func (l Labels) Of(o Outcome) string {
	switch o {
	case AboveLimit:
		return l.AboveLimit
	case WithinGuardBand:
		return l.WithinGuardBand
	case BelowThreshold:
		return l.BelowThreshold
	case Identified:
		return l.Identified
	case NotIdentified:
		return l.NotIdentified
	}
	return l.NotDetermined
}

// limitFor returns the rule for an analyte, or nil.
func (s *Set) limitFor(analyte string) *LimitRule {
	for i := range s.Limits {
		if s.Limits[i].Analyte == analyte {
			return &s.Limits[i]
		}
	}
	return nil
}
