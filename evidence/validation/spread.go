package validation

import (
	"math"

	"assaywrit/evidence/strictmath"
)

// A Spread is a standard deviation with its degrees of freedom and confidence interval.
type Spread struct {
	SD       float64  `json:"sd"`
	Relative *float64 `json:"relative_sd,omitempty"` // over the mean; absent where that is not above zero
	DoF      float64  `json:"degrees_of_freedom"`
	// Interval is √(ν·s²/χ²): for the components of an unequal or combined variance with Satterthwaite's degrees of freedom, an
	// approximation.
	Interval Interval `json:"interval"`
}

// spread makes the figure of a standard deviation s with nu degrees of freedom.
func spread(s, nu, mean float64) Spread {
	f := Spread{SD: s, DoF: nu}
	if mean > 0 {
		if r := s / mean; !math.IsInf(r, 0) {
			f.Relative = &r
		}
	}
	low, high := chiSquareQuantile(0.5-confidence/2, nu), chiSquareQuantile(0.5+confidence/2, nu)
	f.Interval = Interval{float64(s * math.Sqrt(nu/high)), float64(s * math.Sqrt(nu/low))}
	if math.IsInf(f.Interval.High, 0) || math.IsNaN(f.Interval.High) {
		// So few degrees of freedom that the upper end is beyond all numbers.
		f.Interval.High = math.MaxFloat64
	}
	return f
}

// A Mean is an average with its standard uncertainty, degrees of freedom and confidence interval.
type Mean struct {
	Value    float64  `json:"value"`
	StdU     float64  `json:"std_u"`
	DoF      float64  `json:"degrees_of_freedom"`
	Interval Interval `json:"interval"`
	N        int      `json:"n"`
}

// about makes the figure of a value with standard uncertainty u and nu degrees of freedom.
func about(value, u, nu float64, n int) Mean {
	half := float64(strictmath.TQuantile(0.5+confidence/2, nu) * u)
	return Mean{Value: value, StdU: u, DoF: nu, Interval: Interval{value - half, value + half}, N: n}
}

// meanOf is the mean of at least two values.
func meanOf(values []float64) Mean {
	n := float64(len(values))
	return about(strictmath.Mean(values), strictmath.SD(values)/math.Sqrt(n), n-1, len(values))
}

// finite tells whether all are.
func finite(values ...float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

// times is the interval of a figure that is proportional to the standard deviation s, whose interval i is.
func (i Interval) times(figure, s float64) Interval {
	if s == 0 {
		return Interval{}
	}
	k := figure / s
	return Interval{min(float64(i.Low*k), math.MaxFloat64), min(float64(i.High*k), math.MaxFloat64)}
}
