package main

import (
	"errors"
	"fmt"
	"os"

	"github.com/spf13/cobra"
)

func checkCommand(s streams) *cobra.Command {
	return &cobra.Command{
		Use:     "check FOLDER",
		Short:   "List every problem of a case folder",
		Long:    "check reads a case folder as build would, raw files included, and lists every problem with its place: file, line,\ncolumn, what was found and what would be accepted. It writes nothing.",
		Example: "  assaywrit check mycase",
		Args:    exactly(1, "the case folder"),
		RunE: func(cmd *cobra.Command, args []string) error {
			root, err := openFolder(args[0])
			if err != nil {
				return err
			}
			defer root.Close()
			a, err := assess(root.FS(), chosenCriteria)
			if err != nil {
				return err
			}
			rec := a.evaluation.Record
			traces := 0
			for _, inj := range rec.Injections {
				traces += len(inj.Measurements)
			}
			fmt.Fprintf(s.out, "%s: case %s: no problem found (%d files, %d injections, %d traces, %d analytes; criteria %s)\n",
				args[0], rec.Case.Number, len(rec.Inputs), len(rec.Injections), traces, len(rec.Analytes), a.finding.Criteria.ID)
			return nil
		},
	}
}

// openFolder opens a case folder by its path.
func openFolder(path string) (*os.Root, error) {
	info, err := os.Stat(path)
	switch {
	case errors.Is(err, os.ErrNotExist):
		return nil, &failure{exitRefused, fmt.Errorf("%s: there is no such folder", path), "assaywrit demo writes an example of a case folder"}
	case err != nil:
		return nil, err
	case !info.IsDir():
		return nil, &failure{exitRefused, fmt.Errorf("%s: is a file, want a case folder", path), "a finished bundle is checked with: assaywrit verify " + path}
	}
	return os.OpenRoot(path)
}
