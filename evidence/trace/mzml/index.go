package mzml

import (
	"bytes"
	"encoding/hex"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"assaywrit/evidence/trace"
)

// An indexCheck compares what the index wrapper says with the file. Nothing relies on it.
type indexCheck struct {
	present   bool
	namespace string // of the wrapper

	starts []indexed // where spectra and chromatograms begin, in order
	list   int       // where the index begins

	of, id, content string // index, offset and text that we are in
	open            string
	named           map[string]bool // chromatograms with an entry
	spectra         int             // entries of spectra

	right, wrong int
	firstWrong   string
	listOffset   string
	hash         *follower // of the file, as far as it has been read
	sumEnd       int       // just after the tag <fileChecksum>
	sum          string
}

// indexed is an element that an index may point at.
type indexed struct {
	at       int
	spectrum bool
	id       string
}

func (x *indexCheck) start(s *scanner, name string, at int) {
	if !x.present {
		return
	}
	switch name {
	case "indexList":
		x.list = at
	case "index":
		x.of = s.attr("name")
	case "offset":
		x.open, x.content, x.id = name, "", s.attr("idRef")
	case "indexListOffset", "fileChecksum":
		x.open, x.content = name, ""
		if name == "fileChecksum" {
			x.passed(s.pos())
			x.sumEnd = s.pos()
		}
	}
}

// begins takes note of an element that the index should point at.
func (x *indexCheck) begins(at int, spectrum bool, id string) {
	if x.present {
		x.starts = append(x.starts, indexed{at, spectrum, id})
	}
}

// passed tells the checksum how far the file has been read.
func (x *indexCheck) passed(at int) {
	if x.hash != nil && x.sumEnd == 0 {
		x.hash.to <- at
	}
}

func (x *indexCheck) text(text []byte) {
	if x.open != "" {
		x.content = string(bytes.TrimSpace(text))
	}
}

func (x *indexCheck) end(name string) {
	if name != x.open || name == "" {
		return
	}
	x.open = ""
	switch name {
	case "indexListOffset":
		x.listOffset = x.content
	case "fileChecksum":
		x.sum = x.content
	case "offset":
		x.offset()
	}
}

// offset compares one entry of the index.
func (x *indexCheck) offset() {
	if x.of == "chromatogram" {
		if x.named == nil {
			x.named = map[string]bool{}
		}
		x.named[x.id] = true
	} else {
		x.spectra++
	}
	at, err := strconv.Atoi(x.content)
	if i, begins := slices.BinarySearchFunc(x.starts, at, func(e indexed, at int) int { return e.at - at }); err == nil && begins {
		if e := x.starts[i]; e.id == x.id && e.spectrum == (x.of == "spectrum") {
			x.right++
			return
		}
	}
	if x.wrong++; x.wrong == 1 {
		x.firstWrong = x.id
	}
}

// warnings says what does not hold, each kind once.
func (x *indexCheck) warnings(chromatograms []string) ([]trace.Warning, error) {
	if !x.present {
		return nil, nil
	}
	var list []trace.Warning
	offset := func(format string, args ...any) {
		list = append(list, trace.Warning{Code: "index-offset", Detail: fmt.Sprintf(format, args...)})
	}
	if x.wrong > 0 {
		offset("%d of %d offsets of the index do not point at their element, the first of them that of %q", x.wrong, x.wrong+x.right, x.firstWrong)
	}
	missing, first := 0, ""
	for _, id := range chromatograms {
		if !x.named[id] {
			if missing++; missing == 1 {
				first = id
			}
		}
	}
	if missing > 0 {
		offset("%d of %d chromatograms are not in the index, the first of them %q", missing, len(chromatograms), first)
	}
	if spectra := len(x.starts) - len(chromatograms); x.spectra < spectra {
		offset("the index has %d entries for %d spectra", x.spectra, spectra)
	}
	switch {
	case x.list == 0:
		offset("the file has an index wrapper and no index")
	case x.listOffset != strconv.Itoa(x.list):
		offset("the index begins at byte %d, the file says %q", x.list, x.listOffset)
	}
	if x.sumEnd == 0 {
		return append(list, trace.Warning{Code: "file-checksum", Detail: "the file has an index wrapper and no checksum"}), nil
	}
	sum, err := x.hash.finish()
	x.hash = nil
	if err != nil {
		return nil, err
	}
	if got := hex.EncodeToString(sum); !strings.EqualFold(got, x.sum) {
		list = append(list, trace.Warning{Code: "file-checksum", Detail: fmt.Sprintf("the SHA-1 of the file is %s, it says %q", got, x.sum)})
	}
	return list, nil
}

// close stops what still runs.
func (x *indexCheck) close() {
	if x.hash != nil {
		x.hash.finish()
	}
}
