package table

import (
	"bytes"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"testing"
)

// benchText is a table of so many traces, times with five decimals and counts.
func benchText(traces, points int) ([]byte, Layout) {
	layout := Layout{Separator: ',', DecimalMark: '.', TimeColumn: 1, TimeUnit: "min"}
	for i := range traces {
		layout.Columns = append(layout.Columns, Column{Column: i + 2, ID: fmt.Sprint(i)})
	}
	var text bytes.Buffer
	for k := range points {
		fmt.Fprintf(&text, "%.5f", 1+float64(k)/150)
		for i := range traces {
			fmt.Fprintf(&text, ",%d.%d", 1000+(k*7919+i)%100000, k%10)
		}
		text.WriteByte('\n')
	}
	return text.Bytes(), layout
}

// BenchmarkRead reads tables from the disk's cache (by=reader), beside reading the same bytes alone into memory at hand (by=disk) and into
// memory taken for them (by=disk-new).
func BenchmarkRead(b *testing.B) {
	for _, size := range []struct{ traces, points int }{{1, 500}, {4, 500_000}} {
		text, layout := benchText(size.traces, size.points)
		path := filepath.Join(b.TempDir(), "bench.csv")
		if err := os.WriteFile(path, text, 0o600); err != nil {
			b.Fatal(err)
		}
		buf := make([]byte, len(text))
		for by, read := range map[string]func(f *os.File) error{
			"reader": func(f *os.File) error {
				_, err := Read("bench.csv", io.NewSectionReader(f, 0, int64(len(text))), layout)
				return err
			},
			"disk":     func(f *os.File) error { _, err := f.ReadAt(buf, 0); return err },
			"disk-new": func(f *os.File) error { _, err := os.ReadFile(path); return err },
		} {
			b.Run(fmt.Sprintf("traces=%d/points=%d/by=%s", size.traces, size.points, by), func(b *testing.B) {
				b.SetBytes(int64(len(text)))
				b.ReportAllocs()
				for b.Loop() {
					f, err := os.Open(path)
					if err == nil {
						err = read(f)
						f.Close()
					}
					if err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}
