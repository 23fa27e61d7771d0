package main

import (
	"bytes"
	"crypto/x509"
	"errors"
	"fmt"
	"io"
	"os"
	"strings"
	"time"

	"github.com/spf13/cobra"
	"golang.org/x/term"

	"assaywrit/evidence/bundle"
	"assaywrit/evidence/bundle/cms"
	"assaywrit/evidence/bundle/identity"
)

const signHelp = `sign adds one person's signature to a bundle. What is signed is the statement, which names every file by its hash;
adding a signature changes none of it. Before signing, the files are checked and the evaluation is run again: a bundle
that does not hold is not signed.

The person must be among the signatories that the case names, with that meaning, and the certificate must be theirs.`

type signOptions struct {
	person, meaning, certificate, key, passphrase, output string
	chain                                                 []string
}

func signCommand(s streams) *cobra.Command {
	var o signOptions
	cmd := &cobra.Command{
		Use:     "sign BUNDLE",
		Short:   "Add a person's signature to a bundle",
		Long:    signHelp,
		Example: "  assaywrit sign case-0417.zip --person P-04 --meaning authorised --certificate P-04.pem --key P-04.key",
		Args:    exactly(1, "the bundle"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := need(cmd, "person", "meaning", "certificate", "key"); err != nil {
				return err
			}
			return sign(s, args[0], o)
		},
	}
	f := cmd.Flags()
	f.StringVar(&o.person, "person", "", "code of the person who signs, as in the case")
	f.StringVar(&o.meaning, "meaning", "", "what the signature means: analysed, reviewed or authorised")
	f.StringVar(&o.certificate, "certificate", "", "the person's certificate (PEM)")
	f.StringVar(&o.key, "key", "", "the person's private key (PEM, encrypted)")
	f.StringArrayVar(&o.chain, "chain", nil, "certificates between the person's and the root (PEM); may be repeated")
	f.StringVar(&o.passphrase, "passphrase-file", "", "file whose first line is the key's passphrase (default: ask)")
	f.StringVarP(&o.output, "output", "o", "", "file to write (default: the bundle itself, replaced as a whole)")
	return cmd
}

func sign(s streams, path string, o signOptions) error {
	certificates, err := readCertificates([]string{o.certificate})
	if err != nil {
		return err
	}
	chain, err := readCertificates(o.chain)
	if err != nil {
		return err
	}
	key, err := os.ReadFile(o.key)
	if err != nil {
		return err
	}
	b, closeFile, err := openBundle(path)
	if err != nil {
		return err
	}
	defer closeFile()
	v := verification{b: b, allowUnsigned: true}
	v.files()
	v.values()
	if v.status() != exitDone {
		return v.print(s, path, false)
	}
	passphrase, err := readPassphrase(s, o.passphrase, "passphrase of "+o.key+": ")
	if err != nil {
		return err
	}
	signer, err := identity.DecryptKey(key, passphrase)
	if err != nil {
		return &failure{exitFailed, fmt.Errorf("%s: %w", o.key, err), "keys are PEM files as assaywrit identity writes them (PKCS #8, encrypted)"}
	}
	signed, err := signBundle(b, o.person, cms.SignOptions{
		Signer: signer, Certificate: certificates[0], Intermediates: append(certificates[1:], chain...), Time: time.Now(), Meaning: o.meaning,
	})
	if err != nil {
		return err
	}
	output := o.output
	if output == "" {
		output = path
	}
	if err := closeFile(); err != nil {
		return err
	}
	if err := writeFile(output, signed, output == path); err != nil {
		return err
	}
	fmt.Fprintf(s.out, "%s: signed by %s as %q\n", output, o.person, o.meaning)
	return nil
}

// signBundle returns the bundle with one more signature.
func signBundle(b *bundle.Bundle, person string, o cms.SignOptions) ([]byte, error) {
	if err := expected(b.Statement(), person, o.Meaning, o.Certificate); err != nil {
		return nil, err
	}
	p7s, err := cms.Sign(b.StatementBytes(), o)
	if err != nil {
		return nil, err
	}
	var out bytes.Buffer
	if err := bundle.AddSignature(&out, b, fileName(person)+"-"+o.Meaning+".p7s", p7s); err != nil {
		return nil, err
	}
	return out.Bytes(), nil
}

// expected refuses a signature that the statement does not ask for.
func expected(st *bundle.Statement, person, meaning string, c *x509.Certificate) error {
	if code := identity.PersonOf(c); code != person {
		return &failure{exitRefused, fmt.Errorf("the certificate belongs to %q, not to %q", code, person), "give the person's own certificate and key"}
	}
	var asked []string
	for _, x := range st.Signatories {
		if x.Person == person && x.Meaning == meaning {
			return nil
		}
		asked = append(asked, x.Person+" "+x.Meaning)
	}
	return &failure{exitRefused, fmt.Errorf("%s is not asked to sign as %q", person, meaning), "the case asks for: " + listed(asked)}
}

// readPassphrase takes the first line of a file, or asks at the terminal without showing what is typed.
func readPassphrase(s streams, file, prompt string) ([]byte, error) {
	if file != "" {
		data, err := os.ReadFile(file)
		line, _, _ := strings.Cut(string(data), "\n")
		return []byte(strings.TrimRight(line, "\r")), err
	}
	in, ok := s.in.(*os.File)
	if !ok || !term.IsTerminal(int(in.Fd())) {
		return nil, &failure{exitUsage, errors.New("standard input is no terminal to ask for a passphrase at"), "give it in a file with --passphrase-file"}
	}
	fmt.Fprint(s.err, prompt)
	pass, err := term.ReadPassword(int(in.Fd()))
	fmt.Fprintln(s.err)
	if err == io.EOF {
		err = errors.New("no passphrase was given")
	}
	return pass, err
}
