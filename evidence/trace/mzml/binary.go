package mzml

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"strconv"

	"github.com/klauspost/compress/zlib"
)

// A binaryArray is one binaryDataArray element, before it is decoded.
type binaryArray struct {
	at              int
	length, encoded string // attributes
	content         string // accession of what it holds
	number          string // accession of the kind of number
	compression     string
	unit            string
	text            []byte
}

func (b *binaryArray) term(s *scanner, t term, at int) error {
	if name, known := unreadCompressions[t.accession]; known {
		return s.fail(at, name+" ("+t.accession+")", "no compression or zlib", "export the file again without this compression")
	}
	switch t.accession {
	case accFloat64, accFloat32, accInt64, accInt32:
		b.number = t.accession
	case accZlib, accPlain:
		b.compression = t.accession
	case accTime, accIntensity:
		b.content, b.unit = t.accession, t.unit
	}
	return nil
}

// decode gives the array's numbers, times in minutes. What the element says about itself must hold.
func (b *binaryArray) decode(s *scanner, defaultLength int) ([]float64, error) {
	n := defaultLength
	if b.length != "" {
		var err error
		if n, err = strconv.Atoi(b.length); err != nil || n < 0 {
			return nil, s.fail(b.at, fmt.Sprintf("arrayLength %q", b.length), "a number of points", "")
		}
	}
	size := map[string]int{accFloat64: 8, accInt64: 8, accFloat32: 4, accInt32: 4}[b.number]
	switch {
	case size == 0:
		return nil, s.fail(b.at, "an array that does not say what its numbers are", "32- or 64-bit floats or integers", "")
	case b.compression == "":
		return nil, s.fail(b.at, "an array that does not say how it is compressed", "no compression or zlib", "")
	case b.content == accTime && b.unit != unitSecond && b.unit != unitMinute:
		return nil, s.fail(b.at, fmt.Sprintf("a time array in the unit %q", b.unit), "seconds ("+unitSecond+") or minutes ("+unitMinute+")", "a time without a unit is not guessed")
	}
	raw, err := b.bytes(s, n, size)
	if err != nil {
		return nil, err
	}
	if len(raw) != n*size {
		return nil, s.fail(b.at, fmt.Sprintf("an array of %d bytes", len(raw)), fmt.Sprintf("%d, for %d numbers of %d bytes", n*size, n, size), cutHint)
	}
	return b.numbers(raw, n), nil
}

// bytes undoes base64 and zlib. No more is inflated than the stated length, plus one byte to see that there is more.
func (b *binaryArray) bytes(s *scanner, n, size int) ([]byte, error) {
	text := bytes.TrimSpace(b.text)
	if b.encoded != "" && b.encoded != strconv.Itoa(len(text)) {
		return nil, s.fail(b.at, fmt.Sprintf("%d characters of base64", len(text)), b.encoded+", as encodedLength says", cutHint)
	}
	raw := make([]byte, base64.StdEncoding.DecodedLen(len(text)))
	k, err := base64.StdEncoding.Strict().Decode(raw, text)
	if err != nil {
		return nil, s.fail(b.at, "base64 that is damaged ("+err.Error()+")", "whole base64", cutHint)
	}
	raw = raw[:k]
	if b.compression == accPlain {
		return raw, nil
	}
	if len(raw) == 0 && n == 0 {
		return nil, nil
	}
	z, err := zlib.NewReader(bytes.NewReader(raw))
	if err != nil {
		return nil, s.fail(b.at, "zlib data that is damaged ("+err.Error()+")", "whole zlib data", cutHint)
	}
	// Deflate cannot grow by more than about 1,032: a larger claim is a lie that would only cost memory.
	if int64(n)*int64(size) > int64(len(raw))*1100+64 {
		return nil, s.fail(b.at, fmt.Sprintf("%d bytes of zlib data for %d numbers", len(raw), n), "an array length that fits its data", cutHint)
	}
	out := bytes.NewBuffer(make([]byte, 0, n*size+bytes.MinRead))
	if _, err := io.Copy(out, io.LimitReader(z, int64(n*size)+1)); err != nil {
		return nil, s.fail(b.at, "zlib data that is damaged ("+err.Error()+")", "whole zlib data", cutHint)
	}
	return out.Bytes(), nil
}

func (b *binaryArray) numbers(raw []byte, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		switch b.number {
		case accFloat64:
			out[i] = math.Float64frombits(binary.LittleEndian.Uint64(raw[8*i:]))
		case accFloat32:
			out[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(raw[4*i:])))
		case accInt64:
			out[i] = float64(int64(binary.LittleEndian.Uint64(raw[8*i:])))
		case accInt32:
			out[i] = float64(int32(binary.LittleEndian.Uint32(raw[4*i:])))
		}
		if b.content == accTime && b.unit == unitSecond {
			out[i] /= 60
		}
	}
	return out
}
