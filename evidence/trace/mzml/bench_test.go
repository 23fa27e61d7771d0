package mzml

import (
	"bytes"
	"fmt"
	"math"
	"testing"

	"assaywrit/evidence/simulate"
	"assaywrit/evidence/trace"
)

// syntheticFile is a run as the project's own writer writes it: zlib, 64-bit times and 32-bit intensities.
func syntheticFile(b *testing.B, chromatograms, points int) []byte {
	run := simulate.Run{ID: "run", SampleCode: "C-0001", StartTime: "2026-01-02T03:04:05+01:00", Model: "model", Serial: "1", Software: "software", Version: "2"}
	for i := range chromatograms {
		c := trace.Chromatogram{ID: fmt.Sprintf("trace %d", i), Transition: trace.Transition{PrecursorMZ: 200 + float64(i), ProductMZ: 91}}
		for k := range points {
			c.TimeMin = append(c.TimeMin, 1+float64(k)/150)
			z := float64(k-points/2) / 12
			c.Intensity = append(c.Intensity, math.Round(1e6*math.Exp(-z*z/2)+float64(100*((k*7919)%13))))
		}
		run.Traces = append(run.Traces, c)
	}
	var buf bytes.Buffer
	if err := simulate.WriteMzML(&buf, run); err != nil {
		b.Fatal(err)
	}
	return buf.Bytes()
}

func BenchmarkRead(b *testing.B) {
	for _, size := range []struct{ chromatograms, points int }{{10, 500}, {100, 5000}, {10000, 1000}} {
		b.Run(fmt.Sprintf("chromatograms=%d/points=%d", size.chromatograms, size.points), func(b *testing.B) {
			data := syntheticFile(b, size.chromatograms, size.points)
			b.SetBytes(int64(len(data)))
			b.ReportAllocs()
			for b.Loop() {
				if _, err := Read("bench.mzML", bytes.NewReader(data)); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
