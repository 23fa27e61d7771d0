package decision

import (
	"embed"
	"fmt"
	"io/fs"
	"path"
	"regexp"
	"slices"
	"strings"

	"assaywrit/evidence/strictyaml"
)

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
	if s.EffectiveTo != "" && s.EffectiveTo < s.EffectiveFrom {
		report("effective_to", s.EffectiveTo, "a day from "+s.EffectiveFrom+" on, when the set comes into force")
	}
	s.Labels.neutral("labels", report)
	if s.Meanings != nil {
		s.Meanings.neutral("meanings", report)
	}
}

// judging finds words that say more than a measurement can.
var judging = regexp.MustCompile(`(?i)\b(guilt\w*|cheat\w*|offen[cd]\w*|innocen\w*|clean)\b`)

// neutral refuses words that judge a person.
func (l *Labels) neutral(section string, report func(key, got, want string)) {
	for _, t := range []struct{ key, text string }{
		{"not_determined", l.NotDetermined}, {"above_limit", l.AboveLimit}, {"within_guard_band", l.WithinGuardBand},
		{"below_threshold", l.BelowThreshold}, {"identified", l.Identified}, {"not_identified", l.NotIdentified},
	} {
		if w := judging.FindString(t.text); w != "" {
			report(section+"."+t.key, "the word "+strictyaml.Quote(w), "words that tell of the measurement and of nobody")
		}
	}
}

func (s *Set) checkLimit(key string, l LimitRule, i int, report func(key, got, want string)) {
	for _, f := range []struct {
		wrong          bool
		key, got, want string
	}{
		{l.Guard == "stated" && l.DecisionLimit == nil, "", "a stated guard band without a decision_limit", "the decision_limit that the edition states"},
		{l.Guard != "stated" && l.DecisionLimit != nil, ".guard", l.Guard + " beside a decision_limit", "stated, or no decision_limit"},
		{strings.HasPrefix(l.Guard, "k-times-") && l.GuardK == nil, "", "a guard band of " + l.Guard + " without guard_k", "guard_k"},
		{l.Guard == "none" && l.GuardK != nil, ".guard_k", "a factor with no guard band", "a guard band, or no guard_k"},
		{l.Guard == "k-times-max-u" && l.MaxStdU == nil, "", "a guard band of k-times-max-u without max_std_u", "max_std_u"},
		{l.DecisionLimit != nil && *l.DecisionLimit < l.Threshold, ".decision_limit", "a limit below the threshold", "at least the threshold"},
		{l.Rounding != "none" && l.Digits == 0, "", "a rounding without significant_digits", "how many digits it leaves"},
		{l.Rounding == "none" && l.Digits != 0, ".significant_digits", "digits without a rounding", "rounding: truncate or half-even, or no significant_digits"},
		{l.Gravity && s.Quantity.Gravity == nil, ".specific_gravity", "true", "false, or the rule quantity.specific_gravity"},
		{slices.ContainsFunc(s.Limits[:i], func(o LimitRule) bool { return o.Analyte == l.Analyte }), ".analyte", l.Analyte + " a second time", "each analyte once"},
	} {
		if f.wrong {
			report(key+f.key, f.got, f.want)
		}
	}
}
