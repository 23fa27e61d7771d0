package bundle

import (
	"archive/zip"
	"bytes"
	"encoding/binary"
	"fmt"
	"io"
	"testing"
)

// A sparseFile is a file of which only blocks that are not zero take up memory.
type sparseFile struct {
	size   int64
	blocks map[int64][]byte
}

const sparseBlock = 1 << 20

var zeros = make([]byte, sparseBlock)

func (s *sparseFile) Write(p []byte) (int, error) {
	for rest := p; len(rest) > 0; {
		k, within := s.size/sparseBlock, s.size%sparseBlock
		n := min(len(rest), int(sparseBlock-within))
		if !bytes.Equal(rest[:n], zeros[:n]) {
			if s.blocks[k] == nil {
				s.blocks[k] = make([]byte, sparseBlock)
			}
			copy(s.blocks[k][within:], rest[:n])
		}
		s.size += int64(n)
		rest = rest[n:]
	}
	return len(p), nil
}

func (s *sparseFile) ReadAt(p []byte, off int64) (int, error) {
	n := 0
	for n < len(p) && off+int64(n) < s.size {
		k, within := (off+int64(n))/sparseBlock, (off+int64(n))%sparseBlock
		block := s.blocks[k]
		if block == nil {
			block = zeros
		}
		n += copy(p[n:min(len(p), n+int(s.size-off-int64(n)))], block[within:])
	}
	if n < len(p) {
		return n, io.EOF
	}
	return n, nil
}

// TestLargeEntries lays out an entry of more than 4 GiB, and one behind it, as Write does, and copies them as AddSignature does.
func TestLargeEntries(t *testing.T) {
	if testing.Short() {
		t.Skip("goes through 8 GiB of zeros: not in short mode")
	}
	const size = 1<<32 + sparseBlock
	s := &sparseFile{blocks: map[int64][]byte{}}
	z := zip.NewWriter(s)
	w, err := z.CreateRaw(&zip.FileHeader{Name: "data/large.pdf", Method: zip.Store, Flags: flagDescriptor, UncompressedSize64: size, CompressedSize64: size})
	for n := int64(0); n < size && err == nil; n += sparseBlock {
		_, err = w.Write(zeros)
	}
	p, err2 := newPacker()
	if err != nil || err2 != nil {
		t.Fatal(err, err2)
	}
	if err := p.writeEntry(z, "data/second.txt", []byte("behind")); err != nil {
		t.Fatal(err)
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	check := func(s *sparseFile) *zip.Reader {
		t.Helper()
		r, err := zip.NewReader(s, s.size)
		if err != nil || len(r.File) != 2 || r.File[0].UncompressedSize64 != size {
			t.Fatalf("%v, %+v", err, r)
		}
		for _, f := range r.File {
			if err := checkEntry(f); err != nil {
				t.Errorf("%s: %v", f.Name, err)
			}
		}
		if err := (layout{s, s.size}).check(r.File); err != nil {
			t.Error(err)
		}
		var out bytes.Buffer
		if err := unpack(&out, r.File[1]); err != nil || out.String() != "behind" {
			t.Errorf("%q, %v", out.String(), err)
		}
		return r
	}
	first := check(s)
	again := &sparseFile{blocks: map[int64][]byte{}}
	z = zip.NewWriter(again)
	for _, f := range first.File {
		if err := copyEntry(z, f); err != nil {
			t.Fatal(err)
		}
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	check(again)
	if again.size != s.size {
		t.Errorf("the copy has %d octets, want %d", again.size, s.size)
	}
}

// TestManyEntries has more entries than the end record of a plain zip can count.
func TestManyEntries(t *testing.T) {
	if testing.Short() {
		t.Skip("writes 65,536 files: not in short mode")
	}
	var payload []Payload
	for i := range maxEntries / 2 {
		payload = append(payload, Payload{fmt.Sprintf("inputs/%05d", i), []byte{byte(i)}})
	}
	data := written(t, testHeader(), payload)
	b := opened(t, data)
	if problems := b.CheckFiles(); len(problems) > 0 || len(b.PayloadPaths()) != len(payload) {
		t.Errorf("%d problems, %d files", len(problems), len(b.PayloadPaths()))
	}
	if !bytes.Contains(data[len(data)-200:], []byte("PK\x06\x06")) {
		t.Error("it is no zip64: the test shows less than it says")
	}
	if _, err := Write(io.Discard, testHeader(), append(payload, Payload{"one/more", nil})); err == nil {
		t.Error("one more was written, which Open might refuse")
	}
}

// TestLocalZip64Sizes reads sizes in front of an entry as other writers put them (APPNOTE 4.5.3: unpacked, then packed).
func TestLocalZip64Sizes(t *testing.T) {
	le := binary.LittleEndian
	extra := []byte{0x55, 0x54, 1, 0, 9, 1, 0, 16, 0}
	extra = le.AppendUint64(le.AppendUint64(extra, 5<<32), 6<<32)
	if packed, unpacked := zip64Sizes(extra, 1, 2); packed != 6<<32 || unpacked != 5<<32 {
		t.Errorf("packed %d, unpacked %d", packed, unpacked)
	}
	if packed, unpacked := zip64Sizes(extra[:12], 1, 2); packed != 1 || unpacked != 2 {
		t.Errorf("cut short: packed %d, unpacked %d", packed, unpacked)
	}
	if got := withoutZip64(extra); !bytes.Equal(got, extra[:5]) {
		t.Errorf("% x", got)
	}
}
