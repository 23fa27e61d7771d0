package bundle

import (
	"archive/zip"
	"bytes"
	"errors"
	"io"
	"io/fs"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/google/go-cmp/cmp"
	"github.com/google/uuid"
)

func TestWriteAndOpen(t *testing.T) {
	var out bytes.Buffer
	st, err := Write(&out, testHeader(), testPayload())
	if err != nil {
		t.Fatal(err)
	}
	b := opened(t, out.Bytes())
	if d := cmp.Diff(st, b.Statement()); d != "" {
		t.Error(d)
	}
	if problems := b.CheckFiles(); len(problems) > 0 {
		t.Error(problems)
	}
	for _, p := range testPayload() {
		data, err := b.ReadPayload(p.Path)
		if err != nil || !bytes.Equal(data, p.Data) {
			t.Errorf("%s: %q, %v", p.Path, data, err)
		}
	}
	if _, err := b.ReadFile("data/none"); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("a missing file: %v", err)
	}
	var want []string
	for _, p := range testPayload() {
		want = append(want, p.Path)
	}
	if err := fstest.TestFS(b.PayloadFS(), want...); err != nil {
		t.Error(err)
	}
	slices.Sort(want)
	if d := cmp.Diff(want, b.PayloadPaths()); d != "" {
		t.Error(d)
	}
	if id, err := uuid.Parse(st.BundleID); err != nil || id.Version() != 8 || id.Variant() != uuid.RFC4122 {
		t.Errorf("bundle id %s: %v", st.BundleID, err)
	}
	if got := b.Paths()[:4]; !slices.Equal(got, []string{"bagit.txt", "bag-info.txt", "manifest-sha256.txt", "tagmanifest-sha256.txt"}) {
		t.Errorf("order %v", got)
	}
}

func TestSameBytes(t *testing.T) {
	first := written(t, testHeader(), testPayload())
	payload := testPayload()
	rand.New(rand.NewPCG(1, 2)).Shuffle(len(payload), func(i, j int) { payload[i], payload[j] = payload[j], payload[i] })
	if !bytes.Equal(first, written(t, testHeader(), payload)) {
		t.Error("two writes of the same payload, in another order, differ")
	}
	// The order in which people sign leaves no trace.
	lab := laboratory()
	other := withSignature(t, first, "P-05-authorised.p7s", lab.people["P-05"], "authorised")
	other = withSignature(t, other, "P-04-reviewed.p7s", lab.people["P-04"], "reviewed")
	if !bytes.Equal(signedBundle(t), other) {
		t.Error("the same signatures in another order give other bytes")
	}
	directory, _, _, err := (layout{bytes.NewReader(first), int64(len(first))}).end()
	if err != nil || !bytes.HasPrefix(other, first[:directory]) {
		t.Errorf("signing changed entries that were there (%v)", err)
	}
}

func TestSignedBundle(t *testing.T) {
	unsigned := opened(t, written(t, testHeader(), testPayload()))
	if d := cmp.Diff(testHeader().Signatories, MissingSignatories(unsigned)); d != "" {
		t.Error(d)
	}
	b := opened(t, signedBundle(t))
	if problems := b.CheckFiles(); len(problems) > 0 {
		t.Error(problems)
	}
	if missing := MissingSignatories(b); len(missing) > 0 {
		t.Error(missing)
	}
	results := CheckSignatures(b, trusted())
	if len(results) != 2 {
		t.Fatalf("%+v", results)
	}
	for i, want := range []SignatureResult{
		{File: "seal/signatures/P-04-reviewed.p7s", Person: "P-04", Position: "reviewer", Meaning: "reviewed", SigningTime: signedAt, Trusted: true},
		{File: "seal/signatures/P-05-authorised.p7s", Person: "P-05", Position: "certifying scientist", Meaning: "authorised", SigningTime: signedAt, Trusted: true},
	} {
		c := laboratory().people[want.Person].Certificate
		want.Subject, want.CertificateFingerprint = c.Subject.String(), hexSum(c.Raw)
		if d := cmp.Diff(want, results[i]); d != "" {
			t.Error(d)
		}
	}
	for _, r := range CheckSignatures(b, nil) {
		if r.Trusted || r.Problem != "" {
			t.Errorf("without roots: %+v", r)
		}
	}
}

func TestWriteRefuses(t *testing.T) {
	one := []Payload{{"a", []byte("x")}}
	for _, tt := range []struct {
		name, want string
		change     func(*Header) []Payload
	}{
		{"no payload", "0 payload files", func(*Header) []Payload { return nil }},
		{"no case", "case is empty", func(h *Header) []Payload { h.Case = ""; return one }},
		{"two lines", "one line", func(h *Header) []Payload { h.Laboratory = "LAB\nPayload-Oxum: 1.1"; return one }},
		{"not UTF-8", "UTF-8", func(h *Header) []Payload { h.SampleCode = "\xff"; return one }},
		{"unknown meaning", "signatories.meaning", func(h *Header) []Payload { h.Signatories[0].Meaning = "seen"; return one }},
		{"signatory twice", "named twice", func(h *Header) []Payload { h.Signatories[1] = h.Signatories[0]; return one }},
		{"no hash", "64 hexadecimal", func(h *Header) []Payload {
			h.Supersedes = &Supersedes{Root: "abc", Reason: "a value was wrong"}
			return one
		}},
		{"no reason", "supersedes.reason", func(h *Header) []Payload {
			h.Supersedes = &Supersedes{Root: strings.Repeat("0", 64), Reason: " "}
			return one
		}},
		{"hash of no file", "no payload file", func(h *Header) []Payload { h.EvidenceSHA256 = strings.Repeat("0", 64); return one }},
		{"twice", "twice", func(*Header) []Payload { return []Payload{{"a", nil}, {"a", nil}} }},
		{"escape", `".."`, func(*Header) []Payload { return []Payload{{"../a", nil}} }},
	} {
		h := testHeader()
		payload := tt.change(&h)
		var out bytes.Buffer
		if _, err := Write(&out, h, payload); err == nil || !strings.Contains(err.Error(), tt.want) || out.Len() > 0 {
			t.Errorf("%s: %v, %d bytes written", tt.name, err, out.Len())
		}
	}
}

func TestOptionalPartsOfTheStatement(t *testing.T) {
	h := testHeader()
	h.Demonstration, h.Signatories = true, nil
	h.EvidenceSHA256, h.FindingSHA256 = hexSum([]byte(`{"format":"x"}`)), hexSum([]byte(`{"outcome":"not-determined"}`))
	h.Supersedes = &Supersedes{Root: strings.Repeat("ab", 32), Reason: "the dilution was entered wrongly;\nsee documents/note.pdf"}
	b := opened(t, written(t, h, testPayload()))
	if problems := b.CheckFiles(); len(problems) > 0 {
		t.Error(problems)
	}
	st := b.Statement()
	if d := cmp.Diff(h.Supersedes, st.Supersedes); d != "" || !st.Demonstration || st.EvidenceSHA256 != h.EvidenceSHA256 || len(st.Signatories) != 0 {
		t.Errorf("%s %+v", d, st)
	}
	info, err := b.ReadFile("bag-info.txt")
	if err != nil || !strings.Contains(string(info), "(DEMONSTRATION, NOT VALID)") {
		t.Errorf("%s %v", info, err)
	}
}

// failingWriter fails after so many bytes.
type failingWriter struct{ left int }

var errFull = errors.New("no space left")

func (w *failingWriter) Write(p []byte) (int, error) {
	if w.left -= len(p); w.left < 0 {
		return 0, errFull
	}
	return len(p), nil
}

func TestWriteToAFullDisk(t *testing.T) {
	for _, room := range []int{0, 4096} {
		payload := append(testPayload(), Payload{"report/large.pdf", make([]byte, 20000)})
		if _, err := Write(&failingWriter{room}, testHeader(), payload); !errors.Is(err, errFull) {
			t.Errorf("room for %d: %v", room, err)
		}
	}
}

// TestPackedAlone compares each deflated entry with what a packer gives that has packed nothing before.
func TestPackedAlone(t *testing.T) {
	payload := append(batch(30, 3000), Payload{"large.csv", bytes.Repeat([]byte("0.1,3\n0.2,4\n0.30001,5\n"), 20000)})
	b := opened(t, written(t, testHeader(), payload))
	deflatedEntries := 0
	for _, p := range b.Paths() {
		f := b.files[p]
		if f.Method != zip.Deflate {
			continue
		}
		deflatedEntries++
		data, err := b.ReadFile(p)
		if err != nil {
			t.Fatal(err)
		}
		raw, err := f.OpenRaw()
		if err != nil {
			t.Fatal(err)
		}
		got, err := io.ReadAll(raw)
		want, err2 := deflated(data)
		if err != nil || err2 != nil || !bytes.Equal(got, want) {
			t.Errorf("%s: packed otherwise than by itself", p)
		}
	}
	if deflatedEntries < 30 {
		t.Errorf("only %d entries are deflated", deflatedEntries)
	}
}

// TestRepetitiveText is stored where deflating it would go beyond what Open allows.
func TestRepetitiveText(t *testing.T) {
	b := opened(t, written(t, testHeader(), []Payload{{"zeros.csv", bytes.Repeat([]byte("0\n"), 5<<20)}}))
	if b.files["data/zeros.csv"].Method != zip.Store {
		t.Error("it was deflated")
	}
	if problems := b.CheckFiles(); len(problems) > 0 {
		t.Error(problems)
	}
}
