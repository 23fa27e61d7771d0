package mzml

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"math"
	"strconv"
)

// A binaryArray is one binaryDataArray element of a chromatogram, before it is decoded.
type binaryArray struct {
	at              int
	length, encoded string // attributes
	content         string // accession of what it holds
	number          string // accession of the kind of number
	compression     string
	unit            string
	text            []byte
}

// add takes the text of the element "binary", which comes in one piece.
func (b *binaryArray) add(s *scanner, text []byte) error {
	if b.text != nil {
		return s.fail(s.at-len(text), "an array in two pieces", "one run of base64", cutHint)
	}
	b.text = text
	return nil
}

// term takes what a term says about the array. Terms that say nothing about its numbers are passed over.
func (b *binaryArray) term(s *scanner, t term, at int) error {
	slot := &b.content
	switch {
	case numberBytes[t.accession] > 0 || unreadNumbers[t.accession] != "":
		slot = &b.number
	case t.accession == accZlib || t.accession == accPlain || unreadCompressions[t.accession] != "":
		slot = &b.compression
	case t.accession == accTime || t.accession == accIntensity:
		b.unit = t.unit
	case auxiliaryArrays[t.accession] != "":
	default:
		return nil
	}
	if *slot != "" && *slot != t.accession {
		return s.fail(at, fmt.Sprintf("an array that is both %s and %s", *slot, t.accession), "one of them", "")
	}
	*slot = t.accession
	return nil
}

// decode gives the array's numbers, times in minutes. What the element says about itself must hold.
func (b *binaryArray) decode(r *reader, n int) ([]float64, error) {
	s := r.s
	if b.length != "" {
		var ok bool
		if n, ok = count(b.length); !ok {
			return nil, s.fail(b.at, fmt.Sprintf("arrayLength %q", b.length), "a number of points", "")
		}
	}
	if got, want, hint := b.unread(); want != "" {
		return nil, s.fail(b.at, got, want, hint)
	}
	if r.left -= n; r.left < 0 {
		return nil, s.fail(b.at, "a file of very many points", fmt.Sprintf("at most %d numbers in all arrays", maxPoints), "")
	}
	size := numberBytes[b.number]
	raw, err := b.bytes(r, n*size)
	if err != nil {
		return nil, err
	}
	if len(raw) != n*size {
		return nil, s.fail(b.at, fmt.Sprintf("an array of %d bytes", len(raw)), fmt.Sprintf("%d, for %d numbers of %d bytes", n*size, n, size), cutHint)
	}
	return b.numbers(s, raw, n)
}

// unread tells why the array cannot be read as it describes itself; want is "" where it can.
func (b *binaryArray) unread() (got, want, hint string) {
	const again = "export the file again without this encoding"
	name := map[string]string{accTime: "time", accIntensity: "intensity"}[b.content]
	switch {
	case numberBytes[b.number] == 0 && b.number != "":
		return fmt.Sprintf("the %s array as %s (%s)", name, unreadNumbers[b.number], b.number), "32- or 64-bit floats or integers", again
	case b.number == "":
		return fmt.Sprintf("the %s array without the kind of its numbers", name), "32- or 64-bit floats or integers", ""
	case unreadCompressions[b.compression] != "":
		return fmt.Sprintf("the %s array in %s compression (%s)", name, unreadCompressions[b.compression], b.compression), "no compression (" + accPlain + ") or zlib (" + accZlib + ")", again
	case b.compression == "":
		return fmt.Sprintf("the %s array without its compression", name), "no compression (" + accPlain + ") or zlib (" + accZlib + ")", ""
	case b.content == accTime && b.unit == "":
		return "a time array without a unit", "seconds (" + unitSecond + ") or minutes (" + unitMinute + ")", "a unit of time is not guessed: export the file again with a converter that states it"
	case b.content == accTime && b.unit != unitSecond && b.unit != unitMinute:
		return fmt.Sprintf("a time array in the unit %q", b.unit), "seconds (" + unitSecond + ") or minutes (" + unitMinute + ")", ""
	case b.content == accIntensity && relativeUnits[b.unit] != "":
		return fmt.Sprintf("intensities in %s (%s)", relativeUnits[b.unit], b.unit), "intensities as acquired", "scaled traces cannot be compared with each other: export the file again without scaling"
	case b.encoded == "":
		return fmt.Sprintf("the %s array without encodedLength", name), "the number of its base64 characters", ""
	}
	return "", "", ""
}

// bytes undoes base64 and zlib. size is what should come out.
func (b *binaryArray) bytes(r *reader, size int) ([]byte, error) {
	s := r.s
	text := bytes.TrimSpace(b.text)
	if bytes.ContainsAny(text, " \t\r\n") { // line breaks are allowed, and not counted
		text = bytes.Join(bytes.Fields(text), nil)
	}
	if b.encoded != strconv.Itoa(len(text)) {
		return nil, s.fail(b.at, fmt.Sprintf("%d characters of base64", len(text)), fmt.Sprintf("%q, as encodedLength says", b.encoded), cutHint)
	}
	raw := make([]byte, base64.StdEncoding.DecodedLen(len(text)))
	k, err := base64.StdEncoding.Strict().Decode(raw, text)
	if err != nil {
		return nil, s.fail(b.at, fmt.Sprintf("damaged base64 (%v)", err), "whole base64", cutHint)
	}
	raw = raw[:k]
	if b.compression == accPlain || len(raw) == 0 && size == 0 {
		return raw, nil
	}
	out, problem := r.zlib.inflate(raw, size)
	if problem != "" {
		return nil, s.fail(b.at, problem, fmt.Sprintf("zlib data of %d bytes", size), cutHint)
	}
	return out, nil
}

// exactInt is the largest integer up to which a float64 holds every one.
const exactInt = 1 << 53

// numbers are little-endian (mzML 1.1.0, element binary).
func (b *binaryArray) numbers(s *scanner, raw []byte, n int) ([]float64, error) {
	out := make([]float64, n)
	for i := range out {
		switch b.number {
		case accFloat64:
			out[i] = math.Float64frombits(binary.LittleEndian.Uint64(raw[8*i:]))
		case accFloat32:
			out[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(raw[4*i:])))
		case accInt64:
			v := int64(binary.LittleEndian.Uint64(raw[8*i:]))
			if v > exactInt || v < -exactInt {
				return nil, s.fail(b.at, fmt.Sprintf("the integer %d at point %d", v, i+1), "at most 2^53, up to which every integer is exact", "")
			}
			out[i] = float64(v)
		case accInt32:
			out[i] = float64(int32(binary.LittleEndian.Uint32(raw[4*i:])))
		}
	}
	if b.content == accTime && b.unit == unitSecond {
		for i := range out {
			out[i] /= 60
		}
	}
	return out, nil
}
