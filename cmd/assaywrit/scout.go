package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/separation"
	"assaywrit/render"
)

const scoutHelp = `scout reads a separation study: scouting runs of one mixture at two or more compositions of the mobile phase, or with gradients of
different slope. It follows the peaks from run to run, fits the linear solvent strength model, predicts the resolution of the critical pair
against the composition, recommends the composition that separates best within the time allowed, and says how far it may drift.

The study is a YAML file beside its runs (assaywrit schema study describes it). A case can name one (separation_study), and then carries it
in its package as the reason why these conditions were chosen.`

func scoutCommand(s streams) *cobra.Command {
	var report string
	var asJSON, force bool
	cmd := &cobra.Command{
		Use:     "scout STUDY",
		Short:   "Choose the composition of the mobile phase from scouting runs",
		Long:    scoutHelp,
		Example: "  assaywrit scout study/study.yaml\n  assaywrit scout study/study.yaml --report scouting.pdf",
		Args:    exactly(1, "the study's YAML file"),
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := scouted(args[0])
			if err != nil {
				return err
			}
			if report != "" {
				var pdf bytes.Buffer
				if _, err := render.Study(&pdf, study); err != nil {
					return err
				}
				if err := writeFile(report, pdf.Bytes(), force); err != nil {
					return err
				}
			}
			if asJSON {
				return json.NewEncoder(s.out).Encode(study)
			}
			return printStudy(s.out, study)
		},
	}
	cmd.Flags().StringVar(&report, "report", "", "write the study as a PDF")
	cmd.Flags().BoolVar(&asJSON, "json", false, "everything that was found, as JSON")
	cmd.Flags().BoolVar(&force, "force", false, "write over a file that exists")
	return cmd
}

// scouted reads a study and its runs.
func scouted(path string) (*evidence.SeparationStudy, error) {
	info, err := os.Stat(path)
	if err != nil {
		return nil, err
	}
	if !info.Mode().IsRegular() {
		return nil, &failure{exitRefused, fmt.Errorf("%s: is no plain file, want a study's YAML file", path), "assaywrit schema study describes it"}
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	root, err := os.OpenRoot(filepath.Dir(path))
	if err != nil {
		return nil, err
	}
	defer root.Close()
	name := filepath.Base(path)
	study, _, problems := casefile.BindStudy(name, data)
	if len(problems) > 0 {
		return nil, problems
	}
	return evidence.Scout(root.FS(), name, study)
}

func printStudy(w io.Writer, s *evidence.SeparationStudy) error {
	r := s.Result
	fmt.Fprintf(w, "%s (%s)\n\n", s.Study.Title, s.Study.Solvent)
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "run\tpeaks at min")
	for _, run := range s.Runs {
		var times []string
		for _, p := range run.Peaks {
			times = append(times, fmt.Sprintf("%.3f", p.ApexMin))
		}
		fmt.Fprintf(t, "%s\t%s\n", run.File, strings.Join(times, ", "))
	}
	fmt.Fprintln(t, "\ncompound\tmodel\tlog kw\tS\tC\tresidual\tplates")
	for _, c := range r.Compounds {
		fmt.Fprintf(t, "%s\t%s\t%.4f%s\t%.4f%s\t%.4f\t%s\t%.0f\n", c.Name, c.Model.Algorithm, c.Model.LogKw, plusMinus(c.Model.LogKwStdU), c.Model.S, plusMinus(c.Model.SStdU), c.Model.C, optional(c.Model.Residual, "%.2g"), c.Plates)
	}
	if err := t.Flush(); err != nil {
		return err
	}
	if b := r.Best; b != nil {
		fmt.Fprintf(w, "\nrecommended: %s; critical pair %s and %s, resolution %.2f; last peak ends at %.2f min\n", compositionText(r, b.At), b.First, b.Second, b.Resolution, b.LastMin)
		if b.Holds {
			fmt.Fprintf(w, "resolution of at least %g, within the limits, from %s to %s\n", s.Study.Limits.Resolution, compositionText(r, b.LowTolerated), compositionText(r, b.HighTolerated))
		}
		for _, p := range b.Predicted {
			fmt.Fprintf(w, "  %-16s %8.3f min%s\n", p.Compound, p.RetentionMin, nextResolution(p))
		}
	}
	for _, x := range r.Remarks {
		fmt.Fprintf(w, "note: %s\n", x)
	}
	return nil
}

func nextResolution(p separation.Predicted) string {
	if p.Resolution == nil {
		return ""
	}
	return fmt.Sprintf("   resolution to the next %.2f", *p.Resolution)
}

func plusMinus(u *float64) string {
	if u == nil {
		return ""
	}
	return fmt.Sprintf(" ± %.2g", *u)
}

func compositionText(r *separation.Result, at float64) string {
	if r.Gradients {
		return fmt.Sprintf("a gradient of %.2f min", at)
	}
	return fmt.Sprintf("%.2f %%", at*100)
}
