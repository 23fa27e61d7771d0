// Package uncertainty combines standard uncertainties into a budget (JCGM 100:2008, the GUM).
//
// Combine adds independent components that are in the unit of the result. Propagate starts from a measurement model and its inputs, with
// correlations and, where asked for, terms of second order. Simulate propagates distributions through the same model (JCGM 101:2008) and
// Compare says which of the two is to be used. CheckOverlap finds what a budget counts twice; Bias is the top-down figure for what a
// method is off. Units are the caller's. All arithmetic is bit-reproducible (package strictmath); the models must be too.
package uncertainty

// A Component is one input of a budget.
type Component struct {
	Name        string   `json:"name"`
	Type        string   `json:"type"` // "A" or "B" (GUM 4.2, 4.3)
	StdU        float64  `json:"std_u"`
	Sensitivity float64  `json:"sensitivity"`                  // ∂y/∂x
	DoF         *float64 `json:"degrees_of_freedom,omitempty"` // absent: infinite
	Source      string   `json:"source"`
}

// A Budget is a combined standard uncertainty and what it is made of.
type Budget struct {
	Algorithm  string  `json:"algorithm"` // "gum-first-order@1"
	Value      float64 `json:"value"`
	Components []Line  `json:"components"`
	StdU       float64 `json:"combined_std_u"`
	// EffectiveDoF is ν_eff by Welch–Satterthwaite (GUM G.4.1); absent: infinite.
	EffectiveDoF *float64 `json:"effective_degrees_of_freedom,omitempty"`
}

// A Line is a component with its share.
type Line struct {
	Component
	Contribution float64 `json:"contribution"` // |c|·u
	Share        float64 `json:"share"`        // of the combined variance, 0 to 1
}
