package bundle

import (
	"bytes"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"assaywrit/evidence/bundle/cms"
	"assaywrit/evidence/canonical"
)

// StatementFormat names the format of the statement, and with it that of the bundle.
const StatementFormat = "assaywrit-statement/1"

// A Header is what the writer of a bundle says about it.
type Header struct {
	Case       string
	SampleCode string
	Laboratory string // code or name

	EngineName    string
	EngineVersion string
	Toolchain     string // what the program was built with: PDFs depend on it, so the bundle names it

	Demonstration  bool
	Signatories    []Signatory // who is to sign
	Supersedes     *Supersedes
	EvidenceSHA256 string // optional: of the payload file that holds the evidence record
	FindingSHA256  string // optional: of the payload file that holds the finding
}

// A Signatory is a person who is to sign, and what the signature is to mean (one of cms.Meanings).
type Signatory struct {
	Meaning  string `json:"meaning"`
	Person   string `json:"person"`
	Position string `json:"position"`
}

// Supersedes names the bundle that a new one takes the place of.
type Supersedes struct {
	Reason string `json:"reason"`
	Root   string `json:"root"` // its Merkle root, lower-case hexadecimal
}

// A Statement is what signatories sign: it names every file by its hash. See the package comment.
type Statement struct {
	Format         string      `json:"format"`
	BundleID       string      `json:"bundle_id"`
	Case           string      `json:"case"`
	SampleCode     string      `json:"sample_code"`
	Laboratory     string      `json:"laboratory"`
	EngineName     string      `json:"engine_name"`
	EngineVersion  string      `json:"engine_version"`
	Toolchain      string      `json:"toolchain"`
	Demonstration  bool        `json:"demonstration"`
	BagItSHA256    string      `json:"bagit_sha256"`
	BagInfoSHA256  string      `json:"bag_info_sha256"`
	ManifestSHA256 string      `json:"manifest_sha256"`
	MerkleRoot     string      `json:"merkle_root"`
	PayloadFiles   int         `json:"payload_files"`
	PayloadOctets  int64       `json:"payload_octets"`
	EvidenceSHA256 string      `json:"evidence_sha256,omitempty"`
	FindingSHA256  string      `json:"finding_sha256,omitempty"`
	Signatories    []Signatory `json:"signatories"`
	Supersedes     *Supersedes `json:"supersedes,omitempty"`
}

// newStatement fills in everything but the hashes of bag-info.txt, which the statement itself gives.
func newStatement(h Header, leaves []leaf, manifest []byte) *Statement {
	root := merkleRoot(leaves)
	st := &Statement{
		Format: StatementFormat, BundleID: bundleID(root),
		Case: h.Case, SampleCode: h.SampleCode, Laboratory: h.Laboratory,
		EngineName: h.EngineName, EngineVersion: h.EngineVersion, Toolchain: h.Toolchain, Demonstration: h.Demonstration,
		BagItSHA256: hexSum([]byte(bagitText)), ManifestSHA256: hexSum(manifest), MerkleRoot: hex.EncodeToString(root[:]),
		PayloadFiles: len(leaves), EvidenceSHA256: h.EvidenceSHA256, FindingSHA256: h.FindingSHA256,
		Signatories: append([]Signatory{}, h.Signatories...), Supersedes: h.Supersedes,
	}
	for _, l := range leaves {
		st.PayloadOctets += l.Bytes
	}
	st.BagInfoSHA256 = hexSum(bagInfo(st))
	return st
}

// parseStatement reads a statement. Unknown keys, other encodings than the canonical one, and values out of form are
// refused.
func parseStatement(data []byte) (*Statement, error) {
	var st Statement
	dec := json.NewDecoder(bytes.NewReader(data))
	dec.DisallowUnknownFields()
	if err := dec.Decode(&st); err != nil {
		return nil, fmt.Errorf("is not a statement: %w", err)
	}
	if st.Format != StatementFormat {
		return nil, fmt.Errorf("the format is %q, want %q", st.Format, StatementFormat)
	}
	again, err := canonical.Marshal(&st)
	if err != nil {
		return nil, err
	}
	if !bytes.Equal(again, data) {
		return nil, errors.New("is not canonical JSON (RFC 8785) with exactly the keys of a statement")
	}
	return &st, st.check()
}

// check holds for what is written and for what is read.
func (st *Statement) check() error {
	for _, f := range []struct{ key, value string }{
		{"case", st.Case}, {"sample_code", st.SampleCode}, {"laboratory", st.Laboratory},
		{"engine_name", st.EngineName}, {"engine_version", st.EngineVersion}, {"toolchain", st.Toolchain},
	} {
		if err := checkLine(f.key, f.value); err != nil {
			return err
		}
	}
	sums := []struct{ key, value string }{
		{"bagit_sha256", st.BagItSHA256}, {"bag_info_sha256", st.BagInfoSHA256}, {"manifest_sha256", st.ManifestSHA256}, {"merkle_root", st.MerkleRoot},
	}
	for _, optional := range []struct{ key, value string }{{"evidence_sha256", st.EvidenceSHA256}, {"finding_sha256", st.FindingSHA256}} {
		if optional.value != "" {
			sums = append(sums, optional)
		}
	}
	if st.Supersedes != nil {
		sums = append(sums, struct{ key, value string }{"supersedes.root", st.Supersedes.Root})
		if r := st.Supersedes.Reason; strings.TrimSpace(r) == "" || !utf8.ValidString(r) {
			return fmt.Errorf("supersedes.reason is %q, want a reason", r)
		}
	}
	for _, s := range sums {
		if !isSum(s.value) {
			return fmt.Errorf("%s is %q, want 64 hexadecimal digits in lower case", s.key, s.value)
		}
	}
	if st.PayloadFiles < 1 || st.PayloadOctets < 0 {
		return fmt.Errorf("%d payload files of %d octets, want one file or more", st.PayloadFiles, st.PayloadOctets)
	}
	return st.checkSignatories()
}

func (st *Statement) checkSignatories() error {
	if st.Signatories == nil {
		return errors.New("signatories is missing, want a list, which may be empty")
	}
	seen := map[[2]string]bool{}
	for _, s := range st.Signatories {
		if err := errors.Join(checkLine("signatories.person", s.Person), checkLine("signatories.position", s.Position)); err != nil {
			return err
		}
		if !cms.KnownMeaning(s.Meaning) {
			return fmt.Errorf("signatories.meaning is %q, want one of %s", s.Meaning, strings.Join(cms.Meanings(), ", "))
		}
		key := [2]string{s.Person, s.Meaning}
		if seen[key] {
			return fmt.Errorf("the signatory %q is named twice as %q", s.Person, s.Meaning)
		}
		seen[key] = true
	}
	return nil
}

// checkLine refuses text that is empty, not one line, or would read otherwise in bag-info.txt.
func checkLine(key, value string) error {
	if value == "" {
		return fmt.Errorf("%s is empty", key)
	}
	if !utf8.ValidString(value) || strings.TrimSpace(value) != value || strings.ContainsFunc(value, unicode.IsControl) {
		return fmt.Errorf("%s is %q, want one line of UTF-8 text without space around it", key, value)
	}
	return nil
}

// isSum reports whether s is a SHA-256 in lower-case hexadecimal.
func isSum(s string) bool {
	if len(s) != 64 {
		return false
	}
	for i := range len(s) {
		if (s[i] < '0' || s[i] > '9') && (s[i] < 'a' || s[i] > 'f') {
			return false
		}
	}
	return true
}
