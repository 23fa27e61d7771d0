package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"assaywrit/decision"
	"assaywrit/evidence/bundle"
	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/formats"
	"assaywrit/evidence/trace/table"
)

const showHelp = `show tells what a file is: the finding, signatures and files of a bundle, or the traces of a raw file.
It checks nothing: verify does.

With --file, one file of a bundle is written to standard output.`

func showCommand(s streams) *cobra.Command {
	var file string
	cmd := &cobra.Command{
		Use:     "show FILE",
		Short:   "Tell what a bundle or a raw file holds",
		Long:    showHelp,
		Example: "  assaywrit show case-0417.zip\n  assaywrit show case-0417.zip --file data/report/package.pdf > package.pdf\n  assaywrit show mycase/raw/010.mzML",
		Args:    exactly(1, "the file"),
		RunE: func(cmd *cobra.Command, args []string) error {
			isZip, err := startsWith(args[0], "PK\x03\x04")
			if err != nil {
				return err
			}
			if !isZip {
				if file != "" {
					return usage("--file is for bundles, and %s is none", args[0])
				}
				return showRaw(s.out, args[0])
			}
			b, closeFile, err := openBundle(args[0])
			if err != nil {
				return err
			}
			defer closeFile()
			if file != "" {
				data, err := b.ReadFile(file)
				if err != nil {
					return err
				}
				_, err = s.out.Write(data)
				return err
			}
			return showBundle(s.out, b)
		},
	}
	cmd.Flags().StringVar(&file, "file", "", "write this file of the bundle to standard output")
	return cmd
}

func startsWith(path, magic string) (bool, error) {
	f, err := os.Open(path)
	if err != nil {
		return false, err
	}
	defer f.Close()
	if info, err := f.Stat(); err == nil && info.IsDir() {
		return false, &failure{exitUsage, fmt.Errorf("%s: is a folder, want a bundle or a raw file", path), "a case folder is looked through with: assaywrit check " + path}
	}
	head := make([]byte, len(magic))
	n, err := io.ReadFull(f, head)
	if err != nil && err != io.EOF && err != io.ErrUnexpectedEOF {
		return false, err
	}
	return bytes.Equal(head[:n], []byte(magic)), nil
}

func showBundle(w io.Writer, b *bundle.Bundle) error {
	data, err := b.ReadPayload(findingPath)
	if err != nil {
		return err
	}
	var f decision.Finding
	if err := json.Unmarshal(data, &f); err != nil {
		return fmt.Errorf("data/%s: %w", findingPath, err)
	}
	st := b.Statement()
	fmt.Fprintf(w, "bundle %s, made by %s %s; not checked here\n", st.BundleID, st.EngineName, st.EngineVersion)
	if st.Demonstration {
		fmt.Fprintln(w, "DEMONSTRATION, NOT VALID")
	}
	printFinding(w, &f)
	fmt.Fprintln(w, "\nsignatures:")
	for _, r := range bundle.CheckSignatures(b, nil) {
		fmt.Fprintf(w, "  %s %s (%s)\n", r.Person, r.Meaning, r.File)
	}
	for _, m := range bundle.MissingSignatories(b) {
		fmt.Fprintf(w, "  %s %s: not yet signed\n", m.Person, m.Meaning)
	}
	fmt.Fprintln(w, "\nfiles:")
	for _, p := range b.Paths() {
		fmt.Fprintf(w, "  %s\n", p)
	}
	return nil
}

// showRaw lists what a raw file holds.
func showRaw(w io.Writer, path string) error {
	data, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	f, err := formats.Read(path, bytes.NewReader(data), func(string) (table.Layout, bool) { return table.Layout{}, false })
	if err != nil {
		return err
	}
	fmt.Fprintf(w, "%s %s, %d bytes, SHA-256 %s\n", f.Format, f.FormatVersion, len(data), hexSum(data))
	for _, x := range []struct{ name, value string }{{"start", f.StartTime}, {"instrument", f.Instrument}, {"software", f.Software}, {"sample", f.SampleCode}} {
		if x.value != "" {
			fmt.Fprintf(w, "%s: %s\n", x.name, x.value)
		}
	}
	for _, x := range f.Warnings {
		fmt.Fprintf(w, "warning %s: %s\n", x.Code, x.Detail)
	}
	return showTraces(w, f.Chromatograms)
}

func showTraces(w io.Writer, list []trace.Chromatogram) error {
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintln(t, "trace\tkind\tprecursor m/z\tproduct m/z\tpolarity\tpoints\tfrom min\tto min\thighest counts\tat min")
	for _, c := range list {
		if len(c.TimeMin) == 0 {
			fmt.Fprintf(t, "%s\t%s\t%g\t%g\t%s\t0\t\t\t\t\n", c.ID, c.Kind, c.Transition.PrecursorMZ, c.Transition.ProductMZ, c.Transition.Polarity)
			continue
		}
		top := 0
		for i, y := range c.Intensity {
			if y > c.Intensity[top] {
				top = i
			}
		}
		fmt.Fprintf(t, "%s\t%s\t%g\t%g\t%s\t%d\t%.4f\t%.4f\t%.6g\t%.4f\n", c.ID, c.Kind, c.Transition.PrecursorMZ, c.Transition.ProductMZ, c.Transition.Polarity,
			len(c.TimeMin), c.TimeMin[0], c.TimeMin[len(c.TimeMin)-1], c.Intensity[top], c.TimeMin[top])
	}
	return t.Flush()
}
