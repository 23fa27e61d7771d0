package cms

import (
	"bytes"
	"crypto"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/rsa"
	"crypto/sha256"
	"errors"
	"fmt"
)

const minRSABits = 2048

var (
	null = []byte{0x05, 0x00}

	// RFC 5754, 2: parameters are absent when written, and absent or NULL when read.
	algSHA256         = sequence(oid("2.16.840.1.101.3.4.2.1"))
	algSHA256WithNull = sequence(oid("2.16.840.1.101.3.4.2.1"), null)

	algECDSA         = sequence(oid("1.2.840.10045.4.3.2"))         // ecdsa-with-SHA256
	algRSAWithSHA256 = sequence(oid("1.2.840.113549.1.1.11"), null) // sha256WithRSAEncryption
	algRSA           = sequence(oid("1.2.840.113549.1.1.1"), null)  // rsaEncryption: the digest is the signer's
	// RSASSA-PSS with SHA-256, MGF1 with SHA-256 and a salt of 32 bytes (RFC 4056, 3).
	algPSS = sequence(oid("1.2.840.113549.1.1.10"), sequence(
		element(tagContext0, algSHA256WithNull),
		element(tagContext1, sequence(oid("1.2.840.113549.1.1.8"), algSHA256WithNull)),
		element(tagContext2, []byte{tagInteger, 1, 32}),
	))
)

func isSHA256(algorithm []byte) bool {
	return bytes.Equal(algorithm, algSHA256) || bytes.Equal(algorithm, algSHA256WithNull)
}

// verifySignature checks a signature over message with the algorithm, given as a whole AlgorithmIdentifier.
func verifySignature(key crypto.PublicKey, algorithm, message, signature []byte) error {
	digest := sha256.Sum256(message)
	switch k := key.(type) {
	case *ecdsa.PublicKey:
		switch {
		case k.Curve != elliptic.P256():
			return fmt.Errorf("the key is on the curve %s, want P-256", k.Curve.Params().Name)
		case !bytes.Equal(algorithm, algECDSA):
			return errors.New("the signature algorithm does not fit the key, want ecdsa-with-SHA256")
		case !ecdsa.VerifyASN1(k, digest[:], signature):
			return errors.New("the value does not verify")
		}
		return nil
	case *rsa.PublicKey:
		if k.N.BitLen() < minRSABits {
			return fmt.Errorf("the RSA key has %d bits, want %d or more", k.N.BitLen(), minRSABits)
		}
		switch {
		case bytes.Equal(algorithm, algRSA), bytes.Equal(algorithm, algRSAWithSHA256):
			return rsa.VerifyPKCS1v15(k, crypto.SHA256, digest[:], signature)
		case bytes.Equal(algorithm, algPSS):
			return rsa.VerifyPSS(k, crypto.SHA256, digest[:], signature, &rsa.PSSOptions{SaltLength: sha256.Size})
		}
		return errors.New("the signature algorithm does not fit the key, want RSA with SHA-256")
	}
	return fmt.Errorf("a key of type %T, want ECDSA on P-256 or RSA", key)
}

// makeSignature signs message and names the algorithm. A software key on P-256 signs deterministically (RFC 6979).
func makeSignature(signer crypto.Signer, message []byte) (algorithm, signature []byte, err error) {
	digest := sha256.Sum256(message)
	switch signer.Public().(type) {
	case *ecdsa.PublicKey:
		algorithm = algECDSA
	case *rsa.PublicKey:
		algorithm = algRSAWithSHA256
	}
	random := rand.Reader
	if _, software := signer.(*ecdsa.PrivateKey); software {
		random = nil
	}
	if signature, err = signer.Sign(random, digest[:], crypto.SHA256); err != nil {
		return nil, nil, err
	}
	return algorithm, signature, verifySignature(signer.Public(), algorithm, message, signature)
}
