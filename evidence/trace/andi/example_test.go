package andi_test

import (
	"bytes"
	"fmt"
	"os"

	"assaywrit/evidence/trace/andi"
)

// A published chromatogram with the peak table of the instrument's software.
func ExampleRead() {
	data, err := os.ReadFile("../../../testdata/andi/hplc-uv-a.cdf")
	if err != nil {
		fmt.Println(err)
		return
	}
	f, err := andi.Read("hplc-uv-a.cdf", bytes.NewReader(data))
	if err != nil {
		fmt.Println(err)
		return
	}
	c, p := f.Chromatograms[0], f.StoredPeaks[7]
	fmt.Printf("%s, %s: %d points in %s\n", c.ID, c.Kind, len(c.TimeMin), c.Unit)
	fmt.Printf("peak 8: %.3f min, %.2f mAU·min\n", p.RetentionMin, *p.Area)
	// Output:
	// DAD1 A, Sig=254,4 Ref=360,100, absorption: 4651 points in mAU
	// peak 8: 19.629 min, 65.81 mAU·min
}
