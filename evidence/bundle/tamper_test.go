package bundle

import (
	"bytes"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

// verdict opens and checks a bundle in full, and returns the paths that are named: by Open, CheckFiles and CheckSignatures.
func verdict(data []byte) (refused string, files, signatures []string, err error) {
	b, err := Open(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		if r, ok := err.(*RefusedError); ok {
			return r.Path, nil, nil, err
		}
		return "?", nil, nil, err
	}
	for _, p := range b.CheckFiles() {
		files = append(files, p.Path)
	}
	for _, r := range CheckSignatures(b, trusted()) {
		if !r.Trusted {
			signatures = append(signatures, r.File)
		}
	}
	return "", files, signatures, nil
}

// blamedAlone checks that a change was noticed and that the file, and no other, is named.
func blamedAlone(t *testing.T, what, name string, data []byte) {
	t.Helper()
	refused, files, signatures, err := verdict(data)
	switch {
	case err != nil:
		if refused != name {
			t.Errorf("%s: refused for %q: %v", what, refused, err)
		}
	case isSignaturePath(name):
		if len(files) > 0 || !slices.Equal(signatures, []string{name}) {
			t.Errorf("%s: files %v, signatures %v", what, files, signatures)
		}
	case !slices.Equal(files, []string{name}):
		t.Errorf("%s: files %v are named", what, files)
	}
}

// TestEveryByteOfEveryFile changes every byte of every file, one at a time, in signed and unsigned bundles.
func TestEveryByteOfEveryFile(t *testing.T) {
	t.Parallel()
	for kind, data := range map[string][]byte{"signed": signedBundle(t), "unsigned": written(t, testHeader(), testPayload())} {
		names, content := unzipped(t, data)
		if refused, files, signatures, err := verdict(zipped(t, names, content)); err != nil || refused != "" || len(files)+len(signatures) > 0 {
			t.Fatalf("%s: a faithful copy does not hold, so that the rest would prove nothing: %v %v %v", kind, err, files, signatures)
		}
		rnd := rand.New(rand.NewPCG(2026, 12))
		for _, name := range names {
			original := content[name]
			for at := range original {
				altered := bytes.Clone(original)
				altered[at] ^= 1 << rnd.IntN(8)
				content[name] = altered
				blamedAlone(t, kind+" "+name, name, zipped(t, names, content))
			}
			content[name] = original
		}
	}
}

// TestEveryBitOfTheStatement goes through all bits, since the statement is what everything else hangs on.
func TestEveryBitOfTheStatement(t *testing.T) {
	t.Parallel()
	names, content := unzipped(t, signedBundle(t))
	original := content[statementPath]
	for bit := range 8 * len(original) {
		altered := bytes.Clone(original)
		altered[bit/8] ^= 1 << (bit % 8)
		content[statementPath] = altered
		data := zipped(t, names, content)
		blamedAlone(t, statementPath, statementPath, data)
		if b, err := Open(bytes.NewReader(data), int64(len(data))); err == nil {
			for _, r := range CheckSignatures(b, trusted()) {
				if r.Trusted || r.Problem == "" {
					t.Fatalf("bit %d: the signature still holds", bit)
				}
			}
		}
	}
}

// TestEveryByteOfTheContainer changes every byte of the zip file itself. It may be refused, named, or be one that changes
// nothing that a reader gets to see (a time, an owner).
func TestEveryByteOfTheContainer(t *testing.T) {
	t.Parallel()
	data := signedBundle(t)
	names, content := unzipped(t, data)
	harmless := 0
	for at := range data {
		altered := bytes.Clone(data)
		altered[at] ^= 1 << (at % 8)
		_, files, signatures, err := verdict(altered)
		if err != nil || len(files)+len(signatures) > 0 {
			continue
		}
		harmless++
		gotNames, got := unzipped(t, altered)
		if !slices.Equal(gotNames, names) {
			t.Fatalf("byte %d: other names, unnoticed", at)
		}
		for _, name := range names {
			if !bytes.Equal(got[name], content[name]) {
				t.Fatalf("byte %d: %s has other content, unnoticed", at, name)
			}
		}
	}
	// Times (4 + 4 octets), versions (2 + 4), modes and the like (10) of each entry: fewer than 40 octets an entry.
	if limit := 40 * len(names); harmless > limit {
		t.Errorf("%d bytes can change unnoticed, want %d at most", harmless, limit)
	}
	for n := range data {
		if n%97 == 0 || n > len(data)-100 {
			if _, err := Open(bytes.NewReader(data[:n]), int64(n)); err == nil {
				t.Errorf("cut to %d bytes: opened", n)
			}
		}
	}
}

func TestMissingAndAdded(t *testing.T) {
	names, content := unzipped(t, signedBundle(t))
	for i, name := range names {
		rest := slices.Delete(slices.Clone(names), i, i+1)
		data := zipped(t, rest, content)
		if strings.HasSuffix(name, signatureSuffix) {
			if b := opened(t, data); len(b.CheckFiles()) > 0 || len(MissingSignatories(b)) != 1 {
				t.Errorf("without %s: %v", name, MissingSignatories(b))
			}
			continue
		}
		blamedAlone(t, "without "+name, name, data)
	}
	for _, stranger := range []string{
		"data/extra.txt", "extra.txt", "seal/extra.txt", "seal/statement.json.bak", "seal/signatures/notes.txt", "seal/signatures/deep/P-04.p7s",
		"seal/timestamps/P-04.tsr", "manifest-md5.txt", "fetch.txt", "META-INF/MANIFEST.MF",
	} {
		content[stranger] = []byte("x")
		blamedAlone(t, "with "+stranger, stranger, zipped(t, append(slices.Clone(names), stranger), content))
	}
	content["seal/signatures/more.p7s"] = []byte("x")
	blamedAlone(t, "with a signature that is none", "seal/signatures/more.p7s", zipped(t, append(slices.Clone(names), "seal/signatures/more.p7s"), content))
}

// TestAllProblemsAtOnce damages several files in different ways.
func TestAllProblemsAtOnce(t *testing.T) {
	names, content := unzipped(t, signedBundle(t))
	content["data/evidence/evidence.json"] = []byte(`{"format":"y"}`)
	content["data/inputs/case/case.yaml"] = nil
	content["bagit.txt"] = []byte("BagIt-Version: 0.97\nTag-File-Character-Encoding: UTF-8\n")
	content["data/late.txt"] = []byte("added")
	names = append(names, "data/late.txt")
	names = slices.DeleteFunc(names, func(n string) bool { return n == "data/report/package.pdf" })
	_, files, _, err := verdict(zipped(t, names, content))
	want := []string{"bagit.txt", "data/evidence/evidence.json", "data/inputs/case/case.yaml", "data/late.txt", "data/report/package.pdf"}
	if err != nil || !slices.Equal(files, want) {
		t.Errorf("%v %v, want %v", err, files, want)
	}
}

// TestConsistentForgeries changes a file and some of its witnesses with it, as a forger would.
func TestConsistentForgeries(t *testing.T) {
	names, original := unzipped(t, signedBundle(t))
	const victim = "data/evidence/evidence.json"
	forged := []byte(`{"format":"z"}`)
	old, new := []byte(hexSum(original[victim])), []byte(hexSum(forged))
	manifest := bytes.Replace(original[manifestPath], old, new, 1)
	oldManifest, newManifest := []byte(hexSum(original[manifestPath])), []byte(hexSum(manifest))
	tagged := bytes.Replace(original[tagManifestPath], oldManifest, newManifest, 1)
	for _, tt := range []struct {
		name   string
		change map[string][]byte
		want   []string
	}{
		{"file", map[string][]byte{victim: forged}, []string{victim}},
		{"manifest", map[string][]byte{manifestPath: manifest}, []string{manifestPath}},
		{"tag manifest", map[string][]byte{tagManifestPath: tagged}, []string{tagManifestPath}},
		{"file and manifest", map[string][]byte{victim: forged, manifestPath: manifest}, []string{payloadFolder, manifestPath}},
		{"file, manifest and tag manifest", map[string][]byte{victim: forged, manifestPath: manifest, tagManifestPath: tagged}, []string{payloadFolder, statementPath}},
		{"manifest and tag manifest", map[string][]byte{manifestPath: manifest, tagManifestPath: tagged}, []string{manifestPath, statementPath}},
	} {
		content := map[string][]byte{}
		for k, v := range original {
			content[k] = v
		}
		for k, v := range tt.change {
			content[k] = v
		}
		_, files, _, err := verdict(zipped(t, names, content))
		if err != nil || !slices.Equal(files, tt.want) {
			t.Errorf("%s: %v %v, want %v", tt.name, err, files, tt.want)
		}
	}
}

// TestManifestLines alters the manifest's form and leaves what it says, or nearly.
func TestManifestLines(t *testing.T) {
	names, content := unzipped(t, signedBundle(t))
	for _, path := range []string{manifestPath, tagManifestPath} {
		original := content[path]
		lines := bytes.SplitAfter(original, []byte("\n"))
		for name, altered := range map[string][]byte{
			"empty":              nil,
			"no end of line":     original[:len(original)-1],
			"empty line":         append(bytes.Clone(original), '\n'),
			"a line twice":       append(bytes.Clone(original), lines[0]...),
			"another order":      append(bytes.Join([][]byte{lines[1], lines[0]}, nil), bytes.Join(lines[2:], nil)...),
			"a line less":        bytes.Join(lines[1:], nil),
			"capitals":           bytes.ToUpper(original),
			"carriage returns":   bytes.ReplaceAll(original, []byte("\n"), []byte("\r\n")),
			"byte order mark":    append([]byte("\ufeff"), original...),
			"a stranger":         append(bytes.Clone(original), []byte(strings.Repeat("0", 64)+"  data/zzz\n")...),
			"a stranger outside": append(bytes.Clone(original), []byte(strings.Repeat("0", 64)+"  zzz\n")...),
		} {
			content[path] = altered
			blamedAlone(t, path+", "+name, path, zipped(t, names, content))
		}
		content[path] = original
	}
}
