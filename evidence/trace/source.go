package trace

import (
	"fmt"
	"io"
	"math"
)

// A Source is the bytes of one raw file. *bytes.Reader and *io.SectionReader are Sources.
type Source interface {
	io.ReaderAt
	Size() int64
}

// maxSize is the most that a source may hold, in bytes: files are read as a whole.
const maxSize = 1 << 32

// ReadAll returns the whole of a source. A source that holds less than its Size is an error (io.ErrUnexpectedEOF).
func ReadAll(src Source) ([]byte, error) {
	size := src.Size()
	if size < 0 || size > min(maxSize, math.MaxInt) {
		return nil, fmt.Errorf("a size of %d bytes: want at most %d", size, int64(maxSize))
	}
	data := make([]byte, size)
	n, err := src.ReadAt(data, 0)
	if n == len(data) {
		return data, nil
	}
	if err == nil || err == io.EOF {
		err = io.ErrUnexpectedEOF
	}
	return nil, err
}

// Budget is how many bytes of numbers a reader may hold for a source: twelve for each byte of the file as it is stored, and 40 MiB.
// A file that claims more is a bomb, or compressed far beyond what measurements allow.
func Budget(src Source) int64 {
	stored := src.Size()
	if s, ok := src.(interface{ Stored() int64 }); ok {
		stored = s.Stored()
	}
	return 12*stored + 40<<20
}
