// Package cms makes and verifies detached signatures: CMS SignedData (RFC 5652) with one signer, as DER.
//
// A signature holds these signed attributes, each once:
//
//	content-type                id-data                                   RFC 5652, 11.1
//	message-digest              SHA-256 of the content                    RFC 5652, 11.2
//	signing-time                as the signer claims it, to the second    RFC 5652, 11.3
//	signing-certificate-v2      SHA-256 of each enclosed certificate      RFC 5035, 3
//	commitment-type-indication  what the signature means                  RFC 5126, 5.11.1
//
// The meaning is one of three words. Its commitment type is the standard one that comes nearest, and the exact word
// stands in a qualifier, as a UTF8String, under an object identifier of our own (arc 2.25, ITU-T X.667):
//
//	analysed    proof of creation  1.2.840.113549.1.9.16.6.6
//	reviewed    proof of approval  1.2.840.113549.1.9.16.6.5
//	authorised  proof of origin    1.2.840.113549.1.9.16.6.1
//
// Reading is strict, because CMS can be forged where it is lax. A signature over content without signed attributes is
// also a signature over content whose attributes were made the content, so signed attributes are required; and every part
// of the file that nothing signs (versions, algorithm sets, order, lengths) must be exactly what this package would write,
// so that no byte of a signature file can be changed unnoticed. Signatures that other programs made are read if they
// keep to the same attributes; the commitment type may then be absent, and S/MIME capabilities may be present.
//
// Algorithms: SHA-256 with ECDSA on P-256, or with RSA of 2048 bits and more (PKCS #1 v1.5, or PSS with a salt of 32
// bytes when verifying). Whether the signer's certificate leads to a trusted root is not asked here: see package bundle.
// Left out on purpose: signed content inside the file, several signers in one file, unsigned attributes, revocation lists.
package cms

import "slices"

// A commitment ties a meaning to its standard commitment type.
type commitment struct {
	word string
	oid  []byte
}

// Sources: RFC 5126, 5.11.1 for the identifiers and what they state.
var commitments = []commitment{
	{"analysed", oid("1.2.840.113549.1.9.16.6.6")},
	{"reviewed", oid("1.2.840.113549.1.9.16.6.5")},
	{"authorised", oid("1.2.840.113549.1.9.16.6.1")},
}

// Meanings returns the words that a signature can carry.
func Meanings() []string {
	var words []string
	for _, c := range commitments {
		words = append(words, c.word)
	}
	return words
}

// KnownMeaning reports whether a signature can carry the word.
func KnownMeaning(word string) bool { return slices.Contains(Meanings(), word) }

// A RefusedError says why a signature is not accepted, or cannot be made.
type RefusedError struct {
	Reason string
	Err    error // what lies beneath, or nil
}

func (e *RefusedError) Error() string {
	if e.Err != nil {
		return "signature: " + e.Reason + ": " + e.Err.Error()
	}
	return "signature: " + e.Reason
}

func (e *RefusedError) Unwrap() error { return e.Err }

func refused(reason string) error { return &RefusedError{Reason: reason} }
