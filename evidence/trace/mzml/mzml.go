// Package mzml reads mzML 1.1 files (HUPO Proteomics Standards Initiative, mzML 1.1.0, June 2009): chromatograms (selected reaction
// monitoring, selected ion, total ion and absorption) and mass spectra of any stage, centroid or profile; with 32- or 64-bit floats
// or integers, plain, by zlib, by MS-Numpress or both, in seconds or minutes, with or without the index wrapper. Times come out in
// minutes, intensities as they were acquired.
//
// A file is read once, through a window: chromatograms are decoded then, spectra when they are asked for. Accession numbers of the
// vocabulary decide, never names. Index and checksum are verified and never relied on: what is wrong with them becomes a warning.
// Traces of pumps and ovens are passed over, and spectra without m/z. Everything else that is not as it should be is refused, with
// its place: a file that is cut, lies about its lengths, goes back in time or leaves its unit of time out.
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

// maxFile is the most that a file may hold, in bytes.
const maxFile = 1 << 40

// Read reads an mzML file. name is for messages. A file without a chromatogram and without a mass spectrum gives the warning
// "no-chromatograms". The error is a *trace.SyntaxError with the place in the file, or that of src. The scans of the result read from
// src for as long as they are used.
//
// Memory is bounded by the file's size (trace.Budget), whatever the file says about itself.
func Read(name string, src trace.Source) (*trace.File, error) {
	r, err := readAll(name, src)
	if err != nil {
		return nil, err
	}
	return r.file, nil
}

func readAll(name string, src trace.Source) (*reader, error) {
	s, err := newScanner(name, src)
	if err != nil {
		return nil, err
	}
	r := &reader{s: s, file: &trace.File{Format: "mzML"}, groups: map[string][]term{}, ids: map[string]bool{}, left: trace.Budget(src)}
	r.decode = decoder{name: name, src: src, latin1: s.latin1}
	r.scans.from = decoder{name: name, src: src, latin1: s.latin1}
	defer r.index.close()
	if err := r.run(); err != nil {
		return nil, err
	}
	if err := r.finish(); err != nil {
		return nil, err
	}
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
	spec   *spectrum
	binary *described
	spare  described // the memory of binary
	index  indexCheck
	decode decoder

	ids      map[string]bool // of chromatograms
	order    []string        // the same, as they come
	scans    scans
	passed   map[string]int // spectra that are not read, by the reason
	declared string         // count of the chromatogramList
	spectra  string         // count of the spectrumList
	counted  int            // spectra
	left     int64          // bytes of numbers that may still come
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
		r.index.present, r.index.namespace, r.index.hash = true, s.attr("xmlns"), follow(s.src)
	case "mzML":
		return r.version(at)
	case "referenceableParamGroup":
		return r.beginGroup(at)
	case "referenceableParamGroupRef":
		return r.useGroup(at)
	case "cvParam":
		if r.spec != nil && r.group == "" && !relevant[string(s.raw("accession"))] {
			return nil
		}
		return r.param(term{s.attr("accession"), s.attr("name"), s.attr("value"), s.attr("unitAccession")}, at)
	case "sample", "software", "instrumentConfiguration", "scanSettings", "run":
		return r.header.start(s, name, at)
	case "chromatogramList":
		r.declared = s.attr("count")
	case "spectrumList":
		r.spectra = s.attr("count")
	case "chromatogram":
		return r.startChromatogram(at)
	case "spectrum":
		return r.startSpectrum(at)
	case "binaryDataArray":
		if r.chrom != nil || r.spec != nil {
			r.spare = described{at: at, length: s.attr("arrayLength"), encoded: s.attr("encodedLength"), held: r.spare.held}
			r.binary = &r.spare
		}
	case "binary":
		s.passText = r.spec != nil
	}
	return nil
}

func (r *reader) end(name string) error {
	r.index.end(name)
	switch name {
	case "referenceableParamGroup":
		r.group = ""
	case "binary":
		r.s.passText = false
	case "binaryDataArray":
		b := r.binary
		r.binary = nil
		switch {
		case b != nil && r.chrom != nil:
			return r.take(b)
		case b != nil && r.spec != nil:
			return r.spec.take(r.s, b)
		}
	case "chromatogram":
		c := r.chrom
		r.chrom = nil
		r.index.passed(r.s.pos())
		return r.endChromatogram(c)
	case "spectrum":
		x := r.spec
		r.spec = nil
		r.index.passed(r.s.pos())
		return r.endSpectrum(x)
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
func (r *reader) finish() error {
	f := r.file
	r.header.fill(f)
	warn := func(code, detail string) { f.Warnings = append(f.Warnings, trace.Warning{Code: code, Detail: detail}) }
	if len(r.scans.list) > 0 {
		f.Scans = &r.scans
	} else if len(r.ids) == 0 {
		warn("no-chromatograms", "the file holds neither a chromatogram nor a mass spectrum")
	}
	for _, why := range passedReasons {
		if n := r.passed[why]; n > 0 {
			warn("spectra-passed-over", fmt.Sprintf("%d of %d spectra are not read: %s", n, r.counted, why))
		}
	}
	if n := strconv.Itoa(len(r.ids)); r.declared != "" && r.declared != n {
		warn("chromatogram-count", fmt.Sprintf("the file holds %s chromatograms, it says %q", n, r.declared))
	}
	if n := strconv.Itoa(r.counted); r.spectra != "" && r.spectra != n {
		warn("spectrum-count", fmt.Sprintf("the file holds %s spectra, it says %q", n, r.spectra))
	}
	more, err := r.index.warnings(r.order)
	f.Warnings = append(f.Warnings, more...)
	return err
}
