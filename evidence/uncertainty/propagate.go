package uncertainty

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"assaywrit/evidence/strictmath"
)

// The algorithms of Propagate; a published version never changes its results.
const (
	PropagateAlgorithm   = "gum-model-first-order@1"
	SecondOrderAlgorithm = "gum-model-second-order@1"
)

// ErrSecondOrderCorrelated is the error for terms of second order with correlated inputs: the GUM gives them for independent ones.
var ErrSecondOrderCorrelated = errors.New("terms of second order with correlated inputs: use the Monte Carlo method")

// A Term is one input of a propagated uncertainty.
type Term struct {
	Input
	C            float64 `json:"c"`            // ∂f/∂x
	Contribution float64 `json:"contribution"` // |c|·u, in the unit of the result
	// Share of the combined variance. With correlations it is cᵢuᵢ·Σⱼcⱼuⱼrᵢⱼ/u², which may be below 0; the shares (with that of the
	// second order) add up to 1.
	Share float64 `json:"share"`
}

// Freedom says which effective degrees of freedom a combined uncertainty has. Its zero value is not determined.
type Freedom struct {
	Kind   string   `json:"kind"` // FreedomEffective, FreedomInfinite, FreedomRefused
	Value  *float64 `json:"value,omitempty"`
	Reason string   `json:"reason,omitempty"` // why refused
}

// The kinds of Freedom.
const (
	FreedomEffective = "welch-satterthwaite"
	FreedomInfinite  = "infinite"
	FreedomRefused   = "refused"
)

// A Propagation is a value with its combined standard uncertainty, by a measurement model.
type Propagation struct {
	Algorithm    string        `json:"algorithm"`
	Value        float64       `json:"value"`
	Terms        []Term        `json:"terms"`
	Correlations []Correlation `json:"correlations,omitempty"`
	StdU         float64       `json:"combined_std_u"`
	FirstOrder   float64       `json:"first_order_std_u"`
	// SecondOrderVariance is what terms of second order add to the variance, and SecondOrderShare its share; absent where not asked for.
	SecondOrderVariance *float64 `json:"second_order_variance,omitempty"`
	SecondOrderShare    *float64 `json:"second_order_share,omitempty"`
	Freedom             Freedom  `json:"effective_degrees_of_freedom"`
	// TakenAsInfinite names the contributing inputs of type B that state no degrees of freedom.
	TakenAsInfinite []string `json:"degrees_of_freedom_not_stated,omitempty"`
}

// Propagate combines the inputs of a model by the law of propagation of uncertainty, u² = ΣΣ cᵢcⱼuᵢuⱼrᵢⱼ, and with withSecond adds the
// terms of second order. Sensitivities that are not supplied are worked out from the model (see sensitivities); f may be nil where all
// are supplied, and value is then taken as it is. With f, value is not used.
//
// Degrees of freedom follow Welch and Satterthwaite where the inputs that contribute are independent. Correlated inputs count as one
// term where all of them were evaluated from the same simultaneous observations (Input.Together) and have the same degrees of
// freedom, or none that are finite; otherwise the degrees of freedom are refused, with the names. Terms of second order are left out
// of them, as in GUM H.1.6.
//
// What is returned is finite. Errors name the input; ErrNotCorrelation and ErrSecondOrderCorrelated.
//
// Source: JCGM 100:2008 (GUM), 5.1.2, 5.2.2, G.4.1; correlated sets: R. Willink, Metrologia 44 (2007) 340-349 (from memory).
func Propagate(f Model, value float64, inputs []Input, correlations []Correlation, withSecond bool) (Propagation, error) {
	if err := checkInputs(inputs); err != nil {
		return Propagation{}, err
	}
	r, err := correlationMatrix(inputs, correlations)
	if err != nil {
		return Propagation{}, err
	}
	if f == nil {
		if withSecond {
			return Propagation{}, errors.New("terms of second order without a model: want one")
		}
		for _, in := range inputs {
			if in.Sensitivity == nil {
				return Propagation{}, fmt.Errorf("input %q: no sensitivity and no model to work it out from", in.Name)
			}
		}
	} else {
		value = f(values(inputs))
	}
	if math.IsNaN(value) || math.IsInf(value, 0) {
		return Propagation{}, fmt.Errorf("the model gives %g for the inputs' values: want a finite value", value)
	}
	p := Propagation{Algorithm: PropagateAlgorithm, Value: value, Correlations: slices.Clone(correlations)}
	c, err := sensitivities(f, inputs)
	if err != nil {
		return Propagation{}, err
	}
	variance, err := p.first(inputs, c, r)
	if err != nil {
		return Propagation{}, err
	}
	p.FirstOrder, p.StdU = math.Sqrt(variance), math.Sqrt(variance)
	p.Freedom = freedom(p.Terms, r, variance)
	if withSecond {
		if p, err = p.second(f, inputs, c, r, variance); err != nil {
			return Propagation{}, err
		}
	}
	return p, nil
}

// first fills the terms and returns the variance.
func (p *Propagation) first(inputs []Input, c []float64, r [][]float64) (float64, error) {
	n := len(inputs)
	signed := make([]float64, n)
	for i, in := range inputs {
		signed[i] = float64(c[i] * in.StdU)
		p.Terms = append(p.Terms, Term{Input: in, C: c[i], Contribution: math.Abs(signed[i])})
		if in.DoF == nil && signed[i] != 0 {
			p.TakenAsInfinite = append(p.TakenAsInfinite, in.Name)
		}
	}
	row := make([]float64, n) // cᵢuᵢ·Σⱼcⱼuⱼrᵢⱼ
	for i := range n {
		if r == nil {
			row[i] = float64(signed[i] * signed[i])
		} else {
			row[i] = float64(signed[i] * strictmath.Dot(r[i], signed))
		}
	}
	variance := strictmath.Sum(row)
	if math.IsNaN(variance) || math.IsInf(variance, 0) {
		return 0, errors.New("the combined uncertainty is too large for a number")
	}
	// Perfectly correlated inputs can cancel to a little below zero.
	variance = max(variance, 0)
	for i := range p.Terms {
		if variance > 0 {
			p.Terms[i].Share = row[i] / variance
		}
	}
	return variance, nil
}

// second adds the terms of second order.
func (p Propagation) second(f Model, inputs []Input, c []float64, r [][]float64, variance float64) (Propagation, error) {
	if r != nil {
		return p, ErrSecondOrderCorrelated
	}
	more, err := secondOrder(f, inputs, c)
	if err != nil {
		return p, err
	}
	total := variance + more
	if !(total >= 0) || math.IsInf(total, 0) {
		return p, fmt.Errorf("the terms of second order (%g) outweigh those of first order (%g): use the Monte Carlo method", more, variance)
	}
	p.Algorithm, p.SecondOrderVariance, p.StdU = SecondOrderAlgorithm, &more, math.Sqrt(total)
	if total > 0 {
		share := more / total
		p.SecondOrderShare = &share
		for i := range p.Terms {
			p.Terms[i].Share = float64(p.Terms[i].Share * (variance / total))
		}
	}
	return p, nil
}

// freedom is Welch and Satterthwaite's formula over sets of correlated inputs.
func freedom(terms []Term, r [][]float64, variance float64) Freedom {
	if variance == 0 {
		return Freedom{Kind: FreedomInfinite}
	}
	var parts []float64
	done := make([]bool, len(terms))
	for i := range terms {
		if done[i] || terms[i].Contribution == 0 {
			continue
		}
		set := correlatedWith(terms, r, i)
		for _, j := range set {
			done[j] = true
		}
		nu, ok := shared(terms, set)
		if !ok {
			var names []string
			for _, j := range set {
				names = append(names, terms[j].Name)
			}
			return Freedom{Kind: FreedomRefused, Reason: "the formula of Welch and Satterthwaite is for independent inputs; these are correlated and were not observed together with the same degrees of freedom: " + strings.Join(names, ", ")}
		}
		if math.IsInf(nu, 1) {
			continue
		}
		share := 0.0
		for _, j := range set {
			share += terms[j].Share
		}
		parts = append(parts, float64(share*share)/nu)
	}
	nu := 1 / strictmath.Sum(parts)
	if math.IsInf(nu, 0) {
		return Freedom{Kind: FreedomInfinite}
	}
	return Freedom{Kind: FreedomEffective, Value: &nu}
}

// correlatedWith lists the contributing inputs that are tied to input i, itself first.
func correlatedWith(terms []Term, r [][]float64, i int) []int {
	set := []int{i}
	if r == nil {
		return set
	}
	for k := 0; k < len(set); k++ {
		for j := range terms {
			if r[set[k]][j] != 0 && terms[j].Contribution != 0 && !slices.Contains(set, j) {
				set = append(set, j)
			}
		}
	}
	return set
}

// shared is the degrees of freedom that a set has as a whole.
func shared(terms []Term, set []int) (nu float64, ok bool) {
	degrees := func(t Term) float64 {
		if t.DoF == nil {
			return math.Inf(1)
		}
		return *t.DoF
	}
	first := terms[set[0]]
	nu = degrees(first)
	for _, j := range set[1:] {
		t := terms[j]
		if degrees(t) != nu || !math.IsInf(nu, 1) && (t.Together == "" || t.Together != first.Together) {
			return 0, false
		}
	}
	return nu, true
}

// CorrelationWith is the correlation coefficient of two results that were propagated from the same inputs and correlations, first
// order. It is an error where the inputs differ or a result has no uncertainty.
//
// Source: JCGM 100:2008 (GUM), H.2.3, equation (H.9) (from memory).
func (p Propagation) CorrelationWith(q Propagation) (float64, error) {
	if len(p.Terms) != len(q.Terms) || !slices.Equal(p.Correlations, q.Correlations) {
		return 0, errors.New("the correlation of results from different inputs: want the same inputs and correlations")
	}
	if p.FirstOrder == 0 || q.FirstOrder == 0 {
		return 0, errors.New("the correlation of a result without uncertainty")
	}
	inputs := make([]Input, len(p.Terms))
	a, b := make([]float64, len(inputs)), make([]float64, len(inputs))
	for i, t := range p.Terms {
		o := q.Terms[i]
		if t.Name != o.Name || t.StdU != o.StdU || t.Value != o.Value {
			return 0, fmt.Errorf("input %q of one result is %q of the other: want the same inputs", t.Name, o.Name)
		}
		inputs[i] = t.Input
		a[i], b[i] = float64(t.C*t.StdU)/p.FirstOrder, float64(o.C*o.StdU)/q.FirstOrder
	}
	r, err := correlationMatrix(inputs, p.Correlations)
	if err != nil {
		return 0, err
	}
	if r == nil {
		return strictmath.Dot(a, b), nil
	}
	rows := make([]float64, len(a))
	for i := range rows {
		rows[i] = strictmath.Dot(r[i], b)
	}
	return max(-1, min(1, strictmath.Dot(a, rows))), nil
}

// Interval is the two-sided interval y ± k·u that holds the value with probability p, with k by CoverageFactor. The error is for
// degrees of freedom that were refused, and as for CoverageFactor.
func (p Propagation) Interval(probability float64) (low, high, k float64, err error) {
	if p.Freedom.Kind != FreedomEffective && p.Freedom.Kind != FreedomInfinite {
		return 0, 0, 0, fmt.Errorf("no coverage factor: degrees of freedom %s %s", p.Freedom.Kind, p.Freedom.Reason)
	}
	if k, err = CoverageFactor(probability, p.Freedom.Value); err != nil {
		return 0, 0, 0, err
	}
	half := float64(k * p.StdU)
	return p.Value - half, p.Value + half, k, nil
}
