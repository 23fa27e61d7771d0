package bundle

import (
	"archive/zip"
	"bytes"
	"fmt"
	"hash/crc32"
	"io"
	"path"
	"strings"

	"github.com/klauspost/compress/flate"

	"assaywrit/evidence/canonical"
)

// A Payload is a file of the bundle's payload.
type Payload struct {
	Path string // under data/, with forward slashes
	Data []byte
}

// deflateLevel is fixed with the format: another one would give other bytes. It is the lowest at which base64 of compressed
// values, which most of an mzML file is, comes out at three quarters; lower ones leave it as it is.
const deflateLevel = 7

// compressedAlready are the names of files that deflating does not make smaller.
var compressedAlready = map[string]bool{
	".pdf": true, ".png": true, ".jpg": true, ".jpeg": true, ".webp": true, ".gz": true, ".zip": true, ".xz": true, ".zst": true,
	".bz2": true, ".7z": true, ".docx": true, ".xlsx": true, ".odt": true, ".ods": true,
}

// Write writes a bundle, unsigned, and returns its statement. The payload may come in any order. The same header and payload
// give the same bytes. It refuses a payload that Open would refuse.
func Write(w io.Writer, h Header, payload []Payload) (*Statement, error) {
	leaves, content, err := gather(payload)
	if err != nil {
		return nil, err
	}
	manifest := payloadManifest(leaves)
	st := newStatement(h, leaves, manifest)
	if err := st.check(); err != nil {
		return nil, fmt.Errorf("bundle: %w", err)
	}
	for _, s := range []string{st.EvidenceSHA256, st.FindingSHA256} {
		if s != "" && !hasSum(leaves, s) {
			return nil, fmt.Errorf("bundle: no payload file has the SHA-256 %s", s)
		}
	}
	statement, err := canonical.Marshal(st)
	if err != nil {
		return nil, fmt.Errorf("bundle: %w", err)
	}
	content[bagitPath], content[bagInfoPath], content[manifestPath], content[statementPath] = []byte(bagitText), bagInfo(st), manifest, statement
	content[tagManifestPath] = tagManifest(content)

	order := []string{bagitPath, bagInfoPath, manifestPath, tagManifestPath}
	for _, l := range leaves {
		order = append(order, l.Path)
	}
	z := zip.NewWriter(w)
	p, err := newPacker()
	if err != nil {
		return nil, fmt.Errorf("bundle: %w", err)
	}
	for _, name := range append(order, statementPath) {
		if err := p.writeEntry(z, name, content[name]); err != nil {
			return nil, fmt.Errorf("bundle: %s: %w", name, err)
		}
	}
	if err := z.Close(); err != nil {
		return nil, fmt.Errorf("bundle: %w", err)
	}
	return st, nil
}

// gather checks the payload and lists it sorted, with data/ in front of every path.
func gather(payload []Payload) ([]leaf, map[string][]byte, error) {
	if len(payload) == 0 || len(payload) > maxEntries/2 {
		return nil, nil, fmt.Errorf("bundle: %d payload files, want 1 to %d", len(payload), maxEntries/2)
	}
	var leaves []leaf
	var total int64
	content := map[string][]byte{}
	seen := newNames()
	for _, p := range payload {
		if err := CheckPath(p.Path); err != nil {
			return nil, nil, &RefusedError{Path: payloadFolder + p.Path, Reason: err.Error()}
		}
		name := payloadFolder + p.Path
		if err := seen.add(name); err != nil {
			return nil, nil, &RefusedError{Path: name, Reason: err.Error()}
		}
		if err := CheckPath(name); err != nil {
			return nil, nil, &RefusedError{Path: name, Reason: err.Error()}
		}
		leaves = append(leaves, leaf{Bytes: int64(len(p.Data)), Path: name, SHA256: hexSum(p.Data)})
		content[name] = p.Data
		total += int64(len(p.Data))
	}
	if total > maxTotal {
		return nil, nil, fmt.Errorf("bundle: the payload has %d octets, want %d at most", total, int64(maxTotal))
	}
	sortLeaves(leaves)
	return leaves, content, nil
}

func hasSum(leaves []leaf, sum string) bool {
	for _, l := range leaves {
		if l.SHA256 == sum {
			return true
		}
	}
	return false
}

// A packer writes entries. It keeps its working memory from one to the next.
type packer struct {
	deflater *flate.Writer
	small    bytes.Buffer
}

func newPacker() (*packer, error) {
	w, err := flate.NewWriter(nil, deflateLevel)
	return &packer{deflater: w}, err
}

// writeEntry writes one file into the zip with everything that is not its content fixed: its sizes and checksum stand in
// front of it, and no other metadata is there.
func (p *packer) writeEntry(z *zip.Writer, name string, data []byte) error {
	h := &zip.FileHeader{
		Name: name, Method: zip.Store, CRC32: crc32.ChecksumIEEE(data),
		UncompressedSize64: uint64(len(data)), CompressedSize64: uint64(len(data)),
		ModifiedDate:   1<<5 | 1, // 1980-01-01, the first day that a zip can hold
		CreatorVersion: 3<<8 | 20, ExternalAttrs: 0o100644 << 16,
		ReaderVersion: 20,
	}
	if strings.ContainsFunc(name, func(r rune) bool { return r >= 0x80 }) {
		h.Flags |= flagUTF8
	}
	if h.UncompressedSize64 >= 1<<32-1 {
		h.Flags |= flagDescriptor // sizes beyond 32 bits stand behind the content: archive/zip does not put them in front
	}
	body := data
	if !compressedAlready[strings.ToLower(path.Ext(name))] {
		small, err := p.deflated(data)
		if err != nil {
			return err
		}
		if len(small) < len(data) && plausible(uint64(len(small)), uint64(len(data))) {
			h.Method, h.CompressedSize64, body = zip.Deflate, uint64(len(small)), small
		}
	}
	w, err := z.CreateRaw(h)
	if err != nil {
		return err
	}
	_, err = w.Write(body)
	return err
}

// deflated returns data deflated, until the next call.
func (p *packer) deflated(data []byte) ([]byte, error) {
	p.small.Reset()
	p.deflater.Reset(&p.small)
	if _, err := p.deflater.Write(data); err != nil {
		return nil, err
	}
	if err := p.deflater.Close(); err != nil {
		return nil, err
	}
	return p.small.Bytes(), nil
}
