package evidence

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io"
	"io/fs"

	"assaywrit/evidence/trace"
)

// open gives the bytes of a file of the case folder. A file on disk is read piece by piece, as a reader asks; one in an archive is
// held in memory. done closes it.
func open(fsys fs.FS, name string) (src trace.Source, done func() error, err error) {
	f, err := fsys.Open(name)
	if err != nil {
		return nil, nil, err
	}
	info, err := f.Stat()
	if err != nil {
		f.Close()
		return nil, nil, err
	}
	if !info.Mode().IsRegular() {
		f.Close()
		return nil, nil, fmt.Errorf("%s: is no plain file", name)
	}
	if at, ok := f.(io.ReaderAt); ok {
		return io.NewSectionReader(at, 0, info.Size()), f.Close, nil
	}
	data, err := fs.ReadFile(fsys, name)
	return bytes.NewReader(data), f.Close, err
}

// hashFile returns the size and the SHA-256 of a file, in hex.
func hashFile(fsys fs.FS, name string) (int64, string, error) {
	f, err := fsys.Open(name)
	if err != nil {
		return 0, "", err
	}
	defer f.Close()
	sum := sha256.New()
	n, err := io.CopyBuffer(struct{ io.Writer }{sum}, struct{ io.Reader }{f}, make([]byte, 1<<17))
	if err != nil {
		return 0, "", fmt.Errorf("%s: %w", name, err)
	}
	return n, hex.EncodeToString(sum.Sum(nil)), nil
}
