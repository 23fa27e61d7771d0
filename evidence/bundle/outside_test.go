package bundle

import (
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"assaywrit/evidence/bundle/identity"
)

// TestWithoutThisProgram unpacks a signed bundle with unzip and checks it with sha256sum and OpenSSL; each must notice a change.
func TestWithoutThisProgram(t *testing.T) {
	unzip, sum, openssl := program(t, "unzip"), program(t, "sha256sum"), program(t, "openssl")
	dir := t.TempDir()
	zipPath, root := filepath.Join(dir, "case.zip"), filepath.Join(dir, "root.pem")
	for path, data := range map[string][]byte{zipPath: signedBundle(t), root: identity.CertificatePEM(laboratory().root.Certificate)} {
		if err := os.WriteFile(path, data, 0o600); err != nil {
			t.Fatal(err)
		}
	}
	bag := filepath.Join(dir, "bag")
	run := func(name string, args ...string) error {
		cmd := exec.Command(name, args...)
		cmd.Env = append(os.Environ(), "LC_ALL=C.UTF-8")
		if _, err := os.Stat(bag); err == nil {
			cmd.Dir = bag
		}
		out, err := cmd.CombinedOutput()
		if err != nil {
			t.Logf("%s %s\n%s", filepath.Base(name), strings.Join(args, " "), out)
		}
		return err
	}
	if err := run(unzip, "-tq", zipPath); err != nil {
		t.Fatal(err)
	}
	if err := run(unzip, "-q", zipPath, "-d", bag); err != nil {
		t.Fatal(err)
	}
	verify := func(signature string, extra ...string) error {
		return run(openssl, append([]string{"cms", "-verify", "-binary", "-inform", "DER", "-in", "seal/signatures/" + signature, "-content", statementPath, "-CAfile", root, "-out", os.DevNull}, extra...)...)
	}
	checks := map[string]func() error{
		manifestPath:    func() error { return run(sum, "--strict", "-c", manifestPath) },
		tagManifestPath: func() error { return run(sum, "--strict", "-c", tagManifestPath) },
		"P-04":          func() error { return verify("P-04-reviewed.p7s") },
		"P-05":          func() error { return verify("P-05-authorised.p7s", "-cades") },
	}
	for name, check := range checks {
		if err := check(); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
	for _, path := range []string{"data/evidence/evidence.json", statementPath} {
		file := filepath.Join(bag, filepath.FromSlash(path))
		data, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		data[len(data)/2] ^= 1
		if err := os.WriteFile(file, data, 0o600); err != nil {
			t.Fatal(err)
		}
	}
	for name, check := range checks {
		if err := check(); err == nil {
			t.Errorf("%s: the change was not noticed", name)
		}
	}
}
