package uncertainty

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// BudgetAlgorithm names the combination; a published version never changes its results.
const BudgetAlgorithm = "gum-first-order@1"

// Combine adds independent components by the law of propagation of uncertainty, first order: u² = Σ(cᵢuᵢ)². The effective
// degrees of freedom follow Welch and Satterthwaite, ν = u⁴/Σ((cᵢuᵢ)⁴/νᵢ); they are absent where every component that
// contributes has infinitely many.
//
// A component needs a finite u of zero or more and, where degrees of freedom are stated, more than zero.
//
// Source: JCGM 100:2008 (GUM), 5.1.2 and G.4.1.
func Combine(value float64, components []Component) (Budget, error) {
	b := Budget{Algorithm: BudgetAlgorithm, Value: value, Components: []Line{}}
	squares := make([]float64, len(components))
	for i, c := range components {
		if !(c.StdU >= 0) || math.IsInf(c.StdU, 0) || math.IsNaN(c.Sensitivity) || math.IsInf(c.Sensitivity, 0) {
			return Budget{}, fmt.Errorf("component %q: u = %g with sensitivity %g, want finite numbers and u of zero or more", c.Name, c.StdU, c.Sensitivity)
		}
		if c.DoF != nil && !(*c.DoF > 0) {
			return Budget{}, fmt.Errorf("component %q: %g degrees of freedom, want more than zero", c.Name, *c.DoF)
		}
		part := float64(math.Abs(c.Sensitivity) * c.StdU)
		squares[i] = float64(part * part)
		b.Components = append(b.Components, Line{Component: c, Contribution: part})
	}
	variance := strictmath.Sum(squares)
	b.StdU = math.Sqrt(variance)
	if !(variance > 0) {
		return b, nil
	}
	terms := make([]float64, 0, len(components))
	for i := range b.Components {
		b.Components[i].Share = squares[i] / variance
		if nu := b.Components[i].DoF; nu != nil && squares[i] > 0 && !math.IsInf(*nu, 1) {
			terms = append(terms, float64(b.Components[i].Share*b.Components[i].Share)/(*nu))
		}
	}
	if len(terms) > 0 {
		nu := 1 / strictmath.Sum(terms)
		b.EffectiveDoF = &nu
	}
	return b, nil
}

// Expand is the expanded uncertainty U = k·u.
func Expand(b Budget, k float64) float64 { return float64(k * b.StdU) }

// CoverageFactor is the k of a two-sided interval that holds the value with probability p: Student's quantile for the effective
// degrees of freedom, cut to a whole number (GUM G.4.1 note 1), or the normal one where there are infinitely many (nil).
func CoverageFactor(p float64, effectiveDoF *float64) (float64, error) {
	return factor(0.5+p/2, p, effectiveDoF)
}

// OneSidedFactor is the k of a one-sided interval of probability p: 1.645 for 95 % and infinitely many degrees of freedom.
func OneSidedFactor(p float64, effectiveDoF *float64) (float64, error) {
	return factor(p, p, effectiveDoF)
}

func factor(quantile, p float64, effectiveDoF *float64) (float64, error) {
	if !(p > 0 && p < 1) {
		return 0, fmt.Errorf("a coverage probability of %g: want one between 0 and 1", p)
	}
	if effectiveDoF == nil {
		return strictmath.NormQuantile(quantile), nil
	}
	nu := math.Floor(*effectiveDoF)
	if !(nu >= 1) {
		return 0, fmt.Errorf("%g effective degrees of freedom: want at least one", *effectiveDoF)
	}
	return strictmath.TQuantile(quantile, nu), nil
}
