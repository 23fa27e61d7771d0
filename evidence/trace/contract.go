package trace

import (
	"fmt"
	"math"
)

// A Breach says where a chromatogram breaks its contract.
type Breach struct {
	Point       int  // counted from 1
	InIntensity bool // whether the intensity is at fault, otherwise the time
	Got, Want   string
}

// Check returns the first breach of the contract of a Chromatogram (lengths that differ, times that do not increase, values that are
// not finite), or nil. Every reader refuses a file whose chromatogram has one.
func (c *Chromatogram) Check() *Breach {
	n := min(len(c.TimeMin), len(c.Intensity))
	if len(c.TimeMin) != len(c.Intensity) {
		return &Breach{n + 1, len(c.Intensity) < len(c.TimeMin), fmt.Sprintf("%d times and %d intensities", len(c.TimeMin), len(c.Intensity)), "as many of each"}
	}
	for i, t := range c.TimeMin {
		switch y := c.Intensity[i]; {
		case math.IsNaN(t) || math.IsInf(t, 0):
			return &Breach{i + 1, false, fmt.Sprintf("a time of %g", t), "a finite number"}
		case math.IsNaN(y) || math.IsInf(y, 0):
			return &Breach{i + 1, true, fmt.Sprintf("an intensity of %g", y), "a finite number"}
		case i > 0 && t <= c.TimeMin[i-1]:
			return &Breach{i + 1, false, fmt.Sprintf("a time of %g min", t), fmt.Sprintf("one after %g min", c.TimeMin[i-1])}
		}
	}
	return nil
}
