package formats_test

import (
	"fmt"
	"strings"

	"assaywrit/evidence/trace/formats"
)

// Content that no format recognises is refused, whatever the name says.
func ExampleRead() {
	_, err := formats.Read("raw/QC2.mzML", strings.NewReader("4.2800,12\n4.2817,15\n"), nil)
	fmt.Println(err)
	// Output:
	// raw/QC2.mzML: got content that begins with "4.2800,12\n4.2817", want mzML 1.1, or ANDI (netCDF classic), or JCAMP-DX, or delimited text (declared in the method's tables)
}
