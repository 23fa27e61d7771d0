package table_test

import (
	"fmt"
	"strings"

	"assaywrit/evidence/trace/table"
)

// Two columns, as a method declares them.
func ExampleRead() {
	layout := table.Layout{Separator: ';', DecimalMark: ',', HeaderLines: 1, TimeColumn: 1, TimeUnit: "s", Columns: []table.Column{{Column: 2, ID: "254 nm"}}}
	file, err := table.Read("raw/QC2.csv", strings.NewReader("time;254 nm\n60,0;1,5\n60,3;1,75\n"), layout)
	if err != nil {
		fmt.Println(err)
		return
	}
	c := file.Chromatograms[0]
	fmt.Println(c.ID, c.TimeMin, c.Intensity)

	_, err = table.Read("raw/QC2.csv", strings.NewReader("time;254 nm\n60,0;1,5\n59,7;1,75\n"), layout)
	fmt.Println(err)
	// Output:
	// 254 nm [1 1.005] [1.5 1.75]
	// raw/QC2.csv:3:1: got "59,7", want a time after 60,0 s
}
