// Package identity makes a laboratory root and signatories' certificates to try signing with, and keeps private keys under
// a passphrase. A laboratory in service signs with certificates that its own authority issues; what those must hold to be
// accepted is what this package writes into its own:
//
//   - the subject's serialNumber attribute (2.5.4.5), once: the person's code, as the case names it
//   - key usage digitalSignature or nonRepudiation (RFC 5280, 4.2.1.3), and no certification authority
//
// Keys are ECDSA on P-256. Certificates are X.509 (RFC 5280) with extended key usage documentSigning (RFC 9336), and
// emailProtection beside it, since general tools verify CMS signatures for that purpose unless told otherwise.
//
// Times and randomness are arguments: the same ones give the same keys and certificates, byte for byte.
package identity

import (
	"crypto"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/sha256"
	"crypto/x509"
	"crypto/x509/pkix"
	"encoding/asn1"
	"encoding/pem"
	"errors"
	"fmt"
	"io"
	"math/big"
	"slices"
	"strings"
	"time"
	"unicode/utf8"
)

// Marking stands in the subject of every demonstration certificate.
const Marking = "DEMONSTRATION, NOT VALID"

// An Identity is a certificate and its private key.
type Identity struct {
	Certificate *x509.Certificate
	Key         crypto.Signer
}

// RootOptions describe a laboratory root.
type RootOptions struct {
	Laboratory          string // code or name
	NotBefore, NotAfter time.Time
	Demonstration       bool
	Rand                io.Reader
}

// SignatoryOptions describe a person who signs.
type SignatoryOptions struct {
	Person              string // code, as in the case
	Position            string // such as "certifying scientist"
	NotBefore, NotAfter time.Time
	Demonstration       bool
	Rand                io.Reader
}

var (
	oidSerialNumber    = asn1.ObjectIdentifier{2, 5, 4, 5}
	oidTitle           = asn1.ObjectIdentifier{2, 5, 4, 12}
	oidDocumentSigning = asn1.ObjectIdentifier{1, 3, 6, 1, 5, 5, 7, 3, 36} // RFC 9336
)

// NewRoot makes a self-signed root that may issue signatories' certificates and nothing else.
func NewRoot(o RootOptions) (*Identity, error) {
	subject := pkix.Name{Organization: []string{marked(o.Laboratory, o.Demonstration)}, CommonName: marked("signing root", o.Demonstration)}
	template, key, err := start(subject, o.NotBefore, o.NotAfter, o.Rand)
	if err != nil {
		return nil, err
	}
	if o.Laboratory == "" {
		return nil, errors.New("root certificate: the laboratory is empty, want its code or name")
	}
	template.IsCA, template.MaxPathLenZero = true, true
	template.KeyUsage = x509.KeyUsageCertSign | x509.KeyUsageCRLSign
	return issue(template, template, key, key)
}

// NewSignatory makes a certificate of a person under root. A demonstration root issues demonstration certificates only.
func NewSignatory(root *Identity, o SignatoryOptions) (*Identity, error) {
	if root == nil || root.Certificate == nil || root.Key == nil || !root.Certificate.IsCA {
		return nil, errors.New("signatory certificate: the issuer is no root that may issue certificates")
	}
	if o.Person == "" || o.Position == "" {
		return nil, errors.New("signatory certificate: code or position of the person is empty")
	}
	if IsDemonstration(root.Certificate) != o.Demonstration {
		return nil, errors.New("signatory certificate: root and signatory must both be for demonstration, or neither")
	}
	if o.NotBefore.Before(root.Certificate.NotBefore) || o.NotAfter.After(root.Certificate.NotAfter) {
		return nil, fmt.Errorf("signatory certificate: valid from %s to %s, want a time within the root's, from %s to %s", rfc3339(o.NotBefore), rfc3339(o.NotAfter),
			rfc3339(root.Certificate.NotBefore), rfc3339(root.Certificate.NotAfter))
	}
	subject := pkix.Name{
		Organization: root.Certificate.Subject.Organization,
		CommonName:   marked(o.Person, o.Demonstration),
		SerialNumber: o.Person,
		ExtraNames:   []pkix.AttributeTypeAndValue{{Type: oidTitle, Value: o.Position}},
	}
	template, key, err := start(subject, o.NotBefore, o.NotAfter, o.Rand)
	if err != nil {
		return nil, err
	}
	template.KeyUsage = x509.KeyUsageDigitalSignature | x509.KeyUsageContentCommitment
	template.ExtKeyUsage = []x509.ExtKeyUsage{x509.ExtKeyUsageEmailProtection}
	template.UnknownExtKeyUsage = []asn1.ObjectIdentifier{oidDocumentSigning}
	return issue(template, root.Certificate, key, root.Key)
}

// PersonOf returns the code of the person that a certificate belongs to, or nothing where it names none or several.
func PersonOf(c *x509.Certificate) string {
	code := ""
	for _, a := range c.Subject.Names {
		if a.Type.Equal(oidSerialNumber) {
			if code != "" {
				return ""
			}
			code, _ = a.Value.(string)
		}
	}
	return code
}

// IsDemonstration reports whether the subject carries the Marking.
func IsDemonstration(c *x509.Certificate) bool {
	return strings.Contains(c.Subject.CommonName, Marking) ||
		slices.ContainsFunc(c.Subject.Organization, func(o string) bool { return strings.Contains(o, Marking) })
}

// CertificatePEM returns the certificate in PEM form (RFC 7468).
func CertificatePEM(c *x509.Certificate) []byte {
	return pem.EncodeToMemory(&pem.Block{Type: "CERTIFICATE", Bytes: c.Raw})
}

func marked(text string, demonstration bool) string {
	if demonstration {
		return text + " (" + Marking + ")"
	}
	return text
}

func rfc3339(t time.Time) string { return t.UTC().Format(time.RFC3339) }

// start draws a key and a serial number, and begins a certificate.
func start(subject pkix.Name, from, to time.Time, random io.Reader) (*x509.Certificate, *ecdsa.PrivateKey, error) {
	if random == nil {
		return nil, nil, errors.New("certificate: no source of randomness was given")
	}
	if !from.Before(to) {
		return nil, nil, fmt.Errorf("certificate: valid from %s to %s, want an end after the start", rfc3339(from), rfc3339(to))
	}
	if err := checkNames(subject); err != nil {
		return nil, nil, err
	}
	key, err := newKey(random)
	if err != nil {
		return nil, nil, err
	}
	serial := make([]byte, 16)
	if _, err := io.ReadFull(random, serial); err != nil {
		return nil, nil, err
	}
	serial[0] = serial[0]&0x7f | 0x40 // positive, and always 16 bytes (RFC 5280, 4.1.2.2 allows 20)
	point, err := key.PublicKey.Bytes()
	if err != nil {
		return nil, nil, err
	}
	id := sha256.Sum256(point)
	return &x509.Certificate{
		SerialNumber: new(big.Int).SetBytes(serial), Subject: subject, NotBefore: from, NotAfter: to,
		SubjectKeyId: id[:20], BasicConstraintsValid: true, SignatureAlgorithm: x509.ECDSAWithSHA256,
	}, key, nil
}

// checkNames keeps to the upper bound of 64 characters that X.520 sets for these attributes.
func checkNames(subject pkix.Name) error {
	names := append(slices.Clone(subject.Organization), subject.CommonName, subject.SerialNumber)
	for _, a := range subject.ExtraNames {
		names = append(names, a.Value.(string))
	}
	for _, n := range names {
		if !utf8.ValidString(n) || strings.ContainsFunc(n, func(r rune) bool { return r < ' ' || r == 0x7f }) {
			return fmt.Errorf("certificate: the name %q holds control characters or is not UTF-8", n)
		}
		if utf8.RuneCountInString(n) > 64 {
			return fmt.Errorf("certificate: the name %q has %d characters, want 64 at most", n, utf8.RuneCountInString(n))
		}
	}
	return nil
}

// newKey draws a private key on P-256 by rejection (FIPS 186-5, A.2.2). ecdsa.GenerateKey does not use its argument.
func newKey(random io.Reader) (*ecdsa.PrivateKey, error) {
	scalar := make([]byte, 32)
	for range 64 { // a draw is out of range once in 2^32
		if _, err := io.ReadFull(random, scalar); err != nil {
			return nil, err
		}
		if key, err := ecdsa.ParseRawPrivateKey(elliptic.P256(), scalar); err == nil {
			return key, nil
		}
	}
	return nil, errors.New("certificate: the source of randomness gives no usable key")
}

func issue(template, parent *x509.Certificate, key *ecdsa.PrivateKey, issuer crypto.Signer) (*Identity, error) {
	der, err := x509.CreateCertificate(nil, template, parent, &key.PublicKey, deterministic{issuer})
	if err != nil {
		return nil, fmt.Errorf("certificate: %w", err)
	}
	c, err := x509.ParseCertificate(der)
	if err != nil {
		return nil, fmt.Errorf("certificate: %w", err)
	}
	return &Identity{Certificate: c, Key: key}, nil
}

// deterministic signs without randomness where the key can (RFC 6979).
type deterministic struct{ crypto.Signer }

func (d deterministic) Sign(random io.Reader, digest []byte, o crypto.SignerOpts) ([]byte, error) {
	if _, software := d.Signer.(*ecdsa.PrivateKey); software {
		random = nil
	}
	return d.Signer.Sign(random, digest, o)
}
