package netcdf

import (
	"bytes"
	"compress/gzip"
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

const folder = "../../../testdata/andi"

// contents is a test file, unpacked.
func contents(t testing.TB, name string) []byte {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(folder, name))
	if err != nil {
		t.Fatal(err)
	}
	if !strings.HasSuffix(name, ".gz") {
		return data
	}
	z, err := gzip.NewReader(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	if data, err = io.ReadAll(z); err != nil {
		t.Fatal(err)
	}
	return data
}

func open(t testing.TB, name string) *File {
	t.Helper()
	f, err := Open(name, bytes.NewReader(contents(t, name)))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func values(t testing.TB, f *File, name string) []float64 {
	t.Helper()
	v, err := f.Floats(name)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// A published file is what expected.json says of one.
type published struct {
	Version   byte              `json:"netcdf_version_byte"`
	Dims      [][2]any          `json:"dims"`
	Records   *int64            `json:"n_records"`
	Global    map[string]string `json:"global"`
	Variables map[string]struct {
		Type  Type
		N     int64
		First []float64
	}
}

func expected(t testing.TB) map[string]published {
	t.Helper()
	var all map[string]published
	if err := json.Unmarshal(contents(t, "expected.json"), &all); err != nil {
		t.Fatal(err)
	}
	return all
}
