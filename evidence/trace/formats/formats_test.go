package formats

import (
	"bytes"
	"compress/gzip"
	"errors"
	"fmt"
	"io"
	"os"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/mzml"
	"assaywrit/evidence/trace/table"
)

const published = "../../../testdata/mzml/example.mzML"

// declared is a method that lays out files of one ending.
func declared(name string) (table.Layout, bool) {
	layout := table.Layout{Separator: ',', DecimalMark: '.', TimeColumn: 1, TimeUnit: "min", Columns: []table.Column{{Column: 2, ID: "x"}}}
	return layout, strings.HasSuffix(name, ".csv")
}

func gzipped(t testing.TB, data []byte) []byte {
	t.Helper()
	var b bytes.Buffer
	z := gzip.NewWriter(&b)
	if _, err := z.Write(data); err != nil {
		t.Fatal(err)
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func contents(t testing.TB) []byte {
	t.Helper()
	data, err := os.ReadFile(published)
	if err != nil {
		t.Fatal(err)
	}
	return data
}

// TestByContent reads files by what they hold, whatever their names say.
func TestByContent(t *testing.T) {
	data := contents(t)
	want, err := mzml.Read("example", bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	for name, content := range map[string][]byte{"a.mzML": data, "a.csv": data, "a": data, "a.mzML.gz": gzipped(t, data)} {
		f, err := Read(name, bytes.NewReader(content), declared)
		if err != nil {
			t.Fatal(err)
		}
		f.Scans, want.Scans = nil, nil // they are read from the file when asked for
		if fmt.Sprint(f) != fmt.Sprint(want) {
			t.Errorf("%s: not the same as without a wrapper or another name", name)
		}
	}
	for _, content := range [][]byte{[]byte("1,2\n3,4\n"), gzipped(t, []byte("1,2\n3,4\n"))} {
		f, err := Read("a.csv", bytes.NewReader(content), declared)
		if err != nil || f.Format != "delimited text" || len(f.Chromatograms[0].TimeMin) != 2 {
			t.Errorf("got %v, %v", f, err)
		}
	}
}

func TestRefused(t *testing.T) {
	good := gzipped(t, contents(t))
	broken := bytes.Clone(good)
	broken[len(broken)-6] ^= 1 // the checksum
	for _, tt := range []struct {
		name string
		data []byte
		want string
	}{
		{"a.txt", []byte("1,2\n3,4\n"), `got content that begins with "1,2\n3,4\n", want mzML 1.1, or ANDI (netCDF classic), or JCAMP-DX, or delimited text (declared in the method's tables)`},
		{"a.mzML", []byte("MThd not chromatograms"), `got content that begins with "MThd not chromat"`},
		{"a.mzML", nil, "got an empty file"},
		{"a.mzML", []byte("<html><body/></html>"), `got content that begins with "<html><body/></h"`},
		{"a.mzML.gz", good[:len(good)/2], "got damaged gzip data (unexpected EOF)"},
		{"a.mzML.gz", broken, "got damaged gzip data (gzip: invalid checksum)"},
		{"a.mzML.gz", good[:5], "got damaged gzip data"},
		{"a.mzML.gz", append(bytes.Clone(good), "more"...), "got damaged gzip data"},
		{"a.mzML.gz.gz", gzipped(t, good), "got gzip inside gzip"},
	} {
		_, err := Read(tt.name, bytes.NewReader(tt.data), declared)
		var syntax *trace.SyntaxError
		if !errors.As(err, &syntax) || !strings.Contains(err.Error(), tt.want) || syntax.Hint == "" {
			t.Errorf("%s: got %v, want %s", tt.name, err, tt.want)
		}
	}
	if _, err := Read("a.csv", strings.NewReader("1,2\n"), nil); err == nil {
		t.Error("delimited text was read without a layout")
	}
	if _, err := Read("a", io.NewSectionReader(strings.NewReader("1,2"), 0, 99), declared); !errors.Is(err, io.ErrUnexpectedEOF) {
		t.Errorf("a source that ends early: %v", err)
	}
}

// TestUnpackingIsBounded packs a thousand times as much as is there, and one byte more than may come out.
func TestUnpackingIsBounded(t *testing.T) {
	bomb := gzipped(t, make([]byte, 1<<20))
	if _, err := unpack("bomb.gz", bytes.NewReader(bomb), 1<<20-1); err == nil || !strings.Contains(err.Error(), "holds more than 1048575 bytes") {
		t.Errorf("got %v", err)
	}
	if src, err := unpack("bomb.gz", bytes.NewReader(bomb), 1<<20); err != nil || src.Size() != 1<<20 {
		t.Errorf("got %v, %v", src, err)
	}
}

func TestNames(t *testing.T) {
	if names := Names(); len(names) != len(known)+1 {
		t.Errorf("got %q", names)
	}
}
