package trace_test

import (
	"fmt"

	"assaywrit/evidence/trace"
)

// What every reader asks of a chromatogram before it hands it out.
func ExampleChromatogram_Check() {
	c := trace.Chromatogram{ID: "300.2 > 91.1", TimeMin: []float64{1.00, 1.01, 1.01}, Intensity: []float64{12, 15, 11}}
	if b := c.Check(); b != nil {
		fmt.Printf("point %d: got %s, want %s\n", b.Point, b.Got, b.Want)
	}
	// Output: point 3: got a time of 1.01 min, want one after 1.01 min
}
