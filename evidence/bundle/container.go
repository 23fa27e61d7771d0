package bundle

import (
	"archive/zip"
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"strings"
)

// Bounds on what is opened. A bundle holds one case: some hundred files of some megabytes.
const (
	maxEntries    = 1 << 17
	maxTotal      = 1 << 34 // octets, unpacked
	maxRatio      = 200     // unpacked to packed, beyond
	ratioFreeSize = 1 << 20 // this size, up to which text may repeat itself as it likes
)

// Flags of a zip entry (PKWARE APPNOTE 6.3.10, 4.4.4).
const (
	flagEncrypted  = 1 << 0
	flagDescriptor = 1 << 3
	flagUTF8       = 1 << 11
	flagsAccepted  = 1<<1 | 1<<2 | flagDescriptor | flagUTF8 // bits 1 and 2 tell how hard a packer tried
)

// A RefusedError says why a file is not opened, or not written, as a bundle.
type RefusedError struct {
	Path   string // of the entry, or empty where it concerns the whole file
	Reason string
}

func (e *RefusedError) Error() string {
	if e.Path == "" {
		return "refused: " + e.Reason
	}
	return fmt.Sprintf("refused: %q: %s", e.Path, e.Reason)
}

func refuse(path, format string, args ...any) error {
	return &RefusedError{Path: path, Reason: fmt.Sprintf(format, args...)}
}

// plausible reports whether so many packed octets may stand for so many unpacked ones.
func plausible(packed, unpacked uint64) bool {
	return unpacked <= ratioFreeSize || unpacked/maxRatio <= packed
}

// checkEntry looks at what the central directory says of an entry.
func checkEntry(f *zip.File) error {
	switch {
	case f.Flags&flagEncrypted != 0:
		return errors.New("is encrypted")
	case f.Flags&^flagsAccepted != 0:
		return fmt.Errorf("has the flags %#x, which no writer of bundles sets", f.Flags)
	case f.Flags&flagUTF8 == 0 && strings.ContainsFunc(f.Name, func(r rune) bool { return r >= 0x80 }):
		return errors.New("has a name that is not ASCII and not marked as UTF-8")
	case f.Comment != "":
		return errors.New("has a comment")
	case f.Method != zip.Store && f.Method != zip.Deflate:
		return fmt.Errorf("is packed with method %d, want stored or deflated", f.Method)
	case f.Method == zip.Store && f.CompressedSize64 != f.UncompressedSize64:
		return errors.New("is stored, and its two sizes differ")
	case !plausible(f.CompressedSize64, f.UncompressedSize64):
		return fmt.Errorf("unpacks from %d to %d octets, more than %d to one", f.CompressedSize64, f.UncompressedSize64, maxRatio)
	}
	// A symbolic link, a device or a folder in the name of a file. Modes of other systems than Unix hold no such thing.
	if strings.HasSuffix(f.Name, "/") {
		if f.UncompressedSize64 != 0 || f.CompressedSize64 != 0 {
			return errors.New("is a folder with content")
		}
		if f.Mode()&fs.ModeType != fs.ModeDir {
			return fmt.Errorf("is a folder by its name and %v by its mode", f.Mode())
		}
	} else if f.Mode()&fs.ModeType != 0 {
		return fmt.Errorf("is not a plain file (%v)", f.Mode())
	}
	return checkExtra(f.Extra)
}

// checkExtra accepts extra fields that change neither name nor content: zip64 sizes, and times and owners as general tools
// write them. A Unicode path field, for one, gives an entry a second name.
func checkExtra(extra []byte) error {
	for len(extra) > 0 {
		if len(extra) < 4 {
			return errors.New("has an extra field that is cut short")
		}
		id, size := binary.LittleEndian.Uint16(extra), int(binary.LittleEndian.Uint16(extra[2:]))
		if size > len(extra)-4 {
			return errors.New("has an extra field that is cut short")
		}
		switch id {
		case 0x0001, 0x000a, 0x5455, 0x5855, 0x7855, 0x7875: // zip64, NTFS times, extended times, Info-ZIP Unix (three of them)
		default:
			return fmt.Errorf("has the extra field %#04x, want none but sizes, times and owners", id)
		}
		extra = extra[4+size:]
	}
	return nil
}

// withoutZip64 returns extra fields (that checkExtra has seen) without the one that holds zip64 sizes.
func withoutZip64(extra []byte) []byte {
	var kept []byte
	for len(extra) >= 4 {
		size := 4 + int(binary.LittleEndian.Uint16(extra[2:]))
		if binary.LittleEndian.Uint16(extra) != 1 {
			kept = append(kept, extra[:size]...)
		}
		extra = extra[size:]
	}
	return kept
}

// A layout follows a zip file from its first octet to its last. Readers of zip files differ in what they overlook: data
// before, between and after entries, or a local header that disagrees with the directory. Here nothing may be overlooked.
type layout struct {
	r    io.ReaderAt
	size int64
}

const (
	localHeaderSize   = 30
	centralHeaderSize = 46
	endSize           = 22
	zip64EndSize      = 56
	zip64LocatorSize  = 20
)

func (l layout) bytes(at int64, n int) ([]byte, error) {
	if at < 0 || at > l.size-int64(n) {
		return nil, errors.New("the file is cut short")
	}
	buf := make([]byte, n)
	if _, err := l.r.ReadAt(buf, at); err != nil && !(err == io.EOF && at+int64(n) == l.size) {
		return nil, err
	}
	return buf, nil
}

// check compares the file with its directory: the entries one after the other from the start of the file, then the
// directory, then its end record, and nothing else.
func (l layout) check(files []*zip.File) error {
	at := int64(0)
	for _, f := range files {
		next, err := l.checkLocal(f, at)
		if err != nil {
			return &RefusedError{Path: f.Name, Reason: err.Error()}
		}
		at = next
	}
	directory, size, count, err := l.end()
	if err != nil {
		return &RefusedError{Reason: err.Error()}
	}
	want := uint64(0)
	for _, f := range files {
		want += uint64(centralHeaderSize + len(f.Name) + len(f.Extra) + len(f.Comment))
	}
	if directory != uint64(at) || size != want || count != uint64(len(files)) {
		return refuse("", "the zip's directory is not where and as large as its entries make it: there is other data in the file")
	}
	return nil
}

// checkLocal compares the local header at an offset with the directory, and returns where the next one must be.
func (l layout) checkLocal(f *zip.File, at int64) (int64, error) {
	h, err := l.bytes(at, localHeaderSize)
	if err != nil {
		return 0, err
	}
	le := binary.LittleEndian
	if le.Uint32(h) != 0x04034b50 {
		return 0, errors.New("is not where the entry before it ends")
	}
	nameSize, extraSize := int(le.Uint16(h[26:])), int(le.Uint16(h[28:]))
	rest, err := l.bytes(at+localHeaderSize, nameSize+extraSize)
	if err != nil {
		return 0, err
	}
	if le.Uint16(h[6:]) != f.Flags || le.Uint16(h[8:]) != f.Method || string(rest[:nameSize]) != f.Name {
		return 0, errors.New("its local header disagrees with the directory")
	}
	if err := checkExtra(rest[nameSize:]); err != nil {
		return 0, err
	}
	start := at + int64(localHeaderSize+nameSize+extraSize)
	if offset, err := f.DataOffset(); err != nil || offset != start {
		return 0, errors.New("the directory places it elsewhere")
	}
	if f.CompressedSize64 > uint64(l.size-start) {
		return 0, errors.New("is said to be larger than the file")
	}
	end := start + int64(f.CompressedSize64)
	if f.Flags&flagDescriptor != 0 {
		return l.checkDescriptor(f, end)
	}
	crc, packed, unpacked := le.Uint32(h[14:]), uint64(le.Uint32(h[18:])), uint64(le.Uint32(h[22:]))
	if packed == 0xffffffff || unpacked == 0xffffffff {
		packed, unpacked = zip64Sizes(rest[nameSize:], packed, unpacked)
	}
	if crc != f.CRC32 || packed != f.CompressedSize64 || unpacked != f.UncompressedSize64 {
		return 0, errors.New("its local header has another size or checksum than the directory")
	}
	return end, nil
}

// zip64Sizes reads the sizes of a local header from its extra field (APPNOTE 4.5.3).
func zip64Sizes(extra []byte, packed, unpacked uint64) (uint64, uint64) {
	le := binary.LittleEndian
	for len(extra) >= 4 {
		id, size := le.Uint16(extra), int(le.Uint16(extra[2:]))
		if id == 1 && size >= 16 && size <= len(extra)-4 {
			return le.Uint64(extra[12:]), le.Uint64(extra[4:])
		}
		extra = extra[min(4+size, len(extra)):]
	}
	return packed, unpacked
}

// checkDescriptor reads the data descriptor behind an entry (APPNOTE 4.3.9), with its signature and sizes of 4 or 8 octets.
func (l layout) checkDescriptor(f *zip.File, at int64) (int64, error) {
	le := binary.LittleEndian
	short := le.AppendUint32(le.AppendUint32([]byte("PK\x07\x08"), f.CRC32), uint32(f.CompressedSize64))
	short = le.AppendUint32(short, uint32(f.UncompressedSize64))
	long := le.AppendUint64(le.AppendUint32([]byte("PK\x07\x08"), f.CRC32), f.CompressedSize64)
	long = le.AppendUint64(long, f.UncompressedSize64)
	for _, want := range [][]byte{long, short} {
		got, err := l.bytes(at, len(want))
		if err == nil && bytes.Equal(got, want) {
			return at + int64(len(want)), nil
		}
	}
	return 0, errors.New("the sizes and checksum behind it disagree with the directory")
}

// end reads the end records: where the directory is, its size, and how many entries it has.
func (l layout) end() (offset, size, count uint64, err error) {
	le := binary.LittleEndian
	at := l.size - endSize
	e, err := l.bytes(at, endSize)
	if err != nil {
		return 0, 0, 0, err
	}
	if le.Uint32(e) != 0x06054b50 || le.Uint16(e[20:]) != 0 {
		return 0, 0, 0, errors.New("the file does not end with the end record of a zip without comment: there is data behind it, or it is cut short")
	}
	if le.Uint32(e[4:]) != 0 || le.Uint16(e[8:]) != le.Uint16(e[10:]) {
		return 0, 0, 0, errors.New("the zip is a part of several")
	}
	count, size, offset = uint64(le.Uint16(e[10:])), uint64(le.Uint32(e[12:])), uint64(le.Uint32(e[16:]))
	if count == 0xffff || size == 0xffffffff || offset == 0xffffffff {
		if offset, size, count, err = l.zip64End(at - zip64LocatorSize); err != nil {
			return 0, 0, 0, err
		}
		at -= zip64LocatorSize + zip64EndSize
	}
	if offset+size != uint64(at) {
		return 0, 0, 0, errors.New("there is data between the zip's directory and its end, or before its start")
	}
	return offset, size, count, nil
}

func (l layout) zip64End(locator int64) (offset, size, count uint64, err error) {
	le := binary.LittleEndian
	loc, err := l.bytes(locator, zip64LocatorSize)
	if err != nil {
		return 0, 0, 0, err
	}
	e, err := l.bytes(locator-zip64EndSize, zip64EndSize)
	if err != nil {
		return 0, 0, 0, err
	}
	if le.Uint32(loc) != 0x07064b50 || le.Uint64(loc[8:]) != uint64(locator-zip64EndSize) || le.Uint32(e) != 0x06064b50 || le.Uint64(e[4:]) != zip64EndSize-12 {
		return 0, 0, 0, errors.New("the zip64 end records are not in order")
	}
	return le.Uint64(e[48:]), le.Uint64(e[40:]), le.Uint64(e[32:]), nil
}
