package formats

import (
	"bytes"
	"errors"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

var update = flag.Bool("update", false, "write the damaged files anew")

const damagedFolder = "../../../testdata/damaged"

// TestDamagedGzip refuses each damaged packed file, with a message of its own and within bounds of memory.
func TestDamagedGzip(t *testing.T) {
	good := gzipped(t, contents(t)[:4000])
	wrongSum := bytes.Clone(good)
	wrongSum[len(wrongSum)-6] ^= 1
	wrongSize := bytes.Clone(good)
	wrongSize[len(wrongSize)-1] ^= 1
	list := []struct {
		name string
		data []byte
		want string
	}{
		{"gzip_of_zeros", gzipped(t, make([]byte, 25<<20)), "a gzip file that holds more than"},
		{"cut_gzip", good[:len(good)/2], "damaged gzip data (unexpected EOF)"},
		{"wrong_gzip_checksum", wrongSum, "damaged gzip data (gzip: invalid checksum)"},
		{"wrong_gzip_size", wrongSize, "damaged gzip data (gzip: invalid checksum)"},
		{"gzip_in_gzip", gzipped(t, good), "gzip inside gzip"},
		{"gzip_of_nothing_known", gzipped(t, []byte("MThd not chromatograms")), `content that begins with "MThd not chromat"`},
	}
	listed := map[string]bool{}
	for _, d := range list {
		file := d.name + ".gz"
		listed[file] = true
		path := filepath.Join(damagedFolder, file)
		if *update {
			if err := os.WriteFile(path, d.data, 0o644); err != nil {
				t.Fatal(err)
			}
		}
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		before := allocated()
		_, err = everything(file, data)
		if took := allocated() - before; took > mostMemory(len(data)) {
			t.Errorf("%s: %d bytes of memory for a file of %d", file, took, len(data))
		}
		var syntax *trace.SyntaxError
		if !errors.As(err, &syntax) || !strings.Contains(err.Error(), d.want) || syntax.Hint == "" {
			t.Errorf("%s: got %v, want %s", file, err, d.want)
		}
	}
	files, err := filepath.Glob(filepath.Join(damagedFolder, "*.gz"))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		if !listed[filepath.Base(f)] {
			t.Errorf("%s is not in the list", f)
		}
	}
}

// TestDamagedWithinMemory: no damaged file of any format, but those of delimited text, which need a layout, is read; and none takes more
// memory than it may.
func TestDamagedWithinMemory(t *testing.T) {
	entries, err := os.ReadDir(damagedFolder)
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for _, e := range entries {
		data, err := os.ReadFile(filepath.Join(damagedFolder, e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		before := allocated()
		_, err = everything(e.Name(), data)
		if took := allocated() - before; took > mostMemory(len(data)) {
			t.Errorf("%s: %d bytes of memory for a file of %d", e.Name(), took, len(data))
		}
		if filepath.Ext(e.Name()) != ".csv" {
			n++
			if err == nil {
				t.Errorf("%s was read", e.Name())
			}
		}
	}
	if n < 150 {
		t.Errorf("only %d damaged files", n)
	}
}
