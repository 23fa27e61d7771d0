package simulate

import (
	"bytes"
	"compress/zlib"
	"crypto/sha1"
	"encoding/base64"
	"encoding/binary"
	"encoding/csv"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"slices"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/mzml"
)

func sampleRun(t testing.TB) Run {
	return Run{
		ID: "run-1", SampleCode: "4410927", StartTime: "2026-03-18T08:30:00+01:00", Model: "triple quadrupole, simulated", Serial: "SIM-0007",
		Software: "simulator", Version: "1", Traces: acquired(t, small(), 1),
	}
}

func written(t testing.TB, run Run) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := WriteMzML(&b, run); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// TestSchema: written files conform to the published schemas, whatever the polarity and however little is known.
func TestSchema(t *testing.T) {
	s := schemas(t, "mzML1.1.0.xsd", "mzML1.1.0_idx.xsd")
	negative, bare := sampleRun(t), sampleRun(t)
	for i := range negative.Traces {
		negative.Traces[i].Transition.Polarity = trace.Negative
		bare.Traces[i] = trace.Chromatogram{ID: fmt.Sprint(i)}
	}
	bare.SampleCode, bare.Model, bare.Serial, bare.Software, bare.Version = "", "", "", "", ""
	for name, run := range map[string]Run{"positive": sampleRun(t), "negative": negative, "bare": bare} {
		if list := s.check(t, written(t, run)); len(list) > 0 {
			t.Errorf("%s: %s", name, strings.Join(list, "; "))
		}
	}
}

// TestTerms: each accession carries the name and, where the vocabulary allows some, one of the units that the vocabulary gives it.
func TestTerms(t *testing.T) {
	f, err := os.Open("../../testdata/simulate/cv_terms.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil || len(rows) < 20 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	names, units := map[string]string{}, map[string][]string{}
	for _, r := range rows[1:] {
		names[r[0]], units[r[0]] = r[1], strings.Fields(r[2])
	}
	root, err := parse(written(t, sampleRun(t)))
	if err != nil {
		t.Fatal(err)
	}
	seen := 0
	root.walk(func(n *node) {
		if n.name != "cvParam" {
			return
		}
		seen++
		a, unit := n.attrs["accession"], n.attrs["unitAccession"]
		if names[a] == "" || n.attrs["name"] != names[a] || !strings.HasPrefix(a, n.attrs["cvRef"]+":") {
			t.Errorf("%s is called %q, the vocabulary says %q", a, n.attrs["name"], names[a])
		}
		if unit != "" && (n.attrs["unitName"] != names[unit] || !strings.HasPrefix(unit, n.attrs["unitCvRef"]+":")) {
			t.Errorf("the unit %s is called %q, the vocabulary says %q", unit, n.attrs["unitName"], names[unit])
		}
		if len(units[a]) > 0 != (unit != "") || unit != "" && !slices.Contains(units[a], unit) {
			t.Errorf("%s has the unit %q, the vocabulary allows %q", a, unit, units[a])
		}
	})
	if seen < 40 {
		t.Errorf("%d terms, want more than 40", seen)
	}
}

// TestIndexAndChecksum: each offset leads to the tag with its id, the index offset to the index, and the checksum is that of
// everything up to and with the tag <fileChecksum> (mzML 1.1.0, index wrapper schema).
func TestIndexAndChecksum(t *testing.T) {
	run := sampleRun(t)
	run.SampleCode, run.Traces[1].ID = "Ä & <ö>", `quant "µ" > 'x'` // more than one byte a letter, and letters that are escaped
	data := written(t, run)
	root, err := parse(data)
	if err != nil {
		t.Fatal(err)
	}
	offsets := root.first("indexList", "index").all("offset")
	if len(offsets) != len(run.Traces) || root.first("indexList", "index").attrs["name"] != "chromatogram" {
		t.Fatalf("%d offsets, want %d of chromatograms", len(offsets), len(run.Traces))
	}
	for i, o := range offsets {
		var at int
		fmt.Sscan(o.text, &at)
		if want := fmt.Sprintf(`<chromatogram index="%d" id=`, i); !bytes.HasPrefix(data[at:], []byte(want)) || o.attrs["idRef"] != run.Traces[i].ID {
			t.Errorf("offset %d of %q leads to %.40q, want %q", at, o.attrs["idRef"], data[at:], want)
		}
	}
	var at int
	fmt.Sscan(root.first("indexListOffset").text, &at)
	if !bytes.HasPrefix(data[at:], []byte("<indexList ")) {
		t.Errorf("indexListOffset leads to %.40q", data[at:])
	}
	end := bytes.Index(data, []byte("<fileChecksum>")) + len("<fileChecksum>")
	sum := sha1.Sum(data[:end])
	if got := root.first("fileChecksum").text; got != hex.EncodeToString(sum[:]) {
		t.Errorf("checksum %s, want %x", got, sum)
	}
}

// TestArraysByStandardLibrary decodes the arrays with another zlib than the one they were written with.
func TestArraysByStandardLibrary(t *testing.T) {
	run := sampleRun(t)
	root, err := parse(written(t, run))
	if err != nil {
		t.Fatal(err)
	}
	list := root.first("mzML", "run", "chromatogramList").all("chromatogram")
	if len(list) != len(run.Traces) {
		t.Fatalf("%d chromatograms, want %d", len(list), len(run.Traces))
	}
	for i, c := range list {
		arrays := c.first("binaryDataArrayList").all("binaryDataArray")
		times, ints := inflated(t, arrays[0]), inflated(t, arrays[1])
		if len(times) != 8*len(run.Traces[i].TimeMin) || len(ints) != 4*len(run.Traces[i].Intensity) {
			t.Fatalf("%d and %d bytes", len(times), len(ints))
		}
		for k := range run.Traces[i].TimeMin {
			x := math.Float64frombits(binary.LittleEndian.Uint64(times[8*k:]))
			y := math.Float32frombits(binary.LittleEndian.Uint32(ints[4*k:]))
			if x != run.Traces[i].TimeMin[k] || float64(y) != run.Traces[i].Intensity[k] {
				t.Fatalf("trace %d, point %d: %g, %g, want %g, %g", i, k+1, x, y, run.Traces[i].TimeMin[k], run.Traces[i].Intensity[k])
			}
		}
	}
}

func inflated(t *testing.T, array *node) []byte {
	t.Helper()
	text := array.first("binary").text
	if array.attrs["encodedLength"] != fmt.Sprint(len(text)) {
		t.Errorf("encodedLength %s, there are %d characters", array.attrs["encodedLength"], len(text))
	}
	raw, err := base64.StdEncoding.DecodeString(text)
	if err != nil {
		t.Fatal(err)
	}
	z, err := zlib.NewReader(bytes.NewReader(raw))
	if err != nil {
		t.Fatal(err)
	}
	data, err := io.ReadAll(z)
	if err != nil {
		t.Fatal(err)
	}
	return data
}

// TestReadBack: the program's own reader gives back what was written, without a warning.
func TestReadBack(t *testing.T) {
	run := sampleRun(t)
	data := written(t, run)
	f, err := mzml.Read("run.mzML", bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	if f.StartTime != run.StartTime || f.SampleCode != run.SampleCode || !strings.Contains(f.Instrument, run.Serial) || len(f.Warnings) > 0 {
		t.Errorf("start %q, sample %q, instrument %q, warnings %v", f.StartTime, f.SampleCode, f.Instrument, f.Warnings)
	}
	if !slices.EqualFunc(f.Chromatograms, run.Traces, same) {
		t.Error("the traces are not those that were written")
	}
	if !bytes.Equal(data, written(t, run)) {
		t.Error("the same run gives other bytes the second time")
	}
}

func TestWriteMzMLRefuses(t *testing.T) {
	for _, tt := range []struct {
		name string
		harm func(r *Run)
		want string
	}{
		{"id that begins with a digit", func(r *Run) { r.ID = "1" }, `run id "1"`},
		{"id with a space", func(r *Run) { r.ID = "a b" }, "run id"},
		{"id that is used otherwise", func(r *Run) { r.ID = "sample" }, "run id"},
		{"id of the vocabulary", func(r *Run) { r.ID = "MS" }, "run id"},
		{"time without offset", func(r *Run) { r.StartTime = "2026-03-18T08:30:00" }, "start time"},
		{"no traces", func(r *Run) { r.Traces = nil }, "without traces"},
		{"trace without id", func(r *Run) { r.Traces[0].ID = "" }, "trace id"},
		{"trace id twice", func(r *Run) { r.Traces[0].ID = "b" }, `trace id "b"`},
		{"trace id that XML cannot hold", func(r *Run) { r.Traces[0].ID = "a\x00" }, "trace id"},
		{"text that is not UTF-8", func(r *Run) { r.Model = "\xff" }, "XML"},
		{"text with U+FFFE", func(r *Run) { r.SampleCode = "\ufffe" }, "XML"},
		{"m/z not a number", func(r *Run) { r.Traces[0].Transition.ProductMZ = math.NaN() }, "m/z"},
		{"m/z below 0", func(r *Run) { r.Traces[0].Transition.PrecursorMZ = -1 }, "m/z"},
		{"m/z beyond any", func(r *Run) { r.Traces[0].Transition.PrecursorMZ = 1e7 }, "m/z"},
		{"lengths that differ", func(r *Run) { r.Traces[0].TimeMin = r.Traces[0].TimeMin[1:] }, "180 times and 181 intensities"},
		{"time that stands still", func(r *Run) { r.Traces[0].TimeMin[5] = r.Traces[0].TimeMin[4] }, "point 6"},
		{"time not a number", func(r *Run) { r.Traces[0].TimeMin[0] = math.NaN() }, "point 1"},
		{"time without end", func(r *Run) { r.Traces[0].TimeMin[180] = math.Inf(1) }, "point 181"},
		{"intensity not a number", func(r *Run) { r.Traces[0].Intensity[2] = math.NaN() }, "point 3"},
		{"intensity beyond 32 bits", func(r *Run) { r.Traces[0].Intensity[2] = 1e39 }, "32 bits"},
	} {
		run := sampleRun(t)
		tt.harm(&run)
		var b bytes.Buffer
		if err := WriteMzML(&b, run); err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: error %v, want one with %q", tt.name, err, tt.want)
		}
		if b.Len() > 0 {
			t.Errorf("%s: %d bytes were written", tt.name, b.Len())
		}
	}
}

type full struct{}

var errFull = errors.New("full")

func (full) Write([]byte) (int, error) { return 0, errFull }

func TestWriteMzMLPassesError(t *testing.T) {
	if err := WriteMzML(full{}, sampleRun(t)); !errors.Is(err, errFull) {
		t.Errorf("error %v, want %v", err, errFull)
	}
}

// FuzzWriteMzML: whatever the words in a run, it is refused, or the file is well formed, conforms and reads back.
func FuzzWriteMzML(f *testing.F) {
	f.Add("run-1", "4410927", "triple quadrupole", "SRM 1 > 2", 240.2, 148.1)
	f.Add("a", `"&'<>`, "\x00\xff\ufffe", "]]>", 0., math.MaxFloat64)
	f.Add("_", "\t\n\r", "µ", " ", math.NaN(), -1.)
	s := schemas(f, "mzML1.1.0.xsd", "mzML1.1.0_idx.xsd")
	f.Fuzz(func(t *testing.T, id, code, model, traceID string, precursor, product float64) {
		run := Run{ID: id, SampleCode: code, Model: model, StartTime: "2026-03-18T08:30:00+01:00", Traces: []trace.Chromatogram{
			{ID: traceID, Transition: trace.Transition{PrecursorMZ: precursor, ProductMZ: product}, TimeMin: []float64{1, 2}, Intensity: []float64{3, 4}},
		}}
		var b bytes.Buffer
		if WriteMzML(&b, run) != nil {
			return
		}
		if list := s.check(t, b.Bytes()); len(list) > 0 {
			t.Fatalf("%q", list)
		}
		got, err := mzml.Read("run.mzML", bytes.NewReader(b.Bytes()))
		if err != nil {
			t.Fatal(err)
		}
		if len(got.Chromatograms) != 1 || !slices.Equal(got.Chromatograms[0].Intensity, []float64{3, 4}) || len(got.Warnings) > 0 {
			t.Fatalf("read back as %+v", got)
		}
	})
}

func BenchmarkWriteMzML(b *testing.B) {
	run := sampleRun(b)
	b.Run("traces=3/points=181", func(b *testing.B) {
		for b.Loop() {
			if err := WriteMzML(io.Discard, run); err != nil {
				b.Fatal(err)
			}
		}
	})
}
