// Package formats tells which format a raw file is in, by its content and never by its name, and reads it. A format is one folder
// beside this one and one line in the list below. A file inside gzip is unpacked first.
package formats

import (
	"fmt"
	"io"
	"strings"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/andi"
	"assaywrit/evidence/trace/jcamp"
	"assaywrit/evidence/trace/mzml"
	"assaywrit/evidence/trace/table"
)

// A format recognises its files by their first bytes.
type format struct {
	name  string
	sniff func(head []byte) bool
	read  func(name string, src trace.Source) (*trace.File, error)
}

var known = []format{
	{"mzML 1.1", mzml.Sniff, mzml.Read},
	{"ANDI (netCDF classic)", andi.Sniff, andi.Read},
	{"JCAMP-DX", jcamp.Sniff, jcamp.Read},
}

// headBytes is how much of a file is looked at to recognise it.
const headBytes = 4096

// Names lists the formats that are read.
func Names() []string {
	var names []string
	for _, f := range known {
		names = append(names, f.name)
	}
	return append(names, "delimited text (declared in the method's tables)")
}

// Read reads a raw file in whatever format it is. Delimited text has no mark of its own: tables gives the layout that the method
// declares for a name, if it does; tables may be nil. Content that no format recognises is refused with a *trace.SyntaxError.
func Read(name string, src trace.Source, tables func(name string) (table.Layout, bool)) (*trace.File, error) {
	src, head, err := begin(name, src)
	if err != nil {
		return nil, err
	}
	for _, f := range known {
		if f.sniff(head) {
			return f.read(name, src)
		}
	}
	if tables != nil {
		if layout, declared := tables(name); declared {
			return table.Read(name, src, layout)
		}
	}
	return nil, &trace.SyntaxError{File: name, Got: describe(head), Want: strings.Join(Names(), ", or "),
		Hint: "export the run from the instrument's software in an open format, or declare the layout of its text in the method's tables"}
}

// begin returns what a file holds, unpacked where it is packed, and its first bytes.
func begin(name string, src trace.Source) (trace.Source, []byte, error) {
	head, err := first(src)
	if err == nil && packed(head) {
		if src, err = unpack(name, src, mostUnpacked(src.Size())); err != nil {
			return nil, nil, err
		}
		head, err = first(src)
	}
	if err != nil {
		return nil, nil, fmt.Errorf("%s: %w", name, err)
	}
	return src, head, nil
}

// ReadSpectrum reads a file with one mass spectrum, such as that of a reference material: JCAMP-DX.
func ReadSpectrum(name string, src trace.Source) (*jcamp.Spectrum, error) {
	src, head, err := begin(name, src)
	if err != nil {
		return nil, err
	}
	if !jcamp.Sniff(head) {
		return nil, &trace.SyntaxError{File: name, Got: describe(head), Want: "JCAMP-DX", Hint: "export the reference spectrum as JCAMP-DX"}
	}
	list, err := jcamp.ReadSpectra(name, src)
	if err != nil {
		return nil, err
	}
	if len(list) != 1 || len(list[0].Mass.MZ) == 0 {
		return nil, &trace.SyntaxError{File: name, Got: fmt.Sprintf("%d spectra", len(list)), Want: "one mass spectrum", Hint: "put each reference spectrum into a file of its own"}
	}
	return &list[0], nil
}

// first returns the beginning of a file.
func first(src trace.Source) ([]byte, error) {
	return trace.ReadAll(io.NewSectionReader(src, 0, min(headBytes, src.Size())))
}

func describe(head []byte) string {
	if len(head) == 0 {
		return "an empty file"
	}
	return fmt.Sprintf("content that begins with %q", head[:min(16, len(head))])
}
