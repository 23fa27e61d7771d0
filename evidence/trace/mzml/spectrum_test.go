package mzml

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

// An expectedSpectrum is what another decoder found in a spectrum; see expectedFile.
type expectedSpectrum struct {
	Index     int      `json:"index"`
	ID        string   `json:"id"`
	Level     *string  `json:"ms_level"`
	Start     []string `json:"scan_start_time"` // value and unit
	N         int      `json:"n"`
	First     *float64 `json:"mz_first"`
	Last      *float64 `json:"mz_last"`
	Sum       float64  `json:"intensity_sum"`
	Max       *float64 `json:"intensity_max"`
	MZAtMax   *float64 `json:"mz_at_max"`
	Precursor *string  `json:"precursor_mz"`
}

func compareSpectra(t *testing.T, r *reader, want expectedFile) {
	t.Helper()
	if r.counted != want.NSpectra {
		t.Errorf("%d spectra, want %d", r.counted, want.NSpectra)
	}
	byID := map[string]int{}
	for i := range r.scans.list {
		byID[r.scans.list[i].ID] = i
	}
	passed := 0
	for _, n := range r.passed {
		passed += n
	}
	read := r.scans.Open()
	found := 0
	for _, w := range want.Spectra {
		i, ok := byID[w.ID]
		if !ok {
			continue // passed over: counted below
		}
		found++
		compareSpectrum(t, r.scans.list[i], read, i, w)
	}
	if missing := len(want.Spectra) - found; missing > passed {
		t.Errorf("%d spectra are missing, %d were passed over", missing, passed)
	}
}

func compareSpectrum(t *testing.T, s trace.Scan, read trace.ScanReader, i int, want expectedSpectrum) {
	t.Helper()
	mz, err := read.MZ(i)
	if err != nil {
		t.Error(err)
		return
	}
	y, err := read.Intensity(i)
	if err != nil || len(mz) != want.N || len(y) != want.N || s.Points != want.N {
		t.Errorf("%q: %d m/z, %d intensities, %d stated, %v; want %d", s.ID, len(mz), len(y), s.Points, err, want.N)
		return
	}
	near := func(what string, got float64, want *float64) {
		if want != nil && math.Abs(got-*want) > 1e-8*math.Abs(*want)+1e-12 { // nine digits are printed
			t.Errorf("%q: %s %.10g, want %.10g", s.ID, what, got, *want)
		}
	}
	if want.Level != nil && strconv.Itoa(s.MSLevel) != *want.Level {
		t.Errorf("%q: MS level %d, want %s", s.ID, s.MSLevel, *want.Level)
	}
	if len(want.Start) == 2 {
		v, err := strconv.ParseFloat(want.Start[0], 64)
		if err != nil {
			t.Fatal(err)
		}
		v /= map[string]float64{"minute": 1, "second": 60}[want.Start[1]]
		near("start", s.TimeMin, &v)
	}
	if want.N == 0 {
		return
	}
	sum, top := 0.0, 0
	for k := range y {
		sum += y[k]
		if y[k] > y[top] {
			top = k
		}
	}
	near("first m/z", mz[0], want.First)
	near("last m/z", mz[want.N-1], want.Last)
	near("sum", sum, &want.Sum)
	near("highest", y[top], want.Max)
	near("m/z of the highest", mz[top], want.MZAtMax)
}

// readEverything reads a file with all arrays of its spectra.
func readEverything(name string, data []byte) error {
	f, err := Read(name, bytes.NewReader(data))
	if err != nil || f.Scans == nil {
		return err
	}
	r := f.Scans.Open()
	for i := range f.Scans.Len() {
		mz, err := r.MZ(i)
		if err != nil {
			return err
		}
		y, err := r.Intensity(i)
		if err != nil {
			return err
		}
		if n := f.Scans.Scan(i).Points; len(mz) != n || len(y) != n {
			return fmt.Errorf("%d m/z and %d intensities in a spectrum of %d points", len(mz), len(y), n)
		}
	}
	return nil
}

// spectrumOf is a spectrum element.
func spectrumOf(id string, points int, start string, arrays ...string) string {
	return fmt.Sprintf(`      <spectrum index="0" id="%s" defaultArrayLength="%d">
        %s
        %s
        %s
        <scanList count="1"><scan>%s<scanWindowList count="1"><scanWindow>%s%s</scanWindow></scanWindowList></scan></scanList>
        <binaryDataArrayList count="%d">
%s        </binaryDataArrayList>
      </spectrum>
`, id, points, param(accLevel, ` value="1"`), param(accCentroid, ""), param(accPositive, ""), start, param(accWindowLow, ` value="40"`), param(accWindowTop, ` value="450"`), len(arrays), strings.Join(arrays, ""))
}

// scanFileOf is a plain mzML file of spectra.
func scanFileOf(spectra ...string) string {
	return fmt.Sprintf(`<?xml version="1.0" encoding="utf-8"?>
<mzML xmlns="http://psi.hupo.org/ms/mzml" version="1.1.0">
  <run id="run" startTimeStamp="2026-01-02T03:04:05Z">
    <spectrumList count="%d">
%s    </spectrumList>
  </run>
</mzML>
`, len(spectra), strings.Join(spectra, ""))
}

var someMasses = []float64{50, 63.5, 91.05, 91.05, 119.1}
var someHeights = []float64{3, 0, 4200, 11, 7}

func massArray(t testing.TB, v []float64) string {
	return arrayOf(accZlib, packed(t, floats(v)), accMZ, "")
}

func startAt(minutes string) string {
	return param(accScanStart, ` value="`+minutes+`" unitAccession="UO:0000031"`)
}

// wholeScans is a file of two spectra with nothing wrong in it.
func wholeScans(t testing.TB) string {
	return scanFileOf(spectrumOf("scan=1", 5, startAt("1.5"), massArray(t, someMasses), intensityArray(t, someHeights)),
		spectrumOf("scan=2", 5, startAt("1.6"), massArray(t, someMasses), intensityArray(t, someHeights)))
}

func TestWholeScans(t *testing.T) {
	f, err := Read("scans.mzML", strings.NewReader(wholeScans(t)))
	if err != nil || f.Scans == nil || f.Scans.Len() != 2 || len(f.Warnings) > 0 {
		t.Fatalf("got %+v, %v", f, err)
	}
	want := trace.Scan{ID: "scan=2", TimeMin: 1.6, MSLevel: 1, Polarity: trace.Positive, Mode: trace.Centroid, Points: 5, LowMZ: 40, HighMZ: 450}
	if got := f.Scans.Scan(1); got != want {
		t.Errorf("got %+v, want %+v", got, want)
	}
	r := f.Scans.Open()
	mz, err := r.MZ(1)
	y, err2 := r.Intensity(1)
	if err != nil || err2 != nil || fmt.Sprint(mz, y) != fmt.Sprint(someMasses, someHeights) {
		t.Errorf("got %v %v, %v %v", mz, y, err, err2)
	}
}

func spectrumDamages(t testing.TB) []damage {
	good := wholeScans(t)
	change := func(old, new string) string { return replaced(t, good, old, new) }
	of := func(mz, y string) string { return scanFileOf(spectrumOf("scan=1", 5, startAt("1.5"), mz, y)) }
	mm, yy := massArray(t, someMasses), intensityArray(t, someHeights)
	return []damage{
		{"backwards_mz", of(massArray(t, changed(someMasses, 2, 40)), yy), `m/z 40 after 63.5 at point 3 of the spectrum "scan=1"`},
		{"negative_mz", of(massArray(t, changed(someMasses, 0, -1)), yy), `m/z -1 after 0 at point 1 of the spectrum "scan=1"`},
		{"nan_in_spectrum", of(mm, intensityArray(t, changed(someHeights, 3, math.NaN()))), `a value of NaN at point 4 of the spectrum "scan=1"`},
		{"infinite_mz", of(massArray(t, changed(someMasses, 4, math.Inf(1))), yy), `a value of +Inf at point 5 of the spectrum "scan=1"`},
		{"missing_mz_array", scanFileOf(spectrumOf("scan=1", 5, startAt("1.5"), yy)), `the spectrum "scan=1" without its m/z or intensity array`},
		{"second_mz_array", scanFileOf(spectrumOf("scan=1", 5, startAt("1.5"), mm, mm, yy)), `a second array of one kind in the spectrum "scan=1"`},
		{"unequal_spectrum", of(mm, replaced(t, intensityArray(t, someHeights[:4]), "<binaryDataArray ", `<binaryDataArray arrayLength="4" `)), `5 m/z and 4 intensities in the spectrum "scan=1"`},
		{"missing_scan_time_unit", change(` unitAccession="UO:0000031"`, ""), `a scan start time in the unit "" in the spectrum "scan=1"`},
		{"bad_scan_time", change(`value="1.5"`, `value="NaN"`), `the scan start time "NaN" in the spectrum "scan=1"`},
		{"bad_scan_window", change(param(accWindowLow, ` value="40"`), param(accWindowLow, ` value="low"`)), `the scan window limit "low" in the spectrum "scan=1"`},
		{"bad_level", change(param(accLevel, ` value="1"`), param(accLevel, ` value="one"`)), `the MS level "one" in the spectrum "scan=1"`},
		{"centroid_and_profile", change(param(accCentroid, ""), param(accCentroid, "")+param(accProfile, "")), `both centroid and profile in the spectrum "scan=1"`},
		{"missing_spectrum_id", change(` id="scan=1"`, ""), "a spectrum without an id"},
	}
}

// linearTimes are someTimes by MS-Numpress linear prediction, scaled by 10,000: two numbers of 32 bits, then eight second differences,
// which are all zero (one half byte of 8 each).
func linearTimes() []byte {
	b := binary.BigEndian.AppendUint64(nil, math.Float64bits(10000))
	b = binary.LittleEndian.AppendUint32(b, 10000)
	b = binary.LittleEndian.AppendUint32(b, 10100)
	return append(b, 0x88, 0x88, 0x88, 0x88)
}

// pressedFile is a file whose times are MS-Numpress data.
func pressedFile(t testing.TB, data []byte) string {
	return fileOf(chromatogramOf("300.2 > 91.1", len(someTimes), arrayOf("MS:1002312", base64.StdEncoding.EncodeToString(data), accTime, minutes), intensityArray(t, someInts)))
}

func pressedTimes(t testing.TB, old, new string) string {
	return replaced(t, pressedFile(t, linearTimes()), old, new)
}

func cutTimes(t testing.TB) string {
	return pressedFile(t, append(linearTimes()[:19], 0x12)) // six half bytes should follow
}

func scaledTimes(t testing.TB) string {
	return pressedFile(t, append(make([]byte, 8), linearTimes()[8:]...))
}

// TestNumpressFile reads times in MS-Numpress, alone and inside zlib.
func TestNumpressFile(t *testing.T) {
	inZlib := fileOf(chromatogramOf("300.2 > 91.1", len(someTimes), arrayOf("MS:1002746", packed(t, linearTimes()), accTime, minutes), intensityArray(t, someInts)))
	twoTerms := replaced(t, inZlib, param("MS:1002746", ""), param("MS:1002312", "")+param(accZlib, "")) // as newer files say it
	for _, text := range []string{pressedFile(t, linearTimes()), inZlib, twoTerms} {
		f, err := Read("numpress.mzML", strings.NewReader(text))
		if err != nil {
			t.Fatal(err)
		}
		if got := f.Chromatograms[0].TimeMin; fmt.Sprint(got) != fmt.Sprint(someTimes) {
			t.Errorf("got %v, want %v", got, someTimes)
		}
	}
}

// TestNumpressVectors: testdata/mzml/numpress_vectors.json; the first vector is the one that the reference implementation's tests
// assert.
func TestNumpressVectors(t *testing.T) {
	text, err := os.ReadFile(filepath.Join(published, "numpress_vectors.json"))
	if err != nil {
		t.Fatal(err)
	}
	var vectors struct {
		Cases []struct {
			Name, Kind string
			Hex        string    `json:"encoded_hex"`
			Decoded    []float64 `json:"decoded"`
		}
	}
	if err := json.Unmarshal(text, &vectors); err != nil {
		t.Fatal(err)
	}
	if len(vectors.Cases) < 6 {
		t.Fatalf("%d vectors", len(vectors.Cases))
	}
	for _, c := range vectors.Cases {
		data, err := hex.DecodeString(c.Hex)
		if err != nil {
			t.Fatal(err)
		}
		out := make([]float64, len(c.Decoded))
		n, problem := unpress(map[string]press{"linear": linear, "pic": positiveInteger, "slof": shortLoggedFloat}[c.Kind], data, out)
		if problem != "" || n != len(out) {
			t.Errorf("%s: %d numbers, %s", c.Name, n, problem)
			continue
		}
		for i, want := range c.Decoded {
			if math.Abs(out[i]-want) > 1e-9*math.Abs(want)+1e-12 { // twelve digits are printed
				t.Errorf("%s: %.12g, want %.12g", c.Name, out[i], want)
			}
		}
	}
}
