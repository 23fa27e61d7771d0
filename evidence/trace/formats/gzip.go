package formats

import (
	"bytes"
	"fmt"
	"io"

	"github.com/klauspost/compress/gzip"

	"assaywrit/evidence/trace"
)

// mostUnpacked is the most that a packed file may hold, in bytes: six for each of its own, and 24 MiB. Measurements shrink to a half
// or a third; what shrinks to a thousandth is no measurement.
func mostUnpacked(packed int64) int64 { return 6*packed + 24<<20 }

// packed tells whether a file is in gzip (RFC 1952).
func packed(head []byte) bool { return bytes.HasPrefix(head, []byte("\x1f\x8b\x08")) }

// unpacked is what a gzip file holds, in memory. It remembers the size of the file, by which a reader bounds its own memory.
type unpacked struct {
	*bytes.Reader
	stored int64
}

// Stored is the size of the file as it is stored, in bytes; see trace.Budget.
func (u unpacked) Stored() int64 { return u.stored }

// unpack returns what a gzip file holds, if no more than most bytes. Its checksums are compared; a second packing inside is not undone.
func unpack(name string, src trace.Source, most int64) (trace.Source, error) {
	const advice = "unpack the file (gzip -d) and name the result in the sequence, or copy it again"
	refuse := func(got, want string) error {
		return &trace.SyntaxError{File: name, Got: got, Want: want, Hint: advice}
	}
	size, err := unpackedSize(src, most)
	if err == nil && size <= most {
		data := make([]byte, size)
		if err = unzip(src, data); err == nil {
			if packed(data) {
				return nil, refuse("gzip inside gzip", "a file packed once")
			}
			return unpacked{bytes.NewReader(data), src.Size()}, nil
		}
	}
	if err != nil {
		return nil, refuse(fmt.Sprintf("damaged gzip data (%v)", err), "a whole gzip file")
	}
	return nil, refuse(fmt.Sprintf("a gzip file that holds more than %d bytes", most), "at most that")
}

// unpackedSize is how much a gzip file holds, or more than most. It is unpacked once for this, as the size that the file states at its
// end may be that of its last part alone, or a lie.
func unpackedSize(src trace.Source, most int64) (int64, error) {
	z, err := gzip.NewReader(io.NewSectionReader(src, 0, src.Size()))
	if err != nil {
		return 0, err
	}
	return io.Copy(io.Discard, io.LimitReader(z, most+1))
}

// unzip fills data with what the file holds, which is as much.
func unzip(src trace.Source, data []byte) error {
	z, err := gzip.NewReader(io.NewSectionReader(src, 0, src.Size()))
	if err != nil {
		return err
	}
	_, err = io.ReadFull(z, data)
	return err
}
