package inflate

import "encoding/binary"

// reserve is what one turn of the fast loop may write at most: three literals, or two and the longest copy, which is rounded up to
// whole words.
const reserve = 3 + 258 + 8

// block decodes the symbols of one block into dst from n on.
func (d *tables) block(s *state, dst []byte, n int) (int, error) {
	n, done, err := d.fast(s, dst[:cap(dst)], n)
	if n > len(dst) {
		return len(dst), ErrLong
	}
	if done || err != nil {
		return n, err
	}
	return d.careful(s, dst, n)
}

// fast decodes while there is room for a whole turn on both sides. done tells that the block has ended.
func (d *tables) fast(s *state, dst []byte, n int) (_ int, done bool, err error) {
	if s.fake > 0 {
		return n, false, nil
	}
	s.tidy()
	src, at, buf, have := s.src, s.at, s.buf, s.have
	literals, offsets := &d.literals, &d.offsets
	const literalMask, offsetMask = 1<<literalBits - 1, 1<<offsetBits - 1
	for len(src)-at >= 16 && len(dst)-n >= reserve {
		buf |= binary.LittleEndian.Uint64(src[at:]) << (have & 63)
		at += int((63 - have) >> 3)
		have |= 56
		e := literals[buf&literalMask]
		if e&literalFlag != 0 {
			buf >>= e & 63 // the lowest byte is at most 15 here; the bits above it are of no matter to the mask
			have -= uint(e & 0xff)
			dst[n] = byte(e >> 16)
			n++
			e = literals[buf&literalMask]
			if e&literalFlag != 0 {
				buf >>= e & 63
				have -= uint(e & 0xff)
				dst[n] = byte(e >> 16)
				n++
				e = literals[buf&literalMask]
				if e&literalFlag != 0 {
					buf >>= e & 63
					have -= uint(e & 0xff)
					dst[n] = byte(e >> 16)
					n++
					continue
				}
			}
			buf |= binary.LittleEndian.Uint64(src[at:]) << (have & 63)
			at += int((63 - have) >> 3)
			have |= 56
		}
		if e&special != 0 {
			if e&subtable == 0 {
				if e&endOfBlock == 0 {
					return n, false, ErrCorrupt
				}
				s.at, s.buf, s.have = at, buf>>(e&63), have-uint(e&0xff)
				s.tidy()
				return n, true, nil
			}
			buf >>= literalBits
			have -= literalBits
			e = literals[e>>16&0x7fff+uint32(buf)&(1<<(e>>8&15)-1)]
			if e&literalFlag != 0 {
				buf >>= e & 63
				have -= uint(e & 0xff)
				dst[n] = byte(e >> 16)
				n++
				continue
			}
			if e&special != 0 {
				if e&endOfBlock == 0 {
					return n, false, ErrCorrupt
				}
				s.at, s.buf, s.have = at, buf>>(e&63), have-uint(e&0xff)
				s.tidy()
				return n, true, nil
			}
		}
		length := int(e>>16) + int(buf&(1<<(e&63)-1)>>(e>>8&15))
		buf >>= e & 63
		have -= uint(e & 0xff)
		e = offsets[buf&offsetMask]
		if e&special != 0 {
			if e&subtable == 0 {
				return n, false, ErrCorrupt
			}
			buf >>= offsetBits
			have -= offsetBits
			e = offsets[e>>16&0x1ff+uint32(buf)&(1<<(e>>8&15)-1)]
			if e&special != 0 {
				return n, false, ErrCorrupt
			}
		}
		distance := int(e>>16) + int(buf&(1<<(e&63)-1)>>(e>>8&15))
		buf >>= e & 63
		have -= uint(e & 0xff)
		if distance > n {
			return n, false, ErrCorrupt
		}
		end := n + length
		if distance >= 8 {
			for from := n - distance; n < end; n, from = n+8, from+8 {
				binary.LittleEndian.PutUint64(dst[n:], binary.LittleEndian.Uint64(dst[from:]))
			}
		} else if distance == 1 {
			word := uint64(dst[n-1]) * 0x0101010101010101
			for ; n < end; n += 8 {
				binary.LittleEndian.PutUint64(dst[n:], word)
			}
		} else {
			for from := n - distance; n < end; n, from = n+1, from+1 {
				dst[n] = dst[from]
			}
		}
		n = end
	}
	s.at, s.buf, s.have = at, buf, have
	s.tidy()
	return n, false, nil
}

// tidy gives whole bytes back that the fast loop has read ahead: its buffer holds bits above those that it counts.
func (s *state) tidy() {
	s.at -= int(s.have >> 3)
	s.have &= 7
	s.buf &= 1<<s.have - 1
}

// careful decodes symbol by symbol, up to the end of either side.
func (d *tables) careful(s *state, dst []byte, n int) (int, error) {
	for {
		s.fill()
		e := d.literals[s.buf&(1<<literalBits-1)]
		if e&special != 0 && e&subtable != 0 {
			s.take(literalBits)
			e = d.literals[e>>16&0x7fff+uint32(s.buf)&(1<<(e>>8&15)-1)]
		}
		if e == invalid || e&0xff == 0 {
			return n, s.why()
		}
		value := uint(s.buf&(1<<(e&63)-1)) >> (e >> 8 & 15)
		s.take(uint(e & 0xff))
		switch {
		case s.over():
			return n, ErrCut
		case e&literalFlag != 0:
			if n == len(dst) {
				return n, ErrLong
			}
			dst[n] = byte(e >> 16)
			n++
			continue
		case e&endOfBlock != 0 && e&special != 0:
			return n, nil
		case e&special != 0:
			return n, ErrCorrupt
		}
		length := int(e>>16&0x1ff) + int(value)
		o := d.offsets[s.buf&(1<<offsetBits-1)]
		if o&special != 0 && o&subtable != 0 {
			s.take(offsetBits)
			o = d.offsets[o>>16&0x1ff+uint32(s.buf)&(1<<(o>>8&15)-1)]
		}
		if o&special != 0 {
			return n, s.why()
		}
		distance := int(o>>16) + int(uint(s.buf&(1<<(o&63)-1))>>(o>>8&15))
		s.take(uint(o & 0xff))
		switch {
		case s.over():
			return n, ErrCut
		case distance > n:
			return n, ErrCorrupt
		case length > len(dst)-n:
			return n, ErrLong
		}
		for end := n + length; n < end; n++ {
			dst[n] = dst[n-distance]
		}
	}
}

// why tells whether a code that does not exist came from bits beyond the end.
func (s *state) why() error {
	if s.fake > 0 {
		return ErrCut
	}
	return ErrCorrupt
}
