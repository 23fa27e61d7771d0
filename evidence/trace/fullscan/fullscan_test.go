package fullscan

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
	"assaywrit/evidence/trace/mzml"
)

const published = "../../../testdata/mzml"

func open(t testing.TB, name string) *trace.File {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(published, name))
	if err != nil {
		t.Fatal(err)
	}
	f, err := mzml.Read(name, bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// TestTotalIonOfTheFile: the ion trace over all m/z of a published run is the total ion current that its own spectra state, which the
// instrument's software worked out (six digits in the file).
func TestTotalIonOfTheFile(t *testing.T) {
	f := open(t, "small_zlib.mzML")
	all, err := Extract(f.Scans, Filter{}, []Ion{{Window{0, 1e6}, Sum}}, 2)
	if err != nil {
		t.Fatal(err)
	}
	compared := 0
	for i, y := range all.Intensity[0] {
		want := f.Scans.Scan(i).TotalIon
		if want == 0 || f.Scans.Scan(i).Mode == trace.Profile {
			continue // the software did not sum the points of a profile
		}
		compared++
		if math.Abs(y-want) > 2e-5*want {
			t.Errorf("scan %q: %g, the file says %g", f.Scans.Scan(i).ID, y, want)
		}
	}
	if compared < 30 {
		t.Errorf("only %d scans compared", compared)
	}
}

// plainTrace walks over every point.
func plainTrace(t *testing.T, scans trace.Scans, level int, ion Ion) (times, y []float64) {
	r := scans.Open()
	for i := range scans.Len() {
		if s := scans.Scan(i); level > 0 && s.MSLevel != level {
			continue
		}
		mz, err := r.MZ(i)
		if err != nil {
			t.Fatal(err)
		}
		in, err := r.Intensity(i)
		if err != nil {
			t.Fatal(err)
		}
		v := 0.0
		for k := range mz {
			if mz[k] >= ion.Window.Low && mz[k] <= ion.Window.High {
				if ion.Combine == Maximum {
					v = max(v, in[k])
				} else {
					v += in[k]
				}
			}
		}
		times, y = append(times, scans.Scan(i).TimeMin), append(y, v)
	}
	return times, y
}

// TestExtractAgainstEveryPoint compares with a walk over every point of published runs, whatever the number of goroutines.
func TestExtractAgainstEveryPoint(t *testing.T) {
	ions := []Ion{{Around(391.28, 0.5), Sum}, {AroundPPM(810.4155, 20), Maximum}, {Around(74.0970383, 1e-6), Sum}, {Window{1e5, 2e5}, Sum}, {Around(500, 400), Maximum}}
	for _, name := range []string{"small_zlib.mzML", "example.mzML"} {
		f := open(t, name)
		for level := range 3 {
			for _, workers := range []int{0, 1, 3} {
				got, err := Extract(f.Scans, Filter{MSLevel: level}, ions, workers)
				if err != nil {
					t.Fatal(err)
				}
				for i, ion := range ions {
					times, y := plainTrace(t, f.Scans, level, ion)
					if !slices.Equal(times, got.TimeMin) || !slices.Equal(y, got.Intensity[i]) {
						t.Errorf("%s, level %d, %d goroutines, ion %d: another trace", name, level, workers, i)
					}
				}
			}
		}
	}
}

// held makes scans, one a line: "time level precursor: mz intensity, mz intensity".
func held(t *testing.T, lines ...string) *trace.HeldScans {
	t.Helper()
	h := &trace.HeldScans{}
	for i, line := range lines {
		head, body, _ := strings.Cut(line, ":")
		s := trace.Scan{ID: fmt.Sprint("scan=", i+1), Mode: trace.Centroid}
		if _, err := fmt.Sscan(head, &s.TimeMin, &s.MSLevel, &s.PrecursorMZ); err != nil {
			t.Fatal(err)
		}
		var x trace.Spectrum
		for _, pair := range strings.Split(body, ",") {
			var mz, y float64
			if _, err := fmt.Sscan(pair, &mz, &y); err != nil {
				t.Fatal(err)
			}
			x.MZ, x.Intensity = append(x.MZ, mz), append(x.Intensity, y)
		}
		s.Points = len(x.MZ)
		h.Headers, h.Spectra = append(h.Headers, s), append(h.Spectra, x)
	}
	return h
}

func TestFilter(t *testing.T) {
	scans := held(t, "1 1 0: 50 1", "1.1 2 300.2: 50 2", "1.2 2 411.1: 50 4", "1.3 1 0: 50 8", "1.4 2 300.3: 50 16")
	for _, tt := range []struct {
		f    Filter
		want []float64
	}{
		{Filter{}, []float64{1, 2, 4, 8, 16}},
		{Filter{MSLevel: 1}, []float64{1, 8}},
		{Filter{MSLevel: 2}, []float64{2, 4, 16}},
		{Filter{MSLevel: 2, PrecursorMZ: 300.25, PrecursorTolMZ: 0.06}, []float64{2, 16}},
		{Filter{StartMin: 1.1, EndMin: 1.3}, []float64{2, 4, 8}},
		{Filter{StartMin: 2}, nil},
		{Filter{Polarity: trace.Negative}, []float64{1, 2, 4, 8, 16}}, // the scans do not say
	} {
		got, err := Extract(scans, tt.f, []Ion{{Around(50, 0.1), Sum}}, 1)
		if err != nil || !slices.Equal(got.Intensity[0], tt.want) {
			t.Errorf("%+v: %v, %v, want %v", tt.f, got, err, tt.want)
		}
	}
	scans.Headers[0].Polarity = trace.Positive
	got, err := Extract(scans, Filter{Polarity: trace.Negative, MSLevel: 1}, []Ion{{Around(50, 0.1), Sum}}, 1)
	if err != nil || !slices.Equal(got.Intensity[0], []float64{8}) {
		t.Errorf("polarity: %v, %v", got, err)
	}
}

// TestTwoSeries: scans that go back in time are two series, of which one has to be chosen.
func TestTwoSeries(t *testing.T) {
	scans := held(t, "1 1 0: 50 1", "2 1 0: 50 2", "1 2 300: 50 4")
	if _, err := Extract(scans, Filter{}, nil, 1); err == nil || !strings.Contains(err.Error(), `"scan=3" at 1 min after "scan=2" at 2 min`) {
		t.Errorf("got %v", err)
	}
	if _, err := Extract(scans, Filter{MSLevel: 1}, nil, 1); err != nil {
		t.Error(err)
	}
}

type failing struct {
	*trace.HeldScans
	at map[int]error
}

func (f failing) Open() trace.ScanReader { return failingReader{f.HeldScans.Open(), f.at} }

type failingReader struct {
	trace.ScanReader
	at map[int]error
}

func (f failingReader) MZ(i int) ([]float64, error) {
	if err := f.at[i]; err != nil {
		return nil, err
	}
	return f.ScanReader.MZ(i)
}

// TestFirstError: of several scans that cannot be read the first is told, whatever the number of goroutines.
func TestFirstError(t *testing.T) {
	var lines []string
	for i := range 200 {
		lines = append(lines, fmt.Sprintf("%d 1 0: 50 1", i))
	}
	first := errors.New("first")
	scans := failing{held(t, lines...), map[int]error{97: first, 98: errors.New("second"), 150: errors.New("third")}}
	for _, workers := range []int{1, 2, 8} {
		for range 20 {
			if _, err := Extract(scans, Filter{}, []Ion{{Around(50, 1), Sum}}, workers); err != first {
				t.Fatalf("%d goroutines: %v", workers, err)
			}
		}
	}
}

// TestSpectrumAtPeak is worked out by hand.
func TestSpectrumAtPeak(t *testing.T) {
	scans := held(t, "1.0 1 0: 50.0 10, 91.0 4", "1.1 1 0: 50.1 30, 91.0 4, 119 8", "1.2 1 0: 50.0 10, 91.2 12", "1.3 1 0: 60 5, 91.1 4")
	is := func(what string, got *Taken, err error, mz, y []float64, ids ...string) {
		t.Helper()
		if err != nil {
			t.Fatal(what, err)
		}
		near := func(a, b []float64) bool {
			return slices.EqualFunc(a, b, func(x, y float64) bool { return math.Abs(x-y) < 1e-12*math.Abs(y) })
		}
		if !near(got.Spectrum.MZ, mz) || !near(got.Spectrum.Intensity, y) || !slices.Equal(got.Scans, ids) {
			t.Errorf("%s: %+v, want %v %v of %v", what, got, mz, y, ids)
		}
	}
	apex, err := Apex(scans, Filter{}, 1.12)
	is("apex", apex, err, []float64{50.1, 91, 119}, []float64{30, 4, 8}, "scan=2")
	mean, err := Average(scans, Filter{}, Span{1.0, 1.2}, 0.3)
	// (50.0·10 + 50.1·30 + 50.0·10)/50 = 50.06; (91.0·4 + 91.0·4 + 91.2·12)/20 = 91.12; a third of the sums
	is("mean", mean, err, []float64{50.06, 91.12, 119}, []float64{50. / 3, 20. / 3, 8. / 3}, "scan=1", "scan=2", "scan=3")
	err = mean.Subtract(scans, Filter{}, []Span{{1.25, 1.4}}, 0.3)
	is("without background", mean, err, []float64{50.06, 91.12, 119}, []float64{50. / 3, 20./3 - 4, 8. / 3}, "scan=1", "scan=2", "scan=3")
	if fmt.Sprint(mean.Background) != "[scan=4]" {
		t.Errorf("background %v", mean.Background)
	}
	err = apex.Subtract(scans, Filter{}, []Span{{0.9, 1.05}, {1.3, 1.3}}, 0.3)
	// background: 50.0 at 10/2, 60 at 5/2, 91.05 at 8/2
	is("apex without background", apex, err, []float64{50.1, 119}, []float64{25, 8}, "scan=2")
	if _, err := Average(scans, Filter{}, Span{5, 6}, 0.3); err == nil {
		t.Error("a span without a scan gave a spectrum")
	}
}

// TestProfiles are averaged on the same m/z only.
func TestProfiles(t *testing.T) {
	scans := held(t, "1 1 0: 50.0 10, 50.1 20", "2 1 0: 50.0 30, 50.1 0", "3 1 0: 50.0 1, 50.2 1")
	for i := range scans.Headers {
		scans.Headers[i].Mode = trace.Profile
	}
	got, err := Average(scans, Filter{}, Span{1, 2}, 0.3)
	if err != nil || !slices.Equal(got.Spectrum.Intensity, []float64{20, 10}) || !slices.Equal(got.Spectrum.MZ, []float64{50, 50.1}) {
		t.Errorf("got %+v, %v", got, err)
	}
	if _, err := Average(scans, Filter{}, Span{1, 3}, 0.3); err == nil || !strings.Contains(err.Error(), "different m/z") {
		t.Errorf("got %v", err)
	}
}
