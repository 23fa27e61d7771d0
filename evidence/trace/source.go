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

// ReadAll returns the whole of a source. A source that holds less than its Size is an error (io.ErrUnexpectedEOF).
func ReadAll(src Source) ([]byte, error) {
	size := src.Size()
	if size < 0 || size > math.MaxInt/2 {
		return nil, fmt.Errorf("a size of %d bytes: want one that memory can hold", size)
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
