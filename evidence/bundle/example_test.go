package bundle_test

import (
	"bytes"
	"crypto/rand"
	"crypto/x509"
	"fmt"
	"time"

	"assaywrit/evidence/bundle"
	"assaywrit/evidence/bundle/cms"
	"assaywrit/evidence/bundle/identity"
)

// A bundle is written, signed, and checked again.
func Example() {
	if err := example(); err != nil {
		fmt.Println(err)
	}
	// Output:
	// 2 files
	// P-05 authorised trusted: true
	// file problems: 0, missing signatures: 0
}

func example() error {
	var unsigned, signed bytes.Buffer
	st, err := bundle.Write(&unsigned, bundle.Header{
		Case: "C-0417", SampleCode: "S-100200", Laboratory: "LAB-07", EngineName: "assaywrit", EngineVersion: "1.0.0", Toolchain: "go1.26",
		Signatories: []bundle.Signatory{{Person: "P-05", Position: "certifying scientist", Meaning: "authorised"}},
	}, []bundle.Payload{
		{Path: "evidence/evidence.json", Data: []byte(`{}`)},
		{Path: "inputs/case/case.yaml", Data: []byte("case: C-0417\n")},
	})
	if err != nil {
		return err
	}
	fmt.Printf("%d files\n", st.PayloadFiles)

	from := time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)
	root, err := identity.NewRoot(identity.RootOptions{Laboratory: "LAB-07", NotBefore: from, NotAfter: from.AddDate(10, 0, 0), Rand: rand.Reader})
	if err != nil {
		return err
	}
	id, err := identity.NewSignatory(root, identity.SignatoryOptions{Person: "P-05", Position: "certifying scientist", NotBefore: from, NotAfter: from.AddDate(3, 0, 0), Rand: rand.Reader})
	if err != nil {
		return err
	}
	b, err := bundle.Open(bytes.NewReader(unsigned.Bytes()), int64(unsigned.Len()))
	if err != nil {
		return err
	}
	p7s, err := cms.Sign(b.StatementBytes(), cms.SignOptions{Signer: id.Key, Certificate: id.Certificate, Time: from.AddDate(0, 11, 0), Meaning: "authorised"})
	if err != nil {
		return err
	}
	if err := bundle.AddSignature(&signed, b, "P-05-authorised.p7s", p7s); err != nil {
		return err
	}

	if b, err = bundle.Open(bytes.NewReader(signed.Bytes()), int64(signed.Len())); err != nil {
		return err
	}
	for _, r := range bundle.CheckSignatures(b, []*x509.Certificate{root.Certificate}) {
		fmt.Println(r.Person, r.Meaning, "trusted:", r.Trusted)
	}
	fmt.Printf("file problems: %d, missing signatures: %d\n", len(b.CheckFiles()), len(bundle.MissingSignatories(b)))
	return nil
}
