package mzml

import (
	"bytes"
	"crypto/sha1"
	"encoding/hex"
	"fmt"
	"strconv"
	"strings"

	"assaywrit/evidence/trace"
)

// An indexCheck compares what the index wrapper says with the file. Nothing relies on it.
type indexCheck struct {
	present   bool
	namespace string // of the wrapper

	starts map[int]indexed // where spectra and chromatograms begin
	list   int             // where the index begins

	of, id, content string // index, offset and text that we are in
	open            string
	named           map[string]bool // chromatograms with an entry

	right, wrong int
	firstWrong   string
	listOffset   string
	sumEnd       int // just after the tag <fileChecksum>
	sum          string
}

// indexed is an element that an index may point at.
type indexed struct{ of, id string }

func (x *indexCheck) start(s *scanner, name string, at int) {
	if !x.present {
		return
	}
	switch name {
	case "spectrum", "chromatogram":
		if x.starts == nil {
			x.starts = map[int]indexed{}
		}
		x.starts[at] = indexed{name, s.attr("id")}
	case "indexList":
		x.list = at
	case "index":
		x.of = s.attr("name")
	case "offset":
		x.open, x.content, x.id = name, "", s.attr("idRef")
	case "indexListOffset", "fileChecksum":
		x.open, x.content = name, ""
		if name == "fileChecksum" {
			x.sumEnd = s.at
		}
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
		if x.of == "chromatogram" {
			if x.named == nil {
				x.named = map[string]bool{}
			}
			x.named[x.id] = true
		}
		at, err := strconv.Atoi(x.content)
		if there, begins := x.starts[at]; err == nil && begins && there == (indexed{x.of, x.id}) {
			x.right++
			return
		}
		if x.wrong++; x.wrong == 1 {
			x.firstWrong = x.id
		}
	}
}

// warnings says what does not hold, each kind once.
func (x *indexCheck) warnings(s *scanner, chromatograms []string) []trace.Warning {
	if !x.present {
		return nil
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
	switch {
	case x.list == 0:
		offset("the file has an index wrapper and no index")
	case x.listOffset != strconv.Itoa(x.list):
		offset("the index begins at byte %d, the file says %q", x.list, x.listOffset)
	}
	if x.sumEnd == 0 {
		return append(list, trace.Warning{Code: "file-checksum", Detail: "the file has an index wrapper and no checksum"})
	}
	sum := sha1.Sum(s.data[:x.sumEnd])
	if got := hex.EncodeToString(sum[:]); !strings.EqualFold(got, x.sum) {
		list = append(list, trace.Warning{Code: "file-checksum", Detail: fmt.Sprintf("the SHA-1 of the file is %s, it says %q", got, x.sum)})
	}
	return list
}
