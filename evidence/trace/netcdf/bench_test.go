package netcdf

import (
	"fmt"
	"os"
	"path/filepath"
	"testing"
	"time"
)

// BenchmarkFloats reads a variable of some megabytes from a file that the system has in its cache, and reports how long that takes
// against os.ReadFile of the same file: with a new array each time (Floats), and into one that is there (Cursor), in pieces.
func BenchmarkFloats(b *testing.B) {
	const n = 1 << 23
	short, long := make([]float32, n), make([]float64, n)
	for i := range short {
		short[i], long[i] = float32(i)/7, float64(i)/7
	}
	for _, tt := range []struct {
		name   string
		values any
		record bool
		size   int
	}{{"float32", short, false, 4}, {"float64", long, false, 8}, {"float32-records", short, true, 4}} {
		d := &Dataset{Dimensions: []Dimension{{"n", n, tt.record}}, Variables: []NewVariable{{"y", []string{"n"}, nil, tt.values}}}
		if tt.record {
			d.Variables = append(d.Variables, NewVariable{"z", []string{"n"}, nil, tt.values})
		}
		path := filepath.Join(b.TempDir(), "bench.nc")
		if err := os.WriteFile(path, bytesOf(b, d), 0o644); err != nil {
			b.Fatal(err)
		}
		var whole time.Duration // one os.ReadFile
		b.Run(fmt.Sprintf("os.ReadFile/type=%s/values=%d", tt.name, n), func(b *testing.B) {
			start := time.Now()
			for b.Loop() {
				data, err := os.ReadFile(path)
				if err != nil {
					b.Fatal(err)
				}
				b.SetBytes(int64(len(data)))
			}
			whole = time.Since(start) / time.Duration(b.N)
		})
		run := func(way string, read func(f *File) error) {
			b.Run(fmt.Sprintf("%s/type=%s/values=%d", way, tt.name, n), func(b *testing.B) {
				file, err := os.Open(path)
				if err != nil {
					b.Fatal(err)
				}
				defer file.Close()
				stat, err := file.Stat()
				if err != nil {
					b.Fatal(err)
				}
				b.SetBytes(int64(n * tt.size))
				start := time.Now()
				for b.Loop() {
					f, err := Open(path, sized{file, stat.Size()})
					if err != nil {
						b.Fatal(err)
					}
					if err := read(f); err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(float64(time.Since(start)/time.Duration(b.N))/float64(whole), "times-ReadFile")
			})
		}
		run("Floats", func(f *File) error {
			_, err := f.Floats("y")
			return err
		})
		dst := make([]float64, 1<<15)
		run("Cursor", func(f *File) error {
			c, err := f.Cursor("y")
			for first := int64(0); err == nil && first < n; first += int64(len(dst)) {
				err = c.Read(dst, first)
			}
			return err
		})
	}
}

// A sized file is a source.
type sized struct {
	*os.File
	size int64
}

func (s sized) Size() int64 { return s.size }
