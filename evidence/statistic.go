package evidence

import "assaywrit/evidence/strictmath"

// statistic summarises values in their order; it is nil where there are none. SD is the sample standard deviation (n − 1),
// absent for a single value.
func statistic(values []float64) *Statistic {
	if len(values) == 0 {
		return nil
	}
	s := &Statistic{Mean: strictmath.Mean(values), Min: values[0], Max: values[0], N: len(values)}
	for _, v := range values[1:] {
		s.Min = min(s.Min, v)
		s.Max = max(s.Max, v)
	}
	if len(values) > 1 {
		sd := strictmath.SD(values)
		s.SD = &sd
	}
	return s
}

func ptr[T any](v T) *T { return &v }
