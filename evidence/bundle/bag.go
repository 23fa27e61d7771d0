package bundle

import (
	"bytes"
	"errors"
	"fmt"
	"sort"
	"strings"
)

// Paths of a bundle's own files.
const (
	bagitPath       = "bagit.txt"
	bagInfoPath     = "bag-info.txt"
	manifestPath    = "manifest-sha256.txt"
	tagManifestPath = "tagmanifest-sha256.txt"
	payloadFolder   = "data/"
	statementPath   = "seal/statement.json"
	signatureFolder = "seal/signatures/"
	signatureSuffix = ".p7s"
)

// bagitText is the whole of bagit.txt (RFC 8493, 2.1.1).
const bagitText = "BagIt-Version: 1.0\nTag-File-Character-Encoding: UTF-8\n"

// bagInfo writes bag-info.txt (RFC 8493, 2.2.2). It holds no date: two writes give the same bytes.
func bagInfo(st *Statement) []byte {
	var b bytes.Buffer
	fmt.Fprintf(&b, "Bag-Software-Agent: %s %s\n", st.EngineName, st.EngineVersion)
	fmt.Fprintf(&b, "Source-Organization: %s\n", st.Laboratory)
	fmt.Fprintf(&b, "External-Identifier: %s\n", st.Case)
	fmt.Fprintf(&b, "External-Description: evidence bundle, sample %s%s\n", st.SampleCode, demonstrationNote(st))
	fmt.Fprintf(&b, "Internal-Sender-Identifier: %s\n", st.BundleID)
	fmt.Fprintf(&b, "Payload-Oxum: %d.%d\n", st.PayloadOctets, st.PayloadFiles)
	return b.Bytes()
}

func demonstrationNote(st *Statement) string {
	if st.Demonstration {
		return " (DEMONSTRATION, NOT VALID)"
	}
	return ""
}

// A listing is one line of a manifest.
type listing struct {
	line   int
	sha256 string
	path   string
}

// manifestText writes a manifest (RFC 8493, 2.1.3), in the form that sha256sum writes and reads.
func manifestText(list []listing) []byte {
	var b bytes.Buffer
	for _, l := range list {
		fmt.Fprintf(&b, "%s  %s\n", l.sha256, l.path)
	}
	return b.Bytes()
}

// payloadManifest is the manifest of the payload.
func payloadManifest(leaves []leaf) []byte {
	list := make([]listing, len(leaves))
	for i, l := range leaves {
		list[i] = listing{sha256: l.SHA256, path: l.Path}
	}
	return manifestText(list)
}

// tagManifest is the manifest of the four files that are listed there, sorted by path.
func tagManifest(content map[string][]byte) []byte {
	var list []listing
	for _, path := range taggedPaths {
		list = append(list, listing{sha256: hexSum(content[path]), path: path})
	}
	return manifestText(list)
}

var taggedPaths = []string{bagInfoPath, bagitPath, manifestPath, statementPath}

// A lineProblem is a fault in a line of a manifest.
type lineProblem struct {
	line int
	err  error
}

// parseManifest reads a manifest strictly: 64 lower-case hexadecimal digits, two spaces, a path, a line feed; sorted by path,
// none twice. Lines that are in order are returned even where others are not.
func parseManifest(data []byte) (list []listing, problems []lineProblem) {
	if len(data) == 0 || data[len(data)-1] != '\n' {
		problems = append(problems, lineProblem{bytes.Count(data, []byte("\n")) + 1, errors.New("the last line has no end")})
	}
	lines := strings.Split(strings.TrimSuffix(string(data), "\n"), "\n")
	seen := map[string]int{}
	last := ""
	for i, text := range lines {
		l, err := parseListing(text)
		l.line = i + 1
		if err != nil {
			problems = append(problems, lineProblem{i + 1, err})
			continue
		}
		if first, twice := seen[l.path]; twice {
			problems = append(problems, lineProblem{i + 1, fmt.Errorf("%q is listed twice, first on line %d", l.path, first)})
			continue
		}
		if l.path < last {
			problems = append(problems, lineProblem{i + 1, fmt.Errorf("%q stands after %q, want paths in the order of their bytes", l.path, last)})
		}
		seen[l.path], last = l.line, l.path
		list = append(list, l)
	}
	return list, problems
}

func parseListing(text string) (listing, error) {
	sum, path, ok := strings.Cut(text, "  ")
	if !ok || !isSum(sum) {
		return listing{}, fmt.Errorf("%q is not a SHA-256 in lower case, two spaces and a path", shortened(text))
	}
	if err := CheckPath(path); err != nil {
		return listing{}, fmt.Errorf("%q: %w", shortened(path), err)
	}
	return listing{sha256: sum, path: path}, nil
}

func shortened(s string) string {
	if len(s) > 200 {
		return s[:200] + "…"
	}
	return s
}

func sortLeaves(leaves []leaf) {
	sort.Slice(leaves, func(i, j int) bool { return leaves[i].Path < leaves[j].Path })
}
