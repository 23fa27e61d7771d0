package mzml

import (
	"bytes"
	"compress/gzip"
	"encoding/json"
	"io"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

const published = "../../../testdata/mzml"

// An expectedFile is what another decoder found in a file: see testdata/SOURCES.md.
type expectedFile struct {
	Version       string                 `json:"version"`
	Chromatograms []expectedChromatogram `json:"chromatograms"`
	NSpectra      int                    `json:"n_spectra"`
	Spectra       []expectedSpectrum     `json:"spectra"` // all of them, or some
	Offsets       *struct {
		Correct, Wrong int
	} `json:"index_offsets"`
	Checksum *struct {
		Stored string `json:"stored"`
		SHA1   string `json:"sha1_of_bytes_through_opening_tag"`
	} `json:"fileChecksum"`
}

type expectedChromatogram struct {
	ID        string  `json:"id"`
	Type      string  `json:"type"`
	Q1        *string `json:"Q1"`
	Q3        *string `json:"Q3"`
	N         int     `json:"n_time"`
	TimeUnit  string  `json:"time_unit"`
	First     float64 `json:"time_first"`
	Last      float64 `json:"time_last"`
	Sum       float64 `json:"sum"`
	Max       float64 `json:"max"`
	TimeAtMax float64 `json:"time_at_max"`
	Trapezoid float64 `json:"trapezoid_area_in_file_time_unit"`
}

// refused are the files that must not be read, and a part of the reason.
var refused = map[string]string{
	"tiny.idx.mzML":             "a time array without a unit",
	"tiny.err.idx.mzML":         "a time array without a unit",
	"tiny2_SRM.mzML0.99.1.mzML": `mzML version "0.99.1"`,
}

// wrongOffsets are where an offset points at the beginning of another element than the one it names, which the other decoder
// counted as correct. Looked up in the files: the first says so of itself ("just any number"), in the second the chromatogram tr8 was
// put in and moved tr1 and tr2 down.
var wrongOffsets = map[string]int{"example.mzML": 1, "example.mzML.gz": 1, "dataset1.chrom.mzML": 2}

// TestPublishedFiles compares other people's files with what another decoder found in them.
func TestPublishedFiles(t *testing.T) {
	const want = 34 + 24 + 4 + 3 + 2 + 2 + 1 + 1 + 1 + 1 + 1 + 1 // the files that are not refused, by testdata/mzml/expected.json
	if n := againstOtherDecoder(t, published); n != want {
		t.Errorf("%d chromatograms compared, want %d", n, want)
	}
}

// againstOtherDecoder returns how many chromatograms were compared.
func againstOtherDecoder(t *testing.T, folder string) int {
	text, err := os.ReadFile(filepath.Join(folder, "expected.json"))
	if err != nil {
		t.Fatal(err)
	}
	var files map[string]expectedFile
	if err := json.Unmarshal(text, &files); err != nil {
		t.Fatal(err)
	}
	n := 0
	for name, want := range files {
		t.Run(name, func(t *testing.T) {
			r, err := readAll(name, bytes.NewReader(fileBytes(t, filepath.Join(folder, name))))
			if why, not := refused[name]; not {
				if err == nil || !strings.Contains(err.Error(), why) {
					t.Errorf("got %v, want it refused: %s", err, why)
				}
				return
			}
			if err != nil {
				t.Fatal(err)
			}
			if r.file.FormatVersion != want.Version {
				t.Errorf("version %q, want %q", r.file.FormatVersion, want.Version)
			}
			if len(r.file.Chromatograms) != len(want.Chromatograms) {
				t.Fatalf("%d chromatograms, want %d", len(r.file.Chromatograms), len(want.Chromatograms))
			}
			for i, c := range r.file.Chromatograms {
				compareChromatogram(t, c, want.Chromatograms[i])
				n++
			}
			compareIndex(t, r, name, want)
			compareSpectra(t, r, want)
		})
	}
	return n
}

func fileBytes(t *testing.T, path string) []byte {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if filepath.Ext(path) == ".gz" {
		z, err := gzip.NewReader(bytes.NewReader(data))
		if err != nil {
			t.Fatal(err)
		}
		if data, err = io.ReadAll(z); err != nil {
			t.Fatal(err)
		}
	}
	return data
}

func compareIndex(t *testing.T, r *reader, name string, want expectedFile) {
	warned := map[string]bool{}
	for _, w := range r.file.Warnings {
		warned[w.Code] = true
	}
	if want.Offsets != nil {
		more := wrongOffsets[name]
		if r.index.right != want.Offsets.Correct-more || r.index.wrong != want.Offsets.Wrong+more {
			t.Errorf("%d offsets right and %d wrong, want %d and %d", r.index.right, r.index.wrong, want.Offsets.Correct-more, want.Offsets.Wrong+more)
		}
		if r.index.wrong > 0 && !warned["index-offset"] {
			t.Error("no warning of the wrong offsets")
		}
	}
	if want.Checksum != nil && warned["file-checksum"] != (want.Checksum.Stored != want.Checksum.SHA1) {
		t.Errorf("warning of the checksum: %t; stored %s, computed %s", warned["file-checksum"], want.Checksum.Stored, want.Checksum.SHA1)
	}
	if warned["no-chromatograms"] != (len(want.Chromatograms)+want.NSpectra == 0) {
		t.Error("the warning no-chromatograms is wrong")
	}
}

// kinds of the names that the other decoder took from the vocabulary.
var kinds = map[string]trace.Kind{
	"total ion current chromatogram": trace.TIC, "selected ion current chromatogram": trace.SIM, "selected reaction monitoring chromatogram": trace.SRM,
	"absorption chromatogram": trace.Absorption, "basepeak chromatogram": trace.Other, "mass chromatogram": trace.Other,
}

func compareChromatogram(t *testing.T, c trace.Chromatogram, want expectedChromatogram) {
	t.Helper()
	if c.ID != want.ID || len(c.TimeMin) != want.N || len(c.Intensity) != want.N {
		t.Errorf("%q has %d points, want %q with %d", c.ID, len(c.TimeMin), want.ID, want.N)
		return
	}
	if kind, known := kinds[want.Type]; known && c.Kind != kind {
		t.Errorf("%q: kind %s, want that of %q", c.ID, c.Kind, want.Type)
	}
	near := func(what string, got, want float64) {
		if math.Abs(got-want) > 1e-8*math.Abs(want)+1e-12 { // nine digits are printed
			t.Errorf("%q: %s %.10g, want %.10g", c.ID, what, got, want)
		}
	}
	for _, x := range []struct {
		what string
		got  float64
		want *string
	}{{"precursor m/z", c.Transition.PrecursorMZ, want.Q1}, {"product m/z", c.Transition.ProductMZ, want.Q3}} {
		mz := 0.0
		if x.want != nil {
			var err error
			if mz, err = strconv.ParseFloat(*x.want, 64); err != nil {
				t.Fatal(err)
			}
		}
		if x.got != mz {
			t.Errorf("%q: %s %v, want %v", c.ID, x.what, x.got, mz)
		}
	}
	if want.N == 0 {
		return
	}
	scale := map[string]float64{"second": 60, "minute": 1}[want.TimeUnit]
	sum, top, area := 0.0, 0, 0.0
	for i, y := range c.Intensity {
		sum += y
		if y > c.Intensity[top] {
			top = i
		}
		if i > 0 {
			area += (y + c.Intensity[i-1]) / 2 * (c.TimeMin[i] - c.TimeMin[i-1]) * scale
		}
	}
	near("first time", c.TimeMin[0]*scale, want.First)
	near("last time", c.TimeMin[want.N-1]*scale, want.Last)
	near("sum", sum, want.Sum)
	near("highest", c.Intensity[top], want.Max)
	near("time of the highest", c.TimeMin[top]*scale, want.TimeAtMax)
	near("area", area, want.Trapezoid)
}

// TestKnownGaussians reads traces that were written as Gaussians of known area (counts·s) with a standard deviation of 10 s, in 32-bit
// numbers, and compares each point with the closed form.
func TestKnownGaussians(t *testing.T) {
	f, err := Read("dataset2_file1.mzML", bytes.NewReader(fileBytes(t, filepath.Join(published, "dataset2_file1.mzML"))))
	if err != nil {
		t.Fatal(err)
	}
	series := []struct{ centre, unit float64 }{{1000, 40}, {1000, 80}, {2000, 240}, {2000, 480}} // six traces of 1, 2, ... 6 units each
	if len(f.Chromatograms) != 6*len(series) {
		t.Fatalf("%d traces", len(f.Chromatograms))
	}
	for i, c := range f.Chromatograms {
		s := series[i/6]
		height := s.unit * float64(i%6+1) / (10 * math.Sqrt(2*math.Pi))
		for k, y := range c.Intensity {
			z := (c.TimeMin[k]*60 - s.centre) / 10
			if want := height * math.Exp(-z*z/2); math.Abs(y-want) > 1e-6*height {
				t.Errorf("%q: %g at %g min, want %g", c.ID, y, c.TimeMin[k], want)
				break
			}
		}
	}
}

// TestIndexWithoutUnits gives two files, which are refused for having no unit of time, one in as many bytes: the standard's reference
// implementation publishes them for their index, of which all six offsets are wrong, and one.
func TestIndexWithoutUnits(t *testing.T) {
	for name, wrong := range map[string]int{"tiny.idx.mzML": 6, "tiny.err.idx.mzML": 1} {
		data := fileBytes(t, filepath.Join(published, name))
		data = bytes.ReplaceAll(data, []byte(`"MS:1000595" name="time array" value=""/>`), []byte(`"MS:1000595" unitAccession="UO:0000010"/>`))
		r, err := readAll(name, bytes.NewReader(data))
		if err != nil {
			t.Fatal(err)
		}
		if r.index.wrong != wrong || r.index.right != 6-wrong {
			t.Errorf("%s: %d offsets wrong and %d right, want %d wrong of 6", name, r.index.wrong, r.index.right, wrong)
		}
		for i, sum := range []float64{120, 55} { // testdata/mzml/expected.json
			got := 0.0
			for _, y := range r.file.Chromatograms[i].Intensity {
				got += y
			}
			if got != sum {
				t.Errorf("%s: sum %g, want %g", name, got, sum)
			}
		}
	}
}
