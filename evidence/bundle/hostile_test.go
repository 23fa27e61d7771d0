package bundle

import (
	"archive/zip"
	"bytes"
	"encoding/binary"
	"errors"
	"hash/crc32"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// An entry is one of a zip that no honest writer makes.
type entry struct {
	header zip.FileHeader
	body   []byte
}

func stored(name string, body string) entry {
	return entry{zip.FileHeader{Name: name, Method: zip.Store, CRC32: crc32.ChecksumIEEE([]byte(body)), CompressedSize64: uint64(len(body)), UncompressedSize64: uint64(len(body))}, []byte(body)}
}

func (e entry) with(change func(*zip.FileHeader)) entry {
	change(&e.header)
	return e
}

// appended packs a good bundle's entries and further ones.
func appended(t testing.TB, more ...entry) []byte {
	t.Helper()
	b := opened(t, written(t, testHeader(), testPayload()))
	var out bytes.Buffer
	z := zip.NewWriter(&out)
	for _, p := range b.paths {
		if err := z.Copy(b.files[p]); err != nil {
			t.Fatal(err)
		}
	}
	for _, e := range more {
		h := e.header
		w, err := z.CreateRaw(&h)
		if err == nil && len(e.body) > 0 {
			_, err = w.Write(e.body)
		}
		if err != nil && !strings.HasSuffix(h.Name, "/") {
			t.Fatal(err)
		}
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func utf8Name(h *zip.FileHeader) { h.Flags |= flagUTF8 }

// TestHostileEntries adds one bad entry to a good bundle: refused, and the entry named.
func TestHostileEntries(t *testing.T) {
	if _, err := Open(bytes.NewReader(appended(t)), int64(len(appended(t)))); err != nil {
		t.Fatalf("without one: %v", err)
	}
	bomb, err := deflated(make([]byte, 10<<20))
	if err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct {
		want string
		e    entry
	}{
		{"twice", stored("data/inputs/case/case.yaml", "x")},
		{`the part ".."`, stored("data/../escape", "x")},
		{`the part ".."`, stored("../escape", "x")},
		{`the part "."`, stored("data/./x", "x")},
		{"absolute", stored("/etc/x", "x")},
		{"empty part", stored("data//x", "x")},
		{"home folder", stored("~/x", "x")},
		{`holds '\\'`, stored(`data\x`, "x")},
		{`holds ':'`, stored(`C:/x`, "x")},
		{`holds '\n'`, stored("data/a\nb", "x")},
		{`holds '\x00'`, stored("data/a\x00b", "x")},
		{`holds '\u202e'`, stored("data/a\u202eb", "x").with(utf8Name)},
		{"reserved", stored("data/NUL.txt", "x")},
		{"reserved", stored("data/lpt1", "x")},
		{"ends with a dot", stored("data/a.", "x")},
		{"not UTF-8", stored("data/\xff\xfe", "x")},
		{"not marked as UTF-8", stored("data/ü", "x")},
		{"bytes, want 1024", stored("data/"+strings.Repeat("a/", 600)+"a", "x")},
		{"bytes, want 255", stored("data/"+strings.Repeat("a", 256), "x")},
		{"name is empty", stored("", "x")},
		{"case or Unicode form", stored("data/inputs/case/CASE.yaml", "x")},
		{"case or Unicode form", stored("DATA/x", "x")},
		{"case or Unicode form", stored("data/inputs/case/raw/U\u0308berpru\u0308fung e\u0301.csv", "x").with(utf8Name)}, // decomposed
		{"case or Unicode form", stored("data/inputs/case/raw/ÜBERPRÜFUNG É.csv", "x").with(utf8Name)},
		{"is a file", stored("data/inputs/case/case.yaml/x", "x")},
		{"of a file and of a folder", stored("data/inputs", "x")},
		{"folder with content", stored("data/inputs/", "x")},
		{"holds no file", stored("data/nothing/", "").with(func(h *zip.FileHeader) { h.SetMode(fs.ModeDir | 0o755) })},
		{"holds no file", stored("data/inputs/case/case.yaml/", "").with(func(h *zip.FileHeader) { h.SetMode(fs.ModeDir | 0o755) })},
		{"not a plain file", stored("data/link", "/etc/passwd").with(func(h *zip.FileHeader) { h.SetMode(fs.ModeSymlink | 0o777) })},
		{"not a plain file", stored("data/device", "").with(func(h *zip.FileHeader) { h.SetMode(fs.ModeDevice | 0o600) })},
		{"not a plain file", stored("data/folder", "").with(func(h *zip.FileHeader) { h.SetMode(fs.ModeDir | 0o755) })},
		{"folder by its name", stored("data/inputs/", "").with(func(h *zip.FileHeader) { h.SetMode(fs.ModeSymlink | 0o777) })},
		{"encrypted", stored("data/x", "x").with(func(h *zip.FileHeader) { h.Flags |= flagEncrypted })},
		{"flags", stored("data/x", "x").with(func(h *zip.FileHeader) { h.Flags |= 1 << 6 })},
		{"method 12", stored("data/x", "x").with(func(h *zip.FileHeader) { h.Method = 12 })},
		{"two sizes differ", stored("data/x", "x").with(func(h *zip.FileHeader) { h.UncompressedSize64 = 2 })},
		{"more than 200 to one", entry{zip.FileHeader{Name: "data/x", Method: zip.Deflate, CompressedSize64: uint64(len(bomb)), UncompressedSize64: 10 << 20}, bomb}},
		{"more than 200 to one", stored("data/x", "x").with(func(h *zip.FileHeader) { h.Method, h.UncompressedSize64 = zip.Deflate, 1<<63 })},
		{"comment", stored("data/x", "x").with(func(h *zip.FileHeader) { h.Comment = "x" })},
		{"extra field 0x7075", stored("data/x", "x").with(func(h *zip.FileHeader) { h.Extra = []byte{0x75, 0x70, 1, 0, 1} })},
		{"extra field that is cut short", stored("data/x", "x").with(func(h *zip.FileHeader) { h.Extra = []byte{0x55, 0x54, 9, 0, 1} })},
	} {
		data := appended(t, tt.e)
		_, err := Open(bytes.NewReader(data), int64(len(data)))
		var r *RefusedError
		if !errors.As(err, &r) || !strings.Contains(r.Reason, tt.want) || r.Path != tt.e.header.Name {
			t.Errorf("%.60q: %v, want %q", tt.e.header.Name, err, tt.want)
		}
	}
	big := func(n string) entry {
		return stored(n, "").with(func(h *zip.FileHeader) { h.CompressedSize64, h.UncompressedSize64 = 1<<33+1<<32, 1<<33+1<<32 })
	}
	data := appended(t, big("data/x"), big("data/y"))
	if _, err := Open(bytes.NewReader(data), int64(len(data))); err == nil || !strings.Contains(err.Error(), "in all") {
		t.Errorf("24 GiB in all: %v", err)
	}
}

// TestHostileContainers changes the zip around its entries.
func TestHostileContainers(t *testing.T) {
	good := written(t, testHeader(), testPayload())
	names, content := unzipped(t, good)
	le := binary.LittleEndian
	end := len(good) - endSize
	directory := int(le.Uint32(good[end+16:]))
	changed := func(change func(b []byte) []byte) []byte { return change(bytes.Clone(good)) }
	for name, data := range map[string][]byte{
		"empty":          nil,
		"no zip":         []byte("hello, this is not a zip file at all"),
		"data in front":  append([]byte("#!/bin/sh\n"), good...),
		"data behind":    append(bytes.Clone(good), "x"...),
		"a second zip":   append(bytes.Clone(good), good...),
		"a zip in front": append(zipped(t, names[:1], content), good...),
		"comment":        changed(func(b []byte) []byte { le.PutUint16(b[end+20:], 3); return append(b, "abc"...) }),
		"several disks":  changed(func(b []byte) []byte { le.PutUint16(b[end+4:], 1); return b }),
		"one entry less": changed(func(b []byte) []byte {
			le.PutUint16(b[end+8:], uint16(len(names)-1))
			le.PutUint16(b[end+10:], uint16(len(names)-1))
			return b
		}),
		"another local name": changed(func(b []byte) []byte { b[localHeaderSize] = 'B'; return b }),
		"local checksum":     changed(func(b []byte) []byte { b[14] ^= 1; return b }),
		"local size":         changed(func(b []byte) []byte { b[22] ^= 1; return b }),
		"local flags":        changed(func(b []byte) []byte { b[6] ^= 2; return b }),
		"gap before the directory": changed(func(b []byte) []byte {
			out := append(append(bytes.Clone(b[:directory]), "gap"...), b[directory:]...)
			le.PutUint32(out[len(out)-endSize+16:], uint32(directory+3))
			return out
		}),
		"gap behind the directory": changed(func(b []byte) []byte {
			return append(append(bytes.Clone(b[:end]), "gap"...), b[end:]...)
		}),
	} {
		_, err := Open(bytes.NewReader(data), int64(len(data)))
		var r *RefusedError
		if !errors.As(err, &r) {
			t.Errorf("%s: %v", name, err)
		}
		t.Logf("%s: %v", name, err)
	}
}

// TestEntriesThatLie have sizes or checksums that their content does not keep to: the file is named when it is read.
func TestEntriesThatLie(t *testing.T) {
	b := opened(t, written(t, testHeader(), testPayload()))
	const victim = "data/inputs/case/raw/001.mzML"
	text, err := b.ReadFile(victim)
	if err != nil {
		t.Fatal(err)
	}
	packed, err := deflated(text)
	if err != nil {
		t.Fatal(err)
	}
	header := zip.FileHeader{Name: victim, Method: zip.Deflate, CRC32: crc32.ChecksumIEEE(text), CompressedSize64: uint64(len(packed)), UncompressedSize64: uint64(len(text))}
	for _, tt := range []struct {
		name, want string
		e          entry
	}{
		{"nothing", "", entry{header, packed}},
		{"smaller than it says", "does not unpack to", entry{header, packed}.with(func(h *zip.FileHeader) { h.UncompressedSize64++ })},
		{"larger than it says", "does not unpack to", entry{header, packed}.with(func(h *zip.FileHeader) { h.UncompressedSize64-- })},
		{"another checksum", "checksum", entry{header, packed}.with(func(h *zip.FileHeader) { h.CRC32 ^= 1 })},
		{"data behind the content", "behind its content", entry{header, append(bytes.Clone(packed), "hidden"...)}.with(func(h *zip.FileHeader) { h.CompressedSize64 += 6 })},
		{"one octet behind the content", "behind its content", entry{header, append(bytes.Clone(packed), 0)}.with(func(h *zip.FileHeader) { h.CompressedSize64++ })},
		{"cut short", "cannot be unpacked", entry{header, packed[:len(packed)-4]}.with(func(h *zip.FileHeader) { h.CompressedSize64 -= 4 })},
		{"not deflated", "cannot be unpacked", entry{header, bytes.Repeat([]byte{0xff}, len(packed))}},
	} {
		var out bytes.Buffer
		z := zip.NewWriter(&out)
		for _, p := range b.paths {
			if p != victim {
				if err := z.Copy(b.files[p]); err != nil {
					t.Fatal(err)
				}
			}
		}
		h := tt.e.header
		w, err := z.CreateRaw(&h)
		if err == nil {
			_, err = w.Write(tt.e.body)
		}
		if err != nil || z.Close() != nil {
			t.Fatal(err)
		}
		problems := opened(t, out.Bytes()).CheckFiles()
		if tt.want == "" && len(problems) > 0 || tt.want != "" && (len(problems) != 1 || problems[0].Path != victim || !strings.Contains(problems[0].Error(), tt.want)) {
			t.Errorf("%s: %v, want %q", tt.name, problems, tt.want)
		}
	}
}

// TestHostileStatements are refused while opening.
func TestHostileStatements(t *testing.T) {
	names, content := unzipped(t, written(t, testHeader(), testPayload()))
	original := string(content[statementPath])
	for _, tt := range []struct{ name, want, old, new string }{
		{"unknown key", "unknown field", `"case":`, `"a_new_key":1,"case":`},
		{"key twice", "canonical", `"case":"C-0417"`, `"case":"C-0417","case":"C-0417"`},
		{"another case of a key", "canonical", `"case":`, `"Case":`},
		{"space", "canonical", `,"case"`, `, "case"`},
		{"another format", "want \"assaywrit-statement/1\"", `statement/1`, `statement/2`},
		{"number as text", "is not a statement", `"payload_files":7`, `"payload_files":"7"`},
		{"number in another form", "not a statement", `"payload_files":7`, `"payload_files":7.0`},
		{"large number", "not a statement", `"payload_files":7`, `"payload_files":99999999999999999999`},
		{"negative", "octets", `"payload_octets":`, `"payload_octets":-`},
		{"no payload", "0 payload files", `"payload_files":7`, `"payload_files":0`},
		{"null", "signatories is missing", `"signatories":[{"meaning":"reviewed","person":"P-04","position":"reviewer"},{"meaning":"authorised","person":"P-05","position":"certifying scientist"}]`, `"signatories":null`},
		{"trailing text", "canonical", `"toolchain":"go1.26"}`, `"toolchain":"go1.26"}{}`},
		{"capitals", "64 hexadecimal", `"merkle_root":"`, `"merkle_root":"A`},
		{"escape", "canonical", `"C-0417"`, `"\u0043-0417"`},
		{"lone surrogate", "canonical", `"C-0417"`, `"\ud800"`},
		{"empty", "statement", original, ``},
		{"too large", "at most", original, strings.Repeat(" ", maxStatement+1)},
	} {
		text := strings.Replace(original, tt.old, tt.new, 1)
		if text == original {
			t.Fatalf("%s: nothing was changed", tt.name)
		}
		content[statementPath] = []byte(text)
		data := zipped(t, names, content)
		_, err := Open(bytes.NewReader(data), int64(len(data)))
		var r *RefusedError
		if !errors.As(err, &r) || r.Path != statementPath || !strings.Contains(r.Reason, tt.want) {
			t.Errorf("%s: %v, want %q", tt.name, err, tt.want)
		}
	}
}

// program finds an outside program. Where it is absent the test is skipped, except in continuous integration.
func program(t testing.TB, name string) string {
	t.Helper()
	path, err := exec.LookPath(name)
	if err != nil {
		if os.Getenv("CI") != "" {
			t.Fatalf("%s is not installed, and nothing may be skipped here", name)
		}
		t.Skipf("%s is not installed: this check was not made", name)
	}
	return path
}

// TestPackedByAnotherTool unpacks a bundle and packs it again with Info-ZIP, folders, times, owners and all: it holds, and can be
// signed. Only names beyond ASCII would be refused, since that tool does not mark them as UTF-8.
func TestPackedByAnotherTool(t *testing.T) {
	zipProgram := program(t, "zip")
	lab := laboratory()
	ascii := slices.DeleteFunc(testPayload(), func(p Payload) bool { return strings.ContainsAny(p.Path, "Üé") })
	data := withSignature(t, written(t, testHeader(), ascii), "P-04-reviewed.p7s", lab.people["P-04"], "reviewed")
	out := filepath.Join(t.TempDir(), "again.zip")
	cmd := exec.Command(zipProgram, "-q", "-r", out, ".")
	cmd.Dir = extracted(t, data)
	if text, err := cmd.CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	data, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	b := opened(t, data)
	if !slices.ContainsFunc(b.zip.File, func(f *zip.File) bool { return strings.HasSuffix(f.Name, "/") }) {
		t.Error("no folder was packed: the test shows less than it says")
	}
	if refused, files, signatures, err := verdict(data); err != nil || len(files)+len(signatures) > 0 {
		t.Errorf("%s %v %v %v", refused, files, signatures, err)
	}
	if _, files, signatures, err := verdict(withSignature(t, data, "P-05-authorised.p7s", lab.people["P-05"], "authorised")); err != nil || len(files)+len(signatures) > 0 {
		t.Errorf("signed again: %v %v %v", files, signatures, err)
	}
}

// extracted unpacks a bundle into a folder with the standard library.
func extracted(t testing.TB, data []byte) string {
	t.Helper()
	dir := t.TempDir()
	names, content := unzipped(t, data)
	for _, name := range names {
		path := filepath.Join(dir, filepath.FromSlash(name))
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, content[name], 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}
