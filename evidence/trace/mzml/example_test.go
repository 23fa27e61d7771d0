package mzml_test

import (
	"bytes"
	"fmt"
	"os"

	"assaywrit/evidence/trace/mzml"
)

// The traces of a file, with the ions that they followed.
func ExampleRead() {
	data, err := os.ReadFile("../../../testdata/mzml/mini.chrom.mzML")
	if err != nil {
		fmt.Println(err)
		return
	}
	file, err := mzml.Read("mini.chrom.mzML", bytes.NewReader(data))
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, c := range file.Chromatograms {
		last := len(c.TimeMin) - 1
		fmt.Printf("%s %g → %g: %d points from %.2f to %.2f min\n", c.Kind, c.Transition.PrecursorMZ, c.Transition.ProductMZ, last+1, c.TimeMin[0], c.TimeMin[last])
	}
	// Output:
	// srm 808.4924 → 689.347785870371: 175 points from 57.50 to 67.40 min
	// srm 810.9094 → 689.3548: 176 points from 55.96 to 65.92 min
	// srm 814.7744 → 689.3626: 176 points from 65.46 to 75.42 min
}

// A file that was cut is refused, with the place.
func ExampleRead_refused() {
	_, err := mzml.Read("cut.mzML", bytes.NewReader([]byte("<mzML xmlns=\"http://psi.hupo.org/ms/mzml\" version=\"1.1.0\">\n <run>\n")))
	fmt.Println(err)
	// Output:
	// cut.mzML:2:2: got the element "run", which has no end, want </run> before the file ends
}
