package cms_test

import (
	"crypto/rand"
	"fmt"
	"time"

	"assaywrit/evidence/bundle/cms"
	"assaywrit/evidence/bundle/identity"
)

func ExampleSign() {
	from := time.Date(2026, 1, 1, 0, 0, 0, 0, time.UTC)
	root, err := identity.NewRoot(identity.RootOptions{Laboratory: "LAB-07", NotBefore: from, NotAfter: from.AddDate(10, 0, 0), Rand: rand.Reader})
	if err != nil {
		fmt.Println(err)
		return
	}
	id, err := identity.NewSignatory(root, identity.SignatoryOptions{Person: "P-04", Position: "certifying scientist", NotBefore: from, NotAfter: from.AddDate(3, 0, 0), Rand: rand.Reader})
	if err != nil {
		fmt.Println(err)
		return
	}
	content := []byte("what is signed")
	signature, err := cms.Sign(content, cms.SignOptions{Signer: id.Key, Certificate: id.Certificate, Time: from.AddDate(0, 11, 0), Meaning: "authorised"})
	if err != nil {
		fmt.Println(err)
		return
	}
	v, err := cms.Verify(signature, content)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(identity.PersonOf(v.Certificate), v.Meaning, v.SigningTime.Format(time.RFC3339))
	_, err = cms.Verify(signature, []byte("what was not"))
	fmt.Println(err)
	// Output:
	// P-04 authorised 2026-12-01T00:00:00Z
	// signature: is not over this content: the message digest differs
}
