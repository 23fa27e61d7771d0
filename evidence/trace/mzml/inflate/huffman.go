package inflate

import "math/bits"

// Entries of the decoding tables. The lowest byte is what the entry consumes, extra bits included; the next the length of the code
// alone.
const (
	literalFlag = 1 << 31 // the value is in bits 16 to 23
	special     = 1 << 15 // no value: one of the next three
	subtable    = 1 << 14 // its start is in bits 16 to 30, its bits in bits 8 to 12
	endOfBlock  = 1 << 13
	invalid     = special // no such code
)

// Bits that the first table of each code decodes at once, and the entries that it needs with all its sub-tables in the worst case:
// 288 and 32 symbols with codes of at most 15 bits (computed by the program "enough" of the zlib distribution, from memory).
const (
	literalBits = 11
	offsetBits  = 8
	precodeBits = 7

	literalSize = 2342
	offsetSize  = 402
	maxBits     = 15
)

// build fills a decoding table from the code lengths of its symbols (RFC 1951, section 3.2.2). entries holds, for each symbol, its
// table entry without the lengths. It tells whether the lengths are a code: complete, or a single code of one bit, or none at all.
func build(table []uint32, tableBits int, lengths []uint8, entries *[288]uint32) bool {
	var count [maxBits + 1]int
	for _, l := range lengths {
		count[l]++
	}
	if count[0] == len(lengths) {
		clearTo(table[:1<<tableBits]) // any use of it is an error
		return true
	}
	count[0] = 0
	left, next := 1, [maxBits + 2]int{}
	for l := 1; l <= maxBits; l++ {
		if left = left<<1 - count[l]; left < 0 {
			return false
		}
		next[l+1] = next[l] + count[l]
	}
	if left > 0 {
		if count[1] != 1 || next[maxBits+1] != 1 {
			return false
		}
		clearTo(table[:1<<tableBits])
	}
	var sorted [288]uint16
	for symbol, l := range lengths {
		if l > 0 {
			sorted[next[l]] = uint16(symbol)
			next[l]++
		}
	}
	fill(table, tableBits, lengths, entries, sorted[:next[maxBits]], &count)
	return true
}

func clearTo(table []uint32) {
	for i := range table {
		table[i] = invalid
	}
}

// fill writes the entries of the symbols, which are sorted by their codes. A table for codes of up to l bits is twice that for l - 1
// bits, one after the other, with the codes of l bits put in.
func fill(table []uint32, tableBits int, lengths []uint8, entries *[288]uint32, sorted []uint16, count *[maxBits + 1]int) {
	code, i, size := 0, 0, 1
	for l := 1; l <= tableBits; l++ {
		code <<= 1
		copy(table[size:2*size], table[:size])
		size *= 2
		for range count[l] {
			table[bits.Reverse16(uint16(code))>>(16-l)] = entries[sorted[i]] + uint32(l)<<8 + uint32(l)
			code, i = code+1, i+1
		}
	}
	if i < len(sorted) {
		fillLonger(table, tableBits, code, lengths, entries, sorted[i:], count)
	}
}

// fillLonger writes the entries of codes that are longer than the table's bits into sub-tables, one for each beginning.
func fillLonger(table []uint32, tableBits, code int, lengths []uint8, entries *[288]uint32, sorted []uint16, count *[maxBits + 1]int) {
	length, end := tableBits, 1<<tableBits // what is used of the table
	start, subBits, prefix := 0, 0, -1
	for _, symbol := range sorted {
		l := int(lengths[symbol])
		code, length = code<<(l-length), l
		reversed := int(bits.Reverse16(uint16(code)) >> (16 - l))
		code++
		if p := reversed & (1<<tableBits - 1); p != prefix {
			prefix, start = p, end
			subBits = l - tableBits
			for used := count[l]; used < 1<<subBits && tableBits+subBits < maxBits; {
				subBits++
				used = used<<1 + count[tableBits+subBits]
			}
			end += 1 << subBits
			table[p] = special | subtable | uint32(start)<<16 | uint32(subBits)<<8 | uint32(tableBits)
		}
		count[l]--
		rest := l - tableBits
		e := entries[symbol] + uint32(rest)<<8 + uint32(rest)
		for i := reversed >> tableBits; i < 1<<subBits; i += 1 << rest {
			table[start+i] = e
		}
	}
}

// Entries without their lengths, by symbol.
var literalEntries, offsetEntries, precodeEntries [288]uint32

func init() {
	for i := range 256 {
		literalEntries[i] = literalFlag | uint32(i)<<16
	}
	literalEntries[256] = special | endOfBlock
	// RFC 1951, section 3.2.5.
	base, extra := 3, 0
	for i := range 28 {
		if i >= 8 && i%4 == 0 {
			extra++
		}
		literalEntries[257+i] = uint32(base)<<16 | uint32(extra)
		base += 1 << extra
	}
	literalEntries[285] = 258 << 16
	literalEntries[286], literalEntries[287] = invalid, invalid
	base, extra = 1, 0
	for i := range 30 {
		if i >= 4 && i%2 == 0 {
			extra++
		}
		offsetEntries[i] = uint32(base)<<16 | uint32(extra)
		base += 1 << extra
	}
	offsetEntries[30], offsetEntries[31] = invalid, invalid
	for i := range 19 {
		precodeEntries[i] = uint32(i) << 16
	}
}
