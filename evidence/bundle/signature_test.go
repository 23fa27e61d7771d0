package bundle

import (
	"bytes"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/x509"
	"crypto/x509/pkix"
	"encoding/asn1"
	"errors"
	"math/big"
	"strings"
	"testing"
	"time"

	"assaywrit/evidence/bundle/cms"
	"assaywrit/evidence/bundle/identity"
)

// certified makes a certificate that identity would not.
func certified(t testing.TB, issuer *identity.Identity, change func(*x509.Certificate)) *identity.Identity {
	t.Helper()
	key, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	template := &x509.Certificate{
		SerialNumber: big.NewInt(time.Now().UnixNano()), Subject: pkix.Name{CommonName: "x", SerialNumber: "P-04"},
		NotBefore: validFrom, NotAfter: validTo, KeyUsage: x509.KeyUsageContentCommitment, BasicConstraintsValid: true,
	}
	change(template)
	parent, signer := issuer.Certificate, issuer.Key
	der, err := x509.CreateCertificate(rand.Reader, template, parent, &key.PublicKey, signer)
	if err != nil {
		t.Fatal(err)
	}
	c, err := x509.ParseCertificate(der)
	if err != nil {
		t.Fatal(err)
	}
	return &identity.Identity{Certificate: c, Key: key}
}

func ca(c *x509.Certificate) {
	c.IsCA, c.KeyUsage, c.Subject = true, x509.KeyUsageCertSign, pkix.Name{CommonName: "intermediate"}
}

// withFile adds a signature file unseen, as someone who does not use AddSignature.
func withFile(t testing.TB, data []byte, name string, p7s []byte) []byte {
	t.Helper()
	names, content := unzipped(t, data)
	content[signatureFolder+name] = p7s
	return zipped(t, append(names, signatureFolder+name), content)
}

func TestSignaturesThatDoNotHold(t *testing.T) {
	lab, stranger := laboratory(), hire(9, false)
	unsigned := written(t, testHeader(), testPayload())
	b := opened(t, unsigned)
	other := testHeader()
	other.Case = "C-0418"
	elsewhere := opened(t, written(t, other, testPayload()))
	own := func(change func(*x509.Certificate)) []byte {
		return signature(t, b, certified(t, lab.root, change), "reviewed")
	}
	for _, tt := range []struct {
		name, want string
		p7s        []byte
	}{
		{"nothing", "", signature(t, b, lab.people["P-04"], "reviewed")},
		{"made by hand", "", own(func(*x509.Certificate) {})},
		{"over another bundle", "is not over this content", signature(t, elsewhere, lab.people["P-04"], "reviewed")},
		{"not asked at all", `does not ask "P-99" to sign`, signature(t, b, lab.people["P-99"], "reviewed")},
		{"asked for another meaning", `does not ask "P-04" to sign as "authorised"`, signature(t, b, lab.people["P-04"], "authorised")},
		{"another's root", "trusted", signature(t, b, stranger.people["P-04"], "reviewed")},
		{"demonstration", "is for demonstration", signature(t, b, hire(3, true).people["P-04"], "reviewed")},
		{"no person", "no serialNumber", own(func(c *x509.Certificate) { c.Subject.SerialNumber = "" })},
		{"two persons", "or has several", own(func(c *x509.Certificate) {
			c.Subject.ExtraNames = []pkix.AttributeTypeAndValue{{Type: asn1.ObjectIdentifier{2, 5, 4, 5}, Value: "P-05"}, {Type: asn1.ObjectIdentifier{2, 5, 4, 5}, Value: "P-04"}}
		})},
		{"not yet valid", "trusted", own(func(c *x509.Certificate) { c.NotBefore = signedAt.Add(time.Second) })},
		{"no longer valid", "expired", own(func(c *x509.Certificate) { c.NotAfter = signedAt.Add(-time.Second) })},
		{"a certification authority", "certification authority", own(func(c *x509.Certificate) { c.IsCA = true })},
		{"for key agreement", "key usage", own(func(c *x509.Certificate) { c.KeyUsage = x509.KeyUsageKeyAgreement })},
		{"no key usage", "key usage", own(func(c *x509.Certificate) { c.KeyUsage = 0 })},
		{"for servers", "extended key usage", own(func(c *x509.Certificate) { c.ExtKeyUsage = []x509.ExtKeyUsage{x509.ExtKeyUsageServerAuth} })},
		{"for documents", "", own(func(c *x509.Certificate) {
			c.UnknownExtKeyUsage = []asn1.ObjectIdentifier{oidDocumentSigning}
		})},
		{"unknown critical extension", "trusted", own(func(c *x509.Certificate) {
			c.ExtraExtensions = []pkix.Extension{{Id: asn1.ObjectIdentifier{1, 2, 3, 4}, Critical: true, Value: []byte{5, 0}}}
		})},
		{"no signature", "is not the SignedData", []byte("hello")},
		{"empty", "is not the SignedData", nil},
		{"too large", "at most", make([]byte, cms.MaxSize+1)},
	} {
		t.Run(tt.name, func(t *testing.T) {
			b := opened(t, withFile(t, unsigned, "x.p7s", tt.p7s))
			if problems := b.CheckFiles(); len(problems) > 0 {
				t.Errorf("files: %v", problems)
			}
			r := CheckSignatures(b, trusted())[0]
			if (tt.want == "") != r.Trusted || tt.want == "" && r.Problem != "" || !strings.Contains(r.Problem, tt.want) {
				t.Errorf("%+v, want %q", r, tt.want)
			}
			if missing := len(MissingSignatories(b)); missing != 2 && missing != 1 {
				t.Errorf("%d missing", missing)
			}
		})
	}
}

// TestChains goes through an intermediate authority, sound and unsound.
func TestChains(t *testing.T) {
	lab := laboratory()
	unsigned := written(t, testHeader(), testPayload())
	b := opened(t, unsigned)
	middle := certified(t, lab.root, ca)
	leaf := certified(t, middle, func(c *x509.Certificate) { c.Subject.SerialNumber = "P-04" })
	noCA := certified(t, lab.root, func(c *x509.Certificate) { c.Subject = pkix.Name{CommonName: "no authority", SerialNumber: "P-05"} })
	forged := certified(t, noCA, func(*x509.Certificate) {})
	sign := func(id *identity.Identity, chain ...*x509.Certificate) ([]byte, error) {
		return cms.Sign(b.StatementBytes(), cms.SignOptions{Signer: id.Key, Certificate: id.Certificate, Intermediates: chain, Time: signedAt, Meaning: "reviewed"})
	}
	check := func(p7s []byte, roots ...*x509.Certificate) SignatureResult {
		return CheckSignatures(opened(t, withFile(t, unsigned, "x.p7s", p7s)), roots)[0]
	}
	whole, err := sign(leaf, middle.Certificate)
	if err != nil {
		t.Fatal(err)
	}
	// The root may issue certificates to people, and to no further authority: a path of this length is not the root's to give.
	if r := check(whole, lab.root.Certificate); r.Trusted || !strings.Contains(r.Problem, "too many intermediates") {
		t.Errorf("past the path length: %+v", r)
	}
	lower := certified(t, middle, ca)
	deep := certified(t, lower, func(*x509.Certificate) {})
	if p7s, err := sign(deep, lower.Certificate); err != nil || !check(p7s, middle.Certificate).Trusted || check(p7s, lab.root.Certificate).Trusted {
		t.Errorf("one intermediate below a root that allows it, and below one that does not: %v", err)
	}
	if r := check(whole, middle.Certificate); !r.Trusted {
		t.Errorf("the intermediate itself is trusted: %+v", r)
	}
	if _, err := sign(forged, noCA.Certificate); err == nil {
		t.Error("a signatory's certificate served as an authority's")
	}
	alone, err := sign(leaf)
	if err != nil {
		t.Fatal(err)
	}
	if r := check(alone, lab.root.Certificate); r.Trusted || r.Problem == "" {
		t.Errorf("without its intermediate: %+v", r)
	}
}

func TestAddSignatureRefuses(t *testing.T) {
	lab := laboratory()
	data := withSignature(t, written(t, testHeader(), testPayload()), "P-04.p7s", lab.people["P-04"], "reviewed")
	b := opened(t, data)
	again := signature(t, b, lab.people["P-04"], "reviewed")
	second := signature(t, b, lab.people["P-05"], "authorised")
	for _, tt := range []struct {
		name, want, file string
		p7s              []byte
	}{
		{"the same person and meaning", "has signed as", "other.p7s", again},
		{"the same file", "twice", "P-04.p7s", second},
		{"the same file in another case", "case or Unicode", "p-04.p7s", second},
		{"not asked", "does not ask", "P-99.p7s", signature(t, b, lab.people["P-99"], "authorised")},
		{"no signature", "SignedData", "P-05.p7s", []byte("x")},
		{"a path", "no name for a signature", "../P-05.p7s", second},
		{"another extension", "no name for a signature", "P-05.sig", second},
		{"no name", "no name for a signature", ".p7s", second},
		{"a device", "no name for a signature", "NUL.p7s", second},
		{"hidden", "no name for a signature", ".a.p7s", second},
	} {
		var out bytes.Buffer
		err := AddSignature(&out, b, tt.file, tt.p7s)
		var r *RefusedError
		if !errors.As(err, &r) || !strings.Contains(err.Error(), tt.want) || out.Len() > 0 {
			t.Errorf("%s: %v", tt.name, err)
		}
	}
	if err := AddSignature(&failingWriter{100}, b, "P-05.p7s", second); !errors.Is(err, errFull) {
		t.Errorf("a full disk: %v", err)
	}
	// A second signature that got in by another way is not counted twice.
	results := CheckSignatures(opened(t, withFile(t, data, "z.p7s", again)), trusted())
	if len(results) != 2 || !results[0].Trusted || results[1].Trusted || !strings.Contains(results[1].Problem, "already") {
		t.Errorf("%+v", results)
	}
}
