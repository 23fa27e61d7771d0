package identity

import (
	"bytes"
	"crypto"
	"crypto/aes"
	"crypto/cipher"
	"crypto/pbkdf2"
	"crypto/sha256"
	"crypto/x509"
	"crypto/x509/pkix"
	"encoding/asn1"
	"encoding/pem"
	"errors"
	"fmt"
	"hash"
	"io"
)

// Iterations of PBKDF2: what is written, and the most that is read, so that a hostile file cannot keep a reader busy.
const (
	writeIterations = 600_000 // OWASP's recommendation of 2023 for PBKDF2-HMAC-SHA256 (from memory)
	maxIterations   = 10_000_000
)

// ErrPassphrase is returned, wrapped, for a passphrase that does not open a key. A key file with damaged contents looks the same.
var ErrPassphrase = errors.New("the passphrase is wrong, or the key file is damaged")

const pemType = "ENCRYPTED PRIVATE KEY" // RFC 7468, 11

// Encrypted PKCS #8 (RFC 5958, 3) with PBES2 (RFC 8018, A.4).
type (
	encryptedKey struct {
		Algorithm pbes2Algorithm
		Data      []byte
	}
	pbes2Algorithm struct {
		OID        asn1.ObjectIdentifier
		Parameters pbes2
	}
	pbes2 struct {
		Derivation struct {
			OID        asn1.ObjectIdentifier
			Parameters pbkdf2Parameters
		}
		Encryption struct {
			OID asn1.ObjectIdentifier
			IV  []byte
		}
	}
	pbkdf2Parameters struct {
		Salt       []byte
		Iterations int
		KeyLength  int `asn1:"optional"`
		PRF        pkix.AlgorithmIdentifier
	}
)

var (
	oidPBES2      = asn1.ObjectIdentifier{1, 2, 840, 113549, 1, 5, 13}
	oidPBKDF2     = asn1.ObjectIdentifier{1, 2, 840, 113549, 1, 5, 12}
	oidHMACSHA256 = asn1.ObjectIdentifier{1, 2, 840, 113549, 2, 9}
	oidAES256CBC  = asn1.ObjectIdentifier{2, 16, 840, 1, 101, 3, 4, 1, 42}
)

// EncryptKey returns a private key in PEM form, encrypted with a passphrase: PKCS #8, PBES2 with PBKDF2-HMAC-SHA256 (600,000
// iterations) and AES-256-CBC. The same random bytes give the same file, so random must be a secure source in earnest.
func EncryptKey(key crypto.Signer, passphrase []byte, random io.Reader) ([]byte, error) {
	if len(passphrase) == 0 {
		return nil, errors.New("private key: the passphrase is empty")
	}
	plain, err := x509.MarshalPKCS8PrivateKey(key)
	if err != nil {
		return nil, fmt.Errorf("private key: %w", err)
	}
	drawn := make([]byte, 32)
	if _, err := io.ReadFull(random, drawn); err != nil {
		return nil, fmt.Errorf("private key: %w", err)
	}
	salt, iv := drawn[:16], drawn[16:]
	block, err := derive(passphrase, salt, writeIterations)
	if err != nil {
		return nil, err
	}
	pad := aes.BlockSize - len(plain)%aes.BlockSize
	plain = append(plain, bytes.Repeat([]byte{byte(pad)}, pad)...)
	cipher.NewCBCEncrypter(block, iv).CryptBlocks(plain, plain)
	out := encryptedKey{Data: plain, Algorithm: pbes2Algorithm{OID: oidPBES2}}
	p := &out.Algorithm.Parameters
	p.Derivation.OID, p.Encryption.OID, p.Encryption.IV = oidPBKDF2, oidAES256CBC, iv
	p.Derivation.Parameters = pbkdf2Parameters{Salt: salt, Iterations: writeIterations, PRF: pkix.AlgorithmIdentifier{Algorithm: oidHMACSHA256, Parameters: asn1.NullRawValue}}
	der, err := asn1.Marshal(out)
	if err != nil {
		return nil, fmt.Errorf("private key: %w", err)
	}
	return pem.EncodeToMemory(&pem.Block{Type: pemType, Bytes: der}), nil
}

// DecryptKey opens a private key in the form that EncryptKey writes; general tools write it too. The error wraps
// ErrPassphrase when the passphrase does not open it.
func DecryptKey(data, passphrase []byte) (crypto.Signer, error) {
	block, _ := pem.Decode(data)
	if block == nil || block.Type != pemType {
		return nil, fmt.Errorf("private key: want a PEM block %q, encrypted with a passphrase", pemType)
	}
	var k encryptedKey
	if rest, err := asn1.Unmarshal(block.Bytes, &k); err != nil || len(rest) > 0 {
		return nil, errors.New("private key: want encrypted PKCS #8 with PBES2, PBKDF2 with HMAC-SHA256, and AES-256-CBC")
	}
	if err := k.acceptable(); err != nil {
		return nil, err
	}
	p := k.Algorithm.Parameters
	c, err := derive(passphrase, p.Derivation.Parameters.Salt, p.Derivation.Parameters.Iterations)
	if err != nil {
		return nil, err
	}
	plain := make([]byte, len(k.Data))
	cipher.NewCBCDecrypter(c, p.Encryption.IV).CryptBlocks(plain, k.Data)
	pad := int(plain[len(plain)-1])
	if pad < 1 || pad > aes.BlockSize || !bytes.Equal(plain[len(plain)-pad:], bytes.Repeat([]byte{byte(pad)}, pad)) {
		return nil, fmt.Errorf("private key: %w", ErrPassphrase)
	}
	key, err := x509.ParsePKCS8PrivateKey(plain[:len(plain)-pad])
	if err != nil {
		return nil, fmt.Errorf("private key: %w", ErrPassphrase)
	}
	signer, ok := key.(crypto.Signer)
	if !ok {
		return nil, fmt.Errorf("private key: a key of type %T cannot sign", key)
	}
	return signer, nil
}

func (k *encryptedKey) acceptable() error {
	p := k.Algorithm.Parameters
	d := p.Derivation.Parameters
	for _, c := range []struct {
		what      string
		got, want asn1.ObjectIdentifier
	}{
		{"scheme", k.Algorithm.OID, oidPBES2}, {"key derivation", p.Derivation.OID, oidPBKDF2},
		{"pseudo-random function", d.PRF.Algorithm, oidHMACSHA256}, {"cipher", p.Encryption.OID, oidAES256CBC},
	} {
		if !c.got.Equal(c.want) {
			return fmt.Errorf("private key: the %s is %v, want %v (PBES2, PBKDF2, HMAC-SHA256, AES-256-CBC)", c.what, c.got, c.want)
		}
	}
	switch {
	case d.Iterations < 1 || d.Iterations > maxIterations:
		return fmt.Errorf("private key: %d iterations, want 1 to %d", d.Iterations, maxIterations)
	case d.KeyLength != 0 && d.KeyLength != 32:
		return fmt.Errorf("private key: a derived key of %d bytes, want 32", d.KeyLength)
	case len(d.Salt) < 8 || len(d.Salt) > 1024:
		return fmt.Errorf("private key: a salt of %d bytes, want 8 to 1024", len(d.Salt))
	case len(p.Encryption.IV) != aes.BlockSize:
		return fmt.Errorf("private key: an initial vector of %d bytes, want %d", len(p.Encryption.IV), aes.BlockSize)
	case len(k.Data) == 0 || len(k.Data)%aes.BlockSize != 0:
		return fmt.Errorf("private key: %d encrypted bytes, want a multiple of %d", len(k.Data), aes.BlockSize)
	}
	return nil
}

func derive(passphrase, salt []byte, iterations int) (cipher.Block, error) {
	key, err := pbkdf2.Key(func() hash.Hash { return sha256.New() }, string(passphrase), salt, iterations, 32)
	if err != nil {
		return nil, fmt.Errorf("private key: %w", err)
	}
	return aes.NewCipher(key)
}
