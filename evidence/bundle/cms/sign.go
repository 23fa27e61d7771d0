package cms

import (
	"bytes"
	"crypto"
	"crypto/sha256"
	"crypto/x509"
	"time"
)

// SignOptions say who signs, when and as what.
type SignOptions struct {
	Signer        crypto.Signer       // ECDSA on P-256, or RSA of 2048 bits and more; it may live in a token
	Certificate   *x509.Certificate   // of the signer's key
	Intermediates []*x509.Certificate // from the certificate's issuer upwards; the root is left out
	Time          time.Time           // claimed signing time, written in UTC to the second
	Meaning       string              // one of Meanings
}

// Sign returns a detached signature over content as DER. With an *ecdsa.PrivateKey the same arguments give the same
// bytes (RFC 6979). It refuses a certificate of another key, and whatever Verify would refuse.
func Sign(content []byte, o SignOptions) ([]byte, error) {
	if o.Signer == nil || o.Certificate == nil {
		return nil, refused("a signer and a certificate are needed")
	}
	if o.Time.IsZero() {
		return nil, refused("a signing time is needed")
	}
	if !KnownMeaning(o.Meaning) {
		return nil, refused("the meaning is \"" + o.Meaning + "\", want analysed, reviewed or authorised")
	}
	public, ok := o.Signer.Public().(interface{ Equal(crypto.PublicKey) bool })
	if !ok || !public.Equal(o.Certificate.PublicKey) {
		return nil, refused("the private key is not that of the certificate")
	}
	digest := sha256.Sum256(content)
	a := attributes{digest: digest[:], signingTime: o.Time.UTC().Truncate(time.Second), meaning: o.Meaning}
	s := signedData{digestAlgorithm: algSHA256, issuerAndSerial: issuerAndSerial(o.Certificate)}
	for _, c := range append([]*x509.Certificate{o.Certificate}, o.Intermediates...) {
		sum := sha256.Sum256(c.Raw)
		a.certificates = append(a.certificates, essCertificate{hash: sum[:]})
		s.certificates = append(s.certificates, c.Raw)
	}
	s.attributes = a.encode()
	var err error
	if s.signatureAlgorithm, s.signature, err = makeSignature(o.Signer, s.signed()); err != nil {
		return nil, &RefusedError{"the signer could not sign", err}
	}
	der := s.encode()
	v, err := Verify(der, content)
	if err != nil {
		return nil, err
	}
	if !bytes.Equal(v.Certificate.Raw, o.Certificate.Raw) {
		panic("cms: internal error: another certificate came back")
	}
	return der, nil
}
