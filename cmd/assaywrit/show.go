package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"os"

	"github.com/spf13/cobra"

	"assaywrit/decision"
	"assaywrit/evidence/bundle"
)

const showHelp = `show tells what a file is: the finding, signatures and files of a bundle, or the traces of a raw file.
It checks nothing: verify does.

With --file, one file of a bundle is written to standard output. Of a raw file, --trace and --scan write the points of one
chromatogram or spectrum: times in minutes, m/z and intensities as the file has them.`

func showCommand(s streams) *cobra.Command {
	var file string
	var raw rawView
	cmd := &cobra.Command{
		Use:     "show FILE",
		Short:   "Tell what a bundle or a raw file holds",
		Long:    showHelp,
		Example: "  assaywrit show case-0417.zip\n  assaywrit show case-0417.zip --file data/report/package.pdf > package.pdf\n  assaywrit show mycase/raw/010.mzML\n  assaywrit show mycase/raw/010.mzML --trace TIC > tic.csv",
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
				return raw.show(s.out, args[0])
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
	cmd.Flags().StringVar(&raw.method, "method", "", "method.yaml with the layout of delimited text")
	cmd.Flags().StringVar(&raw.trace, "trace", "", "write the points of this trace of the raw file, as a table")
	cmd.Flags().StringVar(&raw.scan, "scan", "", "write the points of this spectrum of the raw file, as a table")
	cmd.Flags().BoolVar(&raw.asJSON, "json", false, "what the raw file holds, as JSON")
	return cmd
}

func startsWith(path, magic string) (bool, error) {
	f, err := os.Open(path)
	if err != nil {
		return false, err
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return false, err
	}
	if !info.IsDir() && !info.Mode().IsRegular() {
		return false, &failure{exitRefused, fmt.Errorf("%s: is a device or a pipe, want a plain file", path), "copy what it gives into a file first"}
	}
	if info.IsDir() {
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
