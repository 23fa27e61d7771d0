package simulate

import (
	"bytes"
	"crypto/sha1"
	"encoding/base64"
	"encoding/binary"
	"encoding/hex"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math"
	"regexp"
	"slices"
	"strings"
	"time"
	"unicode/utf8"

	"github.com/klauspost/compress/zlib"

	"assaywrit/evidence/trace"
)

// A Run is one injection as an instrument would write it down.
type Run struct {
	ID         string // of the run in the file: a letter or _, then letters, digits, -, _ and .
	SampleCode string
	StartTime  string // RFC 3339
	Model      string // description of the instrument
	Serial     string
	Software   string
	Version    string
	Traces     []trace.Chromatogram
}

// WriteMzML writes a run as indexed mzML 1.1.0 (HUPO Proteomics Standards Initiative, June 2009): times in minutes as 64-bit and
// intensities as 32-bit floats, both with zlib, with right offsets and SHA-1. The same run gives the same bytes. A trace without
// polarity, or with an m/z of 0, is written without it.
//
// What would make a file that its schema or a strict reader refuses is an error, and nothing is written: an ID or StartTime of the
// wrong form, text that XML cannot hold, a trace without id or with that of another, an m/z that is not from 0 to 1,000,000, times
// that do not increase, numbers that are not finite, intensities beyond 32 bits.
func WriteMzML(w io.Writer, run Run) error {
	if err := run.check(); err != nil {
		return err
	}
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

// ncName is the part of XML's NCName (Namespaces in XML 1.0) that is used here: the schema gives run ids that type.
var ncName = regexp.MustCompile(`^[A-Za-z_][A-Za-z0-9._-]*$`)

func (run Run) check() error {
	if !ncName.MatchString(run.ID) || slices.Contains(usedIDs, run.ID) {
		return fmt.Errorf("simulate: the run id %q, want a name of letters, digits, -, _ and . that the file does not use otherwise", run.ID)
	}
	if _, err := time.Parse(time.RFC3339, run.StartTime); err != nil {
		return fmt.Errorf("simulate: the start time %q, want one like 2026-03-18T08:30:00+01:00", run.StartTime)
	}
	if len(run.Traces) == 0 {
		return errors.New("simulate: a run without traces, want at least one")
	}
	for _, text := range []string{run.SampleCode, run.Model, run.Serial, run.Software, run.Version} {
		if !holdsText(text) {
			return fmt.Errorf("simulate: %q, want text that XML can hold", text)
		}
	}
	ids := map[string]bool{}
	for _, c := range run.Traces {
		if c.ID == "" || ids[c.ID] || !holdsText(c.ID) {
			return fmt.Errorf("simulate: the trace id %q, want one that XML can hold and no other trace has", c.ID)
		}
		ids[c.ID] = true
		for _, mz := range []float64{c.Transition.PrecursorMZ, c.Transition.ProductMZ} {
			if !(mz >= 0 && mz <= 1e6) {
				return fmt.Errorf("simulate: trace %q: m/z %g, want one from 0 (not known) to 1000000", c.ID, mz)
			}
		}
		if err := checkPoints(c); err != nil {
			return err
		}
	}
	return nil
}

// holdsText tells whether XML 1.0 can hold s (production 2, Char).
func holdsText(s string) bool {
	for i, r := range s {
		if r == utf8.RuneError && !strings.HasPrefix(s[i:], string(utf8.RuneError)) {
			return false // not UTF-8
		}
		if r < 0x20 && r != '\t' && r != '\n' && r != '\r' || r == 0xfffe || r == 0xffff {
			return false
		}
	}
	return true
}

// checkPoints refuses what breaks the contract of a trace, or does not fit into 32 bits.
func checkPoints(c trace.Chromatogram) error {
	if len(c.TimeMin) != len(c.Intensity) {
		return fmt.Errorf("simulate: trace %q: %d times and %d intensities, want as many of each", c.ID, len(c.TimeMin), len(c.Intensity))
	}
	for i, t := range c.TimeMin {
		y := float64(float32(c.Intensity[i]))
		switch {
		case math.IsNaN(t) || math.IsInf(t, 0) || i > 0 && t <= c.TimeMin[i-1]:
			return fmt.Errorf("simulate: trace %q, point %d: a time of %g min, want a finite one after the point before", c.ID, i+1, t)
		case math.IsNaN(y) || math.IsInf(y, 0):
			return fmt.Errorf("simulate: trace %q, point %d: an intensity of %g, want a finite one that 32 bits hold", c.ID, i+1, c.Intensity[i])
		}
	}
	return nil
}

// ids within the file.
const (
	sampleID     = "sample"
	softwareID   = "acquisition"
	instrumentID = "instrument"
	processingID = "export"
)

var usedIDs = []string{sampleID, softwareID, instrumentID, processingID, "MS", "UO"}

type mzmlWriter struct {
	buf     bytes.Buffer
	offsets []int
	zlib    *zlib.Writer
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
<indexedmzML xmlns="http://psi.hupo.org/ms/mzml" xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance" xsi:schemaLocation="http://psi.hupo.org/ms/mzml http://psidev.info/files/ms/mzML/xsd/mzML1.1.0_idx.xsd">
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
      <sample id="%s" name="%s"/>
    </sampleList>
    <softwareList count="1">
      <software id="%s" version="%s">
        <cvParam cvRef="MS" accession="MS:1000799" name="custom unreleased software tool" value="%s"/>
      </software>
    </softwareList>
`, esc(run.ID), sampleID, esc(run.SampleCode), softwareID, esc(run.Version), esc(run.Software))
	m.instrument(run)
	m.f(`    <dataProcessingList count="1">
      <dataProcessing id="%s">
        <processingMethod order="1" softwareRef="%s">
          <cvParam cvRef="MS" accession="MS:1000544" name="Conversion to mzML" value=""/>
        </processingMethod>
      </dataProcessing>
    </dataProcessingList>
    <run id="%s" defaultInstrumentConfigurationRef="%s" sampleRef="%s" startTimeStamp="%s">
      <chromatogramList count="%d" defaultDataProcessingRef="%s">
`, processingID, softwareID, esc(run.ID), instrumentID, sampleID, esc(run.StartTime), len(run.Traces), processingID)
}

// instrument describes a triple quadrupole: the second quadrupole is the collision cell.
func (m *mzmlWriter) instrument(run Run) {
	m.f(`    <instrumentConfigurationList count="1">
      <instrumentConfiguration id="%s">
        <cvParam cvRef="MS" accession="MS:1000031" name="instrument model" value="%s"/>
        <cvParam cvRef="MS" accession="MS:1000529" name="instrument serial number" value="%s"/>
        <componentList count="5">
          <source order="1">
            <cvParam cvRef="MS" accession="MS:1000073" name="electrospray ionization" value=""/>
          </source>
`, instrumentID, esc(run.Model), esc(run.Serial))
	for order := 2; order <= 4; order++ {
		m.f(`          <analyzer order="%d">
            <cvParam cvRef="MS" accession="MS:1000081" name="quadrupole" value=""/>
          </analyzer>
`, order)
	}
	m.f(`          <detector order="5">
            <cvParam cvRef="MS" accession="MS:1000253" name="electron multiplier" value=""/>
          </detector>
        </componentList>
        <softwareRef ref="%s"/>
      </instrumentConfiguration>
    </instrumentConfigurationList>
`, softwareID)
}

func (m *mzmlWriter) chromatogram(i int, c trace.Chromatogram) error {
	m.f(`      <chromatogram index="%d" id="%s" defaultArrayLength="%d">
        <cvParam cvRef="MS" accession="MS:1001473" name="selected reaction monitoring chromatogram" value=""/>
`, i, esc(c.ID), len(c.TimeMin))
	switch c.Transition.Polarity {
	case trace.Positive:
		m.f("        <cvParam cvRef=\"MS\" accession=\"MS:1000130\" name=\"positive scan\" value=\"\"/>\n")
	case trace.Negative:
		m.f("        <cvParam cvRef=\"MS\" accession=\"MS:1000129\" name=\"negative scan\" value=\"\"/>\n")
	}
	m.f("        <precursor>\n")
	m.isolation(c.Transition.PrecursorMZ)
	m.f(`          <activation>
            <cvParam cvRef="MS" accession="MS:1000133" name="collision-induced dissociation" value=""/>
          </activation>
        </precursor>
        <product>
`)
	m.isolation(c.Transition.ProductMZ)
	m.f("        </product>\n        <binaryDataArrayList count=\"2\">\n")
	times, ints := make([]byte, 8*len(c.TimeMin)), make([]byte, 4*len(c.Intensity))
	for k, t := range c.TimeMin {
		binary.LittleEndian.PutUint64(times[8*k:], math.Float64bits(t))
		binary.LittleEndian.PutUint32(ints[4*k:], math.Float32bits(float32(c.Intensity[k])))
	}
	if err := m.array(times, `accession="MS:1000523" name="64-bit float"`,
		`accession="MS:1000595" name="time array" value="" unitCvRef="UO" unitAccession="UO:0000031" unitName="minute"`); err != nil {
		return err
	}
	if err := m.array(ints, `accession="MS:1000521" name="32-bit float"`,
		`accession="MS:1000515" name="intensity array" value="" unitCvRef="MS" unitAccession="MS:1000131" unitName="number of detector counts"`); err != nil {
		return err
	}
	m.f("        </binaryDataArrayList>\n      </chromatogram>\n")
	return nil
}

// isolation writes the window of a precursor or product; 0 means that its m/z is not known.
func (m *mzmlWriter) isolation(mz float64) {
	if mz == 0 {
		return
	}
	m.f(`          <isolationWindow>
            <cvParam cvRef="MS" accession="MS:1000827" name="isolation window target m/z" value="%g" unitCvRef="MS" unitAccession="MS:1000040" unitName="m/z"/>
          </isolationWindow>
`, mz)
}

func (m *mzmlWriter) array(data []byte, number, content string) error {
	text, err := m.packed(data)
	if err != nil {
		return err
	}
	m.f(`          <binaryDataArray encodedLength="%d">
            <cvParam cvRef="MS" %s value=""/>
            <cvParam cvRef="MS" accession="MS:1000574" name="zlib compression" value=""/>
            <cvParam cvRef="MS" %s/>
            <binary>%s</binary>
          </binaryDataArray>
`, len(text), number, content, text)
	return nil
}

// packed is data through zlib and base64, by a library whose output does not change with the compiler's release. One compressor
// serves the whole file: making it costs more than using it.
func (m *mzmlWriter) packed(data []byte) (string, error) {
	var b bytes.Buffer
	if m.zlib == nil {
		z, err := zlib.NewWriterLevel(&b, 6)
		if err != nil {
			return "", err
		}
		m.zlib = z
	} else {
		m.zlib.Reset(&b)
	}
	if _, err := m.zlib.Write(data); err != nil {
		return "", err
	}
	if err := m.zlib.Close(); err != nil {
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
