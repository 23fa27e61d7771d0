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
// A component needs a finite u of zero or more and, where degrees of freedom are stated, more than zero. The components must be
// independent: one that depends on another belongs into it. What is returned is finite.
//
// Source: JCGM 100:2008 (GUM), 5.1.2 and G.4.1.
func Combine(value float64, components []Component) (Budget, error) {
	if math.IsNaN(value) || math.IsInf(value, 0) {
		return Budget{}, fmt.Errorf("a budget for a value of %g: want a finite one", value)
	}
	b := Budget{Algorithm: BudgetAlgorithm, Value: value, Components: []Line{}}
	largest := 0.0
	for _, c := range components {
		part := float64(math.Abs(c.Sensitivity) * c.StdU)
		if !(c.StdU >= 0) || math.IsNaN(part) || math.IsInf(part, 0) || math.IsInf(c.StdU, 0) || math.IsInf(c.Sensitivity, 0) {
			return Budget{}, fmt.Errorf("component %q: u = %g with sensitivity %g, want finite numbers and u of zero or more", c.Name, c.StdU, c.Sensitivity)
		}
		if c.DoF != nil && !(*c.DoF > 0) {
			return Budget{}, fmt.Errorf("component %q: %g degrees of freedom, want more than zero", c.Name, *c.DoF)
		}
		b.Components = append(b.Components, Line{Component: c, Contribution: part})
		largest = max(largest, part)
	}
	if largest == 0 {
		return b, nil
	}
	// Squares of parts scaled by a power of two, which is exact, neither overflow nor vanish.
	_, power := math.Frexp(largest)
	squares := make([]float64, len(components))
	for i, c := range b.Components {
		part := math.Ldexp(c.Contribution, -power)
		squares[i] = float64(part * part)
	}
	variance := strictmath.Sum(squares)
	b.StdU = math.Ldexp(math.Sqrt(variance), power)
	if math.IsInf(b.StdU, 0) {
		return Budget{}, fmt.Errorf("the combined uncertainty of %d components is too large for a number", len(components))
	}
	b.EffectiveDoF = b.share(squares, variance)
	return b, nil
}

// share fills each component's share of the variance and returns the effective degrees of freedom, nil where they are infinite.
func (b *Budget) share(squares []float64, variance float64) *float64 {
	terms := make([]float64, 0, len(squares))
	for i := range b.Components {
		c := &b.Components[i]
		c.Share = squares[i] / variance
		if c.DoF != nil && squares[i] > 0 && !math.IsInf(*c.DoF, 1) {
			terms = append(terms, float64(c.Share*c.Share)/(*c.DoF))
		}
	}
	nu := 1 / strictmath.Sum(terms)
	if math.IsInf(nu, 0) {
		return nil
	}
	return &nu
}

// Expand is the expanded uncertainty U = k·u.
func Expand(b Budget, k float64) float64 { return float64(k * b.StdU) }

// CoverageFactor is the k of a two-sided interval that holds the value with probability p: Student's quantile for the effective
// degrees of freedom, cut to a whole number (GUM G.4.1 note 1), or the normal one where there are infinitely many (nil). The error
// is for a p outside 0 to 1 and for less than one degree of freedom.
func CoverageFactor(p float64, effectiveDoF *float64) (float64, error) {
	return factor(0.5+p/2, p, effectiveDoF)
}

// OneSidedFactor is the k of a one-sided interval of probability p: 1.645 for 95 % and infinitely many degrees of freedom (nil).
// Degrees of freedom and errors are as for CoverageFactor.
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
