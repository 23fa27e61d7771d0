package jcamp

import (
	"fmt"
	"strings"
	"testing"
)

// someInts are ten points of a made-up trace, from 1.00 min in steps of 0.01 min.
var someInts = []float64{12, 15, 11, 230, 1840, 2620, 1170, 190, 21, 9}

const (
	// The same in DIF form, by hand: 12, +3, -4, +219, +1610; 1840, +780, -1450, -980, -169, -12; 9.
	someLines  = "100A2LmK19J610\n104A840P80j450r80j69j2\n109I\n"
	someHeader = `##TITLE= made-up trace
##JCAMP-DX= 5.01 $$ written by hand
##DATA TYPE= GC CHROMATOGRAM
##ORIGIN= nowhere
##OWNER= public domain
##LONGDATE= 2026/01/02 03:04:05
##SPECTROMETER/DATA SYSTEM= model, 1
##SAMPLE DESCRIPTION= C-0001
##XUNITS= MINUTES
##YUNITS= counts
##XFACTOR= 0.01
##YFACTOR= 1
##FIRSTX= 1.00
##LASTX= 1.09
##NPOINTS= 10
##FIRSTY= 12
##MAXY= 2620
##MINY= 9
`
	whole1 = someHeader + "##XYDATA= (X++(Y..Y))\n" + someLines + "##END=\n"
)

// replaced is text with one piece changed, which must be there.
func replaced(t testing.TB, text, old, new string) string {
	t.Helper()
	if !strings.Contains(text, old) {
		t.Fatalf("%q is not in the file", old)
	}
	return strings.Replace(text, old, new, 1)
}

// run is a run of mass spectra over time, as pages of NTUPLES. Each spectrum has two points.
func run(unit string, times ...string) string {
	var b strings.Builder
	fmt.Fprintf(&b, `##TITLE= made-up run
##JCAMP-DX= 5.00
##DATA TYPE= MASS SPECTRUM
##DATA CLASS= NTUPLES
##.IONIZATION MODE= EI+
##NTUPLES= MASS SPECTRUM
##VAR_NAME= MASS, INTENSITY, RETENTION TIME
##SYMBOL= X, Y, T
##VAR_TYPE= INDEPENDENT, DEPENDENT, PAGE
##VAR_FORM= AFFN, AFFN, AFFN
##VAR_DIM= , , %d
##UNITS= M/Z, COUNTS, %s
`, len(times), unit)
	for i, time := range times {
		fmt.Fprintf(&b, "##PAGE= T=%s\n##NPOINTS= 2\n##DATA TABLE= (XY..XY), PEAKS\n91.1, %d; 65.2, 20\n", time, 100+i)
	}
	return b.String() + "##END NTUPLES= MASS SPECTRUM\n##END=\n"
}
