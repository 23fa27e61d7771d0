package mzml

import (
	"fmt"
	"slices"
	"strings"
)

// parents says where the elements that are relied on may stand (mzML 1.1.0 schema). "" is the top.
var parents = map[string][]string{
	"indexedmzML": {""},
	"mzML":        {"", "indexedmzML"},

	"referenceableParamGroupList": {"mzML"},
	"referenceableParamGroup":     {"referenceableParamGroupList"},
	"sampleList":                  {"mzML"},
	"sample":                      {"sampleList"},
	"softwareList":                {"mzML"},
	"software":                    {"softwareList"},
	"instrumentConfigurationList": {"mzML"},
	"instrumentConfiguration":     {"instrumentConfigurationList"},
	"scanSettingsList":            {"mzML"},
	"scanSettings":                {"scanSettingsList"},
	"run":                         {"mzML"},
	"spectrumList":                {"run"},
	"spectrum":                    {"spectrumList"},
	"chromatogramList":            {"run"},
	"chromatogram":                {"chromatogramList"},
	"scanList":                    {"spectrum"},
	"scan":                        {"scanList"},
	"precursorList":               {"spectrum"},
	"precursor":                   {"precursorList", "chromatogram"},
	"productList":                 {"spectrum"},
	"product":                     {"productList", "chromatogram"},
	"isolationWindow":             {"precursor", "product"},
	"selectedIonList":             {"precursor"},
	"selectedIon":                 {"selectedIonList"},
	"binaryDataArrayList":         {"spectrum", "chromatogram"},
	"binaryDataArray":             {"binaryDataArrayList"},
	"binary":                      {"binaryDataArray"},
	"indexList":                   {"indexedmzML"},
	"index":                       {"indexList"},
	"offset":                      {"index"},
	"indexListOffset":             {"indexedmzML"},
	"fileChecksum":                {"indexedmzML"},
}

// single are the elements of which their parent has at most one.
var single = map[string]bool{
	"mzML": true, "run": true, "chromatogramList": true, "spectrumList": true, "binaryDataArrayList": true, "binary": true, "isolationWindow": true,
	"scanList": true, "precursorList": true, "productList": true,
	"indexList": true, "indexListOffset": true, "fileChecksum": true,
}

// place checks that the element just begun may stand where it does.
func (r *reader) place(name string, at int) error {
	parent := r.above(1)
	if parent == "" && name != "mzML" && name != "indexedmzML" {
		return r.s.fail(at, fmt.Sprintf("the root element %q", name), "mzML or indexedmzML", "")
	}
	allowed, relied := parents[name]
	if relied && !slices.Contains(allowed, parent) {
		return r.s.fail(at, fmt.Sprintf("the element %q inside %q", name, parent), "it inside "+strings.Join(allowed, " or "), "")
	}
	// In a chromatogram a second precursor or product would leave open which one was followed.
	if single[name] || parent == "chromatogram" && (name == "precursor" || name == "product") {
		depth := len(r.s.stack) - 1
		for len(r.seen) <= depth {
			r.seen = append(r.seen, nil)
		}
		if slices.Contains(r.seen[depth], name) {
			return r.s.fail(at, fmt.Sprintf("a second element %q inside %q", name, parent), "one", "")
		}
		r.seen[depth] = append(r.seen[depth], name)
	}
	return nil
}

// leave forgets what was seen inside an element that has ended.
func (r *reader) leave() {
	if inside := len(r.s.stack) + 1; inside < len(r.seen) {
		r.seen[inside] = r.seen[inside][:0]
	}
}

// above names the open element that many levels above the innermost one, or "".
func (r *reader) above(levels int) string {
	if n := len(r.s.stack) - 1 - levels; n >= 0 {
		return r.s.stack[n].name
	}
	return ""
}
