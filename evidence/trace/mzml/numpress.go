package mzml

import (
	"encoding/binary"
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// pressedMost is the most that n numbers take in any of the three forms: nine half bytes each, and what stands before them.
func pressedMost(n int) int { return 5*n + 24 }

// unpress undoes MS-Numpress into out and returns how many numbers there are, which may be more than out holds; problem tells what
// is wrong with the data.
//
// Source: J. Teleman et al., Numerical compression schemes for proteomics mass spectrometry data, Mol. Cell. Proteomics 13 (2014)
// 1537-1542 (from memory), held against published vectors.
func unpress(p press, data []byte, out []float64) (n int, problem string) {
	if p == positiveInteger {
		return unpressIntegers(data, out)
	}
	if len(data) < 8 {
		return 0, fmt.Sprintf("MS-Numpress data of %d bytes, without its scale", len(data))
	}
	scale := math.Float64frombits(binary.BigEndian.Uint64(data))
	if !(scale > 0) || math.IsInf(scale, 1) {
		return 0, fmt.Sprintf("MS-Numpress data with the scale %g", scale)
	}
	if p == linear {
		return unpressLinear(data[8:], scale, out)
	}
	return unpressLogged(data[8:], scale, out)
}

// unpressLinear: two numbers in 32 bits each, then what every other differs by from the line through the two before it.
func unpressLinear(data []byte, scale float64, out []float64) (int, string) {
	n := 0
	put := func(v int64) bool {
		if n < len(out) {
			out[n] = float64(v) / scale
		}
		n++
		return v <= exactInt && v >= -exactInt
	}
	var before, last int64
	for i := 0; i < 2 && len(data) > 0; i++ {
		if len(data) < 4 {
			return 0, "MS-Numpress data that are cut"
		}
		before, last = last, int64(binary.LittleEndian.Uint32(data))
		put(last)
		data = data[4:]
	}
	h := halves{data: data}
	for h.more() {
		d, ok := h.next()
		if !ok {
			return 0, "MS-Numpress data that are cut"
		}
		before, last = last, last+(last-before)+int64(int32(d))
		if !put(last) {
			return 0, "MS-Numpress data beyond the largest exact integer"
		}
	}
	return n, ""
}

// unpressIntegers: integers from 0.
func unpressIntegers(data []byte, out []float64) (int, string) {
	h := halves{data: data}
	n := 0
	for h.more() {
		v, ok := h.next()
		if !ok {
			return 0, "MS-Numpress data that are cut"
		}
		if n < len(out) {
			out[n] = float64(v)
		}
		n++
	}
	return n, ""
}

// unpressLogged: 16 bits for the scaled logarithm of one more than the number.
func unpressLogged(data []byte, scale float64, out []float64) (int, string) {
	if len(data)%2 != 0 {
		return 0, "MS-Numpress data that are cut"
	}
	n := len(data) / 2
	for i := range min(n, len(out)) {
		out[i] = strictmath.Exp(float64(binary.LittleEndian.Uint16(data[2*i:]))/scale) - 1
		if math.IsInf(out[i], 0) {
			return 0, "MS-Numpress data beyond the largest number"
		}
	}
	return n, ""
}

// halves reads 32-bit integers from half bytes, the high one first. The first half byte tells how many of the highest half bytes
// of the integer are left out: 0 to 8 of zeros, or one to seven (9 to 15) of ones; the others follow, the lowest first.
type halves struct {
	data []byte
	at   int // in half bytes
}

// more tells whether another integer begins: a single zero half byte at the end only fills the last byte.
func (h *halves) more() bool {
	left := 2*len(h.data) - h.at
	return left > 1 || left == 1 && h.data[len(h.data)-1]&15 != 0
}

func (h *halves) half() uint32 {
	b := h.data[h.at/2]
	if h.at%2 == 0 {
		b >>= 4
	}
	h.at++
	return uint32(b & 15)
}

func (h *halves) next() (uint32, bool) {
	head := int(h.half())
	v, n := uint32(0), head
	if head > 8 {
		n = head - 8
		v = ^uint32(0) << (32 - 4*n)
	}
	if 2*len(h.data)-h.at < 8-n {
		return 0, false
	}
	for i := range 8 - n {
		v |= h.half() << (4 * i)
	}
	return v, true
}
