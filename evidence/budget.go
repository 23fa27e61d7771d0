package evidence

import (
	"fmt"
	"math"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/uncertainty"
)

// components lists what the uncertainty of a result is made of, each in ng/mL of the sample (so every sensitivity is 1).
//
// The calibration enters with the part that comes from the line alone: the scatter of the sample's own responses enters
// once, as the repeatability of the aliquots or inside a component that the validation states.
func components(a casefile.Analyte, r *Result, dilution float64) ([]uncertainty.Component, error) {
	if a.Uncertainty == nil {
		return nil, fmt.Errorf("the method states no uncertainty for %s", a.ID)
	}
	parts := []uncertainty.Component{{
		Name: "calibration line", Type: "A", StdU: float64(r.Prediction.StdULine * dilution), Sensitivity: 1,
		DoF: ptr(float64(r.Prediction.DoF)), Source: "this batch: covariance of intercept and slope",
	}}
	if a.Uncertainty.Repeatability == "aliquots" {
		if r.SD == nil {
			return nil, fmt.Errorf("repeatability cannot be taken from %d aliquot", r.N)
		}
		parts = append(parts, uncertainty.Component{
			Name: "repeatability of the aliquots", Type: "A", StdU: *r.SD / math.Sqrt(float64(r.N)), Sensitivity: 1,
			DoF: ptr(float64(r.N - 1)), Source: fmt.Sprintf("this batch: standard deviation of %d aliquots over √%d", r.N, r.N),
		})
	}
	for _, c := range a.Uncertainty.Components {
		u := 0.0
		switch {
		case c.Relative != nil:
			u = float64(*c.Relative * math.Abs(r.NGPerML))
		case c.Absolute != nil:
			u = *c.Absolute
		default:
			return nil, fmt.Errorf("component %q has no value", c.Name)
		}
		parts = append(parts, uncertainty.Component{Name: c.Name, Type: c.Type, StdU: u, Sensitivity: 1, DoF: c.DoF, Source: c.Source})
	}
	return parts, nil
}
