package mzml

import (
	"bytes"
	"compress/zlib"
	"encoding/base64"
	"encoding/binary"
	"encoding/xml"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

type secondParam struct {
	Accession string `xml:"accession,attr"`
	Unit      string `xml:"unitAccession,attr"`
}

type secondArray struct {
	Params []secondParam `xml:"cvParam"`
	Text   string        `xml:"binary"`
}

type secondChromatogram struct {
	ID     string        `xml:"id,attr"`
	Arrays []secondArray `xml:"binaryDataArrayList>binaryDataArray"`
}

// values decodes an array in the simplest way that there is.
func (a secondArray) values(t *testing.T) (content string, values []float64) {
	raw, err := base64.StdEncoding.DecodeString(strings.TrimSpace(a.Text))
	if err != nil {
		t.Fatal(err)
	}
	single, packed, unit := false, false, ""
	for _, p := range a.Params {
		switch p.Accession {
		case "MS:1000521":
			single = true
		case "MS:1000574":
			packed = true
		case "MS:1000595", "MS:1000515":
			content, unit = p.Accession, p.Unit
		}
	}
	if packed {
		z, err := zlib.NewReader(bytes.NewReader(raw))
		if err != nil {
			t.Fatal(err)
		}
		if raw, err = io.ReadAll(z); err != nil {
			t.Fatal(err)
		}
	}
	if single {
		short := make([]float32, len(raw)/4)
		err = binary.Read(bytes.NewReader(raw), binary.LittleEndian, short)
		for _, v := range short {
			values = append(values, float64(v))
		}
	} else {
		values = make([]float64, len(raw)/8)
		err = binary.Read(bytes.NewReader(raw), binary.LittleEndian, values)
	}
	if err != nil {
		t.Fatal(err)
	}
	if unit == "UO:0000010" {
		for i := range values {
			values[i] /= 60
		}
	}
	return content, values
}

// TestSecondDecoder compares every number of the published files with encoding/xml and the standard library's zlib, bit for bit.
func TestSecondDecoder(t *testing.T) {
	paths, err := filepath.Glob(filepath.Join(published, "*.mzML"))
	if err != nil || len(paths) < 10 {
		t.Fatalf("%d files (%v)", len(paths), err)
	}
	numbers := 0
	for _, path := range paths {
		name := filepath.Base(path)
		if refused[name] != "" {
			continue
		}
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		f, err := Read(name, bytes.NewReader(data))
		if err != nil {
			t.Fatal(err)
		}
		d := xml.NewDecoder(bytes.NewReader(data))
		d.CharsetReader = func(_ string, in io.Reader) (io.Reader, error) { return in, nil }
		i := 0
		for {
			token, err := d.Token()
			if errors.Is(err, io.EOF) {
				break
			}
			if err != nil {
				t.Fatal(err)
			}
			start, ok := token.(xml.StartElement)
			if !ok || start.Name.Local != "chromatogram" {
				continue
			}
			var want secondChromatogram
			if err := d.DecodeElement(&want, &start); err != nil {
				t.Fatal(err)
			}
			got := f.Chromatograms[i]
			i++
			for _, a := range want.Arrays {
				content, values := a.values(t)
				ours := map[string][]float64{"MS:1000595": got.TimeMin, "MS:1000515": got.Intensity}[content]
				if content == "" || len(ours) != len(values) || got.ID != want.ID {
					t.Fatalf("%s %q: %d values, want %d of %q", name, got.ID, len(ours), len(values), want.ID)
				}
				for k := range values {
					if ours[k] != values[k] {
						t.Fatalf("%s %q: value %d is %v, want %v", name, got.ID, k, ours[k], values[k])
					}
				}
				numbers += len(values)
			}
		}
		if i != len(f.Chromatograms) {
			t.Errorf("%s: %d chromatograms, want %d", name, len(f.Chromatograms), i)
		}
	}
	if numbers < 40000 {
		t.Errorf("only %d numbers compared", numbers)
	}
}
