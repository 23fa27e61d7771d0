// Package mzml reads the chromatograms of mzML 1.1 files (HUPO Proteomics Standards Initiative, mzML 1.1.0, June 2009): selected
// reaction monitoring, selected ion, total ion and absorption traces, with 32- or 64-bit numbers, plain or by zlib, in seconds or
// minutes, with or without the index wrapper. Times come out in minutes, intensities as they were acquired.
//
// Accession numbers of the vocabulary decide, never names. Index and checksum are verified and never relied on: what is wrong
// with them becomes a warning. Spectra are passed over, and so are traces of pumps and ovens. Everything else that is not as it
// should be is refused, with its place: a file that is cut, lies about its lengths, goes back in time or leaves its unit of time out.
package mzml

import (
	"bytes"
	"fmt"
	"strconv"
	"strings"

	"assaywrit/evidence/trace"
)

const (
	namespace  = "http://psi.hupo.org/ms/mzml"
	draftsHint = "versions before 1.0 were drafts: convert the file again from the instrument's own data"
)

// Sniff tells whether a file begins like mzML of any version. head is its first bytes; 4,096 are enough.
func Sniff(head []byte) bool {
	head = bytes.TrimLeft(bytes.TrimPrefix(head, byteOrderMark), " \t\r\n")
	return bytes.HasPrefix(head, []byte("<")) && (bytes.Contains(head, []byte("<mzML")) || bytes.Contains(head, []byte("<indexedmzML")))
}

// Read reads the chromatograms of an mzML file. name is for messages. A file without any gives an empty list and the warning
// "no-chromatograms". The error is a *trace.SyntaxError with the place in the file, or that of src.
//
// Memory is bounded by the file's size and maxPoints, whatever the file says about itself.
func Read(name string, src trace.Source) (*trace.File, error) {
	data, err := trace.ReadAll(src)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	r, err := readAll(name, data)
	if err != nil {
		return nil, err
	}
	return r.file, nil
}

func readAll(name string, data []byte) (*reader, error) {
	s, err := newScanner(name, data)
	if err != nil {
		return nil, err
	}
	r := &reader{s: s, file: &trace.File{Format: "mzML"}, groups: map[string][]term{}, ids: map[string]bool{}, left: maxPoints}
	if err := r.run(); err != nil {
		return nil, err
	}
	r.finish()
	return r, nil
}

// A reader goes through one file, once.
type reader struct {
	s    *scanner
	file *trace.File
	seen [][]string // by depth: single elements of the open parents

	groups map[string][]term // by id of the referenceableParamGroup
	group  string            // that we are in

	header header
	chrom  *chromatogram
	binary *binaryArray
	index  indexCheck
	zlib   inflater

	ids      map[string]bool // of chromatograms
	order    []string        // the same, as they come
	declared string          // count of the chromatogramList
	left     int             // points that may still come
}

func (r *reader) run() error {
	for {
		kind, name, text, err := r.s.next()
		if err != nil {
			return err
		}
		switch kind {
		case endOfFile:
			return nil
		case startTag:
			err = r.start(name)
		case endTag:
			r.leave()
			err = r.end(name)
		case textRun:
			if r.binary != nil && name == "binary" {
				err = r.binary.add(r.s, text)
			}
			r.index.text(text)
		}
		if err != nil {
			return err
		}
	}
}

func (r *reader) start(name string) error {
	s := r.s
	at := s.stack[len(s.stack)-1].start
	if err := r.place(name, at); err != nil {
		return err
	}
	r.index.start(s, name, at)
	switch name {
	case "indexedmzML":
		r.index.present, r.index.namespace = true, s.attr("xmlns")
	case "mzML":
		return r.version(at)
	case "referenceableParamGroup":
		return r.beginGroup(at)
	case "referenceableParamGroupRef":
		return r.useGroup(at)
	case "cvParam":
		return r.param(term{s.attr("accession"), s.attr("name"), s.attr("value"), s.attr("unitAccession")}, at)
	case "sample", "software", "instrumentConfiguration", "run":
		return r.header.start(s, name, at)
	case "chromatogramList":
		r.declared = s.attr("count")
	case "chromatogram":
		return r.startChromatogram(at)
	case "binaryDataArray":
		if r.chrom != nil {
			r.binary = &binaryArray{at: at, length: s.attr("arrayLength"), encoded: s.attr("encodedLength")}
		}
	}
	return nil
}

func (r *reader) end(name string) error {
	r.index.end(name)
	switch name {
	case "referenceableParamGroup":
		r.group = ""
	case "binaryDataArray":
		if b := r.binary; b != nil {
			r.binary = nil
			return r.take(b)
		}
	case "chromatogram":
		c := r.chrom
		r.chrom = nil
		return r.endChromatogram(c)
	}
	return nil
}

// version accepts mzML 1.0 and 1.1, by the namespace and, where it is stated, the version.
func (r *reader) version(at int) error {
	ns := r.s.attr("xmlns")
	if ns == "" {
		ns = r.index.namespace
	}
	v := r.s.attr("version")
	known := v == ""
	for _, x := range []string{"1.0", "1.1"} {
		known = known || v == x || strings.HasPrefix(v, x+".")
	}
	switch {
	case !known:
		return r.s.fail(at, fmt.Sprintf("mzML version %q", v), "version 1.0 or 1.1", draftsHint)
	case ns != namespace:
		return r.s.fail(at, fmt.Sprintf("mzML in the namespace %q", ns), namespace, draftsHint)
	}
	r.file.FormatVersion = v
	return nil
}

// finish fills what is known only at the end.
func (r *reader) finish() {
	f := r.file
	r.header.fill(f)
	warn := func(code, detail string) { f.Warnings = append(f.Warnings, trace.Warning{Code: code, Detail: detail}) }
	if len(r.ids) == 0 {
		warn("no-chromatograms", "the file holds no chromatogram; spectra are not read")
	}
	if n := strconv.Itoa(len(r.ids)); r.declared != "" && r.declared != n {
		warn("chromatogram-count", fmt.Sprintf("the file holds %s chromatograms, it says %q", n, r.declared))
	}
	f.Warnings = append(f.Warnings, r.index.warnings(r.s, r.order)...)
}
