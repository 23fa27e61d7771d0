package cms

import (
	"bytes"
	"crypto/x509"
	"encoding/pem"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
)

// program finds an outside program. Where it is absent the test is skipped, except in continuous integration.
func program(t testing.TB, name string) string {
	t.Helper()
	path, err := exec.LookPath(name)
	if err != nil {
		if os.Getenv("CI") != "" {
			t.Fatalf("%s is not installed, and nothing may be skipped here", name)
		}
		t.Skipf("%s is not installed: this check was not made", name)
	}
	return path
}

// A workbench is a folder with the files that openssl is given.
type workbench struct {
	t       testing.TB
	dir     string
	openssl string
}

func newWorkbench(t testing.TB) workbench {
	w := workbench{t, t.TempDir(), program(t, "openssl")}
	who := players()
	w.file("content", content)
	w.file("root.pem", certPEM(who.root.cert))
	w.file("middle.pem", certPEM(who.middle.cert))
	return w
}

func (w workbench) file(name string, data []byte) {
	w.t.Helper()
	if err := os.WriteFile(filepath.Join(w.dir, name), data, 0o600); err != nil {
		w.t.Fatal(err)
	}
}

// party writes a certificate and its key.
func (w workbench) party(name string, p *party) {
	w.t.Helper()
	key, err := x509.MarshalPKCS8PrivateKey(p.key)
	if err != nil {
		w.t.Fatal(err)
	}
	w.file(name+".pem", certPEM(p.cert))
	w.file(name+".key", pem.EncodeToMemory(&pem.Block{Type: "PRIVATE KEY", Bytes: key}))
}

func (w workbench) run(args ...string) (string, error) {
	cmd := exec.Command(w.openssl, args...)
	cmd.Dir = w.dir
	out, err := cmd.CombinedOutput()
	return string(out), err
}

func certPEM(c *x509.Certificate) []byte {
	return pem.EncodeToMemory(&pem.Block{Type: "CERTIFICATE", Bytes: c.Raw})
}

// TestOpenSSLVerifies has OpenSSL verify what is signed here, also by the rules of CAdES.
func TestOpenSSLVerifies(t *testing.T) {
	who := players()
	rsaSigner := newParty(rsaKey(), "rsa", false, who.middle)
	w := newWorkbench(t)
	for _, p := range []*party{who.signer, rsaSigner} {
		w.file("signature", mustSign(t, p, "authorised", who.middle.cert))
		for _, extra := range [][]string{nil, {"-cades"}} {
			args := append([]string{"cms", "-verify", "-binary", "-inform", "DER", "-in", "signature", "-content", "content", "-CAfile", "root.pem", "-out", os.DevNull}, extra...)
			if out, err := w.run(args...); err != nil {
				t.Errorf("%v: %v\n%s", extra, err, out)
			}
		}
		if out, err := w.run("cms", "-cmsout", "-print", "-noout", "-inform", "DER", "-in", "signature"); err != nil || !strings.Contains(out, "authorised") {
			t.Errorf("the meaning is not printed: %v\n%s", err, out)
		}
	}
	w.file("content", append(bytes.Clone(content), ' '))
	if _, err := w.run("cms", "-verify", "-binary", "-inform", "DER", "-in", "signature", "-content", "content", "-CAfile", "root.pem", "-out", os.DevNull); err == nil {
		t.Error("openssl verifies over other content: it proves nothing")
	}
}

// TestOpenSSLSigns verifies here what OpenSSL signed, and refuses what it can sign and should not.
func TestOpenSSLSigns(t *testing.T) {
	who := players()
	w := newWorkbench(t)
	ec, rsaSigner := who.signer, newParty(rsaKey(), "rsa", false, who.middle)
	for _, tt := range []struct {
		name, want string
		signer     *party
		extra      []string
	}{
		{"ECDSA", "", ec, []string{"-cades"}},
		{"ECDSA without capabilities", "", ec, []string{"-cades", "-nosmimecap"}},
		{"ECDSA with its chain", "", ec, []string{"-cades", "-certfile", "middle.pem"}},
		{"RSA PKCS #1 v1.5", "", rsaSigner, []string{"-cades"}},
		{"RSA PSS", "", rsaSigner, []string{"-cades", "-keyopt", "rsa_padding_mode:pss", "-keyopt", "rsa_pss_saltlen:32"}},
		{"RSA PSS, salt of another length", "signature algorithm", rsaSigner, []string{"-cades", "-keyopt", "rsa_padding_mode:pss", "-keyopt", "rsa_pss_saltlen:20"}},
		{"no certificate named", "signing-certificate-v2 is missing", ec, nil},
		{"no attributes", "no signed attributes", ec, []string{"-noattr"}},
		{"SHA-384", "SHA-256", ec, []string{"-cades", "-md", "sha384"}},
		{"content inside", "content must be outside", ec, []string{"-cades", "-nodetach"}},
		{"signer named by key", "issuer and serial", ec, []string{"-cades", "-keyid"}},
		{"no certificate", "certificates", ec, []string{"-cades", "-nocerts"}},
		{"two signers", "more than one signer", ec, []string{"-cades", "-signer", "second.pem", "-inkey", "second.key"}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			w.party("signer", tt.signer)
			w.party("second", newParty(ecKey(), "second", false, who.middle))
			args := []string{"cms", "-sign", "-binary", "-in", "content", "-outform", "DER", "-out", "signature", "-signer", "signer.pem", "-inkey", "signer.key"}
			if out, err := w.run(append(args, tt.extra...)...); err != nil {
				t.Fatalf("%v\n%s", err, out)
			}
			der, err := os.ReadFile(filepath.Join(w.dir, "signature"))
			if err != nil {
				t.Fatal(err)
			}
			v, err := Verify(der, content)
			switch {
			case tt.want == "" && err != nil, tt.want != "" && (err == nil || !strings.Contains(err.Error(), tt.want)):
				t.Errorf("%v, want %q", err, tt.want)
			case err == nil && (v.Meaning != "" || !v.Certificate.Equal(tt.signer.cert)):
				t.Errorf("%+v", v)
			}
			if tt.want == "" {
				guarded(t, der)
			}
		})
	}
}

// guarded flips one bit in each byte of a signature that another program made. A certificate above the signer's that
// signing-certificate-v2 does not name is vouched for by its own issuer, which is not here: package bundle looks at that.
func guarded(t *testing.T, der []byte) {
	t.Helper()
	middle := players().middle.cert.Raw
	loose := bytes.Index(der, middle)
	for i := range der {
		if loose >= 0 && i >= loose && i < loose+len(middle) {
			continue
		}
		altered := bytes.Clone(der)
		altered[i] ^= 1 << (i % 8)
		if _, err := Verify(altered, content); err == nil {
			t.Errorf("byte %d: accepted", i)
		}
	}
}

// TestOpenSSLTakesTheForgery shows that the forgery of TestStrippedAttributes is one that a general tool accepts, so that
// refusing it here is worth a test. Where a later release refuses it too, so much the better.
func TestOpenSSLTakesTheForgery(t *testing.T) {
	w := newWorkbench(t)
	s := parts(t, "authorised")
	s.certificates = sortedSet(append(s.certificates, players().middle.cert.Raw))
	w.file("signature", withoutAttributes(s))
	w.file("content", s.signed())
	out, err := w.run("cms", "-verify", "-binary", "-inform", "DER", "-in", "signature", "-content", "content", "-CAfile", "root.pem", "-out", os.DevNull)
	t.Logf("openssl: %v %s", err, out)
	if _, err := Verify(withoutAttributes(s), s.signed()); err == nil {
		t.Error("accepted here")
	}
}
