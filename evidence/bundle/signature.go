package bundle

import (
	"archive/zip"
	"crypto/sha256"
	"crypto/x509"
	"encoding/asn1"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"
	"time"

	"assaywrit/evidence/bundle/cms"
	"assaywrit/evidence/bundle/identity"
)

// A SignatureResult is what one signature file says, and whether it holds.
type SignatureResult struct {
	File                   string
	Person                 string // code, from the certificate
	Position               string // from the statement
	Meaning                string
	Subject                string    // of the certificate (RFC 2253)
	CertificateFingerprint string    // SHA-256 of the certificate, lower-case hexadecimal
	SigningTime            time.Time // as the signer claims it: no timestamp stands behind it
	Trusted                bool      // it holds, and its certificate leads to one of the roots
	Problem                string    // why it does not hold, or is not trusted; empty where no root was given to trust
}

// CheckSignatures checks every signature file, in the order of their names. A signature holds if it is over the statement as
// it is (see cms.Verify), and its certificate is that of a person whom the statement asks to sign with that meaning. It is
// trusted if besides its certificate leads to one of roots, and was valid at the claimed signing time. Without roots nothing
// is trusted; certificates in the bundle never are by themselves.
func CheckSignatures(b *Bundle, roots []*x509.Certificate) []SignatureResult {
	var results []SignatureResult
	signed := map[[2]string]string{}
	for _, path := range b.SignaturePaths() {
		r, v := b.examine(path)
		if key := [2]string{r.Person, r.Meaning}; r.Problem == "" {
			if first := signed[key]; first != "" {
				r.Problem = fmt.Sprintf("%s has signed as %q already, in %s", r.Person, r.Meaning, first)
			}
			signed[key] = path
		}
		if r.Problem == "" && len(roots) > 0 {
			if err := leadsTo(roots, v); err != nil {
				r.Problem = "the signature holds, but its certificate does not lead to a trusted one: " + err.Error()
			} else {
				r.Trusted = true
			}
		}
		results = append(results, r)
	}
	return results
}

// MissingSignatories returns those whom the statement asks to sign and of whom no signature holds. Whether a signature is
// trusted is for CheckSignatures to say.
func MissingSignatories(b *Bundle) []Signatory {
	results := CheckSignatures(b, nil)
	var missing []Signatory
	for _, s := range b.statement.Signatories {
		if !slices.ContainsFunc(results, func(r SignatureResult) bool {
			return r.Problem == "" && r.Person == s.Person && r.Meaning == s.Meaning
		}) {
			missing = append(missing, s)
		}
	}
	return missing
}

// AddSignature writes the bundle with one more signature, in the file seal/signatures/fileName. Every entry that is there is
// copied as it is packed. Whatever order signatures are added in, the same signatures give the same bytes. It refuses a
// signature that does not hold, and a second one of the same person with the same meaning; the files are for CheckFiles.
func AddSignature(w io.Writer, b *Bundle, fileName string, p7s []byte) error {
	path := signatureFolder + fileName
	if err := checkSignatureName(fileName); err != nil {
		return &RefusedError{Path: path, Reason: err.Error()}
	}
	seen := newNames()
	for _, p := range append(b.Paths(), path) {
		if err := seen.add(p); err != nil {
			return &RefusedError{Path: path, Reason: err.Error()}
		}
	}
	r, _ := b.examineBytes(path, p7s)
	if r.Problem != "" {
		return &RefusedError{Path: path, Reason: r.Problem}
	}
	for _, other := range CheckSignatures(b, nil) {
		if other.Problem == "" && other.Person == r.Person && other.Meaning == r.Meaning {
			return refuse(path, "%s has signed as %q already, in %s", r.Person, r.Meaning, other.File)
		}
	}
	z := zip.NewWriter(w)
	if err := b.copyWith(z, path, p7s); err != nil {
		return fmt.Errorf("bundle: %w", err)
	}
	if err := z.Close(); err != nil {
		return fmt.Errorf("bundle: %w", err)
	}
	return nil
}

// copyWith copies all entries, the signatures last and sorted, with the new one among them.
func (b *Bundle) copyWith(z *zip.Writer, path string, p7s []byte) error {
	pack, err := newPacker()
	if err != nil {
		return err
	}
	for _, p := range b.paths {
		if !isSignaturePath(p) {
			if err := copyEntry(z, b.files[p]); err != nil {
				return err
			}
		}
	}
	signatures := append(b.SignaturePaths(), path)
	slices.Sort(signatures)
	for _, p := range signatures {
		if p == path {
			err = pack.writeEntry(z, p, p7s)
		} else {
			err = copyEntry(z, b.files[p])
		}
		if err != nil {
			return err
		}
	}
	return nil
}

// copyEntry copies an entry as it is packed. Its zip64 sizes are left out, since the writer puts its own.
func copyEntry(z *zip.Writer, f *zip.File) error {
	raw, err := f.OpenRaw()
	if err != nil {
		return err
	}
	h := f.FileHeader
	h.Extra = withoutZip64(h.Extra)
	w, err := z.CreateRaw(&h)
	if err != nil {
		return err
	}
	_, err = io.Copy(w, raw)
	return err
}

// checkSignatureName accepts names that need no thought on any system.
func checkSignatureName(name string) error {
	stem, ok := strings.CutSuffix(name, signatureSuffix)
	bad := strings.ContainsFunc(stem, func(r rune) bool {
		return (r < 'a' || r > 'z') && (r < 'A' || r > 'Z') && (r < '0' || r > '9') && r != '-' && r != '_' && r != '.'
	})
	if !ok || stem == "" || bad || len(name) > 128 || checkSegment(name) != nil || stem[0] == '.' {
		return fmt.Errorf("%q is no name for a signature, want letters, digits, - _ . and %s at the end", shortened(name), signatureSuffix)
	}
	return nil
}

func (b *Bundle) readSignature(path string) ([]byte, error) {
	if f := b.files[path]; f != nil && f.UncompressedSize64 > cms.MaxSize {
		return nil, fmt.Errorf("has %d octets, want %d at most", f.UncompressedSize64, cms.MaxSize)
	}
	return b.ReadFile(path)
}

func (b *Bundle) examine(path string) (SignatureResult, *cms.Verified) {
	data, err := b.readSignature(path)
	if err != nil {
		return SignatureResult{File: path, Problem: err.Error()}, nil
	}
	return b.examineBytes(path, data)
}

// examineBytes says what a signature is and whether it holds, apart from trust.
func (b *Bundle) examineBytes(path string, p7s []byte) (SignatureResult, *cms.Verified) {
	r := SignatureResult{File: path}
	v, err := cms.Verify(p7s, b.sealed)
	if err != nil {
		r.Problem = err.Error()
		return r, nil
	}
	sum := sha256.Sum256(v.Certificate.Raw)
	r.Person, r.Meaning, r.SigningTime = identity.PersonOf(v.Certificate), v.Meaning, v.SigningTime
	r.Subject, r.CertificateFingerprint = v.Certificate.Subject.String(), hex.EncodeToString(sum[:])
	if err := maySign(v.Certificate); err != nil {
		r.Problem = "the certificate cannot be used to sign: " + err.Error()
		return r, v
	}
	st := b.statement
	if identity.IsDemonstration(v.Certificate) && !st.Demonstration {
		r.Problem = "the certificate is for demonstration, and the bundle is none"
		return r, v
	}
	asked := slices.IndexFunc(st.Signatories, func(s Signatory) bool { return s.Person == r.Person && s.Meaning == r.Meaning })
	if asked < 0 {
		r.Problem = fmt.Sprintf("the statement does not ask %q to sign as %q", r.Person, r.Meaning)
		return r, v
	}
	r.Position = st.Signatories[asked].Position
	return r, v
}

var (
	oidDocumentSigning = asn1.ObjectIdentifier{1, 3, 6, 1, 5, 5, 7, 3, 36} // RFC 9336
	oidAnyUsage        = asn1.ObjectIdentifier{2, 5, 29, 37, 0}            // RFC 5280, 4.2.1.12
)

// maySign checks that a certificate is one of a person who signs documents (RFC 5280, 4.2.1.3 and 4.2.1.12).
func maySign(c *x509.Certificate) error {
	if identity.PersonOf(c) == "" {
		return errors.New("its subject has no serialNumber that gives the person's code, or has several")
	}
	if c.IsCA {
		return errors.New("it is that of a certification authority")
	}
	if c.KeyUsage&(x509.KeyUsageDigitalSignature|x509.KeyUsageContentCommitment) == 0 {
		return errors.New("its key usage is neither digitalSignature nor nonRepudiation")
	}
	if len(c.ExtKeyUsage)+len(c.UnknownExtKeyUsage) == 0 {
		return nil
	}
	fits := slices.ContainsFunc(c.ExtKeyUsage, func(u x509.ExtKeyUsage) bool { return u == x509.ExtKeyUsageEmailProtection || u == x509.ExtKeyUsageAny }) ||
		slices.ContainsFunc(c.UnknownExtKeyUsage, func(u asn1.ObjectIdentifier) bool {
			return u.Equal(oidDocumentSigning) || u.Equal(oidAnyUsage)
		})
	if !fits {
		return errors.New("its extended key usage is neither documentSigning nor emailProtection")
	}
	return nil
}

// leadsTo builds the path from the signer's certificate to one of roots, at the claimed signing time. Every certificate that came
// with the signature must be on the path.
func leadsTo(roots []*x509.Certificate, v *cms.Verified) error {
	o := x509.VerifyOptions{
		Roots: x509.NewCertPool(), Intermediates: x509.NewCertPool(), CurrentTime: v.SigningTime,
		KeyUsages: []x509.ExtKeyUsage{x509.ExtKeyUsageAny},
	}
	for _, c := range roots {
		o.Roots.AddCert(c)
	}
	for _, c := range v.Intermediates {
		o.Intermediates.AddCert(c)
	}
	chains, err := v.Certificate.Verify(o)
	if err != nil {
		return err
	}
	for _, chain := range chains {
		onIt := func(c *x509.Certificate) bool { return slices.ContainsFunc(chain, c.Equal) }
		if !slices.ContainsFunc(v.Intermediates, func(c *x509.Certificate) bool { return !onIt(c) }) {
			return nil
		}
	}
	return errors.New("a certificate that came with the signature is not on the path to a root")
}
