package bundle

import (
	"encoding/hex"
	"encoding/json"
	"os"
	"strconv"
	"testing"

	"assaywrit/evidence/canonical"
)

// TestReferenceTree: RFC 6962, 2.1, over the customary eight leaves; see testdata/SOURCES.md.
func TestReferenceTree(t *testing.T) {
	text, err := os.ReadFile("../../testdata/tlog/rfc6962_reference_tree.json")
	if err != nil {
		t.Fatal(err)
	}
	var tree struct {
		Leaves []string          `json:"leaves_hex"`
		Hashes []string          `json:"leaf_hashes"`
		Roots  map[string]string `json:"roots_by_size"`
	}
	if err := json.Unmarshal(text, &tree); err != nil {
		t.Fatal(err)
	}
	if len(tree.Leaves) != 8 || len(tree.Roots) != 9 {
		t.Fatalf("%d leaves and %d roots, want 8 and 9", len(tree.Leaves), len(tree.Roots))
	}
	var hashes [][32]byte
	for size := 0; ; size++ {
		root := treeHash(hashes)
		if got, want := hex.EncodeToString(root[:]), tree.Roots[strconv.Itoa(size)]; got != want {
			t.Errorf("root of %d leaves: %s, want %s", size, got, want)
		}
		if size == len(tree.Leaves) {
			break
		}
		data, err := hex.DecodeString(tree.Leaves[size])
		if err != nil {
			t.Fatal(err)
		}
		h := leafHash(data)
		if got := hex.EncodeToString(h[:]); got != tree.Hashes[size] {
			t.Errorf("leaf %d: %s, want %s", size, got, tree.Hashes[size])
		}
		hashes = append(hashes, h)
	}
}

// TestLeaf pins what a leaf holds: format 1 cannot change it. The text is written out by hand from the package comment.
func TestLeaf(t *testing.T) {
	l := leaf{Bytes: 3, Path: "data/é \"a\".txt", SHA256: hexSum([]byte("abc"))}
	// SHA-256 of "abc": FIPS 180-4, example.
	want := `{"bytes":3,"path":"data/é \"a\".txt","sha256":"ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"}`
	if got, err := canonical.Marshal(l); err != nil || string(got) != want {
		t.Errorf("%s, %v, want %s", got, err, want)
	}
	if got, want := merkleRoot([]leaf{l}), leafHash([]byte(want)); got != want {
		t.Errorf("%x, want %x", got, want)
	}
}

func TestBundleID(t *testing.T) {
	root := [32]byte{}
	for i := range root {
		root[i] = 0xff
	}
	// RFC 9562, 5.8: the version in bits 48 to 51, the variant 10 in bits 64 and 65, and all the rest as given.
	if got, want := bundleID(root), "ffffffff-ffff-8fff-bfff-ffffffffffff"; got != want {
		t.Errorf("%s, want %s", got, want)
	}
	if got, want := bundleID([32]byte{}), "00000000-0000-8000-8000-000000000000"; got != want {
		t.Errorf("%s, want %s", got, want)
	}
}
