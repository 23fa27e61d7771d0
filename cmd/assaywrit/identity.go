package main

import (
	"crypto/rand"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"time"

	"github.com/spf13/cobra"

	"assaywrit/evidence/bundle"
	"assaywrit/evidence/bundle/identity"
)

const identityHelp = `identity makes certificates to try signing with: a laboratory's root, and certificates of the people who sign.
A laboratory in service signs with certificates that its own authority issues and looks after.

Private keys are encrypted with a passphrase and readable by their owner alone. The root certificate (root.pem) is what
others need to verify; give it to them by another way than the bundle.`

func identityCommand(s streams) *cobra.Command {
	cmd := &cobra.Command{
		Use:     "identity",
		Short:   "Make a root and signatories' certificates for trials",
		Long:    identityHelp,
		Example: "  assaywrit identity root keys --laboratory LAB-07\n  assaywrit identity signatory keys --person P-04 --position \"certifying scientist\"",
		Args:    atMost(0, "root or signatory"),
		RunE:    func(cmd *cobra.Command, args []string) error { return cmd.Help() },
	}
	cmd.AddCommand(identityRoot(s), identitySignatory(s))
	return cmd
}

func identityRoot(s streams) *cobra.Command {
	var laboratory, passphrase string
	var years int
	cmd := &cobra.Command{
		Use:     "root FOLDER",
		Short:   "Make a laboratory root: FOLDER/root.pem and FOLDER/root.key",
		Example: "  assaywrit identity root keys --laboratory LAB-07",
		Args:    exactly(1, "the folder to write to"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := need(cmd, "laboratory"); err != nil {
				return err
			}
			pass, err := newPassphrase(s, passphrase)
			if err != nil {
				return err
			}
			now := time.Now().UTC().Truncate(time.Second)
			root, err := identity.NewRoot(identity.RootOptions{Laboratory: laboratory, NotBefore: now, NotAfter: now.AddDate(years, 0, 0), Rand: rand.Reader})
			if err != nil {
				return err
			}
			return writeIdentity(s, args[0], "root", root, pass)
		},
	}
	cmd.Flags().StringVar(&laboratory, "laboratory", "", "code or name of the laboratory")
	cmd.Flags().StringVar(&passphrase, "passphrase-file", "", "file whose first line is the passphrase (default: ask)")
	cmd.Flags().IntVar(&years, "years", 10, "how long the certificate is valid")
	return cmd
}

func identitySignatory(s streams) *cobra.Command {
	var person, position, passphrase, rootPassphrase string
	var years int
	cmd := &cobra.Command{
		Use:     "signatory FOLDER",
		Short:   "Make a person's certificate under FOLDER/root.pem: FOLDER/PERSON.pem and FOLDER/PERSON.key",
		Example: "  assaywrit identity signatory keys --person P-04 --position \"certifying scientist\"",
		Args:    exactly(1, "the folder that holds root.pem and root.key"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if err := need(cmd, "person", "position"); err != nil {
				return err
			}
			root, err := readIdentity(s, args[0], "root", rootPassphrase)
			if err != nil {
				return err
			}
			pass, err := newPassphrase(s, passphrase)
			if err != nil {
				return err
			}
			now := time.Now().UTC().Truncate(time.Second)
			id, err := identity.NewSignatory(root, identity.SignatoryOptions{Person: person, Position: position, NotBefore: now, NotAfter: now.AddDate(years, 0, 0), Rand: rand.Reader})
			if err != nil {
				return err
			}
			return writeIdentity(s, args[0], fileName(person), id, pass)
		},
	}
	f := cmd.Flags()
	f.StringVar(&person, "person", "", "code of the person, as in the case")
	f.StringVar(&position, "position", "", "position, such as \"certifying scientist\"")
	f.StringVar(&passphrase, "passphrase-file", "", "file whose first line is the person's passphrase (default: ask)")
	f.StringVar(&rootPassphrase, "root-passphrase-file", "", "file whose first line is the root's passphrase (default: ask)")
	f.IntVar(&years, "years", 3, "how long the certificate is valid")
	return cmd
}

// newPassphrase asks twice at a terminal. It refuses one that is shorter than eight characters.
func newPassphrase(s streams, file string) ([]byte, error) {
	pass, err := readPassphrase(s, file, "new passphrase: ")
	if err != nil {
		return nil, err
	}
	if len(pass) < 8 {
		return nil, &failure{exitUsage, errors.New("the passphrase is shorter than eight characters"), "choose a longer one"}
	}
	if file == "" {
		again, err := readPassphrase(s, file, "the same again: ")
		if err != nil {
			return nil, err
		}
		if string(again) != string(pass) {
			return nil, &failure{exitUsage, errors.New("the two passphrases differ"), "try again"}
		}
	}
	return pass, nil
}

// writeIdentity writes NAME.pem and NAME.key, the key readable by its owner alone; neither may exist.
func writeIdentity(s streams, folder, name string, id *identity.Identity, passphrase []byte) error {
	key, err := identity.EncryptKey(id.Key, passphrase, rand.Reader)
	if err != nil {
		return err
	}
	if err := os.MkdirAll(folder, 0o700); err != nil {
		return err
	}
	for _, f := range []struct {
		path string
		data []byte
	}{{filepath.Join(folder, name+".key"), key}, {filepath.Join(folder, name+".pem"), identity.CertificatePEM(id.Certificate)}} {
		if err := bundle.WriteFileAtomicMode(f.path, 0o600, false, func(w io.Writer) error { _, err := w.Write(f.data); return err }); err != nil {
			return err
		}
		fmt.Fprintln(s.out, f.path)
	}
	return nil
}

func readIdentity(s streams, folder, name, passphraseFile string) (*identity.Identity, error) {
	certificates, err := readCertificates([]string{filepath.Join(folder, name+".pem")})
	if err != nil {
		return nil, err
	}
	path := filepath.Join(folder, name+".key")
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	pass, err := readPassphrase(s, passphraseFile, "passphrase of "+path+": ")
	if err != nil {
		return nil, err
	}
	key, err := identity.DecryptKey(data, pass)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	return &identity.Identity{Certificate: certificates[0], Key: key}, nil
}
