package bundle

import (
	"encoding/hex"
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"
)

// payload checks the files under data/. The root in the statement says whether any of them was changed; the manifest then says
// which. Where the root holds, a manifest that disagrees is itself the one that was changed.
func (c *fileCheck) payload() {
	st := c.b.statement
	leaves := c.leaves()
	root := merkleRoot(leaves)
	lines := c.manifestLines()
	if hex.EncodeToString(root[:]) == st.MerkleRoot {
		c.sealedPayload(leaves, lines)
		return
	}
	before := len(c.found)
	differences := c.compare(leaves, lines)
	switch {
	case differences > 0 || len(c.found) > before:
	case c.sums[manifestPath].sum == st.ManifestSHA256:
		c.blame(statementPath, "was changed: its merkle_root is not that of the payload, which the manifest lists as it is", hex.EncodeToString(root[:]), st.MerkleRoot)
	default:
		c.blame(payloadFolder, "was changed, and the manifest with it, so that it cannot be told which file: the Merkle root is not the one in the statement", st.MerkleRoot, hex.EncodeToString(root[:]))
	}
}

// leaves are those of the files that are here, sorted. One that cannot be read has no hash, so that the root cannot hold.
func (c *fileCheck) leaves() []leaf {
	var leaves []leaf
	for _, path := range c.b.paths {
		if strings.HasPrefix(path, payloadFolder) {
			o := c.sums[path]
			if o.err != nil {
				o.sum = ""
			}
			leaves = append(leaves, leaf{Bytes: o.bytes, Path: path, SHA256: o.sum})
		}
	}
	sortLeaves(leaves)
	return leaves
}

// manifestLines reads the manifest: path to line.
func (c *fileCheck) manifestLines() map[string]listing {
	if _, ok := c.sums[manifestPath]; !ok {
		return nil // named as missing already
	}
	list, problems := parseManifest(c.content(manifestPath))
	for _, p := range problems {
		c.blame(manifestPath, fmt.Sprintf("was changed: line %d: %v", p.line, p.err), "", "")
	}
	lines := map[string]listing{}
	for _, l := range list {
		if !strings.HasPrefix(l.path, payloadFolder) {
			c.blame(manifestPath, fmt.Sprintf("was changed: line %d lists %q, want files under %s", l.line, shortened(l.path), payloadFolder), "", "")
			continue
		}
		lines[l.path] = l
	}
	return lines
}

// sealedPayload is for a payload that has the sealed root: what disagrees with it is the manifest, or the statement's counts.
func (c *fileCheck) sealedPayload(leaves []leaf, lines map[string]listing) {
	st := c.b.statement
	var octets int64
	for _, l := range leaves {
		octets += l.Bytes
		if line, ok := lines[l.Path]; !ok || line.sha256 != l.SHA256 {
			c.blame(manifestPath, "was changed: it does not list "+l.Path+" as it is and as it was sealed", l.SHA256, line.sha256)
		}
	}
	if len(lines) > len(leaves) {
		c.blame(manifestPath, "was changed: it lists more files than were sealed", strconv.Itoa(len(leaves)), strconv.Itoa(len(lines)))
	}
	if st.PayloadFiles != len(leaves) || st.PayloadOctets != octets {
		c.blame(statementPath, "was changed: its counts are not those of the payload that it seals (octets.files)",
			fmt.Sprintf("%d.%d", octets, len(leaves)), fmt.Sprintf("%d.%d", st.PayloadOctets, st.PayloadFiles))
	}
	for _, s := range []string{st.EvidenceSHA256, st.FindingSHA256} {
		if s != "" && !hasSum(leaves, s) {
			c.blame(statementPath, "names the SHA-256 of a file that is not in the payload that it seals", "", s)
		}
	}
}

// compare names every payload file that is not as the manifest lists it, and returns how many there are.
func (c *fileCheck) compare(leaves []leaf, lines map[string]listing) int {
	differences := 0
	here := map[string]bool{}
	if lines == nil {
		return 0
	}
	for _, l := range leaves {
		here[l.Path] = true
		line, listed := lines[l.Path]
		switch {
		case !listed:
			differences++
			c.blame(l.Path, "was added: the manifest does not list it", "", "")
		case line.sha256 != l.SHA256:
			differences++
			c.blame(l.Path, "was changed: its SHA-256 is not the one in the manifest", line.sha256, l.SHA256)
		}
	}
	for _, path := range slices.Sorted(maps.Keys(lines)) {
		if !here[path] {
			differences++
			c.blame(path, "is missing: the manifest lists it", lines[path].sha256, "")
		}
	}
	return differences
}
