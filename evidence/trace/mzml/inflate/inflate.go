// Package inflate undoes deflate (RFC 1951) and zlib (RFC 1950) for data of known size, all at once and into one slice. The output
// is its own window, and a 64-bit buffer holds enough bits for a length with its distance: this is what makes it faster than a
// reader of streams. It accepts and refuses what the library github.com/klauspost/compress/zlib does, and gives the same bytes.
package inflate

import (
	"encoding/binary"
	"errors"
	"hash/adler32"
	"sync"
)

// Errors of Zlib.
var (
	ErrHeader   = errors.New("no zlib header")
	ErrCorrupt  = errors.New("damaged data")
	ErrCut      = errors.New("data that ends early")
	ErrLong     = errors.New("more data than expected")
	ErrChecksum = errors.New("a checksum that does not fit")
)

// Slack is the room beyond the expected size that a destination should have: with less, its end is decoded more slowly.
const Slack = 320

// A Decoder holds tables that are used again and again. The zero value is ready; it serves one goroutine at a time.
type Decoder struct {
	tables
	lengths [288 + 32]uint8
	precode [1 << precodeBits]uint32
}

// tables decode the two codes of a block.
type tables struct {
	literals [literalSize]uint32
	offsets  [offsetSize]uint32
}

// Zlib undoes zlib data that holds at most len(dst) bytes and returns how many there are, and how many bytes of src were used. The
// room between len(dst) and cap(dst) may be overwritten. Its checksum is compared.
func (d *Decoder) Zlib(dst, src []byte) (n, used int, err error) {
	if len(src) < 2 {
		return 0, 0, ErrCut
	}
	if src[0]&15 != 8 || src[0]>>4 > 7 || binary.BigEndian.Uint16(src)%31 != 0 || src[1]&0x20 != 0 {
		return 0, 0, ErrHeader
	}
	n, used, err = d.Deflate(dst, src[2:])
	if err != nil {
		return n, 0, err
	}
	used += 2
	if len(src)-used < 4 {
		return n, 0, ErrCut
	}
	if adler32.Checksum(dst[:n]) != binary.BigEndian.Uint32(src[used:]) {
		return n, 0, ErrChecksum
	}
	return n, used + 4, nil
}

// state is where a Decoder is in its input and output.
type state struct {
	src  []byte
	at   int    // next byte of src
	buf  uint64 // bits not yet used, the next one lowest
	have uint   // how many of them
	fake uint   // bits of them that lie beyond the end of src
}

// fill brings at least 48 bits into the buffer, zeros beyond the end.
func (s *state) fill() {
	for s.have <= 56 {
		if s.at < len(s.src) {
			s.buf |= uint64(s.src[s.at]) << (s.have & 63)
			s.at++
		} else {
			s.fake += 8
		}
		s.have += 8
	}
}

func (s *state) take(n uint) uint {
	v := s.buf & (1<<n - 1)
	s.buf >>= n
	s.have -= n
	return uint(v)
}

// over tells whether bits beyond the end have been used.
func (s *state) over() bool { return s.fake > s.have }

// Deflate undoes deflate data; see Zlib.
func (d *Decoder) Deflate(dst, src []byte) (n, used int, err error) {
	s := state{src: src}
	for last := false; !last; {
		s.fill()
		last = s.take(1) == 1
		kind := s.take(2)
		if s.over() {
			return n, 0, ErrCut
		}
		switch kind {
		case 0:
			n, err = d.stored(&s, dst, n)
		case 1:
			n, err = fixedTables().block(&s, dst, n)
		case 2:
			if err = d.dynamicTables(&s); err == nil {
				n, err = d.block(&s, dst, n)
			}
		default:
			err = ErrCorrupt
		}
		if err != nil {
			return n, 0, err
		}
	}
	return n, s.at - int(s.have-s.fake)/8, nil
}

func (d *Decoder) stored(s *state, dst []byte, n int) (int, error) {
	s.take(s.have & 7)
	at := s.at - int(s.have-min(s.fake, s.have))/8
	s.buf, s.have, s.fake = 0, 0, 0
	if len(s.src)-at < 4 {
		return n, ErrCut
	}
	size := int(binary.LittleEndian.Uint16(s.src[at:]))
	if size != int(^binary.LittleEndian.Uint16(s.src[at+2:])) {
		return n, ErrCorrupt
	}
	at += 4
	if len(s.src)-at < size {
		return n, ErrCut
	}
	if len(dst)-n < size {
		return n, ErrLong
	}
	copy(dst[n:], s.src[at:at+size])
	s.at = at + size
	return n + size, nil
}

// fixedTables are those of the fixed codes (RFC 1951, section 3.2.6).
var fixedTables = sync.OnceValue(func() *tables {
	var l [288]uint8
	for i := range l {
		switch {
		case i < 144:
			l[i] = 8
		case i < 256:
			l[i] = 9
		case i < 280:
			l[i] = 7
		default:
			l[i] = 8
		}
	}
	t := &tables{}
	build(t.literals[:], literalBits, l[:], &literalEntries)
	o := l[:32]
	for i := range o {
		o[i] = 5
	}
	build(t.offsets[:], offsetBits, o, &offsetEntries)
	return t
})

// precodeOrder is the order in which the lengths of the code for code lengths are written (RFC 1951, section 3.2.7).
var precodeOrder = [19]uint8{16, 17, 18, 0, 8, 7, 9, 6, 10, 5, 11, 4, 12, 3, 13, 2, 14, 1, 15}

func (d *Decoder) dynamicTables(s *state) error {
	s.fill()
	literals, offsets, pre := int(s.take(5))+257, int(s.take(5))+1, int(s.take(4))+4
	if literals > 286 || offsets > 30 {
		return ErrCorrupt
	}
	var lengths [19]uint8
	for _, symbol := range precodeOrder[:pre] {
		s.fill()
		lengths[symbol] = uint8(s.take(3))
	}
	if !build(d.precode[:], precodeBits, lengths[:], &precodeEntries) {
		return ErrCorrupt
	}
	all := literals + offsets
	for i := 0; i < all; {
		s.fill()
		e := d.precode[s.buf&(1<<precodeBits-1)]
		if s.over() {
			return ErrCut
		}
		if e&special != 0 {
			return ErrCorrupt
		}
		s.take(uint(e & 0xff))
		symbol := e >> 16
		if symbol < 16 {
			d.lengths[i] = uint8(symbol)
			i++
			continue
		}
		value, again := uint8(0), 0
		switch symbol {
		case 16:
			if i == 0 {
				return ErrCorrupt
			}
			value, again = d.lengths[i-1], 3+int(s.take(2))
		case 17:
			again = 3 + int(s.take(3))
		default:
			again = 11 + int(s.take(7))
		}
		if i+again > all {
			return ErrCorrupt
		}
		for range again {
			d.lengths[i] = value
			i++
		}
	}
	if s.over() {
		return ErrCut
	}
	if !build(d.literals[:], literalBits, d.lengths[:literals], &literalEntries) || !build(d.offsets[:], offsetBits, d.lengths[literals:all], &offsetEntries) {
		return ErrCorrupt
	}
	return nil
}
