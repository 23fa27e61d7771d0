package bundle

import (
	"archive/zip"
	"bytes"
	"crypto/x509"
	"io"
	"math/rand/v2"
	"strings"
	"sync"
	"testing"
	"time"

	"assaywrit/evidence/bundle/cms"
	"assaywrit/evidence/bundle/identity"
)

// Everything here is invented.

var (
	validFrom = time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)
	validTo   = time.Date(2031, 1, 1, 0, 0, 0, 0, time.UTC)
	signedAt  = time.Date(2026, 12, 1, 9, 30, 0, 0, time.UTC)
)

func testHeader() Header {
	return Header{
		Case: "C-0417", SampleCode: "S-100200", Laboratory: "LAB-07", EngineName: "assaywrit", EngineVersion: "1.0.0", Toolchain: "go1.26",
		Signatories: []Signatory{{Person: "P-04", Position: "reviewer", Meaning: "reviewed"}, {Person: "P-05", Position: "certifying scientist", Meaning: "authorised"}},
	}
}

func testPayload() []Payload {
	return []Payload{
		{"inputs/case/case.yaml", []byte("case: C-0417\nsample: S-100200\n")},
		{"inputs/case/raw/001.mzML", []byte(strings.Repeat("<spectrum>AAAAAAAAAAA=</spectrum>\n", 40))},
		{"inputs/case/raw/Überprüfung é.csv", []byte("time_min,counts\n0,0\n0.1,3\n")},
		{"evidence/evidence.json", []byte(`{"format":"x"}`)},
		{"decision/finding.json", []byte(`{"outcome":"not-determined"}`)},
		{"report/package.pdf", []byte("%PDF-1.7 not really\n")},
		{"report/empty.txt", nil},
	}
}

func written(t testing.TB, h Header, payload []Payload) []byte {
	t.Helper()
	var out bytes.Buffer
	if _, err := Write(&out, h, payload); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func opened(t testing.TB, data []byte) *Bundle {
	t.Helper()
	b, err := Open(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	return b
}

type staff struct {
	root   *identity.Identity
	people map[string]*identity.Identity
}

// laboratory is a root and its signatories, from fixed random bytes.
var laboratory = sync.OnceValue(func() staff { return hire(1, false) })

func hire(seed byte, demonstration bool) staff {
	random := rand.NewChaCha8([32]byte{seed})
	root, err := identity.NewRoot(identity.RootOptions{Laboratory: "LAB-07", NotBefore: validFrom, NotAfter: validTo, Demonstration: demonstration, Rand: random})
	if err != nil {
		panic(err)
	}
	s := staff{root, map[string]*identity.Identity{}}
	for _, person := range []string{"P-04", "P-05", "P-99"} {
		if s.people[person], err = identity.NewSignatory(root, identity.SignatoryOptions{Person: person, Position: "x", NotBefore: validFrom, NotAfter: validTo, Demonstration: demonstration, Rand: random}); err != nil {
			panic(err)
		}
	}
	return s
}

func signature(t testing.TB, b *Bundle, id *identity.Identity, meaning string) []byte {
	t.Helper()
	p7s, err := cms.Sign(b.StatementBytes(), cms.SignOptions{Signer: id.Key, Certificate: id.Certificate, Time: signedAt, Meaning: meaning})
	if err != nil {
		t.Fatal(err)
	}
	return p7s
}

func withSignature(t testing.TB, data []byte, name string, id *identity.Identity, meaning string) []byte {
	t.Helper()
	b := opened(t, data)
	var out bytes.Buffer
	if err := AddSignature(&out, b, name, signature(t, b, id, meaning)); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// signedBundle is the test bundle with both signatures.
func signedBundle(t testing.TB) []byte {
	t.Helper()
	lab := laboratory()
	data := withSignature(t, written(t, testHeader(), testPayload()), "P-04-reviewed.p7s", lab.people["P-04"], "reviewed")
	return withSignature(t, data, "P-05-authorised.p7s", lab.people["P-05"], "authorised")
}

func trusted() []*x509.Certificate { return []*x509.Certificate{laboratory().root.Certificate} }

// unzipped reads all entries of a zip, in order, with the standard library.
func unzipped(t testing.TB, data []byte) (names []string, content map[string][]byte) {
	t.Helper()
	r, err := zip.NewReader(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	content = map[string][]byte{}
	for _, f := range r.File {
		rc, err := f.Open()
		if err != nil {
			t.Fatal(err)
		}
		body, err := io.ReadAll(rc)
		if err != nil {
			t.Fatalf("%s: %v", f.Name, err)
		}
		names = append(names, f.Name)
		content[f.Name] = body
	}
	return names, content
}

// zipped packs entries as another tool would: stored, with data descriptors.
func zipped(t testing.TB, names []string, content map[string][]byte) []byte {
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

// deflated packs data with a packer of its own.
func deflated(data []byte) ([]byte, error) {
	p, err := newPacker()
	if err != nil {
		return nil, err
	}
	return p.deflated(data)
}
