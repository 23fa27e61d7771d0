package netcdf

import (
	"fmt"
	"strings"
)

// chunk is the most of a file that is read at once, in bytes.
const chunk = 1 << 18

// A Cursor reads ranges of one variable, for one goroutine. Ranges that follow each other are read ahead.
type Cursor struct {
	f *File
	v *Variable

	window []byte // what was read last
	from   int64  // its offset
	next   int64  // offset after what was asked for last
	pieces []byte // of records, put together
}

// Cursor returns a reader of a variable. A variable that is not there is an error.
func (f *File) Cursor(name string) (*Cursor, error) {
	v := f.Variable(name)
	if v == nil {
		return nil, f.fail("no variable "+name, "one", "")
	}
	return &Cursor{f: f, v: v}, nil
}

// Read fills dst with the values from first on, counted from 0 over all dimensions, the fastest last. Text, values that are not finite
// and integers beyond 2^53 are refused.
func (c *Cursor) Read(dst []float64, first int64) error {
	v := c.v
	if v.Type == Char {
		return c.f.fail(fmt.Sprintf("text in the variable %q at byte %d", v.Name, v.begin), "numbers", "")
	}
	return c.each(first, int64(len(dst)), func(at int64, src []byte) error {
		n := len(src) / int(v.Type.Size())
		if i, what := convert(dst[at-first:][:n], src, v.Type); what != "" {
			place := at + int64(i)
			return c.f.fail(fmt.Sprintf("%s as value %d of the variable %q at byte %d", what, place+1, v.Name, v.Offset(place)), "a finite number, and no integer beyond 2^53", "")
		}
		return nil
	})
}

// check refuses a range beyond the variable.
func (c *Cursor) check(first, n int64) error {
	if first < 0 || n < 0 || n > c.v.length-first {
		return fmt.Errorf("%s: %d values from %d on are asked for of %q, which has %d", c.f.Name, n, first, c.v.Name, c.v.length)
	}
	return nil
}

// each hands over the bytes of n values from first on, in pieces of a chunk at most; at is the first value of a piece.
func (c *Cursor) each(first, n int64, use func(at int64, src []byte) error) error {
	if err := c.check(first, n); err != nil {
		return err
	}
	v := c.v
	size, together := v.Type.Size(), v.bytes()
	for n > 0 {
		in := first % v.slab
		var src []byte
		var err error
		if v.Record && in == 0 && n >= v.slab && v.stride > together && v.stride <= chunk/4 {
			records := min(n/v.slab, (chunk-together)/v.stride+1)
			if src, err = c.bytes(v.Offset(first), (records-1)*v.stride+together); err == nil {
				if int64(cap(c.pieces)) < records*together {
					c.pieces = make([]byte, records*together)
				}
				c.pieces = c.pieces[:records*together]
				gather(c.pieces, src, int(together), int(v.stride))
				src = c.pieces
			}
		} else {
			// Records without a gap between them lie together as one.
			most := v.slab - in
			if v.Record && v.stride == together {
				most = n
			}
			src, err = c.bytes(v.Offset(first), min(most, n, chunk/size)*size)
		}
		if err != nil {
			return err
		}
		if err := use(first, src); err != nil {
			return err
		}
		got := int64(len(src)) / size
		first, n = first+got, n-got
	}
	return nil
}

// bytes returns n bytes of the file, at most a chunk, which stay valid until the next call.
func (c *Cursor) bytes(at, n int64) ([]byte, error) {
	if at < c.from || at+n > c.from+int64(len(c.window)) {
		size := n
		if at >= c.from && at <= c.next+c.v.stride { // in sequence
			size = max(n, min(chunk, c.v.end()-at))
		}
		if int64(cap(c.window)) < size {
			c.window = make([]byte, size)
		}
		c.window, c.from = c.window[:size], at
		if err := c.f.readAt(c.window, at); err != nil {
			c.window = c.window[:0]
			return nil, err
		}
	}
	c.next = at + n
	return c.window[at-c.from:][:n], nil
}

// Floats returns all values of a variable of numbers, as Cursor.Read does.
func (f *File) Floats(name string) ([]float64, error) {
	c, err := f.Cursor(name)
	if err != nil {
		return nil, err
	}
	return c.floats(0, c.v.length)
}

// FloatsRange returns count values of a variable of numbers from first on, as Cursor.Read does.
func (f *File) FloatsRange(name string, first, count int64) ([]float64, error) {
	c, err := f.Cursor(name)
	if err != nil {
		return nil, err
	}
	return c.floats(first, count)
}

func (c *Cursor) floats(first, count int64) ([]float64, error) {
	if err := c.check(first, count); err != nil {
		return nil, err
	}
	dst := make([]float64, count)
	if err := c.Read(dst, first); err != nil {
		return nil, err
	}
	return dst, nil
}

// Text returns the text of a variable of characters, a string for each row of its last dimension, without NUL characters at the end,
// as the file has it: it may not be UTF-8.
func (f *File) Text(name string) ([]string, error) {
	c, err := f.Cursor(name)
	if err != nil {
		return nil, err
	}
	v := c.v
	if v.Type != Char {
		return nil, f.fail(fmt.Sprintf("%ss in the variable %q at byte %d", v.Type, name, v.begin), "text", "")
	}
	all := make([]byte, 0, v.length)
	err = c.each(0, v.length, func(_ int64, src []byte) error {
		all = append(all, src...)
		return nil
	})
	if err != nil {
		return nil, err
	}
	width := int64(1)
	if n := len(v.Dimensions); n > 0 {
		if last := f.Dimensions[v.Dimensions[n-1]]; !last.Record || n == 1 {
			width = max(1, last.Length)
		}
	}
	var rows []string
	for ; len(all) > 0; all = all[width:] {
		rows = append(rows, strings.TrimRight(string(all[:width]), "\x00"))
	}
	return rows, nil
}
