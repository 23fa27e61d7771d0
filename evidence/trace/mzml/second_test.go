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

	"assaywrit/evidence/trace"
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
		case "MS:1000595", "MS:1000515", "MS:1000514":
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
		if refused[name] != "" || name == "mini_numpress.chrom.mzML" { // the standard library has no MS-Numpress: see TestNumpressVectors
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
			if ok && start.Name.Local == "spectrum" {
				numbers += secondSpectrum(t, d, start, f, name)
			}
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
	if numbers < 500000 {
		t.Errorf("only %d numbers compared", numbers)
	}
}

// secondSpectrum compares every number of one spectrum, unless it has none or was passed over.
func secondSpectrum(t *testing.T, d *xml.Decoder, start xml.StartElement, f *trace.File, name string) int {
	var want secondChromatogram
	if err := d.DecodeElement(&want, &start); err != nil {
		t.Fatal(err)
	}
	for i := range f.Scans.Len() {
		if f.Scans.Scan(i).ID != want.ID {
			continue
		}
		n, r := 0, f.Scans.Open()
		for _, a := range want.Arrays {
			content, values := a.values(t)
			read := map[string]func(int) ([]float64, error){"MS:1000514": r.MZ, "MS:1000515": r.Intensity}[content]
			if read == nil {
				continue
			}
			ours, err := read(i)
			if err != nil || len(ours) != len(values) {
				t.Fatalf("%s %q: %d values, %v, want %d", name, want.ID, len(ours), err, len(values))
			}
			for k := range values {
				if ours[k] != values[k] {
					t.Fatalf("%s %q: value %d is %v, want %v", name, want.ID, k, ours[k], values[k])
				}
			}
			n += len(values)
		}
		return n
	}
	return 0
}
