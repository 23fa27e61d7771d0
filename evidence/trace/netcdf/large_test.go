package netcdf

import (
	"encoding/binary"
	"slices"
	"testing"
)

// A sparse source has bytes at its beginning and at its end, and zeros between.
type sparse struct {
	head, tail []byte
	size       int64
}

func (s sparse) Size() int64 { return s.size }

func (s sparse) ReadAt(b []byte, at int64) (int, error) {
	clear(b)
	if at < int64(len(s.head)) {
		copy(b, s.head[at:])
	}
	if from := s.size - int64(len(s.tail)); at+int64(len(b)) > from {
		copy(b[max(0, from-at):], s.tail[max(0, at-from):])
	}
	return len(b), nil
}

// TestBeyond4GiB reads the last values of files whose offsets do not fit 32 bits, and a variable whose size does not.
func TestBeyond4GiB(t *testing.T) {
	const n = 3 << 29 // ints: 6 GiB
	var tail []byte
	for _, y := range []uint32{7, 8, 1<<32 - 9} {
		tail = binary.BigEndian.AppendUint32(tail, y)
	}
	for name, h := range map[string]*raw{
		"CDF-2": begin(2).words(0, dimensionTag, 1).name("n").words(n).words(0, 0, variableTag, 2).
			name("big").words(1, 0, 0, 0, 4, 1<<32-1, 0, 1024).name("last").words(0, 0, 0, 4, 4, 1, 1<<31+1020),
		"CDF-5": begin(5).words(0, 0, dimensionTag, 0, 1, 0).name("nnnn").words(0, n).words(0, 0, 0, variableTag, 0, 2, 0).
			name("bigg").words(0, 1, 0, 0, 0, 0, 0, 4, 1, 1<<31, 0, 1024, 0).name("last").words(0, 0, 0, 0, 0, 4, 0, 4, 1, 1<<31+1020),
	} {
		end := int64(1024 + 4*n)
		f, err := Open(name, sparse{h.Bytes(), tail, end})
		if err == nil {
			t.Fatalf("%s: two variables share the last value and are read: %v", name, f.Variables)
		}
		// The second variable lies after the first one.
		place := h.Bytes()[h.Len()-8:]
		binary.BigEndian.PutUint64(place, uint64(end))
		f, err = Open(name, sparse{h.Bytes(), tail, end + 4})
		if err != nil || len(f.Warnings) > 0 {
			t.Fatalf("%s: %v", name, err)
		}
		if got, err := f.FloatsRange(f.Variables[0].Name, n-3, 3); err != nil || !slices.Equal(got, []float64{0, 7, 8}) {
			t.Errorf("%s: got %v, %v", name, got, err)
		}
		if got, err := f.Floats("last"); err != nil || !slices.Equal(got, []float64{-9}) {
			t.Errorf("%s: got %v, %v", name, got, err)
		}
	}
}
