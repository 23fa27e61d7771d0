package peak

import (
	"fmt"
	"testing"
)

// BenchmarkDetectMillion is one million points with few and with many peaks, detected and integrated.
func BenchmarkDetectMillion(b *testing.B) {
	const n = 1000000
	for _, peaks := range []int{100, 1000, 6000} {
		b.Run(fmt.Sprintf("points=%d/peaks=%d", n, peaks), func(b *testing.B) {
			c := made(n, 0.4/60, 1, 0, 0.05, seeded(1))
			for m := 100; m+150 < n; m += n / peaks {
				g := emg{1, c.TimeMin[m], 0.035, 0.015}
				for i := m - 60; i < m+120; i++ {
					c.Intensity[i] += g.at(c.TimeMin[i])
				}
			}
			for b.Loop() {
				r, err := Detect(c, demo)
				if err != nil {
					b.Fatal(err)
				}
				b.ReportMetric(float64(len(r.Peaks)), "peaks")
			}
		})
	}
}
