package peak

import (
	"fmt"
	"math"
)

const (
	maxSmoothingPoints  = 101
	defaultEdgeFraction = 0x1p-13
)

// Validate returns a *ParameterError for the first parameter out of its range: SmoothingPoints odd, 5 to 101; MinSN above
// 0; MinWidthMin 0 or more; Shared one of its two values; ValleyFraction from 0 to below 1; EdgeFraction from 0 to 0.1.
func (p Parameters) Validate() error {
	switch {
	case p.SmoothingPoints < 5 || p.SmoothingPoints > maxSmoothingPoints || p.SmoothingPoints%2 == 0:
		return &ParameterError{"smoothing_points", fmt.Sprint(p.SmoothingPoints), "an odd number from 5 to 101"}
	case !(p.MinSN > 0) || p.MinSN > maxCounts:
		return &ParameterError{"min_signal_to_noise", fmt.Sprint(p.MinSN), "a number above 0"}
	case !(p.MinWidthMin >= 0) || math.IsInf(p.MinWidthMin, 1):
		return &ParameterError{"min_width_min", fmt.Sprint(p.MinWidthMin), "a number of minutes, 0 or more"}
	case p.Shared != Drop && p.Shared != Valley:
		return &ParameterError{"shared_valley", fmt.Sprintf("%q", string(p.Shared)), fmt.Sprintf("%q or %q", Drop, Valley)}
	case !(p.ValleyFraction >= 0 && p.ValleyFraction < 1):
		return &ParameterError{"valley_fraction", fmt.Sprint(p.ValleyFraction), "a fraction from 0 to below 1"}
	case !(p.EdgeFraction >= 0 && p.EdgeFraction <= 0.1):
		return &ParameterError{"edge_fraction", fmt.Sprint(p.EdgeFraction), "a fraction from 0 to 0.1"}
	}
	return nil
}

func (p Parameters) edge() float64 {
	if p.EdgeFraction == 0 {
		return defaultEdgeFraction
	}
	return p.EdgeFraction
}

// halvings tells how many halvings bring 1 down to f (0 < f <= 1). Between two whole numbers it goes straight in f, which
// is within 0.09 of the logarithm and needs none.
func halvings(f float64) float64 {
	frac, exp := math.Frexp(f)
	return float64(2*(1-frac)) - float64(exp)
}
