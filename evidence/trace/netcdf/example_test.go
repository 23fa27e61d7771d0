package netcdf_test

import (
	"bytes"
	"fmt"

	"assaywrit/evidence/trace/netcdf"
)

// A data set is written, and a part of it is read again.
func ExampleOpen() {
	var file bytes.Buffer
	err := netcdf.Write(&file, &netcdf.Dataset{
		Dimensions: []netcdf.Dimension{{Name: "point_number", Length: 4}},
		Attributes: []netcdf.NewAttribute{{Name: "retention_unit", Values: "seconds"}},
		Variables:  []netcdf.NewVariable{{Name: "ordinate_values", Dimensions: []string{"point_number"}, Values: []float32{0.5, 1.5, 9, 2}}},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	f, err := netcdf.Open("run.cdf", bytes.NewReader(file.Bytes()))
	if err != nil {
		fmt.Println(err)
		return
	}
	part, err := f.FloatsRange("ordinate_values", 1, 2)
	fmt.Println(f.Attribute("retention_unit").Text(), part, err)
	// Output: seconds [1.5 9] <nil>
}
