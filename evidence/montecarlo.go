package evidence

import (
	"fmt"
	"math"

	"assaywrit/evidence/calibration"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/uncertainty"
)

const (
	monteCarloSeed   = 20080101 // of every run: the result follows from the inputs alone
	monteCarloTrials = 200_000
	monteCarloLevel  = 0.95
	monteCarloDigits = 1 // of the standard uncertainty, for the comparison
)

// A Confirmation holds the law of propagation against a simulation of the same measurement model (GUM Supplement 1).
type Confirmation struct {
	Model       string                  `json:"model"`
	Propagation uncertainty.Propagation `json:"propagation"`
	Simulation  uncertainty.Simulation  `json:"simulation"`
	Comparison  uncertainty.Comparison  `json:"comparison"`
}

// confirm works the result out once more by its measurement model: the mean response read from the line, times the dilution, times one
// factor around 1 for each relative component, plus one term around 0 for each absolute one. Intercept and slope are drawn together from a
// normal distribution, with their correlation. What was evaluated from observations with more than two degrees of freedom is drawn from
// Student's distribution (JCGM 101:2008, 6.4.9, from memory); with two or one that has no standard deviation, and the normal one stands in
// for both of the two that are compared.
func confirm(a casefile.Analyte, fit *calibration.Fit, r *Result, dilution float64) (*Confirmation, error) {
	response := float64(r.NGPerML / dilution * fit.B)
	inputs := []uncertainty.Input{
		{Name: "intercept", Type: "B", Value: fit.A, StdU: fit.SA, Source: "this batch: calibration"},
		{Name: "slope", Type: "B", Value: fit.B, StdU: fit.SB, Source: "this batch: calibration"},
	}
	mean := uncertainty.Input{Name: "mean response", Value: response + fit.A, Source: "this batch: aliquots"}
	var freedom *float64
	if a.Uncertainty.Repeatability == "aliquots" && r.SD != nil {
		n := float64(r.N)
		freedom = ptr(n - 1)
		mean.StdU = math.Abs(float64(*r.SD / math.Sqrt(n) / dilution * fit.B))
	}
	inputs = append(inputs, observed(mean, freedom))
	var relative []bool
	for _, c := range a.Uncertainty.Components {
		in := uncertainty.Input{Name: c.Name, Source: c.Source}
		switch {
		case c.Relative != nil:
			in.Value, in.StdU = 1, *c.Relative
		case c.Absolute != nil:
			in.StdU = *c.Absolute
		}
		inputs, relative = append(inputs, observed(in, c.DoF)), append(relative, c.Relative != nil)
	}
	model := func(x []float64) float64 {
		y := float64((x[2] - x[0]) / x[1] * dilution)
		for i, factor := range relative {
			if factor {
				y = float64(y * x[3+i])
			}
		}
		for i, factor := range relative {
			if !factor {
				y += x[3+i]
			}
		}
		return y
	}
	var together []uncertainty.Correlation
	if fit.SA > 0 && fit.SB > 0 {
		together = []uncertainty.Correlation{{A: "intercept", B: "slope", R: max(-1, min(1, fit.Cov/(fit.SA*fit.SB)))}}
	}
	out := &Confirmation{Model: "(mean response − intercept) / slope × dilution × Π(1 + relative components) + Σ absolute components"}
	var err error
	if out.Propagation, err = uncertainty.Propagate(model, 0, inputs, together, false); err != nil {
		return nil, fmt.Errorf("propagation: %w", err)
	}
	if out.Simulation, err = uncertainty.Simulate(model, inputs, together, uncertainty.Run{Seed: monteCarloSeed, Probability: monteCarloLevel, Trials: monteCarloTrials}); err != nil {
		return nil, fmt.Errorf("simulation: %w", err)
	}
	out.Comparison, err = uncertainty.Compare(out.Propagation, out.Simulation, monteCarloDigits)
	return out, err
}

// observed gives an input the distribution of what was observed with so many degrees of freedom.
func observed(in uncertainty.Input, freedom *float64) uncertainty.Input {
	in.Type = "B"
	if freedom != nil && *freedom > 2 {
		in.Type, in.DoF, in.Distribution = "A", freedom, uncertainty.Distribution{Shape: uncertainty.Student}
	}
	return in
}
