package netcdf

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"strings"
)

const (
	headerWindow = 1 << 14 // bytes of the header that are read at once
	maxHeader    = 1 << 24 // bytes that a header may have; those of instruments have some thousand
)

// A header reads the values of a header one after the other.
type header struct {
	f      *File
	at     int64 // offset of the next byte
	window []byte
	from   int64 // offset of the window

	streaming bool  // whether the number of records follows from the size of the file
	padding   int64 // offset of the first padding that is not zero, or -1
}

func (h *header) fail(at int64, got, want string) error {
	return h.f.fail(fmt.Sprintf("%s at byte %d", got, at), want, copyHint)
}

// left is the number of bytes that the rest of the header can have at most.
func (h *header) left() int64 { return min(h.f.size, maxHeader) - h.at }

// take returns the next n bytes, which stay valid until the next call.
func (h *header) take(n int64, what string) ([]byte, error) {
	if n > h.left() {
		if h.f.size > maxHeader {
			return nil, h.fail(h.at, fmt.Sprintf("%s of %d bytes", what, n), fmt.Sprintf("a header of at most %d bytes", maxHeader))
		}
		return nil, h.fail(h.at, fmt.Sprintf("%s of %d bytes with %d bytes left in the file", what, n, h.left()), "a whole header")
	}
	if h.at+n > h.from+int64(len(h.window)) {
		size := min(max(n, headerWindow), h.f.size-h.at)
		if int64(cap(h.window)) < size {
			h.window = make([]byte, size)
		}
		h.window, h.from = h.window[:size], h.at
		if err := h.f.readAt(h.window, h.at); err != nil {
			return nil, err
		}
	}
	b := h.window[h.at-h.from:][:n]
	h.at += n
	return b, nil
}

// readAt fills b from the file.
func (f *File) readAt(b []byte, at int64) error {
	n, err := f.src.ReadAt(b, at)
	if n == len(b) {
		return nil
	}
	if err == nil || errors.Is(err, io.EOF) {
		err = io.ErrUnexpectedEOF
	}
	return fmt.Errorf("%s: %w", f.Name, err)
}

// magic reads the mark of the format and its version.
func (h *header) magic() error {
	f := h.f
	head := make([]byte, min(4, max(0, f.size)))
	if err := f.readAt(head, 0); err != nil {
		return err
	}
	if IsClassic(head) {
		f.Version, h.at = head[3], 4
		return nil
	}
	const want = "a classic netCDF file (CDF-1, CDF-2 or CDF-5)"
	mark := make([]byte, len(hdf5Magic))
	for at := int64(0); at+int64(len(mark)) <= f.size; at = max(512, 2*at) {
		if err := f.readAt(mark, at); err != nil {
			return err
		}
		if string(mark) == hdf5Magic {
			return f.fail(fmt.Sprintf("an HDF5 file (netCDF-4), by its signature at byte %d", at), want, hdf5Hint)
		}
		if at > f.size/2 {
			break
		}
	}
	if strings.HasPrefix(string(head), magic) && len(head) == 4 {
		return f.fail(fmt.Sprintf("version %d at byte 3", head[3]), want, hdf5Hint)
	}
	return f.fail(fmt.Sprintf("%q at byte 0", head), want, "the file is in another format, or damaged")
}

// uint32 reads a number of four bytes.
func (h *header) uint32(what string) (uint32, error) {
	b, err := h.take(4, what)
	if err != nil {
		return 0, err
	}
	return binary.BigEndian.Uint32(b), nil
}

// signed reads a number of eight bytes, or of four.
func (h *header) signed(wide bool, what string) (int64, error) {
	if !wide {
		n, err := h.uint32(what)
		return int64(int32(n)), err
	}
	b, err := h.take(8, what)
	if err != nil {
		return 0, err
	}
	return int64(binary.BigEndian.Uint64(b)), nil
}

// number reads a number that may not be negative; those of CDF-5 have eight bytes.
func (h *header) number(what string) (int64, error) {
	at := h.at
	n, err := h.signed(h.f.Version == 5, what)
	if err == nil && n < 0 {
		err = h.fail(at, fmt.Sprintf("%s of %d", what, n), "a number that is not negative")
	}
	return n, err
}

// count reads the beginning of a list: its tag and how many follow, each of at least least bytes.
func (h *header) count(tag uint32, least int64, what string) (int64, error) {
	at := h.at
	got, err := h.uint32("a tag")
	if err != nil {
		return 0, err
	}
	n, err := h.number("a number of " + what)
	if err != nil {
		return 0, err
	}
	if got != tag && (got != 0 || n != 0) {
		return 0, h.fail(at, fmt.Sprintf("the tag %d with a number of %d", got, n), fmt.Sprintf("the tag %d of a list of %s, or zeros", tag, what))
	}
	return n, h.fits(at, n, least, what)
}

// fits refuses more things than the rest of the file can hold.
func (h *header) fits(at, n, least int64, what string) error {
	if n > max(0, h.left())/least {
		return h.fail(at, fmt.Sprintf("%d %s in a header with %d bytes left", n, what, max(0, h.left())), fmt.Sprintf("at most %d", max(0, h.left())/least))
	}
	return nil
}

// padded reads n bytes and those that fill them up to a multiple of four.
func (h *header) padded(n int64, what string) ([]byte, error) {
	if n > h.left() { // before n is rounded up
		_, err := h.take(n, what)
		return nil, err
	}
	b, err := h.take(roundUp(n), what)
	if err != nil {
		return nil, err
	}
	for i, c := range b[n:] {
		if c != 0 && h.padding < 0 {
			h.padding = h.at - int64(len(b)) + n + int64(i)
		}
	}
	return b[:n], nil
}

func roundUp(n int64) int64 { return (n + 3) &^ 3 }

// word is the size of a number in the header.
func (h *header) word() int64 {
	if h.f.Version == 5 {
		return 8
	}
	return 4
}

// name reads a name, which must be a new one among those seen.
func (h *header) name(what string, seen map[string]bool) (string, error) {
	n, err := h.number("a length of a name")
	if err != nil {
		return "", err
	}
	at := h.at
	b, err := h.padded(n, "a name")
	if err != nil {
		return "", err
	}
	name := string(b)
	if !validName(name) {
		return "", h.fail(at, fmt.Sprintf("the name %.80q of %s", name, what), "a name in UTF-8 without control characters and strokes")
	}
	if seen[name] {
		return "", h.fail(at, fmt.Sprintf("the name %.80q of %s again", name, what), "each name once")
	}
	seen[name] = true
	return name, nil
}
