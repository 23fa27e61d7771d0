package cms

import (
	"bytes"
	"crypto"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/rsa"
	"crypto/sha256"
	"crypto/x509"
	"crypto/x509/pkix"
	"errors"
	"math/big"
	"strings"
	"sync"
	"testing"
	"time"
)

// A party holds a certificate and its key.
type party struct {
	cert *x509.Certificate
	key  crypto.Signer
}

func newParty(key crypto.Signer, name string, ca bool, issuer *party) *party {
	template := &x509.Certificate{
		SerialNumber: new(big.Int).SetBytes([]byte("\x01" + name)), Subject: pkix.Name{CommonName: name, Organization: []string{"LAB-07"}},
		NotBefore: time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC), NotAfter: time.Date(2040, 1, 1, 0, 0, 0, 0, time.UTC),
		SubjectKeyId: []byte(name), BasicConstraintsValid: true, IsCA: ca, KeyUsage: x509.KeyUsageDigitalSignature | x509.KeyUsageContentCommitment,
	}
	if ca {
		template.KeyUsage = x509.KeyUsageCertSign
	}
	parent, signer := template, key
	if issuer != nil {
		parent, signer = issuer.cert, issuer.key
	}
	der, err := x509.CreateCertificate(rand.Reader, template, parent, key.Public(), signer)
	if err != nil {
		panic(err)
	}
	c, err := x509.ParseCertificate(der)
	if err != nil {
		panic(err)
	}
	return &party{c, key}
}

func ecKey() *ecdsa.PrivateKey {
	key, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	if err != nil {
		panic(err)
	}
	return key
}

var rsaKey = sync.OnceValue(func() *rsa.PrivateKey {
	key, err := rsa.GenerateKey(rand.Reader, 2048)
	if err != nil {
		panic(err)
	}
	return key
})

type cast struct{ root, middle, signer *party }

var players = sync.OnceValue(func() cast {
	root := newParty(ecKey(), "root", true, nil)
	middle := newParty(ecKey(), "middle", true, root)
	return cast{root, middle, newParty(ecKey(), "signer", false, middle)}
})

var (
	content = []byte(`{"format":"assaywrit-statement/1"}`)
	at      = time.Date(2026, 12, 1, 9, 30, 0, 0, time.FixedZone("", 3600))
)

func mustSign(t testing.TB, p *party, meaning string, chain ...*x509.Certificate) []byte {
	t.Helper()
	der, err := Sign(content, SignOptions{Signer: p.key, Certificate: p.cert, Intermediates: chain, Time: at, Meaning: meaning})
	if err != nil {
		t.Fatal(err)
	}
	return der
}

func TestSignAndVerify(t *testing.T) {
	who := players()
	for _, meaning := range Meanings() {
		der := mustSign(t, who.signer, meaning, who.middle.cert)
		v, err := Verify(der, content)
		if err != nil {
			t.Fatal(err)
		}
		if v.Meaning != meaning || !v.SigningTime.Equal(at) || !v.Certificate.Equal(who.signer.cert) || len(v.Intermediates) != 1 || !v.Intermediates[0].Equal(who.middle.cert) {
			t.Errorf("%+v", v)
		}
		if !bytes.Equal(der, mustSign(t, who.signer, meaning, who.middle.cert)) {
			t.Error("two signatures with the same key and arguments differ")
		}
		if _, err := Verify(der, append(bytes.Clone(content), ' ')); err == nil {
			t.Error("verifies over other content")
		}
	}
}

func TestSignWithRSA(t *testing.T) {
	who := newParty(rsaKey(), "rsa", false, players().root)
	if _, err := Verify(mustSign(t, who, "reviewed"), content); err != nil {
		t.Error(err)
	}
}

func TestSignRefuses(t *testing.T) {
	who := players()
	small, err := rsa.GenerateKey(rand.Reader, 1024)
	if err != nil {
		t.Fatal(err)
	}
	p384, err := ecdsa.GenerateKey(elliptic.P384(), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	weak, other := newParty(small, "weak", false, who.root), newParty(p384, "p384", false, who.root)
	for _, tt := range []struct {
		name, want string
		o          SignOptions
	}{
		{"no key", "a signer", SignOptions{Certificate: who.signer.cert, Time: at, Meaning: "reviewed"}},
		{"another's key", "not that of the certificate", SignOptions{Signer: who.root.key, Certificate: who.signer.cert, Time: at, Meaning: "reviewed"}},
		{"no time", "signing time", SignOptions{Signer: who.signer.key, Certificate: who.signer.cert, Meaning: "reviewed"}},
		{"unknown meaning", "want analysed", SignOptions{Signer: who.signer.key, Certificate: who.signer.cert, Time: at, Meaning: "seen"}},
		{"needless certificate", "no part in the signer's chain", SignOptions{Signer: who.signer.key, Certificate: who.signer.cert, Intermediates: []*x509.Certificate{who.root.cert}, Time: at, Meaning: "reviewed"}},
		{"small RSA key", "1024 bits", SignOptions{Signer: weak.key, Certificate: weak.cert, Time: at, Meaning: "reviewed"}},
		{"another curve", "want P-256", SignOptions{Signer: other.key, Certificate: other.cert, Time: at, Meaning: "reviewed"}},
	} {
		_, err := Sign(content, tt.o)
		var r *RefusedError
		if !errors.As(err, &r) || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: %v", tt.name, err)
		}
	}
}

// TestEveryByteIsGuarded flips bits in every byte of a signature file that holds a chain.
func TestEveryByteIsGuarded(t *testing.T) {
	who := players()
	der := mustSign(t, who.signer, "authorised", who.middle.cert)
	flips := []byte{0x01, 0x02, 0x10, 0x20, 0x80, 0xff}
	for i := range der {
		for _, f := range flips {
			altered := bytes.Clone(der)
			altered[i] ^= f
			if _, err := Verify(altered, content); err == nil {
				t.Fatalf("byte %d of %d ^ %#x: accepted", i, len(der), f)
			}
		}
	}
	for n := range der {
		if _, err := Verify(der[:n], content); err == nil {
			t.Fatalf("cut to %d bytes: accepted", n)
		}
	}
	if _, err := Verify(append(bytes.Clone(der), 0), content); err == nil {
		t.Error("a trailing byte was accepted")
	}
}

// parts returns the signature's parts, for the forgeries below to change.
func parts(t testing.TB, meaning string) *signedData {
	t.Helper()
	s, err := decode(mustSign(t, players().signer, meaning))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// withoutAttributes encodes a SignerInfo that has no signed attributes, as RFC 5652 allows.
func withoutAttributes(s *signedData) []byte {
	signer := sequence(version1, s.issuerAndSerial, s.digestAlgorithm, s.signatureAlgorithm, element(tagOctetString, s.signature))
	return wrap(s, signer)
}

func wrap(s *signedData, signers ...[]byte) []byte {
	return sequence(oidSignedData, element(tagContext0, sequence(version1, element(tagSet, s.digestAlgorithm), sequence(oidData),
		element(tagContext0, s.certificates...), element(tagSet, signers...))))
}

// TestStrippedAttributes makes the forgery that many readers accept: the attributes become the content.
func TestStrippedAttributes(t *testing.T) {
	s := parts(t, "authorised")
	forged, forgedContent := withoutAttributes(s), s.signed()
	digest := sha256.Sum256(forgedContent)
	if !ecdsa.VerifyASN1(players().signer.cert.PublicKey.(*ecdsa.PublicKey), digest[:], s.signature) {
		t.Fatal("the forgery is not one: its signature value does not hold")
	}
	if _, err := Verify(forged, forgedContent); err == nil || !strings.Contains(err.Error(), "no signed attributes") {
		t.Errorf("the forgery: %v", err)
	}
}

// TestNoAttributes signs the content itself, without attributes.
func TestNoAttributes(t *testing.T) {
	s := parts(t, "authorised")
	var err error
	if _, s.signature, err = makeSignature(players().signer.key, content); err != nil {
		t.Fatal(err)
	}
	if _, err := Verify(withoutAttributes(s), content); err == nil || !strings.Contains(err.Error(), "no signed attributes") {
		t.Errorf("%v", err)
	}
}

// TestResigned changes a part and signs the attributes again with the signer's own key: what is refused here is refused for
// its form, not for a broken signature value.
func TestResigned(t *testing.T) {
	who := players()
	setAttribute := func(kind, value []byte) func(*signedData) {
		return func(s *signedData) {
			var list [][]byte
			for _, a := range s.attributes {
				if k, _, _ := decodeAttribute(a); !bytes.Equal(k, kind) {
					list = append(list, a)
				}
			}
			if value != nil {
				list = append(list, attribute(kind, value))
			}
			s.attributes = list
		}
	}
	otherHash := sha256.Sum256([]byte("another certificate"))
	signerHash := sha256.Sum256(who.signer.cert.Raw)
	ess := func(ids ...[]byte) []byte { return sequence(sequence(ids...)) }
	hash := element(tagOctetString, signerHash[:])
	for _, tt := range []struct {
		name, want string // want is empty where it must be accepted
		change     func(*signedData)
	}{
		{"nothing", "", func(*signedData) {}},
		{"no content type", "content-type is missing", setAttribute(oidContentType, nil)},
		{"another content type", "not id-data", setAttribute(oidContentType, oidSignedData)},
		{"no digest", "message-digest is missing", setAttribute(oidMessageDigest, nil)},
		{"short digest", "message digest differs", setAttribute(oidMessageDigest, element(tagOctetString, otherHash[:16]))},
		{"no time", "signing-time is missing", setAttribute(oidSigningTime, nil)},
		{"UTCTime without seconds", "signing time", setAttribute(oidSigningTime, element(tagUTCTime, []byte("2612010930Z")))},
		{"UTCTime with an offset", "signing time", setAttribute(oidSigningTime, element(tagUTCTime, []byte("261201093000+0100")))},
		{"GeneralizedTime before 2050", "RFC 5652, 11.3", setAttribute(oidSigningTime, element(tagGeneralizedTime, []byte("20261201093000Z")))},
		{"GeneralizedTime with a fraction", "signing time", setAttribute(oidSigningTime, element(tagGeneralizedTime, []byte("20611201093000.5Z")))},
		{"GeneralizedTime from 2050", "", setAttribute(oidSigningTime, element(tagGeneralizedTime, []byte("20611201093000Z")))},
		{"31 February", "signing time", setAttribute(oidSigningTime, element(tagUTCTime, []byte("260231093000Z")))},
		{"no certificate named", "signing-certificate-v2 is missing", setAttribute(oidSigningCertificate, nil)},
		{"empty list", "names no certificate", setAttribute(oidSigningCertificate, ess())},
		{"another certificate named", "names another one", setAttribute(oidSigningCertificate, ess(sequence(element(tagOctetString, otherHash[:]))))},
		{"a certificate too many named", "2 are named", setAttribute(oidSigningCertificate, ess(sequence(hash), sequence(element(tagOctetString, otherHash[:]))))},
		{"with issuer and serial", "", setAttribute(oidSigningCertificate, ess(sequence(hash, sequence(sequence(element(tagContext4, who.signer.cert.RawIssuer)), serialNumber(who.signer.cert)))))},
		{"with another serial", "names another one", setAttribute(oidSigningCertificate, ess(sequence(hash, sequence(sequence(element(tagContext4, who.signer.cert.RawIssuer)), serialNumber(who.middle.cert)))))},
		{"default algorithm written out", "without its name", setAttribute(oidSigningCertificate, ess(sequence(algSHA256, hash)))},
		{"no meaning", "", setAttribute(oidCommitmentType, nil)},
		{"meaning without its word", "commitment type", setAttribute(oidCommitmentType, sequence(commitments[2].oid))},
		{"word of another type", "commitment type", setAttribute(oidCommitmentType, commitmentValue(commitment{"reviewed", commitments[2].oid}))},
		{"unknown attribute", "not known here", setAttribute(oid("1.2.3.4"), null)},
		{"attribute twice", "there twice", func(s *signedData) { s.attributes = append(s.attributes, s.attributes[0]) }},
		{"two values", "more than one value", func(s *signedData) {
			s.attributes = append(s.attributes, sequence(oidSMIMECapabilities, element(tagSet, sequence(), sequence(algSHA256))))
		}},
		{"no value", "cut short", func(s *signedData) {
			s.attributes = append(s.attributes, sequence(oidSMIMECapabilities, element(tagSet)))
		}},
		{"S/MIME capabilities", "", setAttribute(oidSMIMECapabilities, sequence())},
		{"SHA-1", "not SHA-256", func(s *signedData) { s.digestAlgorithm = sequence(oid("1.3.14.3.2.26")) }},
		{"SHA-256 with NULL", "", func(s *signedData) { s.digestAlgorithm = algSHA256WithNull }},
		{"another certificate", "not among them", func(s *signedData) { s.certificates = [][]byte{who.middle.cert.Raw} }},
		{"no certificate", "not among them", func(s *signedData) { s.certificates = nil }},
		{"the signer's certificate twice", "no part in", func(s *signedData) { s.certificates = [][]byte{who.signer.cert.Raw, who.signer.cert.Raw} }},
		{"the issuer's certificate, unnamed", "", func(s *signedData) { s.certificates = [][]byte{who.signer.cert.Raw, who.middle.cert.Raw} }},
		{"the chain with its root", "", func(s *signedData) {
			s.certificates = [][]byte{who.signer.cert.Raw, who.middle.cert.Raw, who.root.cert.Raw}
		}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			s := parts(t, "authorised")
			tt.change(s)
			var err error
			if _, s.signature, err = makeSignature(who.signer.key, s.signed()); err != nil {
				t.Fatal(err)
			}
			_, err = Verify(s.encode(), content)
			if tt.want == "" && err != nil || tt.want != "" && (err == nil || !strings.Contains(err.Error(), tt.want)) {
				t.Errorf("%v, want %q", err, tt.want)
			}
		})
	}
}

// TestOtherEncodings re-writes unsigned parts of a signature in ways that lax readers accept.
func TestOtherEncodings(t *testing.T) {
	s := parts(t, "reviewed")
	attributes := element(tagContext0, sortedSet(s.attributes)...)
	signature := element(tagOctetString, s.signature)
	signer := sequence(version1, s.issuerAndSerial, s.digestAlgorithm, attributes, s.signatureAlgorithm, signature)
	if !bytes.Equal(wrap(s, signer), s.encode()) {
		t.Fatal("the test's own encoding differs, so that what follows would prove nothing")
	}
	body := func(parts ...[]byte) []byte { return sequence(oidSignedData, element(tagContext0, sequence(parts...))) }
	set, certs, data := element(tagSet, s.digestAlgorithm), element(tagContext0, s.certificates...), sequence(oidData)
	reversed := element(tagContext0, func() []byte {
		var list []byte
		for _, a := range sortedSet(s.attributes) {
			list = append(bytes.Clone(a), list...)
		}
		return list
	}())
	version3 := []byte{tagInteger, 1, 3}
	for _, tt := range []struct {
		name string
		der  []byte
	}{
		{"version 3", body(version3, set, data, certs, element(tagSet, signer))},
		{"signer version 3", wrap(s, sequence(version3, s.issuerAndSerial, s.digestAlgorithm, attributes, s.signatureAlgorithm, signature))},
		{"no digest algorithms", body(version1, element(tagSet), data, certs, element(tagSet, signer))},
		{"another digest algorithm", body(version1, element(tagSet, algSHA256WithNull), data, certs, element(tagSet, signer))},
		{"two digest algorithms", body(version1, element(tagSet, s.digestAlgorithm, algSHA256WithNull), data, certs, element(tagSet, signer))},
		{"the signer has another digest algorithm", wrap(s, sequence(version1, s.issuerAndSerial, algSHA256WithNull, attributes, s.signatureAlgorithm, signature))},
		{"content inside", body(version1, set, sequence(oidData, element(tagContext0, element(tagOctetString, content))), certs, element(tagSet, signer))},
		{"another content type", body(version1, set, sequence(oidSignedData), certs, element(tagSet, signer))},
		{"two signers", wrap(s, signer, signer)},
		{"no signer", wrap(s)},
		{"revocation list", body(version1, set, data, certs, element(tagContext1), element(tagSet, signer))},
		{"unsigned attributes", wrap(s, sequence(version1, s.issuerAndSerial, s.digestAlgorithm, attributes, s.signatureAlgorithm, signature, element(tagContext1)))},
		{"attributes in another order", wrap(s, sequence(version1, s.issuerAndSerial, s.digestAlgorithm, reversed, s.signatureAlgorithm, signature))},
		{"something after the signers", body(version1, set, data, certs, element(tagSet, signer), null)},
		{"another outer type", sequence(oidData, element(tagContext0, sequence(version1, set, data, certs, element(tagSet, signer))))},
		{"long length", append([]byte{0x30, 0x83, 0}, s.encode()[2:]...)},
		{"indefinite length", append(append([]byte{0x30, 0x80}, s.encode()[4:]...), 0, 0)},
		{"empty", nil},
		{"too large", make([]byte, MaxSize+1)},
	} {
		if _, err := Verify(tt.der, content); err == nil {
			t.Errorf("%s: accepted", tt.name)
		} else {
			t.Logf("%s: %v", tt.name, err)
		}
	}
}

func TestOID(t *testing.T) {
	// X.690, 8.19.5: the worked example {2 100 3} is 06 03 81 34 03.
	if got := oid("2.100.3"); !bytes.Equal(got, []byte{6, 3, 0x81, 0x34, 3}) {
		t.Errorf("% x", got)
	}
	// The arc after 2.25 is the UUID as a number (ITU-T X.667, 6.3).
	uuid, _ := new(big.Int).SetString("a13abee945ca4cdeb0d150927a4a4b92", 16)
	if got := oid("2.25." + uuid.String()); !bytes.Equal(got, oidMeaning) {
		t.Errorf("% x", got)
	}
}
