package main

import (
	"errors"
	"fmt"
	"io"

	"github.com/spf13/cobra"
)

// streams are what a command reads and writes: results to out, everything else to err.
type streams struct {
	in       io.Reader
	out, err io.Writer
}

// run carries out one command line and returns the exit status.
func run(args []string, stdin io.Reader, stdout, stderr io.Writer) int {
	s := streams{stdin, stdout, stderr}
	root := rootCommand(s)
	root.SetArgs(args)
	root.SetIn(stdin)
	root.SetOut(stdout)
	root.SetErr(stderr)
	err := root.Execute()
	if err == nil {
		return exitDone
	}
	report(stderr, err)
	return statusOf(err)
}

const rootHelp = `assaywrit takes one drug-testing case from raw chromatograms to a signed litigation package,
and checks such a package again, from the raw data up.

It reports a measurement and the criteria applied to it. It does not say whether anyone broke a rule:
that belongs to an accredited laboratory's authorised signatory and the competent review body.`

const rootExample = `  assaywrit demo                      write a worked example, build, sign and verify it
  assaywrit new mycase                draft a case from a folder of raw files
  assaywrit check mycase              list every problem of a case folder
  assaywrit build mycase              evaluate it and write the evidence bundle
  assaywrit sign BUNDLE --person P-04 --meaning authorised --certificate P-04.pem --key P-04.key
  assaywrit verify --trust root.pem BUNDLE`

const exitHelp = `Exit status:
  0 done, everything asked for holds     1 could not be done       2 wrong command line
  3 inputs refused, every problem listed 4 a file of the bundle    5 a signature
  6 a value computed again differs
`

func rootCommand(s streams) *cobra.Command {
	root := &cobra.Command{
		Use:           "assaywrit",
		Short:         "From raw chromatograms to a signed litigation package that anyone can check",
		Long:          rootHelp,
		Example:       rootExample,
		Version:       engineVersion,
		SilenceErrors: true,
		SilenceUsage:  true,
		Args:          cobra.ArbitraryArgs,
		RunE: func(cmd *cobra.Command, args []string) error {
			if len(args) > 0 {
				return usage("unknown command %q%s", args[0], suggestion(cmd, args[0]))
			}
			return cmd.Help()
		},
	}
	root.SuggestionsMinimumDistance = 2
	root.SetUsageTemplate(root.UsageTemplate() + "\n" + exitHelp)
	root.SetFlagErrorFunc(func(cmd *cobra.Command, err error) error {
		return &failure{exitUsage, err, "see " + cmd.CommandPath() + " -h"}
	})
	root.AddCommand(demoCommand(s), newCommand(s), checkCommand(s), buildCommand(s), signCommand(s), verifyCommand(s), showCommand(s), scoutCommand(s), appraiseCommand(s),
		identityCommand(s), schemaCommand(s), criteriaCommand(s))
	return root
}

func suggestion(cmd *cobra.Command, word string) string {
	if near := cmd.SuggestionsFor(word); len(near) > 0 {
		return "; did you mean " + near[0] + "?"
	}
	return ""
}

// atMost refuses more than n arguments.
func atMost(n int, names string) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		if len(args) > n {
			return &failure{exitUsage, fmt.Errorf("%s takes %s, got %q too", cmd.Name(), names, args[n]), "see " + cmd.CommandPath() + " -h"}
		}
		return nil
	}
}

// need refuses a command line that lacks a flag.
func need(cmd *cobra.Command, names ...string) error {
	var missing []string
	for _, name := range names {
		if f := cmd.Flags().Lookup(name); f == nil || f.Value.String() == "" {
			missing = append(missing, "--"+name)
		}
	}
	if len(missing) == 0 {
		return nil
	}
	return &failure{exitUsage, fmt.Errorf("%s needs %s", cmd.Name(), listed(missing)), "see " + cmd.CommandPath() + " -h"}
}

// exactly asks for n arguments, and says which.
func exactly(n int, names string) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		if len(args) != n {
			return &failure{exitUsage, errors.New(cmd.Name() + " takes " + names), "see " + cmd.CommandPath() + " -h"}
		}
		return nil
	}
}
