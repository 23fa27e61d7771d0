package netcdf

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

// TestPublishedFiles compares with what another reader, checked against ncdump, found in files of other people.
func TestPublishedFiles(t *testing.T) {
	compared := 0
	for name, want := range expected(t) {
		if want.Version == 0 || strings.HasPrefix(name, "gcms-scan") {
			continue
		}
		f := open(t, name)
		odd := 0
		if name == "example_2.nc" { // has other bytes than zeros after names
			odd = 1
		}
		if f.Version != want.Version || len(f.Warnings) != odd || odd == 1 && f.Warnings[0].Code != "padding" {
			t.Errorf("%s: version %d, want %d; warnings %v", name, f.Version, want.Version, f.Warnings)
		}
		if want.Records != nil && *want.Records != f.Records {
			t.Errorf("%s: %d records, want %d", name, f.Records, *want.Records)
		}
		for i, d := range want.Dims {
			got := f.Dimensions[i]
			length := fmt.Sprint(got.Length)
			if got.Record {
				length = fmt.Sprint(d[1]) // the collection has either the count or nothing there
			}
			if got.Name != d[0] || length != fmt.Sprint(d[1]) {
				t.Errorf("%s: dimension %v, want %v", name, got, d)
			}
		}
		for global, text := range want.Global {
			if got := f.Attribute(global).Text(); got != strings.TrimRight(text, "\x00") {
				t.Errorf("%s: %s is %q, want %q", name, global, got, text)
			}
		}
		for variable, w := range want.Variables {
			v, got := f.Variable(variable), values(t, f, variable)
			if v.Type != w.Type || v.Len() != w.N || int64(len(got)) != w.N || !slices.Equal(got[:len(w.First)], w.First) {
				t.Errorf("%s: %s: %d of %s, %v, want %v", name, variable, len(got), v.Type, got[:len(w.First)], w)
			}
			compared++
		}
	}
	if compared < 7 {
		t.Errorf("only %d variables compared", compared)
	}
}

// TestVersions reads the same data as CDF-1, and as ncgen and nccopy of the format's own library write it as CDF-2 and CDF-5.
func TestVersions(t *testing.T) {
	want := open(t, "hplc-uv-a.cdf")
	for name, version := range map[string]byte{"hplc-uv-a.cdf2.cdf": 2, "hplc-uv-a.cdf5.cdf": 5} {
		f := open(t, name)
		if f.Version != version || len(f.Variables) != len(want.Variables) || fmt.Sprint(f.Attributes) != fmt.Sprint(want.Attributes) || fmt.Sprint(f.Dimensions) != fmt.Sprint(want.Dimensions) {
			t.Errorf("%s: not the same header", name)
		}
		for _, v := range want.Variables {
			if v.Type == Char {
				a, _ := want.Text(v.Name)
				if b, err := f.Text(v.Name); err != nil || !slices.Equal(a, b) || len(a) != 8 {
					t.Errorf("%s: %s: %q, %v, want %q", name, v.Name, b, err, a)
				}
			} else if !slices.Equal(values(t, f, v.Name), values(t, want, v.Name)) {
				t.Errorf("%s: %s differs", name, v.Name)
			}
		}
	}
}

// TestTypes reads a file made by ncgen from types.cdf5.cdl, which has the values.
func TestTypes(t *testing.T) {
	f := open(t, "types.cdf5.nc")
	const p53 = 1 << 53
	for name, want := range map[string][]float64{
		"b": {-128, 0, 127}, "ub": {0, 128, 255}, "s": {-32768, 0, 32767}, "us": {0, 32768, 65535}, "i": {-2147483648, 0, 2147483647}, "ui": {0, 2147483648, 4294967295},
		"l": {-p53, 0, p53}, "ul": {0, 1, p53}, "f": {-1.5, 0, float64(float32(3.25e38))}, "d": {-1e300, 0, 0.1},
		"rb": {1, -2, 3}, "rs": {1, 2, 3, 4, 5, 6, 7, 8, 9}, "rd": {0.5, 1.5, 2.5},
	} {
		if got := values(t, f, name); !slices.Equal(got, want) {
			t.Errorf("%s: got %v, want %v", name, got, want)
		}
	}
	if rows, err := f.Text("c"); err != nil || !slices.Equal(rows, []string{"abcde", "ab", ""}) {
		t.Errorf("got %q, %v", rows, err)
	}
	if got := f.Attribute("title").Text(); got != "every type of CDF-5" {
		t.Errorf("got %q", got)
	}
	if limits, err := f.Variable("ul").Attribute("limits").Floats(); err != nil || !slices.Equal(limits, []float64{1, p53}) {
		t.Errorf("got %v, %v", limits, err)
	}
	for name, want := range map[string]float64{"s": -1, "us": 65535, "i": -2147483647, "ui": 4294967295, "f": 9.9692099683868690e+36, "d": 9.9692099683868690e+36} {
		if fill, ok := f.Variable(name).Fill(); !ok || fill != want {
			t.Errorf("%s: fill value %v, %t, want %v", name, fill, ok, want)
		}
	}
	if _, ok := f.Variable("b").Fill(); ok {
		t.Error("a byte without _FillValue has a fill value")
	}
	if got := f.Shape(f.Variable("rs")); !slices.Equal(got, []int64{3, 3}) {
		t.Errorf("shape %v", got)
	}
	for name, want := range map[string]string{
		"big": "types.cdf5.nc: got the integer 9007199254740993, beyond 2^53 as value 2 of the variable \"big\" at byte ",
		"c":   `types.cdf5.nc: got text in the variable "c" at byte `, "none": "types.cdf5.nc: got no variable none, want one",
	} {
		if _, err := f.Floats(name); err == nil || !strings.HasPrefix(err.Error(), want) {
			t.Errorf("%s: got %v, want %s", name, err, want)
		}
	}
	if _, err := f.Text("d"); err == nil || !strings.Contains(err.Error(), "doubles in the variable") {
		t.Errorf("got %v", err)
	}
}

// TestSingleRecordVariable reads shorts that stand alone in the records, which nothing fills up to four bytes.
func TestSingleRecordVariable(t *testing.T) {
	f := open(t, "single_record.nc") // made by ncgen from single_record.cdl
	if got := values(t, f, "s"); !slices.Equal(got, []float64{1, 2, 3, 4, 5}) || f.Records != 5 {
		t.Errorf("got %v", got)
	}
	if got := values(t, f, "fixed"); !slices.Equal(got, []float64{7}) {
		t.Errorf("got %v", got)
	}
	if len(f.Warnings) > 0 {
		t.Error(f.Warnings)
	}
}

// TestStreaming takes the number of records out of files: the size of the file tells it.
func TestStreaming(t *testing.T) {
	for _, name := range []string{"example_1.nc", "single_record.nc", "gcms-scan-a.cdf.gz"} {
		want, data := open(t, name), contents(t, name)
		copy(data[4:], "\xff\xff\xff\xff")
		f, err := Open(name, bytes.NewReader(data))
		if err != nil || f.Records != want.Records {
			t.Fatalf("%s: %d records, %v", name, f.Records, err)
		}
		// gcms-scan-a.cdf has a byte too many of its own.
		if warned := len(f.Warnings) > 0; warned != (name == "gcms-scan-a.cdf.gz") {
			t.Errorf("%s: %v", name, f.Warnings)
		}
		f, err = Open(name, bytes.NewReader(append(data, 0)))
		if err != nil || f.Records != want.Records || len(f.Warnings) != 1 || f.Warnings[0].Code != "partial-record" {
			t.Errorf("%s with a byte more: %d records, %v", name, f.Records, err)
		}
	}
}

// TestRanges reads pieces of variables, in and out of sequence.
func TestRanges(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for _, name := range []string{"example_1.nc", "types.cdf5.nc", "single_record.nc", "gcms-scan-a.cdf.gz"} {
		f := open(t, name)
		for _, v := range f.Variables {
			if v.Type == Char || v.Name == "big" {
				continue
			}
			all := values(t, f, v.Name)
			c, err := f.Cursor(v.Name)
			if err != nil {
				t.Fatal(err)
			}
			next := int64(0)
			for range 200 {
				first := random.Int64N(v.Len() + 1)
				if random.IntN(2) == 0 {
					first = next
				}
				n := random.Int64N(min(v.Len()-first, 5000) + 1)
				want := all[first:][:n]
				dst := make([]float64, n)
				if err := c.Read(dst, first); err != nil || !slices.Equal(dst, want) {
					t.Fatalf("%s: %s: %d from %d on: %v", name, v.Name, n, first, err)
				}
				if got, err := f.FloatsRange(v.Name, first, n); err != nil || !slices.Equal(got, want) {
					t.Fatalf("%s: %s: %d from %d on: %v", name, v.Name, n, first, err)
				}
				next = first + n
			}
			for _, bad := range [][2]int64{{-1, 1}, {0, v.Len() + 1}, {v.Len(), 1}, {0, -1}, {1, math.MaxInt64}, {math.MaxInt64, 1}, {math.MinInt64, 1}} {
				if _, err := f.FloatsRange(v.Name, bad[0], bad[1]); err == nil {
					t.Errorf("%s: %v was read", v.Name, bad)
				}
			}
		}
	}
}

// TestLargeRecords reads records that are larger than what is read at once, several values of one variable in each.
func TestLargeRecords(t *testing.T) {
	const records, wide = 5, 3 * chunk / 4
	a, b, c := make([]float32, records*wide), make([]int16, records*3), make([]float64, records*2)
	for i := range a {
		a[i] = float32(i) / 3
	}
	for i := range b {
		b[i] = int16(1000 - i)
	}
	for i := range c {
		c[i] = float64(i) * math.Pi
	}
	for _, dims := range [][]string{{"r", "wide"}, {"r", "wide", "one"}} {
		f := written(t, &Dataset{
			Dimensions: []Dimension{{"r", records, true}, {"wide", wide, false}, {"one", 1, false}, {"three", 3, false}, {"two", 2, false}},
			Variables:  []NewVariable{{"b", []string{"r", "three"}, nil, b}, {"a", dims, nil, a}, {"c", []string{"r", "two"}, nil, c}},
		})
		for i, y := range values(t, f, "a") {
			if y != float64(a[i]) {
				t.Fatalf("value %d is %v, want %v", i, y, a[i])
			}
		}
		if got := values(t, f, "c"); !slices.Equal(got, c) {
			t.Errorf("got %v, want %v", got, c)
		}
		for i, y := range values(t, f, "b") {
			if y != float64(b[i]) {
				t.Errorf("value %d is %v, want %v", i, y, b[i])
			}
		}
	}
}

// TestNotFinite puts what is no number at each place of arrays of every length up to 9, in records and not.
func TestNotFinite(t *testing.T) {
	for _, record := range []bool{false, true} {
		for n := range 9 {
			for at := range n {
				for _, kind := range []Type{Float, Double} {
					for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
						short, long := make([]float32, n), make([]float64, n)
						for i := range n {
							short[i], long[i] = math.MaxFloat32, -math.MaxFloat64
						}
						d := &Dataset{Dimensions: []Dimension{{"n", int64(n), record}}, Variables: []NewVariable{{"y", []string{"n"}, nil, long}, {"z", []string{"n"}, nil, long}}}
						if kind == Float {
							d.Variables[0].Values = short
						}
						data := bytesOf(t, d)
						f, err := Open("f", bytes.NewReader(data))
						if err != nil {
							t.Fatal(err)
						}
						values(t, f, "y")
						offset := f.Variable("y").Offset(int64(at))
						put(data[offset:], kind, bad)
						_, err = f.Floats("y")
						want := fmt.Sprintf(`f: got %g as value %d of the variable "y" at byte %d, want a finite number, and no integer beyond 2^53`, bad, at+1, offset)
						if err == nil || err.Error() != want {
							t.Fatalf("got %v, want %s", err, want)
						}
					}
				}
			}
		}
	}
}

// failing is a source that fails after the header.
type failing struct {
	*bytes.Reader
	from int64
	err  error
}

func (s failing) ReadAt(b []byte, at int64) (int, error) {
	if at+int64(len(b)) > s.from {
		return 0, s.err
	}
	return s.Reader.ReadAt(b, at)
}

// TestSourceFails: what a disk says is passed on, and is not the file's fault.
func TestSourceFails(t *testing.T) {
	data := contents(t, "gcms-scan-a.cdf.gz")
	broken := errors.New("disk on fire")
	for err, want := range map[error]error{broken: broken, io.EOF: io.ErrUnexpectedEOF} {
		f, openErr := Open("f", failing{bytes.NewReader(data), 40000, err})
		if openErr != nil {
			t.Fatal(openErr)
		}
		_, err = f.Floats("mass_values")
		var syntax *trace.SyntaxError
		if !errors.Is(err, want) || errors.As(err, &syntax) {
			t.Errorf("got %v, want %v", err, want)
		}
		if _, err := Open("f", failing{bytes.NewReader(data), 2, broken}); !errors.Is(err, broken) {
			t.Errorf("got %v", err)
		}
	}
}
