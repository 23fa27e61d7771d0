package jcamp_test

import (
	"fmt"
	"strings"

	"assaywrit/evidence/trace/jcamp"
)

// A chromatogram of four points, written as differences. The third line checks the last ordinate.
func ExampleRead() {
	f, err := jcamp.Read("run.jdx", strings.NewReader(`##TITLE= made-up trace
##JCAMP-DX= 5.01
##DATA TYPE= GC CHROMATOGRAM
##XUNITS= SECONDS
##YUNITS= counts
##FIRSTX= 60
##LASTX= 63
##NPOINTS= 4
##XYDATA= (X++(Y..Y))
60A2L
61A5K50
62B65j56
63A09
##END=
`))
	if err != nil {
		fmt.Println(err)
		return
	}
	c := f.Chromatograms[0]
	fmt.Printf("%s: %.2f min to %.2f min, %v %s\n", c.ID, c.TimeMin[0], c.TimeMin[3], c.Intensity, c.Unit)
	// Output: made-up trace: 1.00 min to 1.05 min, [12 15 265 109] counts
}
