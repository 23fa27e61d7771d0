package bundle

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"syscall"
)

// WriteFileAtomic writes a file whole or not at all, with mode 0666 less the umask. See WriteFileAtomicMode.
func WriteFileAtomic(path string, overwrite bool, write func(io.Writer) error) error {
	return WriteFileAtomicMode(path, 0o666, overwrite, write)
}

// WriteFileAtomicMode writes a file so that, whatever happens, the path holds what it held before or all of what was
// written, and the content is on the disk when it returns. A new file gets the mode perm, less the umask; one that is
// replaced keeps its own. It writes a file beside the path (.NAME.N.part), syncs it, and gives it its name; then it syncs
// the folder where the system can.
//
// Without overwrite, an existing file is left alone and the error wraps fs.ErrExist, also when the file appears in the
// meantime (on file systems that have no hard links, within a moment). A symbolic link at the path is replaced, not followed.
func WriteFileAtomicMode(path string, perm fs.FileMode, overwrite bool, write func(io.Writer) error) (err error) {
	before, statErr := os.Lstat(path)
	switch {
	case statErr == nil && !overwrite:
		return &fs.PathError{Op: "create", Path: path, Err: fs.ErrExist}
	case statErr == nil && before.IsDir():
		return &fs.PathError{Op: "replace", Path: path, Err: errors.New("is a folder")}
	case statErr == nil && before.Mode().IsRegular():
		perm = before.Mode().Perm()
	}
	f, err := besideFile(path, perm)
	if err != nil {
		return err
	}
	defer func() { // also when write panics; after the rename there is nothing to remove
		f.Close()
		if e := os.Remove(f.Name()); e != nil && !errors.Is(e, fs.ErrNotExist) && err == nil {
			err = e
		}
	}()
	if err := write(f); err != nil {
		return err
	}
	if statErr == nil {
		if err := f.Chmod(perm); err != nil && runtime.GOOS != "windows" { // the umask does not apply to what was there
			return err
		}
	}
	if err := f.Sync(); err != nil {
		return err
	}
	if err := f.Close(); err != nil {
		return err
	}
	if err := giveName(f.Name(), path, overwrite); err != nil {
		return err
	}
	return syncFolder(filepath.Dir(path))
}

// besideFile creates a file in the folder of path under a name that is not taken.
func besideFile(path string, perm fs.FileMode) (*os.File, error) {
	dir, base := filepath.Split(path)
	for n := 0; ; n++ {
		name := filepath.Join(dir, fmt.Sprintf(".%s.%d-%d.part", base, os.Getpid(), n))
		f, err := os.OpenFile(name, os.O_CREATE|os.O_EXCL|os.O_WRONLY, perm)
		if err == nil || !errors.Is(err, fs.ErrExist) || n == 1000 {
			return f, err
		}
	}
}

// giveName gives the finished file its name.
func giveName(from, to string, overwrite bool) error {
	if overwrite {
		return os.Rename(from, to)
	}
	// A hard link, unlike a rename, fails where the name is taken.
	err := os.Link(from, to)
	if err == nil || errors.Is(err, fs.ErrExist) {
		return err
	}
	if _, e := os.Lstat(to); e == nil {
		return &fs.PathError{Op: "create", Path: to, Err: fs.ErrExist}
	}
	return os.Rename(from, to)
}

// syncFolder makes a new name last. Windows has no such call, and some file systems refuse it.
func syncFolder(dir string) error {
	if runtime.GOOS == "windows" {
		return nil
	}
	d, err := os.Open(dir)
	if err != nil {
		return err
	}
	defer d.Close()
	if err := d.Sync(); err != nil && !errors.Is(err, syscall.EINVAL) && !errors.Is(err, errors.ErrUnsupported) {
		return err
	}
	return nil
}
