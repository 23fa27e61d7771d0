package fullscan

import (
	"bufio"
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"strconv"
	"strings"
	"sync"
	"testing"

	stdzlib "compress/zlib"

	"github.com/klauspost/compress/zlib"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/mzml"
)

// writeRun writes a full-scan run as instruments' converters do: m/z in 64 bits, intensities in 32, both in zlib, centroids that
// wander a little from scan to scan over a noisy ground. 64 different spectra repeat.
func writeRun(w io.Writer, scans, points int) error {
	r := rand.New(rand.NewPCG(7, 7))
	text := func(raw []byte) (string, error) {
		var b bytes.Buffer
		z := stdzlib.NewWriter(&b)
		if _, err := z.Write(raw); err != nil {
			return "", err
		}
		err := z.Close()
		return base64.StdEncoding.EncodeToString(b.Bytes()), err
	}
	var arrays [64][2]string
	for i := range arrays {
		var mz, y []byte
		at := 80.0
		for range points {
			at += 0.01 + r.ExpFloat64()*0.4
			mz = binary.LittleEndian.AppendUint64(mz, math.Float64bits(at))
			y = binary.LittleEndian.AppendUint32(y, math.Float32bits(float32(200+r.ExpFloat64()*3000)))
		}
		var err error
		if arrays[i][0], err = text(mz); err != nil {
			return err
		}
		if arrays[i][1], err = text(y); err != nil {
			return err
		}
	}
	b := bufio.NewWriterSize(w, 1<<20)
	fmt.Fprintf(b, "<?xml version=\"1.0\" encoding=\"utf-8\"?>\n<mzML xmlns=\"http://psi.hupo.org/ms/mzml\" version=\"1.1.0\">\n<run id=\"r\" startTimeStamp=\"2026-01-02T03:04:05Z\">\n<spectrumList count=\"%d\">\n", scans)
	for i := range scans {
		a := arrays[i%len(arrays)]
		fmt.Fprintf(b, `      <spectrum index="%d" id="controllerType=0 controllerNumber=1 scan=%d" defaultArrayLength="%d">
        <cvParam cvRef="MS" accession="MS:1000511" name="ms level" value="1"/>
        <cvParam cvRef="MS" accession="MS:1000579" name="MS1 spectrum" value=""/>
        <cvParam cvRef="MS" accession="MS:1000130" name="positive scan" value=""/>
        <cvParam cvRef="MS" accession="MS:1000127" name="centroid spectrum" value=""/>
        <cvParam cvRef="MS" accession="MS:1000504" name="base peak m/z" value="391.2842" unitCvRef="MS" unitAccession="MS:1000040" unitName="m/z"/>
        <cvParam cvRef="MS" accession="MS:1000505" name="base peak intensity" value="1.2183176e07" unitCvRef="MS" unitAccession="MS:1000131" unitName="number of detector counts"/>
        <cvParam cvRef="MS" accession="MS:1000285" name="total ion current" value="9.2003632e07"/>
        <scanList count="1">
          <cvParam cvRef="MS" accession="MS:1000795" name="no combination" value=""/>
          <scan instrumentConfigurationRef="IC1">
            <cvParam cvRef="MS" accession="MS:1000016" name="scan start time" value="%.6f" unitCvRef="UO" unitAccession="UO:0000031" unitName="minute"/>
            <scanWindowList count="1">
              <scanWindow>
                <cvParam cvRef="MS" accession="MS:1000501" name="scan window lower limit" value="80.0" unitCvRef="MS" unitAccession="MS:1000040" unitName="m/z"/>
                <cvParam cvRef="MS" accession="MS:1000500" name="scan window upper limit" value="1200.0" unitCvRef="MS" unitAccession="MS:1000040" unitName="m/z"/>
              </scanWindow>
            </scanWindowList>
          </scan>
        </scanList>
        <binaryDataArrayList count="2">
`, i, i+1, points, float64(i+1)/600)
		for k, terms := range []string{`<cvParam cvRef="MS" accession="MS:1000523"/><cvParam cvRef="MS" accession="MS:1000574"/><cvParam cvRef="MS" accession="MS:1000514" unitAccession="MS:1000040"/>`,
			`<cvParam cvRef="MS" accession="MS:1000521"/><cvParam cvRef="MS" accession="MS:1000574"/><cvParam cvRef="MS" accession="MS:1000515" unitAccession="MS:1000131"/>`} {
			fmt.Fprintf(b, "<binaryDataArray encodedLength=\"%d\">%s<binary>%s</binary></binaryDataArray>\n", len(a[k]), terms, a[k])
		}
		b.WriteString("        </binaryDataArrayList>\n      </spectrum>\n")
	}
	b.WriteString("</spectrumList>\n</run>\n</mzML>\n")
	return b.Flush()
}

// runFile writes a run of about so many bytes once for all benchmarks.
func runFile(tb testing.TB, size int64) string {
	path := filepath.Join(tb.TempDir(), "run.mzML")
	f, err := os.Create(path)
	if err != nil {
		tb.Fatal(err)
	}
	const points, perScan = 2000, 24_000
	if err := writeRun(f, int(size/perScan), points); err != nil {
		tb.Fatal(err)
	}
	if err := f.Close(); err != nil {
		tb.Fatal(err)
	}
	return path
}

func size(tb testing.TB, path string) int64 {
	info, err := os.Stat(path)
	if err != nil {
		tb.Fatal(err)
	}
	return info.Size()
}

// extract reads one ion trace from a file. wide: over every point, so that no array stays packed.
func extract(path string, workers int, wide bool, f Filter) (float64, error) {
	file, err := os.Open(path)
	if err != nil {
		return 0, err
	}
	defer file.Close()
	info, err := file.Stat()
	if err != nil {
		return 0, err
	}
	run, err := mzml.Read(path, io.NewSectionReader(file, 0, info.Size()))
	if err != nil {
		return 0, err
	}
	ion := Ion{AroundPPM(391.2842, 10), Sum}
	if wide {
		ion.Window = Window{0, 1e6}
	}
	t, err := Extract(run.Scans, f, []Ion{ion}, workers)
	if err != nil {
		return 0, err
	}
	return t.Intensity[0][len(t.TimeMin)/2], nil
}

// total is the sum of all intensities of a file, every array of which is decoded.
func total(path string) (float64, error) {
	file, err := os.Open(path)
	if err != nil {
		return 0, err
	}
	defer file.Close()
	info, err := file.Stat()
	if err != nil {
		return 0, err
	}
	run, err := mzml.Read(path, io.NewSectionReader(file, 0, info.Size()))
	if err != nil {
		return 0, err
	}
	t, err := Extract(run.Scans, Filter{}, []Ion{{Window{0, 1e6}, Sum}}, runtime.GOMAXPROCS(0))
	if err != nil {
		return 0, err
	}
	sum := 0.0
	for _, y := range t.Intensity[0] {
		sum += y
	}
	return sum, nil
}

// floor decodes the base64 and undoes the zlib of every array with libraries, in memory, and nothing else.
func floor(texts []string, sizes []int, workers int) error {
	var group sync.WaitGroup
	errs := make([]error, workers)
	for w := range workers {
		group.Go(func() {
			var raw, out []byte
			var in bytes.Reader
			var z io.ReadCloser
			for i := w; i < len(texts); i += workers {
				if n := base64.StdEncoding.DecodedLen(len(texts[i])); cap(raw) < n {
					raw = make([]byte, n)
				}
				n, err := base64.StdEncoding.Decode(raw[:cap(raw)], []byte(texts[i]))
				if err != nil {
					errs[w] = err
					return
				}
				in.Reset(raw[:n])
				if z == nil {
					z, err = zlib.NewReader(&in)
				} else {
					err = z.(zlib.Resetter).Reset(&in, nil)
				}
				if err == nil {
					if cap(out) < sizes[i] {
						out = make([]byte, sizes[i])
					}
					_, err = io.ReadFull(z, out[:sizes[i]])
				}
				if err != nil {
					errs[w] = err
					return
				}
			}
		})
	}
	group.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}

// BenchmarkFullScan reads every array of a run (by=reader), against base64 and zlib by libraries of the same arrays alone (by=floor), on one
// goroutine and on two.
func BenchmarkFullScan(b *testing.B) {
	path := runFile(b, 200<<20)
	data, err := os.ReadFile(path)
	if err != nil {
		b.Fatal(err)
	}
	var texts []string
	var sizes []int
	for i, piece := range strings.Split(string(data), "<binary>")[1:] {
		text, _, _ := strings.Cut(piece, "<")
		texts, sizes = append(texts, text), append(sizes, []int{16000, 8000}[i%2])
	}
	for _, workers := range []int{1, 2} {
		for _, by := range []string{"reader", "floor"} {
			b.Run("workers="+strconv.Itoa(workers)+"/by="+by, func(b *testing.B) {
				defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(workers))
				b.SetBytes(int64(len(data)))
				for b.Loop() {
					if by == "floor" {
						err = floor(texts, sizes, workers)
					} else {
						_, err = extract(path, workers, true, Filter{})
					}
					if err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

// BenchmarkOneIon reads one ion trace of a whole run, and of a tenth of it.
func BenchmarkOneIon(b *testing.B) {
	path := runFile(b, 200<<20)
	last := float64(size(b, path)/24_000) / 600
	for name, f := range map[string]Filter{"all": {}, "tenth": {StartMin: last / 2, EndMin: last * 0.6}} {
		b.Run("span="+name, func(b *testing.B) {
			b.SetBytes(size(b, path))
			for b.Loop() {
				if _, err := extract(path, runtime.GOMAXPROCS(0), false, f); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

var _ trace.Scans = (*trace.HeldScans)(nil)
