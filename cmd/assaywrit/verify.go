package main

import (
	"bytes"
	"crypto/x509"
	"encoding/json"
	"encoding/pem"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"

	"github.com/spf13/cobra"

	"assaywrit/evidence/bundle"
	"assaywrit/evidence/canonical"
)

const verifyHelp = `verify checks a bundle again, from the raw data up:

  1. files       every file is listed, present and unchanged, and the seal agrees with all of them
  2. signatures  every signature holds, belongs to a person the statement names, and leads to a certificate that you trust
  3. values      the evaluation is run again from the inputs inside, and every value and decision is compared

The certificates that you trust come from you (--trust), never from the bundle.`

func verifyCommand(s streams) *cobra.Command {
	var trust []string
	var unsigned, asJSON bool
	cmd := &cobra.Command{
		Use:     "verify BUNDLE",
		Short:   "Check a bundle again, from the raw data up",
		Long:    verifyHelp,
		Example: "  assaywrit verify --trust root.pem case-0417.zip\n  assaywrit verify --allow-unsigned case-0417.zip",
		Args:    exactly(1, "the bundle"),
		RunE: func(cmd *cobra.Command, args []string) error {
			roots, err := readCertificates(trust)
			if err != nil {
				return err
			}
			b, closeFile, err := openBundle(args[0])
			if err != nil {
				return err
			}
			defer closeFile()
			v := verification{b: b, roots: roots, allowUnsigned: unsigned}
			v.all()
			return v.print(s, args[0], asJSON)
		},
	}
	cmd.Flags().StringArrayVar(&trust, "trust", nil, "certificates to accept as roots (PEM); may be repeated")
	cmd.Flags().BoolVar(&unsigned, "allow-unsigned", false, "do not ask for the signatures that the statement expects")
	cmd.Flags().BoolVar(&asJSON, "json", false, "one JSON object per check on standard output")
	return cmd
}

// An observation is the outcome of one check of a verification.
type observation struct {
	Step    string `json:"step"` // "files", "signatures", "values"
	Subject string `json:"subject"`
	Holds   bool   `json:"holds"`
	Detail  string `json:"detail,omitempty"`
}

// A verification gathers what was checked. It goes through all steps, so that every problem is seen at once.
type verification struct {
	b             *bundle.Bundle
	roots         []*x509.Certificate
	allowUnsigned bool
	seen          []observation
}

func (v *verification) all() {
	v.files()
	v.signatures()
	v.values()
}

func (v *verification) note(step, subject string, holds bool, format string, args ...any) {
	v.seen = append(v.seen, observation{step, subject, holds, fmt.Sprintf(format, args...)})
}

func (v *verification) files() {
	problems := v.b.CheckFiles()
	for _, p := range problems {
		v.note("files", p.Path, false, "%s", p.Error())
	}
	if len(problems) == 0 {
		st := v.b.Statement()
		v.note("files", "bundle "+st.BundleID, true, "%d files unchanged, Merkle root %s", st.PayloadFiles, st.MerkleRoot)
	}
}

func (v *verification) signatures() {
	for _, r := range bundle.CheckSignatures(v.b, v.roots) {
		switch {
		case r.Problem != "":
			v.note("signatures", r.File, false, "%s", r.Problem)
		case !r.Trusted:
			v.note("signatures", r.File, false, "the signature holds, but its certificate does not lead to one that was given with --trust")
		default:
			v.note("signatures", r.File, true, "%s (%s) signed as %q on %s (claimed, no timestamp), certificate SHA-256 %.16s…", r.Person, r.Position, r.Meaning, r.SigningTime.UTC().Format("2006-01-02 15:04:05Z"), r.CertificateFingerprint)
		}
	}
	if v.allowUnsigned {
		return
	}
	for _, m := range bundle.MissingSignatories(v.b) {
		v.note("signatures", m.Person, false, "%s (%s) has not signed as %q", m.Person, m.Position, m.Meaning)
	}
}

// values runs the evaluation again from the inputs in the bundle and compares what it gives with what is recorded.
func (v *verification) values() {
	fsys, err := fs.Sub(v.b.PayloadFS(), "inputs/case")
	if err != nil {
		v.note("values", "inputs", false, "%v", err)
		return
	}
	a, err := assess(fsys, bundledCriteria(v.b))
	if err != nil {
		for _, e := range parts(err) {
			v.note("values", "inputs", false, "%v", e)
		}
		return
	}
	before := len(v.seen)
	v.compareJSON(evidencePath, a.evidenceJSON)
	v.compareJSON(findingPath, a.findingJSON)
	for _, t := range a.tables {
		recorded, err := v.b.ReadPayload(t.Path)
		if err != nil || !bytes.Equal(recorded, t.Data) {
			v.note("values", t.Path, false, "the table is not the one that the evaluation gives")
		}
	}
	if len(v.seen) == before {
		v.note("values", "evaluation", true, "run again with %s %s: every recorded value and decision is the same", engineName, engineVersion)
	}
}

func (v *verification) compareJSON(path string, again []byte) {
	recorded, err := v.b.ReadPayload(path)
	if err != nil {
		v.note("values", path, false, "%v", err)
		return
	}
	if bytes.Equal(recorded, again) {
		return
	}
	found, err := canonical.Differences(recorded, again, 0)
	if err != nil {
		v.note("values", path, false, "%v", err)
		return
	}
	if len(found) == 0 {
		v.note("values", path, false, "is not written canonically")
	}
	const most = 20
	for i, d := range found {
		if i == most {
			v.note("values", path, false, "and %d more", len(found)-most)
			return
		}
		v.note("values", path+"#"+d.Pointer, false, "recorded %s, again %s", d.Left, d.Right)
	}
}

// status is that of the first step that failed.
func (v *verification) status() int {
	for _, step := range []struct {
		name   string
		status int
	}{{"files", exitFiles}, {"signatures", exitSignatures}, {"values", exitValues}} {
		for _, o := range v.seen {
			if o.Step == step.name && !o.Holds {
				return step.status
			}
		}
	}
	return exitDone
}

func (v *verification) print(s streams, name string, asJSON bool) error {
	for _, o := range v.seen {
		switch {
		case asJSON:
			if err := printJSON(s.out, o); err != nil {
				return err
			}
		case o.Holds:
			fmt.Fprintf(s.out, "%-11s %s: %s\n", o.Step, o.Subject, o.Detail)
		}
		if !o.Holds {
			fmt.Fprintf(s.err, "assaywrit: error: %s: %s\n", o.Subject, o.Detail)
		}
	}
	status := v.status()
	if status != exitDone {
		return &failure{status, errQuiet, "the bundle does not hold; see the lines above, and ask the laboratory for the original"}
	}
	if !asJSON {
		fmt.Fprintf(s.out, "%s: holds\n", name)
	}
	return nil
}

func printJSON(w io.Writer, v any) error {
	enc := json.NewEncoder(w)
	enc.SetEscapeHTML(false)
	return enc.Encode(v)
}

// readCertificates reads PEM files of certificates.
func readCertificates(paths []string) ([]*x509.Certificate, error) {
	var list []*x509.Certificate
	for _, p := range paths {
		data, err := os.ReadFile(p)
		if err != nil {
			return nil, err
		}
		before := len(list)
		for block, rest := pem.Decode(data); block != nil; block, rest = pem.Decode(rest) {
			c, err := x509.ParseCertificate(block.Bytes)
			if err != nil {
				return nil, &failure{exitUsage, fmt.Errorf("%s: %w", p, err), "want a certificate in PEM form"}
			}
			list = append(list, c)
		}
		if len(list) == before {
			return nil, &failure{exitUsage, errors.New(p + ": holds no certificate in PEM form"), "the root certificate comes from the laboratory, by another way than the bundle"}
		}
	}
	return list, nil
}
