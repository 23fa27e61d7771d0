package table

import (
	"bytes"
	"fmt"
	"testing"
)

func BenchmarkRead(b *testing.B) {
	for _, size := range []struct{ chromatograms, points int }{{1, 500}, {10, 5000}} {
		b.Run(fmt.Sprintf("chromatograms=%d/points=%d", size.chromatograms, size.points), func(b *testing.B) {
			layout := Layout{Separator: ',', DecimalMark: '.', TimeColumn: 1, TimeUnit: "min"}
			for i := range size.chromatograms {
				layout.Columns = append(layout.Columns, Column{Column: i + 2, ID: fmt.Sprint(i)})
			}
			var text bytes.Buffer
			for k := range size.points {
				fmt.Fprintf(&text, "%.5f", 1+float64(k)/150)
				for i := range size.chromatograms {
					fmt.Fprintf(&text, ",%d", 100+(k*7919+i)%1000)
				}
				text.WriteByte('\n')
			}
			b.SetBytes(int64(text.Len()))
			b.ReportAllocs()
			for b.Loop() {
				if _, err := Read("bench.csv", bytes.NewReader(text.Bytes()), layout); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
