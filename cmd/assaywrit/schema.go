package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"assaywrit/decision"
	"assaywrit/evidence/casefile"
)

func schemaCommand(s streams) *cobra.Command {
	names := append(casefile.SchemaNames(), "criteria")
	return &cobra.Command{
		Use:       "schema [NAME]",
		Short:     "Print the JSON Schema of a file that people write",
		Long:      "schema prints the JSON Schema (draft 2020-12) of one kind of file, so that editors complete and check it.\nWithout a name it lists the kinds: " + listed(names) + ".",
		Example:   "  assaywrit schema case > case.schema.json",
		ValidArgs: names,
		Args:      atMost(1, "one name"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if len(args) == 0 {
				fmt.Fprintln(s.out, strings.Join(names, "\n"))
				return nil
			}
			data, err := schemaNamed(args[0])
			if err != nil {
				return &failure{exitUsage, err, "there are schemas for: " + listed(names)}
			}
			_, err = s.out.Write(data)
			return err
		},
	}
}

func schemaNamed(name string) ([]byte, error) {
	if name == "criteria" {
		return decision.SchemaJSON()
	}
	return casefile.SchemaJSON(name)
}

func criteriaCommand(s streams) *cobra.Command {
	return &cobra.Command{
		Use:       "criteria [NAME]",
		Short:     "List the built-in criteria sets, or print one",
		Long:      "criteria prints a built-in criteria set, as a start for a laboratory's own: put it in the case folder and name its path in\ncase.yaml. Without a name it lists the sets. Each value tells whether it was read in its source or comes from memory.",
		Example:   "  assaywrit criteria antidoping-urine-2022 > mycase/criteria.yaml",
		ValidArgs: decision.BuiltInNames(),
		Args:      atMost(1, "one name"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if len(args) == 0 {
				fmt.Fprintln(s.out, strings.Join(decision.BuiltInNames(), "\n"))
				return nil
			}
			data, ok := decision.BuiltIn(args[0])
			if !ok {
				return &failure{exitUsage, fmt.Errorf("there is no criteria set %q", args[0]), "there are: " + listed(decision.BuiltInNames())}
			}
			_, err := s.out.Write(data)
			return err
		},
	}
}
