package bundle

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
)

func text(s string) func(io.Writer) error {
	return func(w io.Writer) error { _, err := io.WriteString(w, s); return err }
}

// holds checks that a folder has exactly these files, given as name=content.
func holds(t *testing.T, dir string, want ...string) {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, e := range entries {
		data, err := os.ReadFile(filepath.Join(dir, e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		got = append(got, e.Name()+"="+string(data))
	}
	if strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("the folder holds %q, want %q", got, want)
	}
}

func TestWriteFileAtomic(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "case.zip")
	if err := WriteFileAtomic(path, false, text("one")); err != nil {
		t.Fatal(err)
	}
	holds(t, dir, "case.zip=one")
	if err := WriteFileAtomic(path, false, text("two")); !errors.Is(err, fs.ErrExist) {
		t.Errorf("over an existing file: %v", err)
	}
	holds(t, dir, "case.zip=one")
	if err := WriteFileAtomic(path, true, text("three")); err != nil {
		t.Error(err)
	}
	holds(t, dir, "case.zip=three")
	if err := WriteFileAtomic(filepath.Join(dir, "new.zip"), true, text("four")); err != nil {
		t.Error(err)
	}
	holds(t, dir, "case.zip=three", "new.zip=four")
}

func TestFailedWriteLeavesNothing(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "case.zip")
	fails := func(w io.Writer) error {
		if _, err := io.WriteString(w, "half"); err != nil {
			return err
		}
		return errFull
	}
	if err := WriteFileAtomic(path, false, fails); !errors.Is(err, errFull) {
		t.Error(err)
	}
	holds(t, dir)
	if err := WriteFileAtomic(path, false, text("old")); err != nil {
		t.Fatal(err)
	}
	if err := WriteFileAtomic(path, true, fails); !errors.Is(err, errFull) {
		t.Error(err)
	}
	holds(t, dir, "case.zip=old")
	func() {
		defer func() { _ = recover() }()
		_ = WriteFileAtomic(path, true, func(io.Writer) error { panic("in the middle") })
	}()
	holds(t, dir, "case.zip=old")
	// The disk that is full while a bundle is written.
	if err := WriteFileAtomic(path, true, func(w io.Writer) error {
		_, err := Write(io.MultiWriter(w, &failingWriter{500}), testHeader(), testPayload())
		return err
	}); !errors.Is(err, errFull) {
		t.Error(err)
	}
	holds(t, dir, "case.zip=old")
}

func TestFileAppearsMeanwhile(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "case.zip")
	err := WriteFileAtomic(path, false, func(w io.Writer) error {
		if err := os.WriteFile(path, []byte("theirs"), 0o600); err != nil {
			return err
		}
		return text("ours")(w)
	})
	if !errors.Is(err, fs.ErrExist) {
		t.Error(err)
	}
	holds(t, dir, "case.zip=theirs")
}

func TestManyWritersOneWins(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "case.zip")
	var done atomic.Int32
	var wg sync.WaitGroup
	for range 16 {
		wg.Go(func() {
			switch err := WriteFileAtomic(path, false, text("whole")); {
			case err == nil:
				done.Add(1)
			case !errors.Is(err, fs.ErrExist):
				t.Error(err)
			}
		})
	}
	wg.Wait()
	if done.Load() != 1 {
		t.Errorf("%d writers were told that they wrote the file", done.Load())
	}
	holds(t, dir, "case.zip=whole")
}

func TestUnwritablePlaces(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "file")
	if err := os.WriteFile(file, []byte("x"), 0o600); err != nil {
		t.Fatal(err)
	}
	if err := os.Mkdir(filepath.Join(dir, "folder"), 0o700); err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{filepath.Join(file, "case.zip"), filepath.Join(dir, "none", "case.zip"), filepath.Join(dir, "folder")} {
		called := false
		for _, overwrite := range []bool{false, true} {
			if err := WriteFileAtomic(path, overwrite, func(io.Writer) error { called = true; return nil }); err == nil || called {
				t.Errorf("%s: %v, the content was asked for: %v", path, err, called)
			}
		}
	}
	if err := os.Remove(filepath.Join(dir, "folder")); err != nil {
		t.Errorf("something was left in the folder: %v", err)
	}
	holds(t, dir, "file=x")
}

func TestModes(t *testing.T) {
	if runtime.GOOS == "windows" {
		t.Skip("Windows has no such modes: this check was not made")
	}
	path := filepath.Join(t.TempDir(), "key.pem")
	mode := func() fs.FileMode {
		info, err := os.Stat(path)
		if err != nil {
			t.Fatal(err)
		}
		return info.Mode().Perm()
	}
	if err := WriteFileAtomicMode(path, 0o600, false, func(w io.Writer) error {
		if got := w.(*os.File); got != nil {
			if info, err := got.Stat(); err != nil || info.Mode().Perm() != 0o600 {
				t.Errorf("while it is written: %v, %v", info.Mode(), err)
			}
		}
		return nil
	}); err != nil || mode() != 0o600 {
		t.Errorf("%v, %v", mode(), err)
	}
	if err := os.Chmod(path, 0o640); err != nil {
		t.Fatal(err)
	}
	if err := WriteFileAtomic(path, true, text("x")); err != nil || mode() != 0o640 {
		t.Errorf("replaced: %v, %v", mode(), err)
	}
}
