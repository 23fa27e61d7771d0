package peak

import (
	"fmt"
	"math"
)

// A NoiseModel is the standard deviation of one point, in counts: WhiteSD at no signal, and with counting noise growing so that
// the variance is WhiteSD² + CountingGain·signal. CountingGain is in counts; it is 1 where a count is one event.
type NoiseModel struct {
	WhiteSD      float64 `json:"white_sd_counts"`
	CountingGain float64 `json:"counting_gain_counts"`
}

// Variance is that of a point of this signal, in counts²; signal below zero counts as none.
func (m NoiseModel) Variance(signal float64) float64 {
	return float64(m.WhiteSD*m.WhiteSD) + float64(m.CountingGain*max(signal, 0))
}

// SD is the square root of it.
func (m NoiseModel) SD(signal float64) float64 { return math.Sqrt(m.Variance(signal)) }

// Validate returns a *ParameterError for what is negative, not finite or out of range.
func (m NoiseModel) Validate() error {
	if !(m.WhiteSD >= 0 && m.WhiteSD <= maxCounts) {
		return &ParameterError{"white_sd", fmt.Sprint(m.WhiteSD), "a standard deviation of 0 counts or more"}
	}
	if !(m.CountingGain >= 0 && m.CountingGain <= maxCounts) {
		return &ParameterError{"counting_gain", fmt.Sprint(m.CountingGain), "a gain of 0 counts or more"}
	}
	return nil
}
