package identity_test

import (
	"bytes"
	"crypto/x509"
	"math/rand/v2"
	"strings"
	"testing"
	"time"

	"assaywrit/evidence/bundle/identity"
)

var (
	from = time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)
	to   = time.Date(2031, 1, 1, 0, 0, 0, 0, time.UTC)
)

func seeded(n byte) *rand.ChaCha8 { return rand.NewChaCha8([32]byte{n}) }

func newRoot(t testing.TB, demonstration bool) *identity.Identity {
	t.Helper()
	root, err := identity.NewRoot(identity.RootOptions{Laboratory: "LAB-07", NotBefore: from, NotAfter: to, Demonstration: demonstration, Rand: seeded(1)})
	if err != nil {
		t.Fatal(err)
	}
	return root
}

func newSignatory(t testing.TB, root *identity.Identity, demonstration bool) *identity.Identity {
	t.Helper()
	id, err := identity.NewSignatory(root, identity.SignatoryOptions{Person: "P-04", Position: "certifying scientist", NotBefore: from, NotAfter: to.AddDate(-2, 0, 0), Demonstration: demonstration, Rand: seeded(2)})
	if err != nil {
		t.Fatal(err)
	}
	return id
}

func TestSignatoryIsIssuedByTheRoot(t *testing.T) {
	root := newRoot(t, false)
	id := newSignatory(t, root, false)
	pool := x509.NewCertPool()
	pool.AddCert(root.Certificate)
	if _, err := id.Certificate.Verify(x509.VerifyOptions{Roots: pool, CurrentTime: from.AddDate(1, 0, 0), KeyUsages: []x509.ExtKeyUsage{x509.ExtKeyUsageEmailProtection}}); err != nil {
		t.Error(err)
	}
	if _, err := id.Certificate.Verify(x509.VerifyOptions{Roots: pool, CurrentTime: to, KeyUsages: []x509.ExtKeyUsage{x509.ExtKeyUsageAny}}); err == nil {
		t.Error("an expired certificate verifies")
	}
	if got := identity.PersonOf(id.Certificate); got != "P-04" {
		t.Errorf("person %q", got)
	}
	if id.Certificate.IsCA || id.Certificate.KeyUsage != x509.KeyUsageDigitalSignature|x509.KeyUsageContentCommitment {
		t.Errorf("CA %v, key usage %b", id.Certificate.IsCA, id.Certificate.KeyUsage)
	}
	if s := id.Certificate.Subject.String(); !strings.Contains(s, "LAB-07") || strings.Contains(s, identity.Marking) {
		t.Errorf("subject %s", s)
	}
	if _, err := identity.NewSignatory(id, identity.SignatoryOptions{Person: "P-05", Position: "x", NotBefore: from, NotAfter: to, Rand: seeded(3)}); err == nil {
		t.Error("a signatory issued a certificate")
	}
}

func TestDemonstrationIsMarked(t *testing.T) {
	root := newRoot(t, true)
	id := newSignatory(t, root, true)
	for _, c := range []*x509.Certificate{root.Certificate, id.Certificate} {
		if !identity.IsDemonstration(c) || strings.Count(c.Subject.String(), "NOT VALID") != 2 {
			t.Errorf("not marked in both names: %s", c.Subject)
		}
	}
	if _, err := identity.NewSignatory(root, identity.SignatoryOptions{Person: "P-04", Position: "x", NotBefore: from, NotAfter: to, Rand: seeded(3)}); err == nil {
		t.Error("a demonstration root issued an unmarked certificate")
	}
}

func TestSameArgumentsSameCertificates(t *testing.T) {
	a, b := newRoot(t, false), newRoot(t, false)
	if !bytes.Equal(a.Certificate.Raw, b.Certificate.Raw) {
		t.Error("two roots from the same random bytes differ")
	}
	if !bytes.Equal(newSignatory(t, a, false).Certificate.Raw, newSignatory(t, b, false).Certificate.Raw) {
		t.Error("two signatories from the same random bytes differ")
	}
}

func TestRefusedCertificates(t *testing.T) {
	root := newRoot(t, false)
	for _, tt := range []struct {
		name, want string
		o          identity.SignatoryOptions
	}{
		{"no person", "empty", identity.SignatoryOptions{Position: "x", NotBefore: from, NotAfter: to, Rand: seeded(3)}},
		{"backwards", "end after the start", identity.SignatoryOptions{Person: "P", Position: "x", NotBefore: to, NotAfter: from.Add(time.Hour), Rand: seeded(3)}},
		{"outlives the root", "within the root's", identity.SignatoryOptions{Person: "P", Position: "x", NotBefore: from, NotAfter: to.AddDate(1, 0, 0), Rand: seeded(3)}},
		{"long", "64 at most", identity.SignatoryOptions{Person: strings.Repeat("P", 65), Position: "x", NotBefore: from, NotAfter: to, Rand: seeded(3)}},
		{"control", "control characters", identity.SignatoryOptions{Person: "P\n", Position: "x", NotBefore: from, NotAfter: to, Rand: seeded(3)}},
		{"no randomness", "randomness", identity.SignatoryOptions{Person: "P", Position: "x", NotBefore: from, NotAfter: to}},
		{"randomness runs out", "EOF", identity.SignatoryOptions{Person: "P", Position: "x", NotBefore: from, NotAfter: to, Rand: bytes.NewReader([]byte{1, 2, 3})}},
		{"useless randomness", "no usable key", identity.SignatoryOptions{Person: "P", Position: "x", NotBefore: from, NotAfter: to, Rand: bytes.NewReader(make([]byte, 1<<16))}},
	} {
		if _, err := identity.NewSignatory(root, tt.o); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: %v", tt.name, err)
		}
	}
}
