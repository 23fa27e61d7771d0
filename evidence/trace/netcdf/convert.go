package netcdf

import (
	"encoding/binary"
	"fmt"
	"math"
)

// convert reads len(dst) numbers of a type, which are big-endian, and returns "". Otherwise what says why value i is refused: it is
// not finite, or an integer beyond 2^53.
func convert(dst []float64, src []byte, t Type) (i int, what string) {
	switch t {
	case Byte:
		for i, c := range src[:len(dst)] {
			dst[i] = float64(int8(c))
		}
	case UByte:
		for i, c := range src[:len(dst)] {
			dst[i] = float64(c)
		}
	case Short:
		for i := range dst {
			dst[i] = float64(int16(binary.BigEndian.Uint16(src[2*i:])))
		}
	case UShort:
		for i := range dst {
			dst[i] = float64(binary.BigEndian.Uint16(src[2*i:]))
		}
	case Int:
		for i := range dst {
			dst[i] = float64(int32(binary.BigEndian.Uint32(src[4*i:])))
		}
	case UInt:
		for i := range dst {
			dst[i] = float64(binary.BigEndian.Uint32(src[4*i:]))
		}
	case Int64:
		for i := range dst {
			n := int64(binary.BigEndian.Uint64(src[8*i:]))
			if n > 1<<53 || n < -1<<53 {
				return i, fmt.Sprintf("the integer %d, beyond 2^53", n)
			}
			dst[i] = float64(n)
		}
	case UInt64:
		for i := range dst {
			n := binary.BigEndian.Uint64(src[8*i:])
			if n > 1<<53 {
				return i, fmt.Sprintf("the integer %d, beyond 2^53", n)
			}
			dst[i] = float64(n)
		}
	case Float:
		if !floats(dst, src) {
			return notFinite(dst)
		}
	case Double:
		if !doubles(dst, src) {
			return notFinite(dst)
		}
	}
	return 0, ""
}

// notFinite finds the first value that is not finite.
func notFinite(dst []float64) (int, string) {
	for i, y := range dst {
		if math.IsNaN(y) || math.IsInf(y, 0) {
			return i, fmt.Sprintf("%g", y)
		}
	}
	panic("netcdf: internal error: every value is finite")
}

// An exponent of ones marks what is not finite. Adding one to the exponent carries into the sign, which collects them without a branch.
const (
	exponent32, one32 = 0x7f800000, 0x00800000
	exponent64, one64 = 0x7ff << 52, 1 << 52
)

// floats reads numbers of 32 bits, and tells whether all are finite.
func floats(dst []float64, src []byte) bool {
	src = src[:4*len(dst)]
	odd := uint32(0)
	for len(dst) >= 4 && len(src) >= 16 {
		a, b := binary.BigEndian.Uint32(src), binary.BigEndian.Uint32(src[4:])
		c, d := binary.BigEndian.Uint32(src[8:]), binary.BigEndian.Uint32(src[12:])
		odd |= (a&exponent32 + one32) | (b&exponent32 + one32) | (c&exponent32 + one32) | (d&exponent32 + one32)
		dst[0], dst[1] = float64(math.Float32frombits(a)), float64(math.Float32frombits(b))
		dst[2], dst[3] = float64(math.Float32frombits(c)), float64(math.Float32frombits(d))
		dst, src = dst[4:], src[16:]
	}
	for i := range dst {
		a := binary.BigEndian.Uint32(src[4*i:])
		odd |= a&exponent32 + one32
		dst[i] = float64(math.Float32frombits(a))
	}
	return odd>>31 == 0
}

// doubles reads numbers of 64 bits, and tells whether all are finite.
func doubles(dst []float64, src []byte) bool {
	src = src[:8*len(dst)]
	odd := uint64(0)
	for len(dst) >= 4 && len(src) >= 32 {
		a, b := binary.BigEndian.Uint64(src), binary.BigEndian.Uint64(src[8:])
		c, d := binary.BigEndian.Uint64(src[16:]), binary.BigEndian.Uint64(src[24:])
		odd |= (a&exponent64 + one64) | (b&exponent64 + one64) | (c&exponent64 + one64) | (d&exponent64 + one64)
		dst[0], dst[1] = math.Float64frombits(a), math.Float64frombits(b)
		dst[2], dst[3] = math.Float64frombits(c), math.Float64frombits(d)
		dst, src = dst[4:], src[32:]
	}
	for i := range dst {
		a := binary.BigEndian.Uint64(src[8*i:])
		odd |= a&exponent64 + one64
		dst[i] = math.Float64frombits(a)
	}
	return odd>>63 == 0
}

// gather copies pieces of size bytes that stand stride bytes apart, until dst is full.
func gather(dst, src []byte, size, stride int) {
	switch size {
	case 4:
		for from := 0; len(dst) >= 4; from += stride {
			binary.NativeEndian.PutUint32(dst, binary.NativeEndian.Uint32(src[from:]))
			dst = dst[4:]
		}
	case 8:
		for from := 0; len(dst) >= 8; from += stride {
			binary.NativeEndian.PutUint64(dst, binary.NativeEndian.Uint64(src[from:]))
			dst = dst[8:]
		}
	default:
		for from := 0; len(dst) > 0; from += stride {
			dst = dst[copy(dst, src[from:from+size]):]
		}
	}
}
