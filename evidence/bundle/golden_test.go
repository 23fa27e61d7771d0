package bundle

import (
	"bytes"
	"flag"
	"os"
	"testing"
)

var update = flag.Bool("update", false, "write the golden bundle anew")

// TestGoldenBundle holds the promise that bundles of format 1 stay readable, and come out with the same bytes. The file is a
// regression guard: this program made it (go test -update), from the invented payload of these tests.
func TestGoldenBundle(t *testing.T) {
	const path = "testdata/golden/format-1.zip"
	if *update {
		if err := os.WriteFile(path, signedBundle(t), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	golden, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if _, files, signatures, err := verdict(golden); err != nil || len(files)+len(signatures) > 0 {
		t.Errorf("%v %v %v", files, signatures, err)
	}
	if missing := MissingSignatories(opened(t, golden)); len(missing) > 0 {
		t.Errorf("missing: %v", missing)
	}
	if !bytes.Equal(golden, signedBundle(t)) {
		t.Error("the same payload, people and times give other bytes than they did")
	}
}
