// Command assaywrit takes one drug-testing case from raw chromatograms to a signed litigation package, and checks such a
// package again, from the raw data up.
package main

import (
	"fmt"
	"os"
)

func main() { os.Exit(guarded(os.Args[1:])) }

// guarded keeps a fault of the program from ending with the runtime's own status 2, which means wrong usage here.
func guarded(args []string) (status int) {
	defer func() {
		if fault := recover(); fault != nil {
			fmt.Fprintf(os.Stderr, "assaywrit: internal error: %v\nassaywrit: hint: nothing was written; please report this with the command that led to it\n", fault)
			status = exitFailed
		}
	}()
	return run(args, os.Stdin, os.Stdout, os.Stderr)
}
