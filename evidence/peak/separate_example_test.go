package peak_test

import (
	"fmt"
	"math"

	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

// Two fused Gaussians of area 10 and 1, σ 0.1 min and 0.4 min apart: what each way of sharing the area gives.
func ExampleSeparate() {
	c := trace.Chromatogram{ID: "quantifier"}
	gauss := func(area, mean, t float64) float64 {
		return area / (0.1 * math.Sqrt(2*math.Pi)) * math.Exp(-(t-mean)*(t-mean)/0.02)
	}
	for i := range 201 {
		t := 4 + float64(i)*0.01
		c.TimeMin = append(c.TimeMin, t)
		c.Intensity = append(c.Intensity, gauss(10, 4.8, t)+gauss(1, 5.2, t))
	}
	cluster := peak.Cluster{
		StartMin: 4, EndMin: 6, ApexesMin: []float64{4.8, 5.2},
		Baseline: peak.Line{StartMin: 4, EndMin: 6},
		Noise:    peak.NoiseModel{WhiteSD: 0.01},
	}
	list, err := peak.Separate(c, cluster, peak.JointOptions{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, s := range list {
		if s.Refused != "" {
			fmt.Printf("%-24s %s\n", s.Method, s.Refused)
			continue
		}
		fmt.Printf("%-24s %6.2f %6.2f\n", s.Method, s.Areas[0], s.Areas[1])
	}
	e1, e2, _ := peak.GaussianPairDrop(10, 4.8, 0.1, 1, 5.2, 0.1)
	fmt.Printf("%-24s %+5.2f%% %+5.2f%%\n", "closed form of the drop", 100*e1, 100*e2)
	// Output:
	// perpendicular-drop@1      10.09   0.91
	// valley-to-valley@1       area-not-above-zero
	// skim-tangent@1            10.63   0.37
	// skim-exponential@1        10.16   0.84
	// emg-joint-fit@1           10.00   1.00
	// emg-joint-fit-shared@1    10.00   1.00
	// closed form of the drop  +0.85% -8.47%
}
