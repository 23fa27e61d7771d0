package simulate

import (
	"bytes"
	"crypto/sha1"
	"encoding/base64"
	"encoding/binary"
	"encoding/hex"
	"encoding/xml"
	"fmt"
	"io"
	"math"

	"github.com/klauspost/compress/zlib"

	"assaywrit/evidence/trace"
)

// WriteMzML writes a run as indexed mzML 1.1.0: times as 64-bit and intensities as 32-bit floats, both with zlib, with right offsets
// and checksum. The same run gives the same bytes.
func WriteMzML(w io.Writer, run Run) error {
	m := &mzmlWriter{}
	m.head(run)
	for i, c := range run.Traces {
		m.offsets = append(m.offsets, m.buf.Len()+len("      "))
		if err := m.chromatogram(i, c); err != nil {
			return err
		}
	}
	m.tail(run)
	_, err := w.Write(m.buf.Bytes())
	return err
}

type mzmlWriter struct {
	buf     bytes.Buffer
	offsets []int
}

func (m *mzmlWriter) f(format string, args ...any) { fmt.Fprintf(&m.buf, format, args...) }

// esc makes text fit for an attribute.
func esc(s string) string {
	var b bytes.Buffer
	_ = xml.EscapeText(&b, []byte(s)) // writing to memory does not fail
	return b.String()
}

func (m *mzmlWriter) head(run Run) {
	m.f(`<?xml version="1.0" encoding="utf-8"?>
<indexedmzML xmlns="http://psi.hupo.org/ms/mzml" xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance" xsi:schemaLocation="http://psi.hupo.org/ms/mzml http://psidev.info/files/ms/mzML/xsd/mzML1.1.2_idx.xsd">
  <mzML xmlns="http://psi.hupo.org/ms/mzml" id="%s" version="1.1.0">
    <cvList count="2">
      <cv id="MS" fullName="Proteomics Standards Initiative Mass Spectrometry Ontology" URI="https://purl.obolibrary.org/obo/ms/psi-ms.obo"/>
      <cv id="UO" fullName="Unit Ontology" URI="https://purl.obolibrary.org/obo/uo.obo"/>
    </cvList>
    <fileDescription>
      <fileContent>
        <cvParam cvRef="MS" accession="MS:1001473" name="selected reaction monitoring chromatogram" value=""/>
      </fileContent>
    </fileDescription>
    <sampleList count="1">
      <sample id="sample" name="%s"/>
    </sampleList>
    <softwareList count="1">
      <software id="acquisition" version="%s">
        <cvParam cvRef="MS" accession="MS:1000799" name="custom unreleased software tool" value="%s"/>
      </software>
    </softwareList>
    <instrumentConfigurationList count="1">
      <instrumentConfiguration id="instrument">
        <cvParam cvRef="MS" accession="MS:1000031" name="instrument model" value="%s"/>
        <cvParam cvRef="MS" accession="MS:1000529" name="instrument serial number" value="%s"/>
        <componentList count="3">
          <source order="1">
            <cvParam cvRef="MS" accession="MS:1000073" name="electrospray ionization" value=""/>
          </source>
          <analyzer order="2">
            <cvParam cvRef="MS" accession="MS:1000081" name="quadrupole" value=""/>
          </analyzer>
          <detector order="3">
            <cvParam cvRef="MS" accession="MS:1000253" name="electron multiplier" value=""/>
          </detector>
        </componentList>
      </instrumentConfiguration>
    </instrumentConfigurationList>
    <dataProcessingList count="1">
      <dataProcessing id="export">
        <processingMethod order="1" softwareRef="acquisition">
          <cvParam cvRef="MS" accession="MS:1000544" name="Conversion to mzML" value=""/>
        </processingMethod>
      </dataProcessing>
    </dataProcessingList>
    <run id="%s" defaultInstrumentConfigurationRef="instrument" sampleRef="sample" startTimeStamp="%s">
      <chromatogramList count="%d" defaultDataProcessingRef="export">
`, esc(run.ID), esc(run.SampleCode), esc(run.Version), esc(run.Software), esc(run.Model), esc(run.Serial), esc(run.ID), esc(run.StartTime), len(run.Traces))
}

func (m *mzmlWriter) chromatogram(i int, c trace.Chromatogram) error {
	polarity := `accession="MS:1000130" name="positive scan"`
	if c.Transition.Polarity == trace.Negative {
		polarity = `accession="MS:1000129" name="negative scan"`
	}
	times, ints := make([]byte, 8*len(c.TimeMin)), make([]byte, 4*len(c.Intensity))
	for k, t := range c.TimeMin {
		binary.LittleEndian.PutUint64(times[8*k:], math.Float64bits(t))
		binary.LittleEndian.PutUint32(ints[4*k:], math.Float32bits(float32(c.Intensity[k])))
	}
	timeText, err := packed(times)
	if err != nil {
		return err
	}
	intText, err := packed(ints)
	if err != nil {
		return err
	}
	m.f(`      <chromatogram index="%d" id="%s" defaultArrayLength="%d">
        <cvParam cvRef="MS" accession="MS:1001473" name="selected reaction monitoring chromatogram" value=""/>
        <cvParam cvRef="MS" %s value=""/>
        <precursor>
          <isolationWindow>
            <cvParam cvRef="MS" accession="MS:1000827" name="isolation window target m/z" value="%g" unitCvRef="MS" unitAccession="MS:1000040" unitName="m/z"/>
          </isolationWindow>
          <activation>
            <cvParam cvRef="MS" accession="MS:1000133" name="collision-induced dissociation" value=""/>
          </activation>
        </precursor>
        <product>
          <isolationWindow>
            <cvParam cvRef="MS" accession="MS:1000827" name="isolation window target m/z" value="%g" unitCvRef="MS" unitAccession="MS:1000040" unitName="m/z"/>
          </isolationWindow>
        </product>
        <binaryDataArrayList count="2">
          <binaryDataArray encodedLength="%d">
            <cvParam cvRef="MS" accession="MS:1000523" name="64-bit float" value=""/>
            <cvParam cvRef="MS" accession="MS:1000574" name="zlib compression" value=""/>
            <cvParam cvRef="MS" accession="MS:1000595" name="time array" value="" unitCvRef="UO" unitAccession="UO:0000031" unitName="minute"/>
            <binary>%s</binary>
          </binaryDataArray>
          <binaryDataArray encodedLength="%d">
            <cvParam cvRef="MS" accession="MS:1000521" name="32-bit float" value=""/>
            <cvParam cvRef="MS" accession="MS:1000574" name="zlib compression" value=""/>
            <cvParam cvRef="MS" accession="MS:1000515" name="intensity array" value="" unitCvRef="MS" unitAccession="MS:1000131" unitName="number of detector counts"/>
            <binary>%s</binary>
          </binaryDataArray>
        </binaryDataArrayList>
      </chromatogram>
`, i, esc(c.ID), len(c.TimeMin), polarity, c.Transition.PrecursorMZ, c.Transition.ProductMZ, len(timeText), timeText, len(intText), intText)
	return nil
}

// packed is data through zlib and base64, by a library whose output does not change with the compiler's release.
func packed(data []byte) (string, error) {
	var b bytes.Buffer
	z, err := zlib.NewWriterLevel(&b, 6)
	if err != nil {
		return "", err
	}
	if _, err := z.Write(data); err != nil {
		return "", err
	}
	if err := z.Close(); err != nil {
		return "", err
	}
	return base64.StdEncoding.EncodeToString(b.Bytes()), nil
}

func (m *mzmlWriter) tail(run Run) {
	m.f("      </chromatogramList>\n    </run>\n  </mzML>\n")
	at := m.buf.Len() + len("  ")
	m.f("  <indexList count=\"1\">\n    <index name=\"chromatogram\">\n")
	for i, c := range run.Traces {
		m.f("      <offset idRef=\"%s\">%d</offset>\n", esc(c.ID), m.offsets[i])
	}
	m.f("    </index>\n  </indexList>\n  <indexListOffset>%d</indexListOffset>\n  <fileChecksum>", at)
	sum := sha1.Sum(m.buf.Bytes())
	m.f("%s</fileChecksum>\n</indexedmzML>\n", hex.EncodeToString(sum[:]))
}
