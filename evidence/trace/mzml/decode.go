package mzml

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"slices"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/mzml/inflate"
)

// maxGrowth is the most by which deflate can grow, a little rounded up: 258 bytes from two bits (RFC 1951, section 3.2.5).
const maxGrowth = 1032

// A decoder undoes base64, zlib and MS-Numpress, again and again in the same memory.
type decoder struct {
	name   string
	src    trace.Source
	latin1 bool

	zlib   inflate.Decoder
	text   []byte
	packed []byte
	raw    []byte
}

func (d *decoder) fail(at int, got, want, hint string) error {
	line, column, err := place(d.src, at, d.latin1)
	if err != nil {
		return fmt.Errorf("%s: %w", d.name, err)
	}
	return &trace.SyntaxError{File: d.name, Line: line, Column: column, Got: got, Want: want, Hint: hint}
}

// read fetches the base64 of an array and decodes it; see decode.
func (d *decoder) read(a *array, out []float64) ([]float64, error) {
	d.text = slices.Grow(d.text[:0], a.bytes)[:a.bytes]
	if n, err := d.src.ReadAt(d.text, int64(a.text)); n < a.bytes {
		return nil, fmt.Errorf("%s: %w", d.name, err)
	}
	return d.decode(a, d.text, out)
}

// decode gives the array's numbers in the memory of out, times in minutes. What the element says about itself must hold.
func (d *decoder) decode(a *array, text []byte, out []float64) ([]float64, error) {
	packed, err := d.base64(a, text)
	if err != nil {
		return nil, err
	}
	if a.press != unpressed {
		return d.pressed(a, packed, out)
	}
	size := a.n * a.kind.size()
	raw := packed
	if a.zlib && !(len(packed) == 0 && size == 0) {
		if raw, err = d.inflate(a, packed, size, true); err != nil {
			return nil, err
		}
	}
	if len(raw) != size {
		return nil, d.fail(a.at, fmt.Sprintf("an array of %d bytes", len(raw)), fmt.Sprintf("%d, for %d numbers of %d bytes", size, a.n, a.kind.size()), cutHint)
	}
	return d.numbers(a, raw, out)
}

var strict = base64.StdEncoding.Strict()

// base64 undoes it, and compares the number of characters. Line breaks are allowed, and not counted.
func (d *decoder) base64(a *array, text []byte) ([]byte, error) {
	if len(text) != a.encoded {
		if text = bytes.TrimSpace(text); bytes.ContainsAny(text, " \t\r\n") {
			text = bytes.Join(bytes.Fields(text), nil)
		}
	}
	if len(text) != a.encoded {
		return nil, d.fail(a.at, fmt.Sprintf("%d characters of base64", len(text)), fmt.Sprintf("%d, as encodedLength says", a.encoded), cutHint)
	}
	size := strict.DecodedLen(len(text))
	d.packed = slices.Grow(d.packed[:0], size)[:size]
	n, err := strict.Decode(d.packed, text)
	if err != nil {
		return nil, d.fail(a.at, fmt.Sprintf("damaged base64 (%v)", err), "whole base64", cutHint)
	}
	return d.packed[:n], nil
}

// inflate undoes zlib. size is what should come out, or the most where it need not be exact. What claims to be more than its bytes
// can hold is refused before any memory is taken for it.
func (d *decoder) inflate(a *array, packed []byte, size int, exact bool) ([]byte, error) {
	want := fmt.Sprintf("zlib data of %d bytes", size)
	if exact && size/maxGrowth > len(packed) {
		return nil, d.fail(a.at, fmt.Sprintf("%d bytes of zlib data, which cannot hold that much", len(packed)), want, cutHint)
	}
	size = min(size, (len(packed)+1)*maxGrowth)
	d.raw = slices.Grow(d.raw[:0], size+inflate.Slack)[:size]
	n, used, err := d.zlib.Zlib(d.raw, packed)
	switch {
	case errors.Is(err, inflate.ErrLong):
		return nil, d.fail(a.at, fmt.Sprintf("zlib data that holds more than %d bytes", size), want, cutHint)
	case err != nil:
		return nil, d.fail(a.at, fmt.Sprintf("damaged zlib data (%v)", err), want, cutHint)
	case exact && n < size:
		return nil, d.fail(a.at, fmt.Sprintf("zlib data that holds %d bytes", n), want, cutHint)
	case used < len(packed):
		return nil, d.fail(a.at, fmt.Sprintf("%d bytes after the end of the zlib data", len(packed)-used), want, cutHint)
	}
	return d.raw[:n], nil
}

// pressed undoes MS-Numpress.
func (d *decoder) pressed(a *array, packed []byte, out []float64) ([]float64, error) {
	if a.zlib {
		var err error
		if packed, err = d.inflate(a, packed, pressedMost(a.n), false); err != nil {
			return nil, err
		}
	}
	if a.n > 2*len(packed) { // half a byte each, at the least
		return nil, d.fail(a.at, fmt.Sprintf("%d bytes of MS-Numpress data", len(packed)), fmt.Sprintf("enough for %d numbers", a.n), cutHint)
	}
	out = slices.Grow(out[:0], a.n)[:a.n]
	n, problem := unpress(a.press, packed, out)
	if problem == "" && n != a.n {
		problem = fmt.Sprintf("MS-Numpress data of %d numbers", n)
	}
	if problem != "" {
		return nil, d.fail(a.at, problem, fmt.Sprintf("MS-Numpress data of %d numbers", a.n), cutHint)
	}
	if a.seconds {
		toMinutes(out)
	}
	return out, nil
}

// exactInt is the largest integer up to which a float64 holds every one.
const exactInt = 1 << 53

// numbers are little-endian (mzML 1.1.0, element binary).
func (d *decoder) numbers(a *array, raw []byte, out []float64) ([]float64, error) {
	out = slices.Grow(out[:0], a.n)[:a.n]
	switch a.kind {
	case float64Number:
		for i := range out {
			out[i] = math.Float64frombits(binary.LittleEndian.Uint64(raw[8*i:]))
		}
	case float32Number:
		for i := range out {
			out[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(raw[4*i:])))
		}
	case int64Number:
		for i := range out {
			v := int64(binary.LittleEndian.Uint64(raw[8*i:]))
			if v > exactInt || v < -exactInt {
				return nil, d.fail(a.at, fmt.Sprintf("the integer %d at point %d", v, i+1), "at most 2^53, up to which every integer is exact", "")
			}
			out[i] = float64(v)
		}
	case int32Number:
		for i := range out {
			out[i] = float64(int32(binary.LittleEndian.Uint32(raw[4*i:])))
		}
	}
	if a.seconds {
		toMinutes(out)
	}
	return out, nil
}

func toMinutes(seconds []float64) {
	for i := range seconds {
		seconds[i] /= 60
	}
}
