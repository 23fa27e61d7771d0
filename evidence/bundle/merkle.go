package bundle

import (
	"crypto/sha256"
	"encoding/hex"
	"math/bits"

	"github.com/google/uuid"

	"assaywrit/evidence/canonical"
)

// A leaf is what the Merkle tree holds of a payload file.
type leaf struct {
	Bytes  int64  `json:"bytes"`
	Path   string `json:"path"` // with data/ in front
	SHA256 string `json:"sha256"`
}

// merkleRoot is the Merkle tree hash of RFC 6962, 2.1, over the leaves in the order given.
func merkleRoot(leaves []leaf) [sha256.Size]byte {
	hashes := make([][sha256.Size]byte, len(leaves))
	for i, l := range leaves {
		text, err := canonical.Marshal(l)
		if err != nil {
			panic("bundle: internal error: " + err.Error()) // paths are valid UTF-8, and nothing else can fail
		}
		hashes[i] = leafHash(text)
	}
	return treeHash(hashes)
}

func leafHash(data []byte) [sha256.Size]byte {
	return sha256.Sum256(append([]byte{0}, data...))
}

// treeHash combines leaf hashes: the left part is the largest power of two that is smaller than the whole.
func treeHash(leaves [][sha256.Size]byte) [sha256.Size]byte {
	switch n := len(leaves); n {
	case 0:
		return sha256.Sum256(nil)
	case 1:
		return leaves[0]
	default:
		k := 1 << (bits.Len(uint(n-1)) - 1)
		left, right := treeHash(leaves[:k]), treeHash(leaves[k:])
		node := append([]byte{1}, left[:]...)
		return sha256.Sum256(append(node, right[:]...))
	}
}

// bundleID is a UUID of version 8 (RFC 9562, 5.8) made of the root's first sixteen bytes.
func bundleID(root [sha256.Size]byte) string {
	id := uuid.UUID(root[:16])
	id[6] = id[6]&0x0f | 0x80
	id[8] = id[8]&0x3f | 0x80
	return id.String()
}

func hexSum(data []byte) string {
	sum := sha256.Sum256(data)
	return hex.EncodeToString(sum[:])
}
