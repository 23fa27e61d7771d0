package mzml

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"

	"assaywrit/evidence/simulate"
	"assaywrit/evidence/trace"
)

func read(t *testing.T, text string) *trace.File {
	t.Helper()
	f, err := Read("file.mzML", strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func codes(f *trace.File) string {
	var list []string
	for _, w := range f.Warnings {
		list = append(list, w.Code)
	}
	return strings.Join(list, " ")
}

// TestKindsOfNumbers writes one trace in every kind of number and compares what comes back.
func TestKindsOfNumbers(t *testing.T) {
	whole := []float64{0, 1, -7, 65536, 2147483647, -2147483648}
	exact := append([]float64{0.5, 1 << 40}, whole...) // 32-bit floats hold the first two as well
	times := func(n int) []float64 { return someTimesOf(n) }
	for _, tt := range []struct {
		accession string
		values    []float64
		encode    func(v float64) []byte
	}{
		{accFloat64, append([]float64{math.Pi, 5e-324, math.MaxFloat64}, exact...), func(v float64) []byte { return binary.LittleEndian.AppendUint64(nil, math.Float64bits(v)) }},
		{accFloat32, append([]float64{0.5, 1 << 40}, 0, 1, -7, 65536, -2147483648), func(v float64) []byte { return binary.LittleEndian.AppendUint32(nil, math.Float32bits(float32(v))) }},
		{accInt64, append([]float64{1 << 53, -(1 << 53)}, whole...), func(v float64) []byte { return binary.LittleEndian.AppendUint64(nil, uint64(int64(v))) }},
		{accInt32, whole, func(v float64) []byte { return binary.LittleEndian.AppendUint32(nil, uint32(int32(v))) }},
	} {
		for _, compression := range []string{accPlain, accZlib} {
			var raw []byte
			for _, v := range tt.values {
				raw = append(raw, tt.encode(v)...)
			}
			text := base64.StdEncoding.EncodeToString(raw)
			if compression == accZlib {
				text = packed(t, raw)
			}
			a := replaced(t, arrayOf(compression, text, accIntensity, counts), accFloat64, tt.accession)
			f := read(t, fileOf(chromatogramOf("x", len(tt.values), timeArray(t, times(len(tt.values))), a)))
			if got := f.Chromatograms[0].Intensity; fmt.Sprint(got) != fmt.Sprint(tt.values) {
				t.Errorf("%s %s: got %v, want %v", tt.accession, compression, got, tt.values)
			}
		}
	}
}

func someTimesOf(n int) []float64 {
	v := make([]float64, n)
	for i := range v {
		v[i] = 1 + float64(i)/64
	}
	return v
}

func TestUnitsOfTime(t *testing.T) {
	seconds := []float64{60, 90, 105.3}
	a := replaced(t, timeArray(t, seconds), "UO:0000031", "UO:0000010")
	f := read(t, fileOf(chromatogramOf("x", 3, a, intensityArray(t, seconds))))
	if got := f.Chromatograms[0].TimeMin; got[0] != 1 || got[1] != 1.5 || got[2] != 105.3/60 {
		t.Errorf("60, 90 and 105.3 s are %v min", got)
	}
	f = read(t, fileOf(chromatogramOf("x", 3, timeArray(t, seconds), intensityArray(t, seconds))))
	if got := f.Chromatograms[0].TimeMin; got[0] != 60 || got[2] != 105.3 {
		t.Errorf("60, 90 and 105.3 min are %v min", got)
	}
}

func TestWhatTheFileStates(t *testing.T) {
	header := `
  <referenceableParamGroupList count="2">
    <referenceableParamGroup id="machine">` + param("MS:1000031", ` value="triple quadrupole"`) + param(accSerial, ` value="7"`) + `</referenceableParamGroup>
    <referenceableParamGroup id="negative">` + param(accNegative, "") + `</referenceableParamGroup>
  </referenceableParamGroupList>
  <sampleList count="2"><sample id="s0" name="C-0000"/><sample id="s1" name="C-0001 &amp; &#x3b1;"/></sampleList>
  <softwareList count="3"><software id="a" version="1.2">` + param("MS:1000799", ` value="acquisition"`) + `</software>
    <software id="b" version="">` + param("MS:1000799", "") + `</software>
    <software id="c" version="3"><cvParam accession="MS:1000615" name="converter"/></software></softwareList>
  <instrumentConfigurationList count="2"><instrumentConfiguration id="i0">` + param("MS:1000031", ` value="other"`) + `</instrumentConfiguration>
    <instrumentConfiguration id="i1"><referenceableParamGroupRef ref="machine"/></instrumentConfiguration></instrumentConfigurationList>`
	good := whole(t)
	good = replaced(t, good, "\n  <sampleList count=\"1\"><sample id=\"s1\" name=\"C-0001\"/></sampleList>", header)
	good = replaced(t, good, `<run id="run"`, `<run id="run" sampleRef="s1" defaultInstrumentConfigurationRef="i1"`)
	good = replaced(t, good, param(accPositive, ""), `<referenceableParamGroupRef ref="negative"/>`)
	f := read(t, good)
	for _, x := range []struct{ what, got, want string }{
		{"format", f.Format + " " + f.FormatVersion, "mzML 1.1.0"},
		{"start", f.StartTime, "2026-01-02T03:04:05Z"},
		{"instrument", f.Instrument, "triple quadrupole, serial number 7"},
		{"software", f.Software, "acquisition 1.2; converter 3"},
		{"sample", f.SampleCode, "C-0001 & α"},
		{"transition", fmt.Sprint(f.Chromatograms[0].Transition), "{300.2 91.1 negative}"},
		{"kind", string(f.Chromatograms[0].Kind), "srm"},
		{"warnings", codes(f), ""},
	} {
		if x.got != x.want {
			t.Errorf("%s: got %q, want %q", x.what, x.got, x.want)
		}
	}
	// Where the run refers to none of two samples, none is taken; of instruments all are named.
	f = read(t, replaced(t, good, ` sampleRef="s1" defaultInstrumentConfigurationRef="i1"`, ""))
	if f.SampleCode != "" || f.Instrument != "other; triple quadrupole, serial number 7" {
		t.Errorf("without references: sample %q, instrument %q", f.SampleCode, f.Instrument)
	}
}

func TestSelectedIonStandsIn(t *testing.T) {
	window := `<isolationWindow>` + param(accTarget, ` value="300.2"`) + `</isolationWindow>`
	ion := `<selectedIonList count="1"><selectedIon>` + param(accSelected, ` value="301"`) + `</selectedIon></selectedIonList>`
	for inside, want := range map[string]float64{ion: 301, window + ion: 300.2, "": 0} {
		f := read(t, replaced(t, whole(t), window, inside))
		if got := f.Chromatograms[0].Transition.PrecursorMZ; got != want {
			t.Errorf("precursor m/z %g, want %g", got, want)
		}
	}
}

func TestEncodings(t *testing.T) {
	latin := replaced(t, replaced(t, whole(t), "utf-8", "ISO-8859-1"), `"C-0001"`, "\"C-\xb5\"")
	if got := read(t, latin).SampleCode; got != "C-µ" {
		t.Errorf("ISO-8859-1: %q", got)
	}
	if got := read(t, "\xef\xbb\xbf"+replaced(t, whole(t), `"C-0001"`, `'C-µ "1"'`)).SampleCode; got != `C-µ "1"` {
		t.Errorf("UTF-8 with a byte-order mark: %q", got)
	}
	if got := read(t, replaced(t, whole(t), `"C-0001"`, "\"C\r\n-&#10;1\"")).SampleCode; got != "C -\n1" {
		t.Errorf("line ends in an attribute: %q", got)
	}
}

func TestBase64InLines(t *testing.T) {
	text := packed(t, floats(someInts))
	f := read(t, replaced(t, whole(t), text, "\n  "+text[:60]+"\r\n  "+text[60:]+"\n"))
	if fmt.Sprint(f.Chromatograms[0].Intensity) != fmt.Sprint(someInts) {
		t.Errorf("got %v", f.Chromatograms[0].Intensity)
	}
}

func TestEmptyChromatogram(t *testing.T) {
	empty := `      <chromatogram id="empty" defaultArrayLength="0"></chromatogram>` + "\n"
	zero := chromatogramOf("zero", 0, arrayOf(accPlain, "", accTime, minutes), arrayOf(accZlib, packed(t, nil), accIntensity, counts))
	f := read(t, fileOf(empty, zero))
	if len(f.Chromatograms) != 2 || len(f.Chromatograms[0].TimeMin)+len(f.Chromatograms[1].TimeMin) != 0 {
		t.Errorf("got %v", f.Chromatograms)
	}
}

func TestSpectraArePassedOver(t *testing.T) {
	spectrum := `<spectrumList count="1"><spectrum id="scan=1" index="0" defaultArrayLength="3"><binaryDataArrayList count="1">` +
		`<binaryDataArray encodedLength="4"><cvParam accession="MS:1002312"/><binary>not base64</binary></binaryDataArray></binaryDataArrayList></spectrum></spectrumList>`
	if n := len(read(t, replaced(t, whole(t), "<chromatogramList", spectrum+"<chromatogramList")).Chromatograms); n != 1 {
		t.Errorf("%d chromatograms", n)
	}
}

func TestWarnings(t *testing.T) {
	pump := replaced(t, chromatogramOf("pump", 10, timeArray(t, someTimes), intensityArray(t, someInts)), accIntensity, "MS:1000821")
	pump = replaced(t, pump, "MS:1001473", "MS:1003019")
	wrapped := replaced(t, replaced(t, whole(t), "<mzML ", `<indexedmzML xmlns="http://psi.hupo.org/ms/mzml"><mzML `), "</mzML>", "</mzML></indexedmzML>")
	for _, tt := range []struct{ name, text, want string }{
		{"nothing", whole(t), ""},
		{"no chromatogram", fileOf(), "no-chromatograms"},
		{"count", replaced(t, whole(t), `<chromatogramList count="1"`, `<chromatogramList count="3"`), "chromatogram-count"},
		{"pump", fileOf(pump, chromatogramOf("x", 10, timeArray(t, someTimes), intensityArray(t, someInts))), "chromatogram-passed-over"},
		{"no index, no checksum", wrapped, "index-offset index-offset file-checksum"},
	} {
		if got := codes(read(t, tt.text)); got != tt.want {
			t.Errorf("%s: warnings %q, want %q", tt.name, got, tt.want)
		}
	}
}

// TestSimulated reads what the project's own writer wrote: nothing to warn of, and the same numbers.
func TestSimulated(t *testing.T) {
	want := trace.Chromatogram{ID: "a & b", Kind: trace.SRM, Transition: trace.Transition{PrecursorMZ: 300.2, ProductMZ: 91.1, Polarity: trace.Negative}, TimeMin: someTimes, Intensity: someInts}
	second := want
	second.ID, second.Transition.Polarity = "second", trace.Positive
	var b bytes.Buffer
	run := simulate.Run{ID: "run", SampleCode: "C-0001", StartTime: "2026-01-02T03:04:05+01:00", Model: "model", Serial: "1", Software: "software", Version: "2", Traces: []trace.Chromatogram{want, second}}
	if err := simulate.WriteMzML(&b, run); err != nil {
		t.Fatal(err)
	}
	text := b.String()
	f := read(t, text)
	if got := fmt.Sprint(f.Chromatograms); got != fmt.Sprint(run.Traces) {
		t.Errorf("got %s, want %v", got, run.Traces)
	}
	if f.SampleCode != "C-0001" || f.StartTime != run.StartTime || f.Instrument != "model, serial number 1" || f.Software != "software 2" || len(f.Warnings) > 0 {
		t.Errorf("got %+v", f)
	}
	// Its index and checksum, made wrong one at a time.
	for _, tt := range []struct{ name, text, want string }{
		{"offset", replaced(t, text, `<offset idRef="second">`, `<offset idRef="second">1`), "index-offset file-checksum"},
		{"offset of another", replaced(t, text, `<offset idRef="second">`, `<offset idRef="a &amp; b">`), "index-offset index-offset file-checksum"},
		{"list offset", replaced(t, text, "<indexListOffset>", "<indexListOffset>1"), "index-offset file-checksum"},
		{"checksum", replaced(t, text, "<fileChecksum>", "<fileChecksum>0"), "file-checksum"},
		{"one letter of the file", replaced(t, text, "electrospray", "Electrospray"), "file-checksum"},
	} {
		if got := codes(read(t, tt.text)); got != tt.want {
			t.Errorf("%s: warnings %q, want %q", tt.name, got, tt.want)
		}
	}
}

func TestSourceThatEndsEarly(t *testing.T) {
	if _, err := Read("file.mzML", io.NewSectionReader(strings.NewReader("<mzML/>"), 0, 100)); !errors.Is(err, io.ErrUnexpectedEOF) {
		t.Errorf("got %v", err)
	}
}

func TestSniff(t *testing.T) {
	for text, want := range map[string]bool{
		whole(t): true, "\xef\xbb\xbf \n<indexedmzML>": true, `<mzML version="0.99.1">`: true, "<html>": false, "": false, "time,mzML": false, "time\n<mzML": false,
	} {
		if Sniff([]byte(text)) != want {
			t.Errorf("%.30q: want %t", text, want)
		}
	}
}
