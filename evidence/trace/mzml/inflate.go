package mzml

import (
	"bytes"
	"fmt"
	"io"

	"github.com/klauspost/compress/zlib"
)

// maxGrowth is the most by which deflate can grow, a little rounded up: 258 bytes from two bits (RFC 1951, section 3.2.5).
const maxGrowth = 1032

// An inflater undoes zlib (RFC 1950), again and again with one set of tables.
type inflater struct {
	src bytes.Reader
	z   io.ReadCloser
}

// inflate returns the size bytes that raw holds. problem tells what is wrong: data that is cut or damaged, whose checksum is wrong,
// that holds more or less than size, or after which something follows. No more than size+1 bytes are ever inflated.
func (f *inflater) inflate(raw []byte, size int) (out []byte, problem string) {
	if size/maxGrowth > len(raw) {
		return nil, fmt.Sprintf("%d bytes of zlib data, which cannot hold that much", len(raw))
	}
	f.src.Reset(raw)
	if err := f.open(); err != nil {
		return nil, fmt.Sprintf("damaged zlib data (%v)", err)
	}
	out = make([]byte, size+1)
	n, err := 0, error(nil)
	for n < len(out) && err == nil {
		var k int
		k, err = f.z.Read(out[n:])
		n += k
	}
	switch {
	case n > size:
		return nil, fmt.Sprintf("zlib data that holds more than %d bytes", size)
	case err != io.EOF: // at its end the checksum has been compared
		return nil, fmt.Sprintf("damaged zlib data (%v)", err)
	case n < size:
		return nil, fmt.Sprintf("zlib data that holds %d bytes", n)
	case f.src.Len() > 0:
		return nil, fmt.Sprintf("%d bytes after the end of the zlib data", f.src.Len())
	}
	return out[:n], ""
}

func (f *inflater) open() (err error) {
	if f.z == nil {
		f.z, err = zlib.NewReader(&f.src)
		return err
	}
	return f.z.(zlib.Resetter).Reset(&f.src, nil)
}
