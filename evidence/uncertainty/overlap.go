package uncertainty

import (
	"fmt"
	"slices"
	"strings"
)

// An Effect is a source of error that a component of uncertainty covers. A component found bottom-up covers one or a few; a figure
// found top-down, such as intermediate precision, covers all that varied while it was determined.
type Effect string

// The effects that are known by name.
const (
	EffectRepeatability    Effect = "repeatability"            // same run, same conditions
	EffectBetweenRun       Effect = "between-run"              // days, operators, set-ups
	EffectCalibrationFit   Effect = "calibration-fit"          // scatter of the calibrators about the line
	EffectCalibratorValue  Effect = "calibrator-value"         // purity and preparation of the calibrators
	EffectInternalStandard Effect = "internal-standard"        // its addition
	EffectVolume           Effect = "volume"                   // pipettes and flasks
	EffectMass             Effect = "mass"                     // weighing
	EffectDilution         Effect = "dilution"                 //
	EffectRecovery         Effect = "recovery"                 // losses in preparation
	EffectMatrix           Effect = "matrix"                   // suppression or enhancement by the sample
	EffectMethodBias       Effect = "method-bias"              // the mean deviation that is left of the whole method
	EffectReferenceValue   Effect = "reference-value"          // of what the bias was found with
	EffectStability        Effect = "stability"                // before and during the analysis
	EffectSubsampling      Effect = "subsampling"              // inhomogeneity of the sample
	EffectTemperature      Effect = "temperature"              //
	EffectIntegration      Effect = "integration"              // limits of peaks
	EffectConversion       Effect = "conversion-and-salt-form" // molar masses, hydrolysis
)

// Effects lists them.
func Effects() []Effect {
	return []Effect{EffectRepeatability, EffectBetweenRun, EffectCalibrationFit, EffectCalibratorValue, EffectInternalStandard, EffectVolume, EffectMass, EffectDilution,
		EffectRecovery, EffectMatrix, EffectMethodBias, EffectReferenceValue, EffectStability, EffectSubsampling, EffectTemperature, EffectIntegration, EffectConversion}
}

// A Coverer is a component of a budget with the effects that it covers.
type Coverer struct {
	Name   string   `json:"name"`
	Covers []Effect `json:"covers"`
}

// An Overlap is an effect that more than one component covers.
type Overlap struct {
	Effect     Effect
	Components []string
}

// An OverlapError lists every effect that a budget counts more than once.
type OverlapError struct{ Overlaps []Overlap }

func (e *OverlapError) Error() string {
	parts := make([]string, len(e.Overlaps))
	for i, o := range e.Overlaps {
		parts[i] = fmt.Sprintf("%s is covered by %s", o.Effect, quoted(o.Components))
	}
	return "counted twice: " + strings.Join(parts, "; ") + ": leave one of them out, or split it"
}

func quoted(names []string) string {
	q := make([]string, len(names))
	for i, n := range names {
		q[i] = fmt.Sprintf("%q", n)
	}
	return strings.Join(q, " and ")
}

// CheckOverlap tells whether a budget counts an effect twice: the error is an *OverlapError that names each effect and the components
// that cover it, in the order of the budget. A component that does not say what it covers, or names an effect that is neither in
// Effects nor in own, is an error too: what is not known cannot be checked.
func CheckOverlap(components []Coverer, own ...Effect) error {
	known := append(Effects(), own...)
	var order []Effect
	by := map[Effect][]string{}
	for i, c := range components {
		if slices.ContainsFunc(components[:i], func(o Coverer) bool { return o.Name == c.Name }) {
			return fmt.Errorf("component %q: a second one of that name", c.Name)
		}
		if len(c.Covers) == 0 {
			return fmt.Errorf("component %q does not say what it covers: name at least one of: %s", c.Name, list(known))
		}
		for j, effect := range c.Covers {
			if !slices.Contains(known, effect) {
				return fmt.Errorf("component %q covers %q: want one of: %s", c.Name, effect, list(known))
			}
			if slices.Contains(c.Covers[:j], effect) {
				return fmt.Errorf("component %q names %s twice", c.Name, effect)
			}
			if by[effect] == nil {
				order = append(order, effect)
			}
			by[effect] = append(by[effect], c.Name)
		}
	}
	var e OverlapError
	for _, effect := range order {
		if len(by[effect]) > 1 {
			e.Overlaps = append(e.Overlaps, Overlap{effect, by[effect]})
		}
	}
	if len(e.Overlaps) > 0 {
		return &e
	}
	return nil
}

func list(effects []Effect) string {
	names := make([]string, len(effects))
	for i, e := range effects {
		names[i] = string(e)
	}
	return strings.Join(names, ", ")
}
