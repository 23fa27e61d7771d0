package main

import (
	"encoding/json"
	"fmt"
	"io"
	"os"
	"strings"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"assaywrit/evidence/validation"
)

const appraiseHelp = `appraise computes the figures of a method's validation from its table of results: repeatability, intermediate precision (analysis of
variance), bias, recovery, matrix effect, carry-over, stability and limits from blanks, each with its degrees of freedom, and the components
of uncertainty that method.yaml refers to. The table has a column kind that says what each row is:

  kind,run,level,replicate,nominal [ng/mL],found [ng/mL]
  precision,day 1,low,1,100,98.2

kinds are precision, reference, blank, recovery, neat, before-extraction, after-extraction, carry-over, stability-reference and stability.
With --controls the table holds controls of earlier batches (batch, level, found), and control charts come out.`

func appraiseCommand(s streams) *cobra.Command {
	var controls, asJSON bool
	cmd := &cobra.Command{
		Use:     "appraise TABLE",
		Short:   "Compute the figures of a validation, or control charts",
		Long:    appraiseHelp,
		Example: "  assaywrit appraise validation.csv\n  assaywrit appraise --controls controls.csv",
		Args:    exactly(1, "the table"),
		RunE: func(cmd *cobra.Command, args []string) error {
			data, err := readTable(args[0])
			if err != nil {
				return err
			}
			if controls {
				return appraiseControls(s.out, args[0], data, asJSON)
			}
			rows, problems := validation.Read(args[0], data)
			if len(problems) > 0 {
				return problems
			}
			figures, err := validation.Appraise(rows, validation.Options{Source: fmt.Sprintf("%s, SHA-256 %s", args[0], hexSum(data))})
			if err != nil {
				return &failure{exitRefused, fmt.Errorf("%s: %w", args[0], err), ""}
			}
			if asJSON {
				return json.NewEncoder(s.out).Encode(figures)
			}
			return printFigures(s.out, figures)
		},
	}
	cmd.Flags().BoolVar(&controls, "controls", false, "the table holds controls of earlier batches")
	cmd.Flags().BoolVar(&asJSON, "json", false, "everything that was computed, as JSON")
	return cmd
}

func readTable(path string) ([]byte, error) {
	info, err := os.Stat(path)
	switch {
	case err != nil:
		return nil, err
	case !info.Mode().IsRegular():
		return nil, &failure{exitRefused, fmt.Errorf("%s: is no plain file, want a table", path), "see assaywrit appraise -h"}
	case info.Size() > validation.MaxBytes:
		return nil, &failure{exitRefused, fmt.Errorf("%s: a file of %d bytes, want at most %d", path, info.Size(), int64(validation.MaxBytes)), ""}
	}
	return os.ReadFile(path)
}

func appraiseControls(w io.Writer, path string, data []byte, asJSON bool) error {
	history, problems := validation.ReadHistory(path, data)
	if len(problems) > 0 {
		return problems
	}
	charts, err := validation.Charts(history, validation.UsualDrift())
	if err != nil {
		return &failure{exitRefused, fmt.Errorf("%s: %w", path, err), ""}
	}
	if asJSON {
		return json.NewEncoder(w).Encode(charts)
	}
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "analyte\tlevel\tresults\tbatches\tcentre ng/mL\ts\twarning\taction\tsignals")
	for _, c := range charts {
		fmt.Fprintf(t, "%s\t%s\t%d\t%d\t%.5g\t%.3g\t%.5g to %.5g\t%.5g to %.5g\t%d\n", c.Analyte, c.Level, c.N, c.Batches, c.Centre, c.SD, c.Warning.Low, c.Warning.High, c.Action.Low, c.Action.High, len(c.Signals))
	}
	if err := t.Flush(); err != nil {
		return err
	}
	for _, c := range charts {
		for _, x := range c.Signals {
			fmt.Fprintf(w, "%s %s, batch %s, rule %s: %s\n", c.Analyte, c.Level, x.Batch, x.Rule, x.Text)
		}
		for _, f := range c.Flags {
			fmt.Fprintf(w, "%s %s: note: %s\n", c.Analyte, c.Level, f)
		}
	}
	return nil
}

func printFigures(w io.Writer, list []validation.Figures) error {
	for _, f := range list {
		if f.Analyte != "" {
			fmt.Fprintf(w, "%s\n\n", f.Analyte)
		}
		t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
		if len(f.Precision) > 0 {
			fmt.Fprintln(t, "level\truns\tn\tmean ng/mL\trepeatability\tbetween runs\tintermediate precision\tbias")
		}
		for _, p := range f.Precision {
			fmt.Fprintf(t, "%s\t%d\t%d\t%.5g\t%s\t%s\t%s\t%s\n", p.Level, p.Runs, p.N, p.Mean, spreadText(p.Repeatability), optional(p.BetweenRunSD, "%.3g"), spreadText(p.Intermediate), meanText(p.RelativeBias))
		}
		for _, x := range f.Recovery {
			fmt.Fprintf(t, "recovery %s\t\t%d\t%s\n", x.Level, x.N, meanText(&x.Mean))
		}
		for _, x := range f.Extraction {
			fmt.Fprintf(t, "extraction %s\tmatrix effect %s\trecovery %s\tprocess efficiency %s\n", x.Level, meanText(x.MatrixEffect), meanText(x.Recovery), meanText(x.ProcessEfficiency))
		}
		for _, x := range f.Stability {
			fmt.Fprintf(t, "stability %s\t%s\t%s\n", x.Level, x.Condition, meanText(&x.Ratio))
		}
		if x := f.Carryover; x != nil {
			fmt.Fprintf(t, "carry-over\tlargest share %.3g %%\tof %d\n", x.LargestShare*100, x.N)
		}
		if x := f.Blanks; x != nil {
			fmt.Fprintf(t, "limits from %d blanks\tdecision %.3g\tdetection %.3g\tquantification %.3g ng/mL\n", x.N, x.Critical, x.Detection, x.Quantification)
		}
		if err := t.Flush(); err != nil {
			return err
		}
		printComponents(w, f)
		for _, x := range f.Flags {
			fmt.Fprintf(w, "note: %s\n", x)
		}
		fmt.Fprintln(w)
	}
	return nil
}

// printComponents writes the components as the method file has them. They are alternatives: two that cover the same are not to be used
// together.
func printComponents(w io.Writer, f validation.Figures) {
	if len(f.Components) == 0 {
		return
	}
	fmt.Fprintln(w, "\ncomponents of uncertainty, for method.yaml; those that cover the same are alternatives:")
	for _, c := range f.Components {
		var covers []string
		for _, e := range c.Covers {
			covers = append(covers, string(e))
		}
		fmt.Fprintf(w, "  - {name: %s, type: %s, relative: %.4g %%, degrees_of_freedom: %.4g, source: %q}  # covers %s\n", c.Name, c.Type, c.Relative*100, c.DoF, c.Source, strings.Join(covers, ", "))
	}
}

func spreadText(s *validation.Spread) string {
	if s == nil {
		return ""
	}
	if s.Relative == nil {
		return fmt.Sprintf("%.3g (ν %.3g)", s.SD, s.DoF)
	}
	return fmt.Sprintf("%.3g %% (ν %.3g)", *s.Relative*100, s.DoF)
}

func meanText(m *validation.Mean) string {
	if m == nil {
		return ""
	}
	return fmt.Sprintf("%.4g %% ± %.2g %%", m.Value*100, m.StdU*100)
}
