package netcdf

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func bytesOf(t testing.TB, d *Dataset) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := Write(&b, d); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func written(t testing.TB, d *Dataset) *File {
	t.Helper()
	f, err := Open("written", bytes.NewReader(bytesOf(t, d)))
	if err != nil {
		t.Fatal(err)
	}
	if len(f.Warnings) > 0 {
		t.Error(f.Warnings)
	}
	return f
}

func put(b []byte, kind Type, v float64) {
	if kind == Float {
		binary.BigEndian.PutUint32(b, math.Float32bits(float32(v)))
	} else {
		binary.BigEndian.PutUint64(b, math.Float64bits(v))
	}
}

// everything has each type, as attribute, fixed and record variable.
func everything(records int64) *Dataset {
	n := int(records)
	return &Dataset{
		Dimensions: []Dimension{{"three", 3, false}, {"time", records, true}, {"width", 5, false}},
		Attributes: []NewAttribute{{"title", "a run"}, {"empty", ""}, {"bytes", []int8{-1, 2, 3}}, {"shorts", []int16{-300}}, {"ints", []int32{1 << 30, -5}}, {"floats", []float32{0.1}}, {"doubles", []float64{0.1, 1e300}}},
		Variables: []NewVariable{
			{"single", nil, []NewAttribute{{"units", "Seconds"}, {"µ", "odd name"}}, []float64{0.1}},
			{"bytes", []string{"three"}, nil, []int8{-128, 0, 127}},
			{"shorts", []string{"three"}, nil, []int16{-32768, 0, 32767}},
			{"ints", []string{"three"}, nil, []int32{-2147483648, 0, 7}},
			{"floats", []string{"three"}, nil, []float32{0.1, -2.5, math.MaxFloat32}},
			{"text", []string{"three", "width"}, nil, "alphabe\x00\x00\x00gamma"},
			{"recorded text", []string{"time"}, nil, strings.Repeat("x", n)},
			{"recorded shorts", []string{"time", "three"}, nil, make([]int16, 3*n)},
			{"recorded doubles", []string{"time"}, nil, slices.Repeat([]float64{0.25}, n)},
		},
	}
}

// TestWriteRead writes every type, and reads the same again.
func TestWriteRead(t *testing.T) {
	for _, records := range []int64{0, 1, 2, 7} {
		d := everything(records)
		f := written(t, d)
		if f.Version != 1 || f.Records != records || fmt.Sprint(f.Dimensions) != fmt.Sprint(d.Dimensions) {
			t.Errorf("got %v, want %v", f.Dimensions, d.Dimensions)
		}
		sameAttributes(t, f.Attributes, d.Attributes)
		for i, want := range d.Variables {
			v := &f.Variables[i]
			sameAttributes(t, v.Attributes, want.Attributes)
			if kind, n := typeOf(want.Values); v.Name != want.Name || v.Type != kind || v.Len() != int64(n) {
				t.Errorf("got %d %s %s, want %d %s %s", v.Len(), v.Type, v.Name, n, kind, want.Name)
			}
			if text, ok := want.Values.(string); ok {
				rows, err := f.Text(v.Name)
				if got := strings.Join(rows, ""); err != nil || got != strings.ReplaceAll(text, "\x00", "") {
					t.Errorf("%s: got %q, %v, want %q", v.Name, got, err, text)
				}
			} else if got := values(t, f, v.Name); !slices.Equal(got, floatsOf(want.Values)) {
				t.Errorf("%s: got %v, want %v", v.Name, got, want.Values)
			}
		}
	}
}

func sameAttributes(t *testing.T, got []Attribute, want []NewAttribute) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%d attributes, want %d", len(got), len(want))
	}
	for i, w := range want {
		a := &got[i]
		kind, n := typeOf(w.Values)
		if a.Name != w.Name || a.Type != kind || a.Len() != n {
			t.Errorf("got %d %s %s, want %d %s %s", a.Len(), a.Type, a.Name, n, kind, w.Name)
		}
		if text, ok := w.Values.(string); ok {
			if a.Text() != text {
				t.Errorf("%s: got %q, want %q", a.Name, a.Text(), text)
			}
			if _, err := a.Floats(); err == nil {
				t.Errorf("%s: text was read as numbers", a.Name)
			}
		} else if v, err := a.Floats(); err != nil || !slices.Equal(v, floatsOf(w.Values)) || a.Text() != "" {
			t.Errorf("%s: got %v, %v, want %v", a.Name, v, err, w.Values)
		}
	}
}

func floatsOf(values any) (f []float64) {
	switch v := values.(type) {
	case []int8:
		for _, y := range v {
			f = append(f, float64(y))
		}
	case []int16:
		for _, y := range v {
			f = append(f, float64(y))
		}
	case []int32:
		for _, y := range v {
			f = append(f, float64(y))
		}
	case []float32:
		for _, y := range v {
			f = append(f, float64(y))
		}
	case []float64:
		return v
	}
	return f
}

// TestWriteAsLibrary writes what ncgen wrote into single_record.nc, and compares byte for byte.
func TestWriteAsLibrary(t *testing.T) {
	got := bytesOf(t, &Dataset{Dimensions: []Dimension{{"record", 5, true}}, Variables: []NewVariable{
		{"s", []string{"record"}, nil, []int16{1, 2, 3, 4, 5}}, {"fixed", nil, nil, []int32{7}},
	}})
	if want := contents(t, "single_record.nc"); !bytes.Equal(got, want) {
		t.Errorf("got\n%x\nwant\n%x", got, want)
	}
}

// TestNcdump lets the format's own library read what Write wrote.
func TestNcdump(t *testing.T) {
	program, err := exec.LookPath("ncdump")
	if err != nil {
		if os.Getenv("CI") != "" {
			t.Fatal("ncdump is not installed, and nothing may be skipped here")
		}
		t.Skip("ncdump is not installed (Debian: netcdf-bin): not compared with the format's own library")
	}
	path := filepath.Join(t.TempDir(), "written.nc")
	if err := os.WriteFile(path, bytesOf(t, everything(2)), 0o644); err != nil {
		t.Fatal(err)
	}
	out, err := exec.Command(program, "-p", "9,17", path).CombinedOutput()
	if err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	text := strings.Join(strings.Fields(string(out)), " ")
	for _, want := range []string{
		"three = 3 ;", "time = UNLIMITED ; // (2 currently)", `:title = "a run" ;`, `:empty = "" ;`, ":bytes = -1b, 2b, 3b ;", ":shorts = -300s ;",
		":ints = 1073741824, -5 ;", ":floats = 0.100000001f ;", ":doubles = 0.10000000000000001, 1.0000000000000001e+300 ;",
		`single:units = "Seconds" ;`, "bytes = -128, 0, 127 ;", "shorts = -32768, 0, 32767 ;", "ints = -2147483648, 0, 7 ;", "floats = 0.100000001, -2.5, 3.40282347e+38 ;",
		`text = "alpha", "be", "gamma" ;`, `recorded\ text = "xx" ;`, `recorded\ doubles = 0.25, 0.25 ;`,
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %s in %s", want, out)
		}
	}
	sizes := exec.Command(program, "-k", path)
	if kind, err := sizes.Output(); err != nil || strings.TrimSpace(string(kind)) != "classic" {
		t.Errorf("%q, %v", kind, err)
	}
}

func TestWriteRefuses(t *testing.T) {
	for want, change := range map[string]func(d *Dataset){
		`the name "" is not valid`:                            func(d *Dataset) { d.Dimensions[0].Name = "" },
		`the name "three" is not valid, or there twice`:       func(d *Dataset) { d.Dimensions[2].Name = "three" },
		`the dimension "three" has the length 0`:              func(d *Dataset) { d.Dimensions[0].Length = 0 },
		`the dimension "three" has the length -3`:             func(d *Dataset) { d.Dimensions[0].Length = -3 },
		`"width" is a second record dimension`:                func(d *Dataset) { d.Dimensions[2].Record = true },
		`the name "title" is not valid, or there twice`:       func(d *Dataset) { d.Attributes[1].Name = "title" },
		`the name "a/b" is not valid`:                         func(d *Dataset) { d.Attributes[1].Name = "a/b" },
		`attribute "doubles": values []float64`:               func(d *Dataset) { d.Attributes[6].Values = []float64{math.NaN()} },
		`attribute "title": values []string`:                  func(d *Dataset) { d.Attributes[0].Values = []string{"a"} },
		`"single": values []float64`:                          func(d *Dataset) { d.Variables[0].Values = []float64{math.Inf(1)} },
		`"floats": values []float32`:                          func(d *Dataset) { d.Variables[4].Values = []float32{0, float32(math.NaN()), 1} },
		`"single": values []int64`:                            func(d *Dataset) { d.Variables[0].Values = []int64{1} },
		`"bytes": 2 values, its dimensions ask for 3`:         func(d *Dataset) { d.Variables[1].Values = []int8{1, 2} },
		`"recorded text": 3 values, its dimensions ask for 2`: func(d *Dataset) { d.Variables[6].Values = "xxx" },
		`"bytes": no dimension "four"`:                        func(d *Dataset) { d.Variables[1].Dimensions = []string{"four"} },
		`"bytes": the record dimension is not the first`:      func(d *Dataset) { d.Variables[1].Dimensions = []string{"three", "time"} },
		`"single": the name "\xff" is not valid`:              func(d *Dataset) { d.Variables[0].Attributes[0].Name = "\xff" },
		`the name "single" is not valid`:                      func(d *Dataset) { d.Variables[1].Name = "single" },
		`"bytes": more than 2 GiB`: func(d *Dataset) {
			d.Dimensions[0].Length = math.MaxInt32
			d.Variables[1].Dimensions = []string{"three", "width"}
		},
	} {
		d := everything(2)
		change(d)
		if err := Write(&bytes.Buffer{}, d); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %s", err, want)
		}
	}
}
