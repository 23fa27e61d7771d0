package mzml

import (
	"bytes"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"

	"assaywrit/evidence/trace"
)

type expectedFile struct {
	Chromatograms []struct {
		ID        string   `json:"id"`
		Type      string   `json:"type"`
		Q1        *string  `json:"Q1"`
		Q3        *string  `json:"Q3"`
		N         int      `json:"n_time"`
		TimeUnit  string   `json:"time_unit"`
		First     *float64 `json:"time_first"`
		Last      *float64 `json:"time_last"`
		Sum       *float64 `json:"sum"`
		Max       *float64 `json:"max"`
		TimeAtMax *float64 `json:"time_at_max"`
		Trapezoid *float64 `json:"trapezoid_area_in_file_time_unit"`
	} `json:"chromatograms"`
}

func checkAgainst(t *testing.T, folder string, want map[string]expectedFile) int {
	n := 0
	for name, e := range want {
		if len(e.Chromatograms) == 0 {
			continue
		}
		data, err := os.ReadFile(filepath.Join(folder, name))
		if err != nil {
			t.Logf("%s: %v", name, err)
			continue
		}
		f, err := Read(name, bytes.NewReader(data))
		if err != nil {
			t.Logf("%s: %v", name, err)
			continue
		}
		if len(f.Chromatograms) != len(e.Chromatograms) {
			t.Errorf("%s: %d of %d", name, len(f.Chromatograms), len(e.Chromatograms))
			continue
		}
		for i, c := range f.Chromatograms {
			w := e.Chromatograms[i]
			scale := 1.0
			if w.TimeUnit == "second" {
				scale = 60
			}
			if c.ID != w.ID || len(c.TimeMin) != w.N {
				t.Errorf("%s %s: %d points, want %d", name, c.ID, len(c.TimeMin), w.N)
				continue
			}
			if w.N == 0 {
				continue
			}
			sum, top, area := 0.0, 0, 0.0
			for k, y := range c.Intensity {
				sum += y
				if y > c.Intensity[top] {
					top = k
				}
				if k > 0 {
					area += (y + c.Intensity[k-1]) / 2 * (c.TimeMin[k] - c.TimeMin[k-1]) * scale
				}
			}
			near := func(what string, got float64, w *float64) {
				if w != nil && math.Abs(got-*w) > 1e-6*math.Abs(*w)+1e-9 {
					t.Errorf("%s %s: %s %v, want %v", name, c.ID, what, got, *w)
				}
			}
			near("first", c.TimeMin[0]*scale, w.First)
			near("last", c.TimeMin[len(c.TimeMin)-1]*scale, w.Last)
			near("sum", sum, w.Sum)
			near("max", c.Intensity[top], w.Max)
			near("time at max", c.TimeMin[top]*scale, w.TimeAtMax)
			near("area", area, w.Trapezoid)
			if w.Q1 != nil && w.Q3 != nil {
				var q1, q3 float64
				json.Unmarshal([]byte(*w.Q1), &q1)
				json.Unmarshal([]byte(*w.Q3), &q3)
				near("Q1", c.Transition.PrecursorMZ, &q1)
				near("Q3", c.Transition.ProductMZ, &q3)
			}
			n++
		}
		t.Log(name, len(f.Chromatograms), f.Instrument, f.Software, f.StartTime, f.SampleCode, f.Warnings)
	}
	return n
}

func TestCorpus(t *testing.T) {
	folder := os.Getenv("ASSAYWRIT_CORPUS")
	data, err := os.ReadFile(filepath.Join(folder, "expected.json"))
	if err != nil {
		t.Skip(err)
	}
	var want map[string]expectedFile
	if err := json.Unmarshal(data, &want); err != nil {
		t.Fatal(err)
	}
	t.Log(checkAgainst(t, folder, want))
	_ = trace.SRM
}
