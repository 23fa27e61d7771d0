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

// ReadAll returns the whole of a source. Formats that can answer from a part of it should read that part.
func ReadAll(src Source) ([]byte, error) {
	data := make([]byte, src.Size())
	n, err := src.ReadAt(data, 0)
	if n == len(data) {
		return data, nil
	}
	if err == nil || err == io.EOF {
		err = io.ErrUnexpectedEOF
	}
	return nil, err
}

// Check tells what breaks the contract of a Chromatogram: lengths that differ, times that do not increase, values that are not
// finite. index is that of the first point concerned; problem is "" where all is well.
func (c *Chromatogram) Check() (index int, got, want string) {
	if len(c.TimeMin) != len(c.Intensity) {
		return 0, fmt.Sprintf("%d times and %d intensities", len(c.TimeMin), len(c.Intensity)), "as many of each"
	}
	for i, t := range c.TimeMin {
		switch y := c.Intensity[i]; {
		case math.IsNaN(t) || math.IsInf(t, 0):
			return i, fmt.Sprintf("a time of %g", t), "a finite number"
		case math.IsNaN(y) || math.IsInf(y, 0):
			return i, fmt.Sprintf("an intensity of %g", y), "a finite number"
		case i > 0 && t <= c.TimeMin[i-1]:
			return i, fmt.Sprintf("a time of %g min", t), fmt.Sprintf("one after %g min", c.TimeMin[i-1])
		}
	}
	return -1, "", ""
}
