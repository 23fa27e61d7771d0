package main

import (
	"bytes"
	"crypto/rand"
	"crypto/x509"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"github.com/spf13/cobra"

	"assaywrit/evidence/bundle"
	"assaywrit/evidence/bundle/cms"
	"assaywrit/evidence/bundle/identity"
	"assaywrit/evidence/simulate/demo"
)

const demoHelp = `demo writes a worked example into FOLDER (default assaywrit-demo) and takes it through the whole job: it checks the case,
builds the bundle, signs it as two throw-away signatories, verifies the result, and says what was found.

Everything in the example is invented: the sample, the laboratory, the people and the traces. Its pages and certificates are
marked DEMONSTRATION, NOT VALID.`

const defaultDemoFolder = "assaywrit-demo"

func demoCommand(s streams) *cobra.Command {
	var force bool
	cmd := &cobra.Command{
		Use:     "demo [FOLDER]",
		Short:   "Take a worked example through the whole job",
		Long:    demoHelp,
		Example: "  assaywrit demo\n  assaywrit demo /tmp/example",
		Args:    atMost(1, "one folder"),
		RunE: func(cmd *cobra.Command, args []string) error {
			folder := defaultDemoFolder
			if len(args) == 1 {
				folder = args[0]
			}
			return runDemo(s, folder, force, time.Now())
		},
	}
	cmd.Flags().BoolVar(&force, "force", false, "write into the folder even if it exists")
	return cmd
}

func runDemo(s streams, folder string, force bool, now time.Time) error {
	if err := freshFolder(folder, force); err != nil {
		return err
	}
	caseDir := filepath.Join(folder, "case")
	if err := writeDemoCase(caseDir); err != nil {
		return err
	}
	root, err := openFolder(caseDir)
	if err != nil {
		return err
	}
	defer root.Close()
	a, err := assess(root.FS(), chosenCriteria)
	if err != nil {
		return err
	}
	zip, pdfs, err := a.seal(root.FS())
	if err != nil {
		return err
	}
	signed, anchor, err := signDemo(zip, now)
	if err != nil {
		return err
	}
	name := fileName(a.finding.Case) + ".zip"
	files := []struct {
		name string
		data []byte
	}{
		{name, signed},
		{"root.pem", identity.CertificatePEM(anchor)},
		{"finding.pdf", pdfs[findingPDF]},
		{"package.pdf", pdfs[packagePDF]},
	}
	for _, f := range files {
		if err := writeFile(filepath.Join(folder, f.name), f.data, force); err != nil {
			return err
		}
	}
	printFinding(s.out, a.finding)
	fmt.Fprintln(s.out)
	if err := verifyDemo(s, filepath.Join(folder, name), anchor); err != nil {
		return err
	}
	fmt.Fprintf(s.out, `
DEMONSTRATION, NOT VALID: everything in this case is invented. It is in %s:
  finding.pdf   what was found, for a review board
  package.pdf   the whole file, down to every trace
  %s   the signed bundle; verify it with: assaywrit verify --trust %s %s
  case/         the case folder it was built from
`, folder, name, filepath.Join(folder, "root.pem"), filepath.Join(folder, name))
	return nil
}

// freshFolder makes the folder, and refuses one that holds something already.
func freshFolder(folder string, force bool) error {
	entries, err := os.ReadDir(folder)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return os.MkdirAll(folder, 0o777)
	case err != nil:
		return err
	case len(entries) > 0 && !force:
		return &failure{exitFailed, fmt.Errorf("%s: exists and is not empty", folder), "give another folder, or --force to write over the example in it"}
	}
	return nil
}

func writeDemoCase(dir string) error {
	files, err := demo.Files()
	if err != nil {
		return err
	}
	for _, f := range files {
		path := filepath.Join(dir, filepath.FromSlash(f.Path))
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			return err
		}
		if err := os.WriteFile(path, f.Data, 0o666); err != nil {
			return err
		}
	}
	return nil
}

// signDemo signs as each of the case's signatories, with keys that are thrown away.
func signDemo(zip []byte, now time.Time) ([]byte, *x509.Certificate, error) {
	b, err := bundle.Open(bytes.NewReader(zip), int64(len(zip)))
	if err != nil {
		return nil, nil, err
	}
	from, to := now.UTC().Truncate(time.Second).Add(-time.Hour), now.UTC().Truncate(time.Second).AddDate(1, 0, 0)
	root, err := identity.NewRoot(identity.RootOptions{Laboratory: b.Statement().Laboratory, NotBefore: from, NotAfter: to, Demonstration: true, Rand: rand.Reader})
	if err != nil {
		return nil, nil, err
	}
	for _, who := range b.Statement().Signatories {
		id, err := identity.NewSignatory(root, identity.SignatoryOptions{Person: who.Person, Position: who.Position, NotBefore: from, NotAfter: to, Demonstration: true, Rand: rand.Reader})
		if err != nil {
			return nil, nil, err
		}
		zip, err = signBundle(b, who.Person, cms.SignOptions{Signer: id.Key, Certificate: id.Certificate, Time: now, Meaning: who.Meaning})
		if err != nil {
			return nil, nil, err
		}
		if b, err = bundle.Open(bytes.NewReader(zip), int64(len(zip))); err != nil {
			return nil, nil, err
		}
	}
	return zip, root.Certificate, nil
}

// verifyDemo verifies the file as it now lies on disk.
func verifyDemo(s streams, path string, anchor *x509.Certificate) error {
	b, closeFile, err := openBundle(path)
	if err != nil {
		return err
	}
	defer closeFile()
	v := verification{b: b, roots: []*x509.Certificate{anchor}}
	v.all()
	return v.print(s, path, false)
}
