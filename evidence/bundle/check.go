package bundle

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"runtime"
	"sort"
	"strings"
	"sync"

	"assaywrit/evidence/bundle/cms"
)

// A FileProblem is one file of a bundle that is not as it was sealed.
type FileProblem struct {
	Path    string // of the file, from the top of the bundle
	Problem string
	Want    string // a SHA-256, a number or a text, or empty
	Got     string
}

// Error says what is wrong with the file. It does not repeat the path.
func (p FileProblem) Error() string {
	switch {
	case p.Want == "" && p.Got == "":
		return p.Problem
	case p.Got == "":
		return fmt.Sprintf("%s: want %s", p.Problem, p.Want)
	case p.Want == "":
		return fmt.Sprintf("%s: got %s", p.Problem, p.Got)
	}
	return fmt.Sprintf("%s: got %s, want %s", p.Problem, p.Got, p.Want)
}

// CheckFiles checks every file against the manifest, the tag manifest and the statement, and lists each one that is missing,
// added or changed, all at once, sorted by path, one problem a file. It returns nothing where all of them are as they were
// sealed. Signature files are looked at by CheckSignatures.
//
// A hash that does not fit tells of a change, not of where. What was changed is found from what the others say: the statement
// holds the hashes of bagit.txt, bag-info.txt and the manifest and the root over the payload, the tag manifest the first three
// again and that of the statement. Where all of a file's witnesses disagree with it, the file is named; where one of them
// stands alone, that one is.
func (b *Bundle) CheckFiles() []FileProblem {
	c := &fileCheck{b: b, blamed: map[string]bool{}, sums: map[string]observed{}}
	c.read()
	c.strangers()
	c.tagFiles()
	c.payload()
	sort.SliceStable(c.found, func(i, j int) bool { return c.found[i].Path < c.found[j].Path })
	return c.found
}

// observed is what a file turned out to be.
type observed struct {
	sum   string
	bytes int64
	err   error
}

type fileCheck struct {
	b      *Bundle
	sums   map[string]observed
	found  []FileProblem
	blamed map[string]bool
}

// blame notes a problem; the first one of a file stays.
func (c *fileCheck) blame(path, problem, want, got string) {
	if !c.blamed[path] {
		c.blamed[path] = true
		c.found = append(c.found, FileProblem{path, problem, want, got})
	}
}

// read hashes all files, several at a time.
func (c *fileCheck) read() {
	results := make([]observed, len(c.b.paths))
	work := make(chan int)
	var wg sync.WaitGroup
	for range min(runtime.GOMAXPROCS(0), 8) {
		wg.Go(func() {
			for i := range work {
				f := c.b.files[c.b.paths[i]]
				h := sha256.New()
				err := unpack(h, f)
				results[i] = observed{hex.EncodeToString(h.Sum(nil)), int64(f.UncompressedSize64), err}
			}
		})
	}
	for i := range results {
		work <- i
	}
	close(work)
	wg.Wait()
	for i, path := range c.b.paths {
		c.sums[path] = results[i]
		if err := results[i].err; err != nil {
			c.blame(path, err.Error(), "", "")
		}
	}
}

// strangers names the files for which a bundle has no place.
func (c *fileCheck) strangers() {
	for _, path := range c.b.paths {
		switch {
		case strings.HasPrefix(path, payloadFolder), isSignaturePath(path):
		case path == bagitPath, path == bagInfoPath, path == manifestPath, path == tagManifestPath, path == statementPath:
		case strings.HasPrefix(path, "seal/timestamps/"):
			c.blame(path, "was added: timestamps are not read by this version", "", "")
		default:
			c.blame(path, "was added: a bundle has no such file", "", "")
		}
	}
}

// content returns a file's bytes, or nothing where it is missing or unreadable.
func (c *fileCheck) content(path string) []byte {
	data, err := c.b.ReadFile(path)
	if err != nil {
		return nil
	}
	return data
}

// tagFiles checks the bag's own files and the statement.
func (c *fileCheck) tagFiles() {
	st := c.b.statement
	tags := c.tagManifestLines()
	for _, f := range []struct{ path, sealed string }{{bagitPath, st.BagItSHA256}, {bagInfoPath, st.BagInfoSHA256}, {manifestPath, st.ManifestSHA256}} {
		c.tagFile(f.path, f.sealed, tags[f.path])
	}
	tag, got := tags[statementPath], c.sums[statementPath].sum
	if tag != "" && tag != got {
		if nearly(tag, got) || c.isSigned() {
			c.blame(tagManifestPath, "was changed: it says another SHA-256 of "+statementPath, got, tag)
		} else {
			c.blame(statementPath, "was changed: its SHA-256 is not the one in "+tagManifestPath, tag, got)
		}
	}
	c.statementAgrees()
}

// tagManifestLines reads the tag manifest: path to SHA-256. It must list its four files, in order.
func (c *fileCheck) tagManifestLines() map[string]string {
	if _, ok := c.sums[tagManifestPath]; !ok {
		c.blame(tagManifestPath, "is missing", "", "")
		return nil
	}
	lines, problems := parseManifest(c.content(tagManifestPath))
	for _, p := range problems {
		c.blame(tagManifestPath, fmt.Sprintf("was changed: line %d: %v", p.line, p.err), "", "")
	}
	tags := map[string]string{}
	for i, l := range lines {
		if i >= len(taggedPaths) || l.path != taggedPaths[i] {
			c.blame(tagManifestPath, fmt.Sprintf("was changed: line %d lists %q, want %s", l.line, shortened(l.path), strings.Join(taggedPaths, ", ")), "", "")
		}
		tags[l.path] = l.sha256
	}
	if len(lines) < len(taggedPaths) {
		c.blame(tagManifestPath, fmt.Sprintf("was changed: it lists %d files, want %s", len(lines), strings.Join(taggedPaths, ", ")), "", "")
	}
	return tags
}

// tagFile sets a file beside its two witnesses: the statement and, where it lists the file, the tag manifest.
func (c *fileCheck) tagFile(path, sealed, tag string) {
	o, ok := c.sums[path]
	if !ok {
		c.blame(path, "is missing: the statement names it", sealed, "")
		return
	}
	switch {
	case o.sum == sealed && (tag == "" || tag == sealed):
	case o.sum == sealed:
		c.blame(tagManifestPath, "was changed: it says another SHA-256 of "+path, sealed, tag)
	case o.sum == tag:
		c.blame(statementPath, "was changed: it says another SHA-256 of "+path+" than that file and "+tagManifestPath+" do", o.sum, sealed)
	default:
		c.blame(path, "was changed: its SHA-256 is not the one in the statement", sealed, o.sum)
		if tag != "" && tag != sealed {
			c.blame(tagManifestPath, "was changed: it says another SHA-256 of "+path+" than the statement does", sealed, tag)
		}
	}
}

// statementAgrees checks what the statement says against itself, and that the two text files say the same.
func (c *fileCheck) statementAgrees() {
	st := c.b.statement
	root, err := hex.DecodeString(st.MerkleRoot)
	if err != nil {
		panic("bundle: internal error: " + err.Error()) // parseStatement saw to it
	}
	if want := bundleID([32]byte(root)); st.BundleID != want {
		c.blame(statementPath, "was changed: its bundle_id does not follow from its merkle_root", want, st.BundleID)
	}
	if c.blamed[statementPath] {
		return // the files cannot be measured by what it says
	}
	for _, f := range []struct {
		path string
		want []byte
	}{{bagitPath, []byte(bagitText)}, {bagInfoPath, bagInfo(st)}} {
		if o, ok := c.sums[f.path]; ok && o.sum != hexSum(f.want) {
			c.blame(f.path, "does not say what a bundle with this statement says", hexSum(f.want), o.sum)
		}
	}
}

// isSigned reports whether any signature file holds over the statement as it is, whoever made it.
func (c *fileCheck) isSigned() bool {
	for _, path := range c.b.SignaturePaths() {
		if data, err := c.b.readSignature(path); err == nil {
			if _, err := cms.Verify(data, c.b.sealed); err == nil {
				return true
			}
		}
	}
	return false
}

// nearly reports whether two hashes are alike in so many digits that one must be the other, altered: two hashes of different
// content agree in 56 of 64 digits with a probability below 10^-55 (binomial, 1 in 16 a digit).
func nearly(a, b string) bool {
	if len(a) != len(b) {
		return false
	}
	differ := 0
	for i := range len(a) {
		if a[i] != b[i] {
			differ++
		}
	}
	return differ <= 8
}
