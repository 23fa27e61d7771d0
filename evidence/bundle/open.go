package bundle

import (
	"archive/zip"
	"bufio"
	"bytes"
	"errors"
	"fmt"
	"hash/crc32"
	"io"
	"io/fs"
	"slices"
	"strings"

	"github.com/klauspost/compress/flate"
)

// maxStatement is the largest statement that is read, in octets.
const maxStatement = 1 << 20

// A Bundle is an opened bundle. Opening checks the container and reads the statement; CheckFiles and CheckSignatures check
// the rest. Its methods may be called at the same time.
type Bundle struct {
	zip       *zip.Reader
	files     map[string]*zip.File
	paths     []string // of files, in the order of the entries
	statement *Statement
	sealed    []byte // seal/statement.json
}

// Open opens a bundle. The file is taken as hostile; what is refused gives a *RefusedError: names that are there twice, escape,
// or collide on some systems, links, encrypted or oddly packed entries, sizes that lie, more than 200 to one of compression, data
// that no entry accounts for, and a statement that is missing or not in order.
func Open(r io.ReaderAt, size int64) (*Bundle, error) {
	z, err := zip.NewReader(r, size)
	if err != nil {
		if errors.Is(err, zip.ErrFormat) || errors.Is(err, io.ErrUnexpectedEOF) || errors.Is(err, io.EOF) {
			return nil, refuse("", "it is not a zip file (%v)", err)
		}
		return nil, fmt.Errorf("bundle: %w", err)
	}
	z.RegisterDecompressor(zip.Deflate, func(r io.Reader) io.ReadCloser { return flate.NewReader(r) })
	b := &Bundle{zip: z, files: map[string]*zip.File{}}
	if err := b.takeIn(z.File); err != nil {
		return nil, err
	}
	if err := (layout{r, size}).check(z.File); err != nil {
		return nil, err
	}
	return b, b.readStatement()
}

// takeIn checks the entries by what the directory says of them.
func (b *Bundle) takeIn(entries []*zip.File) error {
	if len(entries) > maxEntries {
		return refuse("", "it has %d entries, want %d at most", len(entries), maxEntries)
	}
	seen := newNames()
	folders := map[string]bool{}
	total := uint64(0)
	for _, f := range entries {
		name, isFolder := strings.CutSuffix(f.Name, "/")
		err := CheckPath(name)
		if err == nil {
			err = checkEntry(f)
		}
		if err == nil && !isFolder {
			err = seen.add(name)
		}
		if err != nil {
			return &RefusedError{Path: f.Name, Reason: err.Error()}
		}
		if isFolder {
			if folders[name] {
				return refuse(f.Name, "the name is there twice")
			}
			folders[name] = true
			continue
		}
		if f.UncompressedSize64 > maxTotal-total {
			return refuse(f.Name, "it unpacks to more than %d octets in all", int64(maxTotal))
		}
		total += f.UncompressedSize64
		b.files[name] = f
		b.paths = append(b.paths, name)
	}
	for _, f := range entries {
		if name, isFolder := strings.CutSuffix(f.Name, "/"); isFolder && !seen.folders[name] {
			return refuse(f.Name, "is a folder that holds no file")
		}
	}
	return nil
}

func (b *Bundle) readStatement() error {
	f := b.files[statementPath]
	if f == nil {
		return refuse(statementPath, "is missing: this is not a bundle")
	}
	if f.UncompressedSize64 > maxStatement {
		return refuse(statementPath, "has %d octets, want %d at most", f.UncompressedSize64, maxStatement)
	}
	var err error
	if b.sealed, err = b.ReadFile(statementPath); err != nil {
		return &RefusedError{Path: statementPath, Reason: err.Error()}
	}
	if b.statement, err = parseStatement(b.sealed); err != nil {
		return &RefusedError{Path: statementPath, Reason: err.Error()}
	}
	return nil
}

// Statement returns what the bundle says of itself. Do not change it.
func (b *Bundle) Statement() *Statement { return b.statement }

// StatementBytes returns seal/statement.json, which is what is signed.
func (b *Bundle) StatementBytes() []byte { return slices.Clone(b.sealed) }

// Paths returns the paths of all files, in the order in which they stand in the bundle.
func (b *Bundle) Paths() []string { return slices.Clone(b.paths) }

// PayloadPaths returns the paths of the payload files without their data/, sorted.
func (b *Bundle) PayloadPaths() []string {
	var list []string
	for _, p := range b.paths {
		if rest, ok := strings.CutPrefix(p, payloadFolder); ok {
			list = append(list, rest)
		}
	}
	slices.Sort(list)
	return list
}

// SignaturePaths returns the paths of the signature files, sorted.
func (b *Bundle) SignaturePaths() []string {
	var list []string
	for _, p := range b.paths {
		if isSignaturePath(p) {
			list = append(list, p)
		}
	}
	slices.Sort(list)
	return list
}

// isSignaturePath reports whether a file is a signature by its place and name.
func isSignaturePath(path string) bool {
	name, ok := strings.CutPrefix(path, signatureFolder)
	return ok && checkSignatureName(name) == nil
}

// ReadFile returns the content of a file by its whole path. The error wraps fs.ErrNotExist where there is none.
func (b *Bundle) ReadFile(path string) ([]byte, error) {
	f := b.files[path]
	if f == nil {
		return nil, fmt.Errorf("%q: %w in the bundle", path, fs.ErrNotExist)
	}
	out := bytes.NewBuffer(make([]byte, 0, f.UncompressedSize64)) // a size that Open found plausible
	if err := unpack(out, f); err != nil {
		return nil, fmt.Errorf("%q: %w", path, err)
	}
	return out.Bytes(), nil
}

// ReadPayload returns the content of a payload file by its path without data/.
func (b *Bundle) ReadPayload(path string) ([]byte, error) { return b.ReadFile(payloadFolder + path) }

// PayloadFS returns the payload as a file system, data/ left out. Its files are checked against their checksums in the
// zip as they are read, not against the manifest: that is for CheckFiles.
func (b *Bundle) PayloadFS() fs.FS {
	sub, err := fs.Sub(b.zip, strings.TrimSuffix(payloadFolder, "/"))
	if err != nil {
		panic("bundle: internal error: " + err.Error())
	}
	return sub
}

// unpack writes the content of an entry. It must have exactly the size and checksum that the directory states, and take up
// all of the packed octets.
func unpack(w io.Writer, f *zip.File) error {
	raw, err := f.OpenRaw()
	if err != nil {
		return err
	}
	packed := bufio.NewReader(raw)
	var content io.Reader = packed
	if f.Method == zip.Deflate {
		content = flate.NewReader(packed)
	}
	sum := crc32.NewIEEE()
	n, err := io.Copy(io.MultiWriter(w, sum), io.LimitReader(content, int64(f.UncompressedSize64)+1))
	switch {
	case err != nil:
		return fmt.Errorf("cannot be unpacked: %w", err)
	case uint64(n) != f.UncompressedSize64:
		return fmt.Errorf("does not unpack to the %d octets that the zip states", f.UncompressedSize64)
	case sum.Sum32() != f.CRC32:
		return errors.New("does not have the checksum that the zip states")
	}
	if _, err := packed.ReadByte(); err != io.EOF {
		return errors.New("holds other data behind its content")
	}
	return nil
}
