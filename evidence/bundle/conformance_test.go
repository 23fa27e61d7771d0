package bundle

import (
	"archive/tar"
	"bytes"
	"compress/gzip"
	"crypto/md5"
	"crypto/sha256"
	"crypto/sha512"
	"encoding/csv"
	"encoding/hex"
	"io"
	"os"
	"regexp"
	"slices"
	"sort"
	"strings"
	"testing"
)

// suite reads the bags of the BagIt conformance suite: name of the bag, path in it, content.
func suite(t *testing.T) map[string]map[string][]byte {
	t.Helper()
	f, err := os.Open("../../testdata/bagit/bagit-conformance-suite-a.tar.gz")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	z, err := gzip.NewReader(f)
	if err != nil {
		t.Fatal(err)
	}
	bags := map[string]map[string][]byte{}
	for r := tar.NewReader(z); ; {
		h, err := r.Next()
		if err == io.EOF {
			return bags
		}
		if err != nil {
			t.Fatal(err)
		}
		parts := strings.SplitN(strings.TrimPrefix(h.Name, "./"), "/", 4) // version/verdict/bag/path
		if h.Typeflag != tar.TypeReg || len(parts) < 4 {
			continue
		}
		bag := strings.Join(parts[:3], "/")
		if bags[bag] == nil {
			bags[bag] = map[string][]byte{}
		}
		if bags[bag][parts[3]], err = io.ReadAll(r); err != nil {
			t.Fatal(err)
		}
	}
}

// verdicts are what the suite says of its bags.
func verdicts(t *testing.T) map[string]string {
	t.Helper()
	text, err := os.ReadFile("../../testdata/bagit/expected.csv")
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	says := map[string]string{}
	for _, row := range rows[1:] {
		says[row[0]] = row[1]
	}
	return says
}

var manifestLine = regexp.MustCompile(`^([0-9a-fA-F]+)[ \t]+\*?(.*)$`)

// listedBy reads a manifest of the suite, of whatever algorithm: each line's path, and whether its hash is that of the file.
func listedBy(t *testing.T, bag map[string][]byte) (paths []string, fits []bool) {
	t.Helper()
	for _, name := range []string{"manifest-sha256.txt", "manifest-sha512.txt", "manifest-md5.txt"} {
		for _, line := range strings.Split(strings.TrimRight(string(bag[name]), "\r\n"), "\n") {
			m := manifestLine.FindStringSubmatch(strings.TrimRight(line, "\r"))
			if bag[name] == nil || m == nil {
				continue
			}
			data := bag[strings.TrimPrefix(m[2], "./")]
			md, s2, s5 := md5.Sum(data), sha256.Sum256(data), sha512.Sum512(data)
			sum := strings.ToLower(m[1])
			paths = append(paths, m[2])
			fits = append(fits, sum == hex.EncodeToString(md[:]) || sum == hex.EncodeToString(s2[:]) || sum == hex.EncodeToString(s5[:]))
		}
		if len(paths) > 0 {
			return paths, fits
		}
	}
	t.Fatal("no manifest was found")
	return nil, nil
}

// translated makes a bag of the suite into a bundle: sealed as its manifest lists it, then given the files, manifest lines and
// bagit.txt that the bag has (with version 1.0, SHA-256 and line feeds, the one end of line in a bundle).
func translated(t *testing.T, bag map[string][]byte) (data, manifest []byte) {
	t.Helper()
	paths, fits := listedBy(t, bag)
	var sealed []Payload
	var lines []listing
	for i, path := range paths {
		content := bag[strings.TrimPrefix(path, "./")]
		if !fits[i] {
			content = []byte("what line " + path + " was made for")
		}
		lines = append(lines, listing{sha256: hexSum(content), path: path})
		inside, ok := strings.CutPrefix(strings.TrimPrefix(path, "./"), payloadFolder)
		first := slices.Index(paths, path) == i
		if ok && first && CheckPath(inside) == nil && (!fits[i] || bag[payloadFolder+inside] != nil) && !slices.ContainsFunc(sealed, func(p Payload) bool { return folded(p.Path) == folded(inside) }) {
			sealed = append(sealed, Payload{inside, content})
		}
	}
	sort.SliceStable(lines, func(i, j int) bool { return lines[i].path < lines[j].path })
	names, content := unzipped(t, written(t, testHeader(), sealed))
	manifest = manifestText(lines)
	content[manifestPath] = manifest
	bagit := regexp.MustCompile(`0\.9[67]`).ReplaceAll(bag[bagitPath], []byte("1.0"))
	bagit = bytes.TrimSuffix(bytes.ReplaceAll(bagit, []byte("\r\n"), []byte("\n")), []byte("\n"))
	content[bagitPath] = append(bagit, '\n')
	for path, data := range bag {
		if strings.HasPrefix(path, payloadFolder) {
			if content[path] == nil {
				names = append(names, path)
			}
			content[path] = data
		}
	}
	if bag[bagInfoPath] == nil && listsBagInfo(bag) {
		names = slices.DeleteFunc(names, func(n string) bool { return n == bagInfoPath })
	}
	return zipped(t, names, content), manifest
}

func listsBagInfo(bag map[string][]byte) bool {
	for name, data := range bag {
		if strings.HasPrefix(name, "tagmanifest-") && bytes.Contains(data, []byte(bagInfoPath)) {
			return true
		}
	}
	return false
}

// conforming says for each bag that must not hold what is named for it. The suite calls some of them valid, or valid with a
// warning; a bundle is stricter than a bag there, as the comment says.
var conforming = map[string][]string{
	"v0.97/invalid/baginfo-missing-encoding":                           {bagitPath},
	"v0.97/invalid/corrupt-data-file":                                  {"data/bare-filename"},
	"v0.97/invalid/extra-file-in-bag":                                  {"data/bar"},
	"v0.97/invalid/missing-baginfo":                                    {bagInfoPath},
	"v0.97/invalid/out-of-scope-file-paths-using-dot-notation":         {manifestPath},
	"v0.97/invalid/same-filename-listed-twice-with-different-hashes":   {manifestPath},
	"v0.97/linux-only/out-of-scope-file-paths-using-absolute-path":     {manifestPath},
	"v0.97/linux-only/out-of-scope-file-paths-using-shortcut":          {manifestPath},
	"v0.97/linux-only/out-of-scope-file-paths-using-shortcut-username": {manifestPath},
	"v0.97/windows-only/out-of-scope-file-paths-using-absolute-path":   {manifestPath},
	"v0.97/windows-only/out-of-scope-file-paths-using-shortcut":        {manifestPath},
	"v0.97/windows-only/out-of-scope-file-paths-using-unc":             {manifestPath},
	"v1.0/invalid/bagit-with-invalid-whitespace":                       {bagitPath},
	"v1.0/invalid/same-filename-listed-twice-with-different-hashes":    {bagitPath, manifestPath},
	"v0.97/valid/ISO-8859-1-encoded-tag-files":                         {bagitPath},    // tag files are UTF-8 in a bundle
	"v0.97/warning/duplicate-file-with-different-case":                 {manifestPath}, // two names, one file on some systems
	"v0.97/warning/relative-path":                                      {manifestPath}, // one spelling of a path
	"v0.97/warning/same-filename-listed-twice-with-the-same-hash":      {manifestPath}, // one line a file
}

func TestBagItConformance(t *testing.T) {
	bags, says := suite(t), verdicts(t)
	if len(bags) != 28 || len(says) != 28 {
		t.Fatalf("%d bags and %d verdicts, want 28", len(bags), len(says))
	}
	for name, bag := range bags {
		t.Run(name, func(t *testing.T) {
			data, manifest := translated(t, bag)
			_, files, _, err := verdict(data)
			if err != nil {
				t.Fatal(err)
			}
			want := conforming[name]
			if !slices.Equal(files, want) {
				t.Errorf("%v are named, want %v (the suite says %s)", files, want, says[name])
			}
			if strings.HasPrefix(says[name], "invalid") && len(want) == 0 {
				t.Errorf("the suite says %s", says[name])
			}
			// The manifest's form is refused by itself, whatever the statement says.
			_, problems := parseManifest(manifest)
			if bad := strings.Contains(name, "out-of-scope") || strings.Contains(name, "listed-twice") || strings.Contains(name, "relative-path"); bad != (len(problems) > 0) {
				t.Errorf("manifest: %v", problems)
			}
		})
	}
}
