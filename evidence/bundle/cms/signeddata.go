package cms

import (
	"bytes"
	"crypto/x509"
	"encoding/asn1"
)

var (
	oidData       = oid("1.2.840.113549.1.7.1")
	oidSignedData = oid("1.2.840.113549.1.7.2")
)

// signedData is what a signature file may vary in; encode fixes all the rest. Each part is a whole DER element.
type signedData struct {
	digestAlgorithm    []byte
	certificates       [][]byte
	issuerAndSerial    []byte
	attributes         [][]byte
	signatureAlgorithm []byte
	signature          []byte // without tag and length
}

var version1 = []byte{tagInteger, 1, 1}

// encode returns the ContentInfo (RFC 5652, 3 and 5).
func (s *signedData) encode() []byte {
	signer := sequence(
		version1,
		s.issuerAndSerial,
		s.digestAlgorithm,
		element(tagContext0, sortedSet(s.attributes)...),
		s.signatureAlgorithm,
		element(tagOctetString, s.signature),
	)
	return sequence(oidSignedData, element(tagContext0, sequence(
		version1,
		element(tagSet, s.digestAlgorithm),
		sequence(oidData),
		element(tagContext0, sortedSet(s.certificates)...),
		element(tagSet, signer),
	)))
}

// signed returns the bytes that are signed: the attributes as a SET OF (RFC 5652, 5.4).
func (s *signedData) signed() []byte {
	return element(tagSet, sortedSet(s.attributes)...)
}

// decode reads a ContentInfo. It accepts only what encode gives back byte for byte.
func decode(der []byte) (*signedData, error) {
	s, err := decodeParts(der)
	if err != nil {
		return nil, &RefusedError{"is not the SignedData that is accepted here", err}
	}
	if !bytes.Equal(s.encode(), der) {
		return nil, refused("its bytes are not those of the one accepted encoding (DER, sorted sets, version 1, one digest algorithm)")
	}
	return s, nil
}

func decodeParts(der []byte) (*signedData, error) {
	var s signedData
	file := &reading{rest: der}
	info := file.into(tagSequence, "content info")
	file.err = info.err
	file.end("after the signature")
	if file.err != nil {
		return nil, file.err
	}
	info.want(tagOID, "content type")
	body := info.into(tagContext0, "content").into(tagSequence, "signed data")
	body.want(tagInteger, "version")
	s.digestAlgorithm, _ = body.into(tagSet, "digest algorithms").want(tagSequence, "digest algorithm")
	content := body.into(tagSequence, "encapsulated content")
	content.want(tagOID, "encapsulated content type")
	content.end("the content must be outside of the signature, yet encapsulated content")
	s.certificates = body.into(tagContext0, "certificates").all()
	if body.peek() == tagContext1 {
		body.fail("revocation lists are not accepted")
	}
	signers := body.into(tagSet, "signers")
	if content.err != nil {
		return nil, content.err
	}
	signer := signers.into(tagSequence, "signer")
	signers.end("more than one signer")
	decodeSigner(signer, &s)
	for _, r := range []*reading{info, body, signers, signer} {
		if r.err != nil {
			return nil, r.err
		}
	}
	return &s, nil
}

func decodeSigner(r *reading, s *signedData) {
	r.want(tagInteger, "signer version")
	s.issuerAndSerial, _ = r.want(tagSequence, "issuer and serial number")
	r.want(tagSequence, "signer's digest algorithm")
	if r.err == nil && r.peek() != tagContext0 {
		r.fail("there are no signed attributes")
	}
	attributes := r.into(tagContext0, "signed attributes")
	s.attributes = attributes.all()
	if r.err == nil {
		r.err = attributes.err
	}
	s.signatureAlgorithm, _ = r.want(tagSequence, "signature algorithm")
	_, s.signature = r.want(tagOctetString, "signature value")
	if r.peek() == tagContext1 {
		r.fail("unsigned attributes are not accepted")
	}
	r.end("after the signature value")
}

// issuerAndSerial names a certificate (RFC 5652, 10.2.4).
func issuerAndSerial(c *x509.Certificate) []byte { return sequence(c.RawIssuer, serialNumber(c)) }

func serialNumber(c *x509.Certificate) []byte {
	der, err := asn1.Marshal(c.SerialNumber)
	if err != nil {
		panic("cms: internal error: " + err.Error())
	}
	return der
}
