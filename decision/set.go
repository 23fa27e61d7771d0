package decision

import (
	"embed"
	"fmt"
	"io/fs"
	"path"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
)

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

	Identification IdentificationRules `key:"identification"`
	Quantity       QuantityRules       `key:"quantity"`
	Limits         []LimitRule         `key:"limits" doc:"Substances that are compared with a threshold."`
	Presence       PresenceRule        `key:"presence" doc:"Substances that are reported by presence alone."`
	Labels         Labels              `key:"labels" doc:"What readers see for each outcome."`
}

// A Cite says where a rule comes from.
type Cite struct {
	Clause string `key:"clause" doc:"Document and clause."`
	Tag    string `key:"tag" enum:"read|read-2|from memory|common practice, no source" doc:"read: seen in the source; read-2: in a secondary source."`
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

type IdentificationRules struct {
	SignalToNoise     NumberRule `key:"signal_to_noise" doc:"At least, for each ion."`
	Transitions       NumberRule `key:"transitions" doc:"Transitions that must be monitored, the quantifier among them."`
	Retention         Tolerance  `key:"retention"`
	RelativeRetention Tolerance  `key:"relative_retention" doc:"To the internal standard."`
	Abundance         []Band     `key:"abundance" minitems:"1" doc:"Bands from the highest reference abundance down."`
}

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

// A LimitRule is the comparison with a threshold.
type LimitRule struct {
	Analyte       string   `key:"analyte" doc:"Id, as in methods."`
	Threshold     float64  `key:"threshold" unit:"ng/mL" above:"0"`
	MaxStdU       *float64 `key:"max_std_u,optional" unit:"ng/mL" above:"0" doc:"Largest combined standard uncertainty allowed at the threshold."`
	DecisionLimit *float64 `key:"decision_limit,optional" unit:"ng/mL" above:"0" doc:"As the edition states it; it is applied as it stands."`
	Guard         string   `key:"guard" enum:"none|stated|k-times-u" doc:"none: the threshold itself decides; stated: the stated limit; k-times-u: threshold + k·u of the result."`
	GuardK        *float64 `key:"guard_k,optional" above:"0" doc:"k of the guard band."`
	Compare       string   `key:"compare" enum:"greater|at-or-above"`
	Rounding      string   `key:"rounding" enum:"none|truncate|half-even" doc:"What is done to the value before it is compared."`
	Digits        int      `key:"significant_digits,optional" min:"1" max:"6" doc:"Digits that the rounding leaves."`
	Gravity       bool     `key:"specific_gravity" doc:"true: the limit is adjusted for specific gravity."`
	Cite
}

// A PresenceRule says which analytes may be reported by presence.
type PresenceRule struct {
	Any bool `key:"any" doc:"true: any analyte that the method reports by presence."`
	Cite
}

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

//go:embed criteria
var builtIn embed.FS

// BuiltInNames lists the built-in sets.
func BuiltInNames() []string {
	files, err := fs.Glob(builtIn, "criteria/*.yaml")
	if err != nil {
		panic("decision: internal error: " + err.Error())
	}
	for i, f := range files {
		files[i] = strings.TrimSuffix(path.Base(f), ".yaml")
	}
	return files
}

// BuiltIn returns the text of a built-in set.
func BuiltIn(name string) ([]byte, bool) {
	if !slices.Contains(BuiltInNames(), name) {
		return nil, false
	}
	data, err := builtIn.ReadFile("criteria/" + name + ".yaml")
	return data, err == nil
}

// SchemaJSON is the JSON Schema of a criteria set.
func SchemaJSON() ([]byte, error) {
	return strictyaml.Schema("urn:assaywrit:schema:criteria:1", "A criteria set", Set{})
}

// Parse reads a criteria set. The error is strictyaml.Problems with everything that is wrong.
func Parse(name string, data []byte) (*Set, error) {
	set := &Set{}
	doc, problems := strictyaml.Bind(name, data, set)
	if len(problems) > 0 {
		return nil, problems
	}
	report := func(key, got, want string) { problems = append(problems, doc.Problem(key, got, want, "")) }
	set.check(report)
	if len(problems) > 0 {
		return nil, problems
	}
	return set, nil
}

// check looks at rules together.
func (s *Set) check(report func(key, got, want string)) {
	parts := func(key, kind string, absolute, relative *float64) {
		both := kind == "greater-of" || kind == "smaller-of"
		if (absolute != nil) != (both || kind == "absolute") || (relative != nil) != (both || kind == "relative") {
			report(key, "a tolerance of kind "+kind+" with other parts", "absolute, relative, or both for greater-of and smaller-of")
		}
	}
	id := s.Identification
	parts("identification.retention", id.Retention.Kind, id.Retention.AbsoluteMin, id.Retention.Relative)
	parts("identification.relative_retention", id.RelativeRetention.Kind, id.RelativeRetention.AbsoluteMin, id.RelativeRetention.Relative)
	if id.RelativeRetention.AbsoluteMin != nil {
		report("identification.relative_retention", "an absolute part in minutes", "a relative tolerance: relative retention has no unit")
	}
	for i, b := range id.Abundance {
		key := fmt.Sprintf("identification.abundance[%d]", i)
		parts(key, b.Kind, b.Absolute, b.Relative)
		if i > 0 && b.From >= id.Abundance[i-1].From {
			report(key+".from", fmt.Sprint(b.From), fmt.Sprintf("less than %g, the edge of the band above", id.Abundance[i-1].From))
		}
	}
	if last := id.Abundance[len(id.Abundance)-1]; last.From != 0 {
		report(fmt.Sprintf("identification.abundance[%d].from", len(id.Abundance)-1), fmt.Sprint(last.From), "0 %, so that the bands cover every abundance")
	}
	for i, l := range s.Limits {
		s.checkLimit(fmt.Sprintf("limits[%d]", i), l, i, report)
	}
}

func (s *Set) checkLimit(key string, l LimitRule, i int, report func(key, got, want string)) {
	switch {
	case l.Guard == "stated" && l.DecisionLimit == nil:
		report(key, "a stated guard band without a decision_limit", "the decision_limit that the edition states")
	case l.Guard == "k-times-u" && l.GuardK == nil:
		report(key, "a guard band of k times u without guard_k", "guard_k")
	case l.DecisionLimit != nil && *l.DecisionLimit < l.Threshold:
		report(key+".decision_limit", fmt.Sprint(*l.DecisionLimit), "at least the threshold")
	case l.Rounding != "none" && l.Digits == 0:
		report(key, "a rounding without significant_digits", "how many digits it leaves")
	case l.Gravity && s.Quantity.Gravity == nil:
		report(key+".specific_gravity", "true", "false, or the rule quantity.specific_gravity")
	}
	if slices.ContainsFunc(s.Limits[:i], func(o LimitRule) bool { return o.Analyte == l.Analyte }) {
		report(key+".analyte", l.Analyte+" a second time", "each analyte once")
	}
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
