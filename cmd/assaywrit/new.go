package main

import (
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"assaywrit/decision"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/draft"
	"assaywrit/evidence/strictyaml"
	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/formats"
	"assaywrit/evidence/trace/table"
)

const newHelp = `new looks into a folder of raw files, tells what each holds, and writes a draft of the case beside them:
case.yaml, method.yaml and sequence.csv. What the files state is filled in; everything else is marked ` + strictyaml.Mark + `,
with what is wanted in a comment beside it. assaywrit check lists the marks that are left.

Raw files lie in FOLDER or in folders below it, such as raw/. What lies in documents/ is taken as a document.
Nothing is overwritten.`

func newCommand(s streams) *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:     "new FOLDER",
		Short:   "Draft a case from a folder of raw files",
		Long:    newHelp,
		Example: "  assaywrit new mycase\n  assaywrit check mycase",
		Args:    exactly(1, "the folder with the raw files"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return runNew(s, args[0], asJSON)
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "what the raw files hold and the number of marks, as JSON")
	return cmd
}

// layoutToDeclare is the format of a raw file that needs a layout in the method before it can be read.
const layoutToDeclare = "delimited text, layout to be declared"

// A rawListing is one raw file of a folder.
type rawListing struct {
	Path string `json:"path"`
	rawSummary
}

// documentsFolder holds what belongs to a case and is no raw data.
const documentsFolder = "documents/"

func runNew(s streams, dir string, asJSON bool) error {
	root, err := openRawFolder(dir)
	if err != nil {
		return err
	}
	defer root.Close()
	if err := nothingThere(root, dir); err != nil {
		return err
	}
	paths, err := new(casefile.Folder).Files(root.FS())
	if err != nil {
		return err
	}
	var raws []draft.Raw
	var list []rawListing
	var documents []string
	var refused []error
	for _, p := range paths {
		if strings.HasPrefix(p, documentsFolder) {
			documents = append(documents, p)
			continue
		}
		file, listing, err := lookInto(root, p)
		switch {
		case err == nil:
			raws, list = append(raws, draft.Raw{Path: p, File: file}), append(list, *listing)
		case isInput(err):
			refused = append(refused, err)
		default:
			return err
		}
	}
	switch {
	case len(refused) > 0:
		return errors.Join(refused...)
	case len(raws) == 0:
		return &failure{exitRefused, fmt.Errorf("%s: holds no raw file", dir), "copy what the instrument recorded into " + filepath.Join(dir, "raw") + ", in one of: " + listed(formats.Names())}
	}
	texts := draft.Write(raws, documents, decision.BuiltInNames())
	if err := writeDraft(dir, texts); err != nil {
		return err
	}
	if asJSON {
		return json.NewEncoder(s.out).Encode(map[string]any{"files": list, "documents": append([]string{}, documents...), "marks": texts.Marks})
	}
	return printNew(s.out, dir, list, documents, texts)
}

func openRawFolder(dir string) (*os.Root, error) {
	root, err := openFolder(dir)
	var f *failure
	if errors.As(err, &f) {
		err = &failure{f.status, f.cause, "give the folder that holds the raw files"}
	}
	return root, err
}

func draftNames() []string {
	return []string{draft.MethodFile, draft.SequenceFile, casefile.CaseFile}
}

// nothingThere refuses a folder in which a case has been begun already.
func nothingThere(root *os.Root, dir string) error {
	var there []error
	for _, name := range draftNames() {
		switch _, err := root.Lstat(name); {
		case err == nil:
			there = append(there, &failure{exitFailed, fmt.Errorf("%s: exists already", filepath.Join(dir, name)), "new overwrites nothing: go on with it (assaywrit check " + dir + "), or move it out of the folder"})
		case !errors.Is(err, fs.ErrNotExist):
			return err
		}
	}
	return errors.Join(there...)
}

// lookInto reads a raw file and tells what it holds. The file is nil for delimited text.
func lookInto(root *os.Root, name string) (*trace.File, *rawListing, error) {
	f, err := root.Open(filepath.FromSlash(name))
	if err != nil {
		return nil, nil, err
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		return nil, nil, err
	}
	unknown := false
	file, err := formats.Read(name, io.NewSectionReader(f, 0, info.Size()), func(string) (table.Layout, bool) {
		unknown = true // this is asked of files alone that no format recognises
		return table.Layout{}, false
	})
	s := &rawListing{Path: name, rawSummary: rawSummary{Format: layoutToDeclare, Bytes: info.Size(), Traces: []traceSummary{}}}
	if err != nil && unknown {
		head, headErr := beginningOf(f)
		switch {
		case headErr != nil:
			return nil, nil, headErr
		case !draft.Delimited(head):
			return nil, nil, &failure{exitRefused, err, "export the run in an open format; put what is no raw data into " + documentsFolder + " or take it out of the folder"}
		}
		file, err = nil, nil
	}
	if err != nil {
		return nil, nil, err
	}
	if file != nil {
		if err := s.fill(file); err != nil {
			return nil, nil, err
		}
	}
	sum := sha256.New()
	if _, err := io.Copy(sum, io.NewSectionReader(f, 0, info.Size())); err != nil {
		return nil, nil, err
	}
	s.SHA256 = hex.EncodeToString(sum.Sum(nil))
	return file, s, nil
}

func (s *rawListing) fill(file *trace.File) (err error) {
	s.Format, s.FormatVersion, s.StartTime, s.Instrument, s.Software = file.Format, file.FormatVersion, file.StartTime, file.Instrument, file.Software
	s.Method, s.SampleCode, s.StoredPeaks, s.Warnings = file.Method, file.SampleCode, file.StoredPeaks, file.Warnings
	for i := range file.Chromatograms {
		s.Traces = append(s.Traces, summaryOf(&file.Chromatograms[i]))
	}
	s.Spectra, err = spectraOf(file.Scans)
	return err
}

// beginningOf returns the first bytes of a file, unpacked where it is packed.
func beginningOf(f *os.File) ([]byte, error) {
	const enough = 1 << 16
	head, err := io.ReadAll(io.NewSectionReader(f, 0, enough))
	if err != nil || !bytes.HasPrefix(head, []byte{0x1f, 0x8b}) {
		return head, err
	}
	z, err := gzip.NewReader(bytes.NewReader(head))
	if err != nil {
		return nil, err
	}
	unpacked, err := io.ReadAll(io.LimitReader(z, enough))
	if len(unpacked) > 0 {
		err = nil // the packed bytes end in the middle
	}
	return unpacked, err
}

// writeDraft writes the three files or none; case.yaml comes last, as the folder is a case with it.
func writeDraft(dir string, texts draft.Texts) (err error) {
	var written []string
	defer func() {
		if err != nil {
			for _, path := range written {
				err = errors.Join(err, os.Remove(path))
			}
		}
	}()
	for i, data := range [][]byte{texts.Method, texts.Sequence, texts.Case} {
		path := filepath.Join(dir, draftNames()[i])
		if len(data) > strictyaml.MaxBytes {
			return fmt.Errorf("%s: would have %d bytes, and at most %d are read", path, len(data), strictyaml.MaxBytes)
		}
		if err := writeFile(path, data, false); err != nil {
			return err
		}
		written = append(written, path)
	}
	return nil
}

func printNew(w io.Writer, dir string, list []rawListing, documents []string, texts draft.Texts) error {
	for _, s := range list {
		fmt.Fprintf(w, "%s\n", s.Path)
		if err := s.print(w); err != nil {
			return err
		}
		fmt.Fprintln(w)
	}
	for _, d := range documents {
		fmt.Fprintf(w, "%s: a document\n", d)
	}
	fmt.Fprintf(w, "%s, %s, %s: written into %s\n", casefile.CaseFile, draft.MethodFile, draft.SequenceFile, dir)
	_, err := fmt.Fprintf(w, "%d marks to fill in; assaywrit check %s lists them\n", texts.Marks, dir)
	return err
}
