package cms

import (
	"compress/gzip"
	"crypto/x509"
	"encoding/hex"
	"encoding/json"
	"os"
	"testing"
)

// TestWycheproof: signature values of the collection C2SP/wycheproof; see testdata/SOURCES.md. Of a signature that it calls
// acceptable (a missing NULL in the padding), either verdict would do.
func TestWycheproof(t *testing.T) {
	for _, tt := range []struct {
		file      string
		algorithm []byte
		tests     int
	}{
		{"ecdsa_secp256r1_sha256_test", algECDSA, 484},
		{"rsa_signature_2048_sha256_test", algRSAWithSHA256, 259},
		{"rsa_pss_2048_sha256_mgf1_32_test", algPSS, 108},
	} {
		f, err := os.Open("../../../testdata/wycheproof/" + tt.file + ".json.gz")
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		z, err := gzip.NewReader(f)
		if err != nil {
			t.Fatal(err)
		}
		var vectors struct {
			TestGroups []struct {
				PublicKeyDer string
				Tests        []struct {
					TcID         int
					Comment, Msg string
					Sig, Result  string
				}
			}
		}
		if err := json.NewDecoder(z).Decode(&vectors); err != nil {
			t.Fatal(err)
		}
		n := 0
		for _, g := range vectors.TestGroups {
			der := unhex(t, g.PublicKeyDer)
			key, err := x509.ParsePKIXPublicKey(der)
			if err != nil {
				t.Fatalf("%s: %v", tt.file, err)
			}
			for _, v := range g.Tests {
				n++
				err := verifySignature(key, tt.algorithm, unhex(t, v.Msg), unhex(t, v.Sig))
				if v.Result == "valid" && err != nil || v.Result == "invalid" && err == nil {
					t.Errorf("%s, test %d (%s) is %s: %v", tt.file, v.TcID, v.Comment, v.Result, err)
				}
			}
		}
		if n != tt.tests {
			t.Errorf("%s: %d tests, want %d", tt.file, n, tt.tests)
		}
	}
}

func unhex(t *testing.T, s string) []byte {
	t.Helper()
	b, err := hex.DecodeString(s)
	if err != nil {
		t.Fatal(err)
	}
	return b
}
