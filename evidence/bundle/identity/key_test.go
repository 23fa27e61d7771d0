package identity_test

import (
	"bytes"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/x509"
	"encoding/pem"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"assaywrit/evidence/bundle/identity"
)

func openssl(t testing.TB, args ...string) []byte {
	t.Helper()
	path, err := exec.LookPath("openssl")
	if err != nil {
		if os.Getenv("CI") != "" {
			t.Fatal("openssl is not installed, and nothing may be skipped here")
		}
		t.Skip("openssl is not installed: this check was not made")
	}
	out, err := exec.Command(path, args...).CombinedOutput()
	if err != nil {
		t.Fatalf("openssl %s: %v\n%s", strings.Join(args, " "), err, out)
	}
	return out
}

func TestKeyRoundTrip(t *testing.T) {
	id := newRoot(t, false)
	data, err := identity.EncryptKey(id.Key, []byte("correct horse"), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	back, err := identity.DecryptKey(data, []byte("correct horse"))
	if err != nil {
		t.Fatal(err)
	}
	if !id.Key.(*ecdsa.PrivateKey).Equal(back) {
		t.Error("another key came back")
	}
	if _, err := identity.DecryptKey(data, []byte("incorrect horse")); !errors.Is(err, identity.ErrPassphrase) {
		t.Errorf("wrong passphrase: %v", err)
	}
	if _, err := identity.EncryptKey(id.Key, nil, rand.Reader); err == nil {
		t.Error("an empty passphrase was taken")
	}
}

func TestKeyIsReadByOpenSSL(t *testing.T) {
	id := newRoot(t, false)
	data, err := identity.EncryptKey(id.Key, []byte("correct horse"), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "key.pem")
	if err := os.WriteFile(path, data, 0o600); err != nil {
		t.Fatal(err)
	}
	public := openssl(t, "pkey", "-in", path, "-passin", "pass:correct horse", "-pubout", "-outform", "DER")
	want, err := x509.MarshalPKIXPublicKey(id.Key.Public())
	if err != nil || !bytes.Equal(public, want) {
		t.Errorf("openssl reads another key (%v)", err)
	}
	listing := string(openssl(t, "asn1parse", "-in", path))
	for _, want := range []string{"PBES2", "PBKDF2", ":0927C0", "hmacWithSHA256", "aes-256-cbc"} { // 0x0927C0 = 600,000
		if !strings.Contains(listing, want) {
			t.Errorf("%s is missing in\n%s", want, listing)
		}
	}
}

func TestKeyOfOpenSSLIsRead(t *testing.T) {
	for _, extra := range [][]string{{"-iter", "600000"}, {}} {
		dir := t.TempDir()
		plain, encrypted := filepath.Join(dir, "plain.pem"), filepath.Join(dir, "encrypted.pem")
		openssl(t, "genpkey", "-algorithm", "EC", "-pkeyopt", "ec_paramgen_curve:P-256", "-out", plain)
		openssl(t, append([]string{"pkcs8", "-topk8", "-v2", "aes-256-cbc", "-v2prf", "hmacWithSHA256", "-in", plain, "-out", encrypted, "-passout", "pass:correct horse"}, extra...)...)
		data, err := os.ReadFile(encrypted)
		if err != nil {
			t.Fatal(err)
		}
		key, err := identity.DecryptKey(data, []byte("correct horse"))
		if err != nil {
			t.Fatal(err)
		}
		got, err := x509.MarshalPKIXPublicKey(key.Public())
		if want := openssl(t, "pkey", "-in", plain, "-pubout", "-outform", "DER"); err != nil || !bytes.Equal(got, want) {
			t.Errorf("another key was read (%v)", err)
		}
	}
}

func TestHostileKeys(t *testing.T) {
	id := newRoot(t, false)
	good, err := identity.EncryptKey(id.Key, []byte("x"), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	block, _ := pem.Decode(good)
	altered := func(old, with []byte) []byte {
		if bytes.Count(block.Bytes, old) != 1 || len(old) != len(with) {
			t.Fatalf("% x is not there once", old)
		}
		return pem.EncodeToMemory(&pem.Block{Type: block.Type, Bytes: bytes.Replace(block.Bytes, old, with, 1)})
	}
	for _, tt := range []struct {
		name, want string
		data       []byte
	}{
		{"no PEM", "PEM block", []byte("hello")},
		{"unencrypted", "PEM block", pem.EncodeToMemory(&pem.Block{Type: "PRIVATE KEY", Bytes: block.Bytes})},
		{"cut short", "PKCS #8", pem.EncodeToMemory(&pem.Block{Type: block.Type, Bytes: block.Bytes[:len(block.Bytes)-1]})},
		{"trailing byte", "PKCS #8", pem.EncodeToMemory(&pem.Block{Type: block.Type, Bytes: append(bytes.Clone(block.Bytes), 0)})},
		{"another hash", "pseudo-random function", altered([]byte{0x86, 0xf7, 0x0d, 2, 9}, []byte{0x86, 0xf7, 0x0d, 2, 7})},
		{"another cipher", "cipher", altered([]byte{3, 4, 1, 42}, []byte{3, 4, 1, 2})},
	} {
		if _, err := identity.DecryptKey(tt.data, []byte("x")); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: %v", tt.name, err)
		}
	}
}

// TestTooManyIterations asks for 2^31-1 iterations, which would take minutes.
func TestTooManyIterations(t *testing.T) {
	id := newRoot(t, false)
	data, err := identity.EncryptKey(id.Key, []byte("x"), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	block, _ := pem.Decode(data)
	// One byte more in the iteration count lengthens the four sequences around it.
	der := bytes.Replace(block.Bytes, []byte{2, 3, 0x09, 0x27, 0xc0}, []byte{2, 4, 0x7f, 0xff, 0xff, 0xff}, 1)
	at := bytes.Index(der, []byte{2, 4, 0x7f, 0xff})
	for _, i := range enclosing(t, der, at) {
		der[i]++
	}
	began := time.Now()
	_, err = identity.DecryptKey(pem.EncodeToMemory(&pem.Block{Type: block.Type, Bytes: der}), []byte("x"))
	if err == nil || !strings.Contains(err.Error(), "2147483647 iterations") || time.Since(began) > 5*time.Second {
		t.Errorf("%v, after %v", err, time.Since(began))
	}
}

// enclosing finds where the (last) length byte of every sequence around position at lies.
func enclosing(t testing.TB, der []byte, at int) []int {
	t.Helper()
	var found []int
	for i := 0; i < at; {
		length, head := int(der[i+1]), 2
		if length&0x80 != 0 {
			head, length = 3, int(der[i+2])
		}
		if der[i] == 0x30 && i+head+length >= at {
			found = append(found, i+head-1)
			i += head
			continue
		}
		i += head + length
	}
	return found
}

func FuzzDecryptKey(f *testing.F) {
	key, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	if err != nil {
		f.Fatal(err)
	}
	data, err := identity.EncryptKey(key, []byte("x"), bytes.NewReader(make([]byte, 64)))
	if err != nil {
		f.Fatal(err)
	}
	block, _ := pem.Decode(data)
	f.Add(block.Bytes)
	f.Fuzz(func(t *testing.T, der []byte) {
		if bytes.Contains(der, []byte{2, 3}) && len(der) > 200 {
			return // it would spend its time in the key derivation
		}
		_, _ = identity.DecryptKey(pem.EncodeToMemory(&pem.Block{Type: "ENCRYPTED PRIVATE KEY", Bytes: der}), []byte("y"))
	})
}

func ExampleNewSignatory() {
	from := time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)
	root, err := identity.NewRoot(identity.RootOptions{Laboratory: "LAB-07", NotBefore: from, NotAfter: from.AddDate(10, 0, 0), Rand: rand.Reader})
	if err != nil {
		fmt.Println(err)
		return
	}
	id, err := identity.NewSignatory(root, identity.SignatoryOptions{Person: "P-04", Position: "reviewer", NotBefore: from, NotAfter: from.AddDate(3, 0, 0), Rand: rand.Reader})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(identity.PersonOf(id.Certificate), id.Certificate.CheckSignatureFrom(root.Certificate))
	// Output: P-04 <nil>
}
