package peak_test

import (
	"fmt"
	"math"

	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

// A Gaussian of area 100 counts·min at 2 min on a rising baseline.
func ExampleDetect() {
	c := trace.Chromatogram{ID: "quantifier"}
	for i := range 200 {
		t := 1 + float64(i)*0.01
		z := (t - 2) / 0.05
		c.TimeMin = append(c.TimeMin, t)
		c.Intensity = append(c.Intensity, 50+5*t+100/(0.05*math.Sqrt(2*math.Pi))*math.Exp(-z*z/2))
	}
	found, err := peak.Detect(c, peak.Parameters{SmoothingPoints: 9, MinSN: 3, MinWidthMin: 0.02, Shared: peak.Drop})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, p := range found.Peaks {
		fmt.Printf("apex %.3f min, area %.1f counts·min, height %.0f counts, symmetry %.2f\n", p.ApexMin, p.Area, p.Height, *p.Symmetry)
	}
	// Output: apex 2.000 min, area 100.0 counts·min, height 798 counts, symmetry 1.00
}

// The limits 1.803 and 2.197 min move inwards to acquired points.
func ExampleIntegrate() {
	c := trace.Chromatogram{ID: "quantifier"}
	for i := range 200 {
		t := 1 + float64(i)*0.01
		z := (t - 2) / 0.05
		c.TimeMin = append(c.TimeMin, t)
		c.Intensity = append(c.Intensity, 50+5*t+100/(0.05*math.Sqrt(2*math.Pi))*math.Exp(-z*z/2))
	}
	p, err := peak.Integrate(c, 1.803, 2.197, 2)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.2f to %.2f min, area %.2f counts·min, signal-to-noise %.0f, %s\n", p.StartMin, p.EndMin, p.Area, p.SignalToNoise, p.StartKind)
	// Output: 1.81 to 2.19 min, area 99.76 counts·min, signal-to-noise 399, manual
}
