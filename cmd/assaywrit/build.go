package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"assaywrit/decision"
	"assaywrit/evidence/bundle"
)

func buildCommand(s streams) *cobra.Command {
	var output string
	var force bool
	cmd := &cobra.Command{
		Use:   "build FOLDER",
		Short: "Evaluate a case folder and write its evidence bundle",
		Long: "build checks a case folder, evaluates it, applies the criteria, draws the PDFs and writes one bundle (a zip file), unsigned.\n" +
			"Two builds of the same folder give the same bytes.",
		Example: "  assaywrit build mycase\n  assaywrit build mycase -o case-0417.zip",
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
			if output == "" {
				output = fileName(a.finding.Case) + ".zip"
			}
			zip, _, err := a.seal(root.FS())
			if err != nil {
				return err
			}
			if err := writeFile(output, zip, force); err != nil {
				return err
			}
			printFinding(s.out, a.finding)
			fmt.Fprintf(s.out, "\n%s: written, unsigned; sign it with: assaywrit sign %s\n", output, output)
			return nil
		},
	}
	cmd.Flags().StringVarP(&output, "output", "o", "", "file to write (default: the case number with .zip, here)")
	cmd.Flags().BoolVar(&force, "force", false, "replace the file if it exists")
	return cmd
}

// writeFile writes a whole file or none.
func writeFile(path string, data []byte, force bool) error {
	return bundle.WriteFileAtomic(path, force, func(w io.Writer) error {
		_, err := w.Write(data)
		return err
	})
}

// fileName makes a case number fit for a file name on every system.
func fileName(number string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '-', r == '_', r == '.':
			return r
		}
		return '-'
	}, number)
}

// printFinding says in a few lines what was found.
func printFinding(w io.Writer, f *decision.Finding) {
	fmt.Fprintf(w, "case %s, sample %s, criteria %s (%s)\n", f.Case, f.SampleCode, f.Criteria.ID, f.Criteria.Edition)
	for _, a := range f.Analytes {
		fmt.Fprintf(w, "\n  %s: %s (%s)\n", a.Name, a.Label, a.Outcome)
		for _, line := range wrap(a.Sentence, 92) {
			fmt.Fprintf(w, "      %s\n", line)
		}
		if len(a.Failed) > 0 {
			fmt.Fprintf(w, "      not met: %s\n", firstOf(a.Failed, 3))
		}
	}
}

// firstOf lists the first few names and says how many there are beyond.
func firstOf(names []string, most int) string {
	if len(names) <= most {
		return listed(names)
	}
	return fmt.Sprintf("%s and %d more", listed(names[:most]), len(names)-most)
}

func listed(names []string) string { return strings.Join(names, ", ") }

// wrap breaks a sentence into lines of at most width characters.
func wrap(text string, width int) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		if line != "" && len(line)+1+len(word) > width {
			lines = append(lines, line)
			line = ""
		}
		if line != "" {
			line += " "
		}
		line += word
	}
	return append(lines, line)
}
