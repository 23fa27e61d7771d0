package formats

import (
	"bytes"
	"fmt"
	"io"

	"github.com/klauspost/compress/gzip"

	"assaywrit/evidence/trace"
)

// maxUnpacked is the most that a packed file may hold, in bytes.
const maxUnpacked = 1 << 28

// packed tells whether a file is in gzip (RFC 1952).
func packed(head []byte) bool { return bytes.HasPrefix(head, []byte("\x1f\x8b\x08")) }

// unpack returns what a gzip file holds, if no more than most bytes. Its checksums are compared; a second packing inside is not undone.
func unpack(name string, src trace.Source, most int64) (trace.Source, error) {
	const advice = "unpack the file (gzip -d) and name the result in the sequence, or copy it again"
	refuse := func(got, want string) error {
		return &trace.SyntaxError{File: name, Got: got, Want: want, Hint: advice}
	}
	z, err := gzip.NewReader(io.NewSectionReader(src, 0, src.Size()))
	if err != nil {
		return nil, refuse(fmt.Sprintf("damaged gzip data (%v)", err), "a whole gzip file")
	}
	data, err := io.ReadAll(io.LimitReader(z, most+1))
	switch {
	case err != nil:
		return nil, refuse(fmt.Sprintf("damaged gzip data (%v)", err), "a whole gzip file")
	case int64(len(data)) > most:
		return nil, refuse(fmt.Sprintf("a gzip file that holds more than %d bytes", most), "at most that")
	case packed(data):
		return nil, refuse("gzip inside gzip", "a file packed once")
	}
	return bytes.NewReader(data), nil
}
