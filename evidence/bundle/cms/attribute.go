package cms

import (
	"bytes"
	"crypto/sha256"
	"crypto/x509"
	"errors"
	"fmt"
	"time"
)

var (
	oidContentType        = oid("1.2.840.113549.1.9.3")
	oidMessageDigest      = oid("1.2.840.113549.1.9.4")
	oidSigningTime        = oid("1.2.840.113549.1.9.5")
	oidSMIMECapabilities  = oid("1.2.840.113549.1.9.15")
	oidSigningCertificate = oid("1.2.840.113549.1.9.16.2.47") // signing-certificate-v2
	oidCommitmentType     = oid("1.2.840.113549.1.9.16.2.16")

	// oidMeaning is the arc 2.25 of the UUID a13abee9-45ca-4cde-b0d1-50927a4a4b92, drawn at random for this use.
	oidMeaning = oid("2.25.214310732678752066881944815468427234194")
)

// attributes are the signed attributes in terms of what they say.
type attributes struct {
	digest       []byte
	signingTime  time.Time
	certificates []essCertificate
	meaning      string // empty where the attribute is absent
}

// An essCertificate identifies a certificate (ESSCertIDv2, RFC 5035, 4): its SHA-256, and its issuer and serial number as a
// whole element or nil.
type essCertificate struct {
	hash         []byte
	issuerSerial []byte
}

func (a *attributes) encode() [][]byte {
	var ids [][]byte
	for _, c := range a.certificates {
		ids = append(ids, sequence(element(tagOctetString, c.hash)))
	}
	list := [][]byte{
		attribute(oidContentType, oidData),
		attribute(oidMessageDigest, element(tagOctetString, a.digest)),
		attribute(oidSigningTime, encodeTime(a.signingTime)),
		attribute(oidSigningCertificate, sequence(sequence(ids...))),
	}
	for _, c := range commitments {
		if c.word == a.meaning {
			list = append(list, attribute(oidCommitmentType, commitmentValue(c)))
		}
	}
	return list
}

func attribute(oid, value []byte) []byte { return sequence(oid, element(tagSet, value)) }

func commitmentValue(c commitment) []byte {
	return sequence(c.oid, sequence(sequence(oidMeaning, element(tagUTF8String, []byte(c.word)))))
}

// decodeAttributes reads the signed attributes. Those that this package writes must be there, each once with one value,
// except the commitment type, which others may leave out. Others are refused: they could limit what was signed.
func decodeAttributes(list [][]byte) (*attributes, error) {
	var a attributes
	seen := map[string]bool{}
	for _, whole := range list {
		kind, value, err := decodeAttribute(whole)
		if err != nil {
			return nil, err
		}
		if seen[string(kind)] {
			return nil, errors.New("a signed attribute is there twice")
		}
		seen[string(kind)] = true
		if err := a.take(kind, value); err != nil {
			return nil, err
		}
	}
	for _, need := range []struct {
		oid  []byte
		name string
	}{{oidContentType, "content-type"}, {oidMessageDigest, "message-digest"}, {oidSigningTime, "signing-time"}, {oidSigningCertificate, "signing-certificate-v2"}} {
		if !seen[string(need.oid)] {
			return nil, fmt.Errorf("the signed attribute %s is missing", need.name)
		}
	}
	return &a, nil
}

// decodeAttribute gives the kind and the single value of an attribute.
func decodeAttribute(whole []byte) (kind, value []byte, err error) {
	r := (&reading{rest: whole}).into(tagSequence, "signed attribute")
	kind, _ = r.want(tagOID, "attribute type")
	values := r.into(tagSet, "attribute values")
	r.end("signed attribute")
	if values.err != nil {
		return nil, nil, values.err
	}
	value, _ = values.next()
	values.end("a signed attribute has more than one value")
	return kind, value, errors.Join(r.err, values.err)
}

func (a *attributes) take(kind, value []byte) (err error) {
	switch {
	case bytes.Equal(kind, oidContentType):
		if !bytes.Equal(value, oidData) {
			return errors.New("the content type is not id-data")
		}
	case bytes.Equal(kind, oidMessageDigest):
		r := &reading{rest: value}
		_, a.digest = r.want(tagOctetString, "message digest")
		return r.err
	case bytes.Equal(kind, oidSigningTime):
		a.signingTime, err = decodeTime(value)
	case bytes.Equal(kind, oidSigningCertificate):
		a.certificates, err = decodeSigningCertificate(value)
	case bytes.Equal(kind, oidCommitmentType):
		a.meaning, err = decodeCommitment(value)
	case bytes.Equal(kind, oidSMIMECapabilities): // what the signer's e-mail program can read: says nothing about the content
	default:
		return fmt.Errorf("a signed attribute that is not known here: % x", kind)
	}
	return err
}

// decodeSigningCertificate reads a SigningCertificateV2 (RFC 5035, 3). Hashes are SHA-256, which DER leaves unsaid.
func decodeSigningCertificate(value []byte) ([]essCertificate, error) {
	outer := (&reading{rest: value}).into(tagSequence, "signing certificate")
	ids := outer.into(tagSequence, "certificate identifiers")
	outer.end("signing certificate (policies are not accepted)")
	var list []essCertificate
	for ids.err == nil && len(ids.rest) > 0 {
		id := ids.into(tagSequence, "certificate identifier")
		var c essCertificate
		_, c.hash = id.want(tagOctetString, "certificate hash (SHA-256 without its name)")
		if id.err == nil && id.peek() == tagSequence {
			c.issuerSerial, _ = id.next()
		}
		id.end("certificate identifier")
		if id.err != nil {
			return nil, id.err
		}
		list = append(list, c)
	}
	if err := errors.Join(outer.err, ids.err); err != nil {
		return nil, err
	}
	if len(list) == 0 {
		return nil, errors.New("signing-certificate-v2 names no certificate")
	}
	return list, nil
}

// matches reports whether the identifier is that of the certificate.
func (e essCertificate) matches(c *x509.Certificate) bool {
	sum := sha256.Sum256(c.Raw)
	if !bytes.Equal(e.hash, sum[:]) {
		return false
	}
	// IssuerSerial ::= SEQUENCE { GeneralNames, CertificateSerialNumber }, the name as directoryName [4] (RFC 5035, 4).
	return e.issuerSerial == nil || bytes.Equal(e.issuerSerial, sequence(sequence(element(tagContext4, c.RawIssuer)), serialNumber(c)))
}

func decodeCommitment(value []byte) (string, error) {
	for _, c := range commitments {
		if bytes.Equal(value, commitmentValue(c)) {
			return c.word, nil
		}
	}
	return "", errors.New("the commitment type is none of those that are known here: analysed, reviewed, authorised")
}

const (
	utcTime         = "060102150405Z"
	generalizedTime = "20060102150405Z"
)

// inUTCTime reports whether RFC 5652, 11.3 asks for a UTCTime: from 1950 to 2049.
func inUTCTime(t time.Time) bool { return t.Year() >= 1950 && t.Year() < 2050 }

func encodeTime(t time.Time) []byte {
	if t = t.UTC(); inUTCTime(t) {
		return element(tagUTCTime, []byte(t.Format(utcTime)))
	}
	return element(tagGeneralizedTime, []byte(t.Format(generalizedTime)))
}

func decodeTime(value []byte) (time.Time, error) {
	r := &reading{rest: value}
	tag := r.peek()
	_, inside := r.next()
	var t time.Time
	var err error
	switch tag {
	case tagUTCTime:
		if t, err = time.Parse(utcTime, string(inside)); err == nil && t.Year() >= 2050 {
			t = t.AddDate(-100, 0, 0) // Go splits the centuries at 1969, RFC 5280 at 1950
		}
	case tagGeneralizedTime:
		t, err = time.Parse(generalizedTime, string(inside))
	default:
		err = errors.New("is no time")
	}
	if err != nil {
		return time.Time{}, fmt.Errorf("signing time: %w", err)
	}
	if !bytes.Equal(encodeTime(t), value) {
		return time.Time{}, errors.New("signing time: not in the form that RFC 5652, 11.3 prescribes")
	}
	return t, nil
}
