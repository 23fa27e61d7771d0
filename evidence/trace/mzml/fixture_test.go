package mzml

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"math"
	"strings"
	"testing"

	"github.com/klauspost/compress/zlib"
)

// Ten points of a made-up trace.
var (
	someTimes = []float64{1, 1.01, 1.02, 1.03, 1.04, 1.05, 1.06, 1.07, 1.08, 1.09}
	someInts  = []float64{12, 15, 11, 230, 1840, 2620, 1170, 190, 21, 9}
)

const (
	minutes = ` unitCvRef="UO" unitAccession="UO:0000031" unitName="minute"`
	counts  = ` unitCvRef="MS" unitAccession="MS:1000131" unitName="number of detector counts"`
)

// floats are the bytes of 64-bit numbers.
func floats(v []float64) []byte {
	raw := make([]byte, 8*len(v))
	for i, x := range v {
		binary.LittleEndian.PutUint64(raw[8*i:], math.Float64bits(x))
	}
	return raw
}

// packed is raw through zlib and base64.
func packed(t testing.TB, raw []byte) string {
	t.Helper()
	var b bytes.Buffer
	z := zlib.NewWriter(&b)
	if _, err := z.Write(raw); err != nil {
		t.Fatal(err)
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return base64.StdEncoding.EncodeToString(b.Bytes())
}

// param is a cvParam. Names are left out: they decide nothing.
func param(accession, rest string) string {
	return fmt.Sprintf(`<cvParam cvRef="MS" accession="%s" name=""%s/>`, accession, rest)
}

// arrayOf is a binaryDataArray of 64-bit numbers; terms is what else is said about it.
func arrayOf(compression, text, content, unit string) string {
	return fmt.Sprintf("          <binaryDataArray encodedLength=\"%d\">\n            %s\n            %s\n            %s\n            <binary>%s</binary>\n          </binaryDataArray>\n",
		len(text), param(accFloat64, ""), param(compression, ""), param(content, unit), text)
}

// chromatogramOf is a chromatogram element of SRM type.
func chromatogramOf(id string, points int, arrays ...string) string {
	return fmt.Sprintf(`      <chromatogram index="0" id="%s" defaultArrayLength="%d">
        %s
        %s
        <precursor><isolationWindow>%s</isolationWindow></precursor>
        <product><isolationWindow>%s</isolationWindow></product>
        <binaryDataArrayList count="%d">
%s        </binaryDataArrayList>
      </chromatogram>
`, id, points, param("MS:1001473", ""), param(accPositive, ""), param(accTarget, ` value="300.2"`), param(accTarget, ` value="91.1"`), len(arrays), strings.Join(arrays, ""))
}

// fileOf is a plain mzML file.
func fileOf(chromatograms ...string) string {
	return fmt.Sprintf(`<?xml version="1.0" encoding="utf-8"?>
<mzML xmlns="http://psi.hupo.org/ms/mzml" version="1.1.0">
  <sampleList count="1"><sample id="s1" name="C-0001"/></sampleList>
  <run id="run" startTimeStamp="2026-01-02T03:04:05Z">
    <chromatogramList count="%d">
%s    </chromatogramList>
  </run>
</mzML>
`, len(chromatograms), strings.Join(chromatograms, ""))
}

// times and intensities as arrays in zlib.
func timeArray(t testing.TB, v []float64) string {
	return arrayOf(accZlib, packed(t, floats(v)), accTime, minutes)
}

func intensityArray(t testing.TB, v []float64) string {
	return arrayOf(accZlib, packed(t, floats(v)), accIntensity, counts)
}

// whole is a file with nothing wrong in it.
func whole(t testing.TB) string {
	return fileOf(chromatogramOf("300.2 > 91.1", len(someTimes), timeArray(t, someTimes), intensityArray(t, someInts)))
}

// replaced is text with one piece changed, which must be there.
func replaced(t testing.TB, text, old, new string) string {
	t.Helper()
	if !strings.Contains(text, old) {
		t.Fatalf("%q is not in the file", old)
	}
	return strings.Replace(text, old, new, 1)
}
