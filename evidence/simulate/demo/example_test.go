package demo_test

import (
	"fmt"
	"strings"

	"assaywrit/evidence/simulate/demo"
)

// The example's case folder, without its raw files.
func ExampleFiles() {
	files, err := demo.Files()
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, f := range files {
		if !strings.HasPrefix(f.Path, "raw/") {
			fmt.Println(f.Path)
		}
	}
	fmt.Println("salbutamol in the sample, ng/mL:", demo.Truth()["salbutamol"])
	// Output:
	// case.yaml
	// documents/custody-form.txt
	// documents/reference-material.txt
	// method.yaml
	// sequence.csv
	// salbutamol in the sample, ng/mL: 1450
}
