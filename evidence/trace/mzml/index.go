package mzml

import (
	"bytes"
	"crypto/sha1"
	"encoding/hex"
	"fmt"
	"strconv"

	"assaywrit/evidence/trace"
)

// An indexCheck compares what the index wrapper says with the file. Nothing relies on it.
type indexCheck struct {
	of       string // "spectrum" or "chromatogram": the index we are in
	id       string // of the offset element we are in
	inOffset bool
	inSum    bool
	sumEnd   int // just after the tag <fileChecksum>
	sum      string
	right    int
	wrong    []string
}

func (x *indexCheck) start(s *scanner, name string) {
	switch name {
	case "index":
		x.of = s.attr("name")
	case "offset":
		x.id, x.inOffset = s.attr("idRef"), x.of != ""
	case "fileChecksum":
		x.inSum, x.sumEnd = true, s.at
	}
}

func (x *indexCheck) end(name string) {
	switch name {
	case "index":
		x.of = ""
	case "offset":
		x.inOffset = false
	case "fileChecksum":
		x.inSum = false
	}
}

func (x *indexCheck) text(s *scanner, text []byte) {
	switch {
	case x.inSum:
		x.sum = string(bytes.TrimSpace(text))
	case x.inOffset:
		at, err := strconv.Atoi(string(bytes.TrimSpace(text)))
		if err == nil && pointsAt(s.data, at, x.of, x.id) {
			x.right++
		} else {
			x.wrong = append(x.wrong, x.id)
		}
	}
}

// pointsAt tells whether an element of that name and id begins at an offset.
func pointsAt(data []byte, at int, name, id string) bool {
	if at < 0 || at >= len(data) || !bytes.HasPrefix(data[at:], []byte("<"+name)) {
		return false
	}
	sub := &scanner{data: data, at: at}
	if _, _, _, err := sub.next(); err != nil {
		return false
	}
	return sub.attr("id") == id
}

func (x *indexCheck) warnings(s *scanner) []trace.Warning {
	var list []trace.Warning
	if len(x.wrong) > 0 {
		list = append(list, trace.Warning{Code: "index-offset", Detail: fmt.Sprintf("%d of %d offsets of the index do not point at their element, the first that of %q", len(x.wrong), len(x.wrong)+x.right, x.wrong[0])})
	}
	if x.sumEnd > 0 {
		sum := sha1.Sum(s.data[:x.sumEnd])
		if got := hex.EncodeToString(sum[:]); got != x.sum {
			list = append(list, trace.Warning{Code: "file-checksum", Detail: fmt.Sprintf("the file's SHA-1 is %s, it says %q", got, x.sum)})
		}
	}
	return list
}
