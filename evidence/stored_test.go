package evidence

import (
	"math"
	"os"
	"testing"

	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace/andi"
)

// TestStoredPeaks finds, for the peaks of a real HPLC-UV trace, the peaks that the instrument's software took (testdata/andi), and compares
// the areas: those of its well separated peaks agree, although two programs drew two baselines.
func TestStoredPeaks(t *testing.T) {
	f, err := os.Open("../testdata/andi/hplc-uv-a.cdf")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil {
		t.Fatal(err)
	}
	file, err := andi.Read("hplc-uv-a.cdf", sized{f, info.Size()})
	if err != nil {
		t.Fatal(err)
	}
	c := file.Chromatograms[0]
	found, err := peak.Detect(c, peak.Parameters{SmoothingPoints: 9, MinSN: 10, MinWidthMin: 0.03, Shared: peak.Drop})
	if err != nil {
		t.Fatal(err)
	}
	matched := map[int]float64{}
	for i := range found.Peaks {
		m := &Measurement{TraceID: c.ID, Peak: &found.Peaks[i]}
		s := storedMatch(file.StoredPeaks, m)
		if s == nil {
			continue
		}
		if s.AreaDifference == nil || s.StartDifference == nil || s.EndDifference == nil || math.Abs(s.ApexDifference) > 0.05 {
			t.Errorf("peak at %g min: %+v", m.Peak.ApexMin, s)
			continue
		}
		if old, twice := matched[s.Index]; !twice || math.Abs(*s.AreaDifference) < math.Abs(old) {
			matched[s.Index] = *s.AreaDifference
		}
	}
	t.Logf("relative differences of area, by the file's peak: %v", matched)
	for _, i := range []int{3, 4, 6, 7} { // tall peaks on a flat ground; the first has a tail that the software cut
		if d, ok := matched[i]; !ok || math.Abs(d) > 0.05 {
			t.Errorf("peak %d of the file: %v, %t", i, d, ok)
		}
	}
	if storedMatch(file.StoredPeaks, &Measurement{TraceID: "another", Peak: &found.Peaks[0]}) != nil || storedMatch(file.StoredPeaks, &Measurement{TraceID: c.ID}) != nil {
		t.Error("a peak of another trace, or of none, was matched")
	}
}

type sized struct {
	*os.File
	size int64
}

func (s sized) Size() int64 { return s.size }
