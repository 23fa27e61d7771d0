package cms

import (
	"bytes"
	"crypto/sha256"
	"crypto/x509"
	"errors"
	"fmt"
	"time"
)

// MaxSize is the largest signature file that is read, in bytes.
const MaxSize = 1 << 20

// Verified is what a signature that holds says. Nothing in it says that the certificate can be trusted.
type Verified struct {
	Certificate   *x509.Certificate
	Intermediates []*x509.Certificate // from the certificate's issuer upwards, as far as they came with it
	SigningTime   time.Time           // as the signer claims it; no clock of anybody else's stands behind it
	Meaning       string              // one of Meanings, or empty where another program left it out
}

// Verify checks a detached signature over content: form, attributes, digest and signature value, and that the
// certificates are those that were signed for. The error is a *RefusedError.
//
// No byte of a signature that Sign made can change without being refused. Another program may name the signer's certificate
// alone in signing-certificate-v2 and still enclose its issuers': those are vouched for by their own issuers, so that
// whoever builds the path to a root must see that each of Intermediates is on it.
func Verify(der, content []byte) (*Verified, error) {
	if len(der) > MaxSize {
		return nil, refused(fmt.Sprintf("has %d bytes, want %d at most", len(der), MaxSize))
	}
	s, err := decode(der)
	if err != nil {
		return nil, err
	}
	if !isSHA256(s.digestAlgorithm) {
		return nil, refused("the digest algorithm is not SHA-256")
	}
	a, err := decodeAttributes(s.attributes)
	if err != nil {
		return nil, &RefusedError{"signed attributes", err}
	}
	if digest := sha256.Sum256(content); !bytes.Equal(a.digest, digest[:]) {
		return nil, refused("is not over this content: the message digest differs")
	}
	chain, err := s.chain(a)
	if err != nil {
		return nil, &RefusedError{"certificates", err}
	}
	if err := verifySignature(chain[0].PublicKey, s.signatureAlgorithm, s.signed(), s.signature); err != nil {
		return nil, &RefusedError{"signature value", err}
	}
	return &Verified{Certificate: chain[0], Intermediates: chain[1:], SigningTime: a.signingTime, Meaning: a.meaning}, nil
}

// chain returns the signer's certificate and then its issuers, each with the next one's key. Every certificate in the file
// must have its place in it: one that is not needed would be bytes that nothing vouches for.
func (s *signedData) chain(a *attributes) ([]*x509.Certificate, error) {
	var left []*x509.Certificate
	for _, der := range s.certificates {
		c, err := x509.ParseCertificate(der)
		if err != nil {
			return nil, err
		}
		left = append(left, c)
	}
	take := func(fits func(*x509.Certificate) bool) *x509.Certificate {
		for i, c := range left {
			if fits(c) {
				left = append(left[:i:i], left[i+1:]...)
				return c
			}
		}
		return nil
	}
	signer := take(func(c *x509.Certificate) bool { return bytes.Equal(issuerAndSerial(c), s.issuerAndSerial) })
	if signer == nil {
		return nil, errors.New("the signer's certificate is not among them")
	}
	chain := []*x509.Certificate{signer}
	for len(left) > 0 {
		last := chain[len(chain)-1]
		next := take(func(c *x509.Certificate) bool {
			return bytes.Equal(c.RawSubject, last.RawIssuer) && last.CheckSignatureFrom(c) == nil
		})
		if next == nil {
			return nil, errors.New("one of them has no part in the signer's chain")
		}
		chain = append(chain, next)
	}
	return chain, a.vouchFor(chain)
}

// vouchFor compares the chain with the certificates that were signed for: the signer's at least, and if there are more, all.
func (a *attributes) vouchFor(chain []*x509.Certificate) error {
	if n := len(a.certificates); n > 1 && n != len(chain) {
		return fmt.Errorf("%d are named by signing-certificate-v2, %d are here", n, len(chain))
	}
	for i, id := range a.certificates {
		if !id.matches(chain[i]) {
			return errors.New("signing-certificate-v2 names another one")
		}
	}
	return nil
}
