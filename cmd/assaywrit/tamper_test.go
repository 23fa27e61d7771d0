package main

import (
	"archive/zip"
	"bytes"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"assaywrit/evidence/bundle"
)

// repacked writes entries as a zip of their own, stored, in the given order.
func repacked(t testing.TB, names []string, content map[string][]byte) []byte {
	t.Helper()
	var out bytes.Buffer
	w := zip.NewWriter(&out)
	for _, name := range names {
		f, err := w.CreateHeader(&zip.FileHeader{Name: name, Method: zip.Store})
		if err != nil {
			t.Fatal(err)
		}
		if _, err := f.Write(content[name]); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// verified runs the verify command over a bundle and returns its status and what it printed.
func verified(t testing.TB, data []byte, flags ...string) (int, string, string) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "altered.zip")
	if err := os.WriteFile(path, data, 0o600); err != nil {
		t.Fatal(err)
	}
	var out, errs bytes.Buffer
	args := append([]string{"verify", "--trust", filepath.Join(demoFolder(t), "root.pem")}, flags...)
	status := run(append(args, path), nil, &out, &errs)
	return status, out.String(), errs.String()
}

func TestRepackedBundleHolds(t *testing.T) {
	names, content := unzipped(t, demoBundle(t))
	if status, _, errs := verified(t, repacked(t, names, content)); status != exitDone {
		t.Fatalf("status %d: a faithful copy does not hold, so the tests below would prove nothing:\n%s", status, errs)
	}
}

// TestEveryFileIsGuarded changes one byte at a random position of every file in turn (fixed seed).
func TestEveryFileIsGuarded(t *testing.T) {
	names, content := unzipped(t, demoBundle(t))
	rnd := rand.New(rand.NewPCG(2026, 12))
	for _, name := range names {
		original := content[name]
		if len(original) == 0 {
			t.Errorf("%s is empty", name)
			continue
		}
		at, flip := rnd.IntN(len(original)), byte(1)<<rnd.IntN(8)
		altered := slices.Clone(original)
		altered[at] ^= flip
		content[name] = altered
		status, out, errs := verified(t, repacked(t, names, content))
		content[name] = original
		want := exitFiles
		if strings.HasSuffix(name, ".p7s") {
			want = exitSignatures
		}
		if status != want {
			t.Errorf("%s, byte %d ^ %#x: status %d, want %d\n%s", name, at, flip, status, want, errs)
		}
		if !strings.Contains(errs, name) {
			t.Errorf("%s, byte %d ^ %#x: the file is not named:\n%s", name, at, flip, errs)
		}
		if strings.Contains(out, ": holds\n") {
			t.Errorf("%s: said to hold", name)
		}
	}
}

// TestEveryByteOfTheStatementIsGuarded flips a bit in each byte of the statement, one after the other.
func TestEveryByteOfTheStatementIsGuarded(t *testing.T) {
	const statement = "seal/statement.json"
	names, content := unzipped(t, demoBundle(t))
	original := content[statement]
	roots, err := readCertificates([]string{filepath.Join(demoFolder(t), "root.pem")})
	if err != nil {
		t.Fatal(err)
	}
	for at := range original {
		altered := slices.Clone(original)
		altered[at] ^= byte(1) << (at % 8)
		content[statement] = altered
		data := repacked(t, names, content)
		b, err := bundle.Open(bytes.NewReader(data), int64(len(data)))
		if err != nil {
			if !strings.Contains(err.Error(), statement) {
				t.Fatalf("byte %d: refused without naming the file: %v", at, err)
			}
			continue // refused while opening: status 4, as openBundle gives it
		}
		v := verification{b: b, roots: roots}
		v.files()
		v.signatures()
		if s := v.status(); s != exitFiles && s != exitSignatures {
			t.Fatalf("byte %d: status %d", at, s)
		}
		named := slices.ContainsFunc(v.seen, func(o observation) bool { return !o.Holds && strings.Contains(o.Subject+o.Detail, statement) })
		if !named {
			t.Fatalf("byte %d: the file is not named: %+v", at, v.seen)
		}
	}
}

// TestMissingAndAddedFiles takes each file out in turn, and puts a stranger in.
func TestMissingAndAddedFiles(t *testing.T) {
	names, content := unzipped(t, demoBundle(t))
	for i, name := range names {
		rest := slices.Delete(slices.Clone(names), i, i+1)
		status, _, errs := verified(t, repacked(t, rest, content))
		if status != exitFiles && status != exitSignatures {
			t.Errorf("without %s: status %d", name, status)
		}
		if !strings.HasSuffix(name, ".p7s") && !strings.Contains(errs, name) {
			t.Errorf("without %s: the file is not named:\n%s", name, errs)
		}
	}
	for _, stranger := range []string{"data/extra.txt", "seal/extra.txt", "extra.txt", "data/../escape.txt", "/absolute.txt", `data\back.txt`} {
		content[stranger] = []byte("x")
		status, _, errs := verified(t, repacked(t, append(slices.Clone(names), stranger), content))
		if status != exitFiles || !strings.Contains(errs, "txt") {
			t.Errorf("with %s: status %d\n%s", stranger, status, errs)
		}
	}
}

// TestResealedForgery changes the result in evidence.json and rebuilds every hash over it, as a forger with the program's
// source would: the signatures no longer fit, and without signatures running again gives the forgery away.
func TestResealedForgery(t *testing.T) {
	_, content := unzipped(t, demoBundle(t))
	a := demoAssessment(t)
	var payload []bundle.Payload
	for name, data := range content {
		if path, ok := strings.CutPrefix(name, "data/"); ok {
			if path == evidencePath {
				data = bytes.Replace(data, []byte(`"ng_per_ml":`), []byte(`"ng_per_ml":1`), 1)
			}
			payload = append(payload, bundle.Payload{Path: path, Data: data})
		}
	}
	slices.SortFunc(payload, func(x, y bundle.Payload) int { return strings.Compare(x.Path, y.Path) })
	var out bytes.Buffer
	if _, err := bundle.Write(&out, a.header(), payload); err != nil {
		t.Fatal(err)
	}
	status, _, errs := verified(t, out.Bytes(), "--allow-unsigned")
	if status != exitValues || !strings.Contains(errs, "evidence.json#/") {
		t.Errorf("status %d, want %d with the place named:\n%s", status, exitValues, errs)
	}
	if status, _, _ := verified(t, out.Bytes()); status != exitSignatures {
		t.Errorf("unsigned: status %d, want %d", status, exitSignatures)
	}
}

// TestUntrustedRoot verifies with no root given: certificates that come with a bundle are never trusted by themselves.
func TestUntrustedRoot(t *testing.T) {
	path := filepath.Join(t.TempDir(), "b.zip")
	if err := os.WriteFile(path, demoBundle(t), 0o600); err != nil {
		t.Fatal(err)
	}
	var out, errs bytes.Buffer
	if status := run([]string{"verify", path}, nil, &out, &errs); status != exitSignatures {
		t.Errorf("without a trusted root: status %d\n%s", status, errs.String())
	}
}
