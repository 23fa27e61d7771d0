// Package mzml reads the chromatograms of mzML 1.1 files (HUPO Proteomics Standards Initiative, mzML 1.1.0, June 2009): selected
// reaction monitoring, selected ion, total ion and absorption traces, with 32- or 64-bit numbers, plain or by zlib, in seconds or
// minutes, with or without the index wrapper.
//
// Accession numbers of the vocabulary decide, never names. Index and checksum are verified and never relied on: what is wrong
// with them becomes a warning. Spectra are not read here. Everything else that is not as it should be is refused, with its place.
package mzml

import (
	"bytes"
	"fmt"
	"strings"

	"assaywrit/evidence/trace"
)

// Accessions of the PSI-MS vocabulary and of the Unit Ontology that decide something here.
const (
	accFloat64 = "MS:1000523"
	accFloat32 = "MS:1000521"
	accInt64   = "MS:1000522"
	accInt32   = "MS:1000519"
	accZlib    = "MS:1000574"
	accPlain   = "MS:1000576"

	accTime      = "MS:1000595"
	accIntensity = "MS:1000515"
	unitSecond   = "UO:0000010"
	unitMinute   = "UO:0000031"

	accTarget   = "MS:1000827" // isolation window target m/z
	accSelected = "MS:1000744" // selected ion m/z
	accNegative = "MS:1000129"
	accPositive = "MS:1000130"
	accSerial   = "MS:1000529"
)

// kindsByAccession are the chromatogram types.
var kindsByAccession = map[string]trace.Kind{
	"MS:1000235": trace.TIC,
	"MS:1000628": trace.Other, // base peak
	"MS:1000627": trace.SIM,   // selected ion current
	"MS:1001472": trace.SIM,
	"MS:1001473": trace.SRM,
	"MS:1000812": trace.Absorption,
	"MS:1000813": trace.Other, // emission
}

// compressions that are known by accession and not read.
var unreadCompressions = map[string]string{
	"MS:1002312": "MS-Numpress linear", "MS:1002313": "MS-Numpress positive integer", "MS:1002314": "MS-Numpress short logged float",
	"MS:1002746": "MS-Numpress linear with zlib", "MS:1002747": "MS-Numpress positive integer with zlib", "MS:1002748": "MS-Numpress short logged float with zlib",
}

const namespace = "http://psi.hupo.org/ms/mzml"

// Sniff tells whether data begins like mzML.
func Sniff(head []byte) bool {
	head = bytes.TrimPrefix(head, []byte("\xef\xbb\xbf"))
	return bytes.HasPrefix(bytes.TrimLeft(head, " \t\r\n"), []byte("<")) &&
		(bytes.Contains(head, []byte("<mzML")) || bytes.Contains(head, []byte("<indexedmzML")))
}

// Read reads the chromatograms of an mzML file. name is for messages. The error is a *trace.SyntaxError with the place in the file.
func Read(name string, src trace.Source) (*trace.File, error) {
	data, err := trace.ReadAll(src)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	r := &reader{s: &scanner{name: name, data: data}, file: &trace.File{Format: "mzML"}, groups: map[string][]term{}, software: map[string]string{}}
	if err := r.run(); err != nil {
		return nil, err
	}
	r.finish()
	return r.file, nil
}

// A term is a cvParam.
type term struct{ accession, name, value, unit string }

type reader struct {
	s    *scanner
	file *trace.File

	groups   map[string][]term // referenceableParamGroup
	group    string
	software map[string]string
	inTool   string // id of the software element we are in
	tools    []string
	model    string
	serial   string

	chrom  *chromatogram
	binary *binaryArray
	index  indexCheck
	ids    map[string]bool
}

// run goes through the file once.
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
			err = r.end(name)
		case textRun:
			if r.binary != nil && r.inside("binary") {
				if r.binary.text != nil {
					return r.s.fail(r.s.at, "an array in two pieces", "one run of base64", cutHint)
				}
				r.binary.text, r.binary.at = text, r.s.at-len(text)
			}
			r.index.text(r.s, text)
		}
		if err != nil {
			return err
		}
	}
}

func (r *reader) inside(name string) bool {
	n := len(r.s.stack)
	return n > 0 && r.s.stack[n-1].name == name
}

// within tells whether an element of that name is open at any level.
func (r *reader) within(name string) bool {
	for _, e := range r.s.stack {
		if e.name == name {
			return true
		}
	}
	return false
}

func (r *reader) start(name string) error {
	s := r.s
	at := s.stack[len(s.stack)-1].start
	if len(s.stack) == 1 && name != "mzML" && name != "indexedmzML" {
		return s.fail(at, fmt.Sprintf("the root element %q", name), "mzML or indexedmzML", "")
	}
	switch name {
	case "mzML":
		return r.version(at)
	case "referenceableParamGroup":
		r.group = s.attr("id")
	case "referenceableParamGroupRef":
		terms, ok := r.groups[s.attr("ref")]
		if !ok {
			return s.fail(at, fmt.Sprintf("a reference to the unknown group %q", s.attr("ref")), "the id of a referenceableParamGroup", "")
		}
		for _, t := range terms {
			if err := r.term(t, at); err != nil {
				return err
			}
		}
	case "cvParam":
		t := term{s.attr("accession"), s.attr("name"), s.attr("value"), s.attr("unitAccession")}
		if r.group != "" {
			r.groups[r.group] = append(r.groups[r.group], t)
			return nil
		}
		return r.term(t, at)
	case "sample":
		if r.file.SampleCode = s.attr("name"); r.file.SampleCode == "" {
			r.file.SampleCode = s.attr("id")
		}
	case "software":
		r.inTool = s.attr("version")
	case "run":
		r.file.StartTime = s.attr("startTimeStamp")
	case "chromatogram":
		return r.startChromatogram(at)
	case "binaryDataArray":
		if r.chrom != nil {
			r.binary = &binaryArray{at: at, length: s.attr("arrayLength"), encoded: s.attr("encodedLength")}
		}
	default:
		r.index.start(s, name)
	}
	return nil
}

func (r *reader) version(at int) error {
	v := r.s.attr("version")
	switch ns := r.s.attr("xmlns"); {
	case v != "" && !strings.HasPrefix(v, "1."):
		return r.s.fail(at, fmt.Sprintf("mzML version %q", v), "version 1.0 or 1.1", "versions before 1.0 were drafts: convert the file again from the instrument's own data")
	case ns != "" && ns != namespace:
		return r.s.fail(at, fmt.Sprintf("the namespace %q", ns), namespace, "versions before 1.0 were drafts: convert the file again from the instrument's own data")
	}
	r.file.FormatVersion = v
	return nil
}

func (r *reader) end(name string) error {
	switch name {
	case "referenceableParamGroup":
		r.group = ""
	case "software":
		r.inTool = ""
	case "binaryDataArray":
		if r.binary != nil {
			b := r.binary
			r.binary = nil
			return r.chrom.take(r.s, b)
		}
	case "chromatogram":
		c := r.chrom
		r.chrom = nil
		return r.endChromatogram(c)
	}
	r.index.end(name)
	return nil
}

// term applies one vocabulary term to whatever element it stands in.
func (r *reader) term(t term, at int) error {
	switch {
	case r.binary != nil:
		return r.binary.term(r.s, t, at)
	case r.chrom != nil:
		return r.chrom.term(r, t, at)
	case r.within("software"):
		r.tools = append(r.tools, strings.TrimSpace(strings.TrimSpace(t.name+" "+t.value)+" "+r.inTool))
	case r.inside("cvParam") && r.parent() == "instrumentConfiguration" || r.inside("referenceableParamGroupRef") && r.parent() == "instrumentConfiguration":
		if t.accession == accSerial {
			r.serial = t.value
		} else if r.model == "" {
			r.model = t.name
		}
	}
	return nil
}

// parent names the element around the one that is open.
func (r *reader) parent() string {
	if n := len(r.s.stack); n > 1 {
		return r.s.stack[n-2].name
	}
	return ""
}

// finish fills what is known only at the end.
func (r *reader) finish() {
	r.file.Instrument = r.model
	if r.serial != "" {
		r.file.Instrument = strings.TrimSpace(r.model + ", serial number " + r.serial)
	}
	r.file.Software = strings.Join(r.tools, "; ")
	if len(r.file.Chromatograms) == 0 {
		r.file.Warnings = append(r.file.Warnings, trace.Warning{Code: "no-chromatograms", Detail: "the file holds no chromatogram; spectra are not read"})
	}
	r.file.Warnings = append(r.file.Warnings, r.index.warnings(r.s)...)
}
