package validation

import (
	"errors"
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// ANOVAAlgorithm names the analysis of variance; a published version never changes its results.
const ANOVAAlgorithm = "anova-one-way@1"

// An ANOVA is a one-way analysis of variance. Sums of squares are in the square of the unit of the values.
type ANOVA struct {
	Algorithm string  `json:"algorithm"`
	Groups    int     `json:"groups"`
	N         int     `json:"n"`
	Mean      float64 `json:"mean"` // of all values
	SSBetween float64 `json:"ss_between"`
	SSWithin  float64 `json:"ss_within"`
	DFBetween int     `json:"df_between"`
	DFWithin  int     `json:"df_within"`
	MSBetween float64 `json:"ms_between"`
	MSWithin  float64 `json:"ms_within"`
	// F and P are absent where the values within the groups do not differ at all.
	F        *float64 `json:"f,omitempty"`
	P        *float64 `json:"p,omitempty"` // probability of an F at least as large without a difference between the groups
	RSquared float64  `json:"r_squared"`   // share of the sum of squares that is between groups; 0 where all values are equal
	N0       float64  `json:"n0"`          // values in a group; of unequal groups the (N − Σnᵢ²/N)/(k−1) that the expected mean squares have
	Balanced bool     `json:"balanced"`
}

// OneWay is the analysis of variance of values in groups, equal in size or not. At least two groups are needed, each with a value, and
// one of them with two; values must be finite. Sums of squares are of differences from the mean, in index order and compensated, so
// that constant leading digits cost no precision beyond that of the values themselves.
//
// Source: ISO 5725-2:2019, 7.4; S. R. Searle et al., Variance Components (1992), 3.6 for n0 (both from memory).
func OneWay(groups [][]float64) (ANOVA, error) {
	var all []float64
	for i, g := range groups {
		if len(g) == 0 {
			return ANOVA{}, fmt.Errorf("group %d has no values", i+1)
		}
		for _, v := range g {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return ANOVA{}, fmt.Errorf("group %d: a value of %g, want a finite one", i+1, v)
			}
		}
		all = append(all, g...)
	}
	k, n := len(groups), len(all)
	switch {
	case k < 2:
		return ANOVA{}, fmt.Errorf("%d groups: an analysis of variance needs at least two", k)
	case n == k:
		return ANOVA{}, errors.New("one value in each group: what is within groups cannot be told from what is between them")
	}
	a := ANOVA{Algorithm: ANOVAAlgorithm, Groups: k, N: n, Mean: strictmath.Mean(all), DFBetween: k - 1, DFWithin: n - k, Balanced: true}
	between, within := make([]float64, k), make([]float64, k)
	squares := 0.0
	rest := 0.0 // what rounding of the mean leaves: the deviations do not quite add up to 0
	for i, g := range groups {
		d := make([]float64, len(g))
		for j, v := range g {
			d[j] = v - a.Mean
		}
		ni := float64(len(g))
		sum := strictmath.Sum(d)
		m := sum / ni
		rest += sum
		for j := range d {
			d[j] -= m
		}
		left := strictmath.Sum(d)
		within[i] = strictmath.Dot(d, d) - float64(left*left)/ni
		between[i] = float64(ni * float64(m*m))
		squares += float64(ni * ni)
		a.Balanced = a.Balanced && len(g) == len(groups[0])
	}
	nn := float64(n)
	a.SSBetween = max(0, strictmath.Sum(between)-float64(rest*rest)/nn)
	a.SSWithin = max(0, strictmath.Sum(within))
	a.MSBetween, a.MSWithin = a.SSBetween/float64(k-1), a.SSWithin/float64(n-k)
	a.N0 = (nn - squares/nn) / float64(k-1)
	total := a.SSBetween + a.SSWithin
	if math.IsNaN(total) || math.IsInf(total, 0) || math.IsInf(a.Mean, 0) {
		return ANOVA{}, errors.New("the values are too far apart for their squares to be numbers")
	}
	if total > 0 {
		a.RSquared = a.SSBetween / total
	}
	if f := a.MSBetween / a.MSWithin; a.MSWithin > 0 && !math.IsInf(f, 0) {
		p := fUpper(f, float64(k-1), float64(n-k))
		a.F, a.P = &f, &p
	}
	return a, nil
}
