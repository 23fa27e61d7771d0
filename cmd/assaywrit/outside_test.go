package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// program finds an outside program. Where it is absent the test is skipped, except in continuous integration, where
// every test must run.
func program(t testing.TB, name string) string {
	t.Helper()
	path, err := exec.LookPath(name)
	if err != nil {
		if os.Getenv("CI") != "" {
			t.Fatalf("%s is not installed, and nothing may be skipped here", name)
		}
		t.Skipf("%s is not installed: this check was not made", name)
	}
	return path
}

func unzipInto(t testing.TB, data []byte) string {
	t.Helper()
	dir := t.TempDir()
	names, content := unzipped(t, data)
	for _, name := range names {
		path := filepath.Join(dir, filepath.FromSlash(name))
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, content[name], 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// TestWithoutThisProgram checks the demo bundle with the commands that the package prints, and shows that they notice a change.
func TestWithoutThisProgram(t *testing.T) {
	sum, openssl := program(t, "sha256sum"), program(t, "openssl")
	dir := unzipInto(t, demoBundle(t))
	root, err := filepath.Abs(filepath.Join(demoFolder(t), "root.pem"))
	if err != nil {
		t.Fatal(err)
	}
	call := func(name string, args ...string) error {
		cmd := exec.Command(name, args...)
		cmd.Dir = dir
		out, err := cmd.CombinedOutput()
		t.Logf("%s %s\n%.600s", filepath.Base(name), strings.Join(args, " "), out)
		return err
	}
	signatures, err := filepath.Glob(filepath.Join(dir, "seal", "signatures", "*.p7s"))
	if err != nil || len(signatures) != 2 {
		t.Fatalf("want two signatures, got %v", signatures)
	}
	checks := func() (hashes, tags error, sigs []error) {
		hashes = call(sum, "-c", "manifest-sha256.txt")
		tags = call(sum, "-c", "tagmanifest-sha256.txt")
		for _, s := range signatures {
			sigs = append(sigs, call(openssl, "cms", "-verify", "-binary", "-inform", "DER", "-in", s, "-content", "seal/statement.json",
				"-CAfile", root, "-purpose", "any", "-out", os.DevNull))
		}
		return hashes, tags, sigs
	}
	hashes, tags, sigs := checks()
	if hashes != nil || tags != nil || sigs[0] != nil || sigs[1] != nil {
		t.Fatalf("the untouched bundle: %v %v %v", hashes, tags, sigs)
	}
	flip(t, filepath.Join(dir, "data", "evidence", "evidence.json"))
	flip(t, filepath.Join(dir, "seal", "statement.json"))
	hashes, tags, sigs = checks()
	if hashes == nil || tags == nil || sigs[0] == nil || sigs[1] == nil {
		t.Errorf("a change was not noticed: %v %v %v", hashes, tags, sigs)
	}
}

func flip(t testing.TB, path string) {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	data[len(data)/2] ^= 1
	if err := os.WriteFile(path, data, 0o666); err != nil {
		t.Fatal(err)
	}
}

// TestSameBytesOnAnotherProcessor builds the program for arm64, lets it make the demo under emulation, and compares the
// evidence, the finding and the raw files byte for byte.
func TestSameBytesOnAnotherProcessor(t *testing.T) {
	if testing.Short() {
		t.Skip("builds the whole program for another processor: not in short mode")
	}
	qemu := program(t, "qemu-aarch64-static")
	dir := t.TempDir()
	binary := filepath.Join(dir, "assaywrit-arm64")
	build := exec.Command("go", "build", "-tags", "minimal", "-o", binary, ".")
	build.Env = append(os.Environ(), "GOOS=linux", "GOARCH=arm64", "CGO_ENABLED=0")
	if out, err := build.CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	if out, err := exec.Command(qemu, binary, "demo", filepath.Join(dir, "demo")).CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	there, err := filepath.Glob(filepath.Join(dir, "demo", "*.zip"))
	if err != nil || len(there) != 1 {
		t.Fatalf("want one bundle, got %v", there)
	}
	data, err := os.ReadFile(there[0])
	if err != nil {
		t.Fatal(err)
	}
	names, here := unzipped(t, demoBundle(t))
	_, other := unzipped(t, data)
	compared := 0
	for _, name := range names {
		if strings.HasPrefix(name, "data/evidence/") || strings.HasPrefix(name, "data/decision/") || strings.HasPrefix(name, "data/inputs/") {
			compared++
			if !bytes.Equal(here[name], other[name]) {
				t.Errorf("%s differs between processors", name)
			}
		}
	}
	if compared < 20 {
		t.Errorf("only %d files were compared", compared)
	}
}

// TestNoSpaceLeft lets the program build where a file may not grow beyond 150 kB (the shell's limit on file sizes), as on a disk
// that is full: it fails, and leaves nothing behind.
func TestNoSpaceLeft(t *testing.T) {
	shell := program(t, "bash")
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	folder, err := filepath.Abs(filepath.Join(demoFolder(t), "case"))
	if err != nil {
		t.Fatal(err)
	}
	// This test's own binary runs as assaywrit under that name: see TestMain.
	command := filepath.Join(t.TempDir(), "assaywrit")
	if err := os.Symlink(self, command); err != nil {
		t.Skipf("no symbolic links here: this check was not made (%v)", err)
	}
	cmd := exec.Command(shell, "-c", `ulimit -f 150; exec "$0" build "$1" -o out.zip`, command, folder)
	cmd.Dir = dir
	out, err := cmd.CombinedOutput()
	if cmd.ProcessState == nil || cmd.ProcessState.ExitCode() != exitFailed {
		t.Errorf("%v, want exit status %d\n%s", err, exitFailed, out)
	}
	if left := tree(t, dir); left != "." {
		t.Errorf("left behind: %s\n%s", left, out)
	}
}
