package netcdf

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"runtime"
	"strings"
	"testing"

	"assaywrit/evidence/trace"
)

// A raw header is put together word by word, for what Write does not write.
type raw struct{ bytes.Buffer }

func (r *raw) words(n ...uint32) *raw {
	for _, w := range n {
		r.Write(binary.BigEndian.AppendUint32(nil, w))
	}
	return r
}

func (r *raw) name(s string) *raw {
	r.words(uint32(len(s)))
	r.WriteString(s)
	r.Write(make([]byte, roundUp(int64(len(s)))-int64(len(s))))
	return r
}

func begin(version byte) *raw {
	r := &raw{}
	r.WriteString("CDF")
	r.WriteByte(version)
	return r
}

// TestRefused lists headers that claim what cannot be, each with its message.
func TestRefused(t *testing.T) {
	none := []uint32{0, 0}
	two := func(a, b string, place uint32) *raw { // two variables of two ints each
		return begin(1).words(0, dimensionTag, 1).name("n").words(2).words(none...).words(variableTag, 2).
			name(a).words(1, 0, 0, 0, 4, 8).words(place).name(b).words(1, 0, 0, 0, 4, 8)
	}
	long := strings.Repeat("x", 40)
	for want, r := range map[string]*raw{
		`"" at byte 0`:        {},
		`"CD" at byte 0`:      {*bytes.NewBufferString("CD")},
		`"<?xm" at byte 0`:    {*bytes.NewBufferString("<?xml")},
		"version 3 at byte 3": begin(3).words(0),
		"got an HDF5 file (netCDF-4), by its signature at byte 0, ":                  {*bytes.NewBufferString(hdf5Magic)},
		"got an HDF5 file (netCDF-4), by its signature at byte 1024, ":               {*bytes.NewBufferString(strings.Repeat("u", 1024) + hdf5Magic)},
		"a number of records of 4 bytes with 0 bytes left in the file at byte 4":     begin(1),
		"a number of -2 records at byte 4":                                           begin(1).words(0xfffffffe),
		"2147483647 dimensions in a header with 3 bytes left at byte 8":              {*bytes.NewBuffer(append(begin(1).words(0, dimensionTag, 1<<31-1).Bytes(), 1, 2, 3))},
		"a number of dimensions of -2147483648 at byte 12":                           begin(1).words(0, dimensionTag, 1<<31),
		"the tag 12 with a number of 0 at byte 8":                                    begin(1).words(0, attributeTag, 0),
		"the tag 0 with a number of 1 at byte 8":                                     begin(1).words(0, 0, 1),
		"2147483647 attributes in a header with 0 bytes left at byte 16":             begin(1).words(0, 0, 0, attributeTag, 1<<31-1),
		"2147483647 variables in a header with 0 bytes left at byte 24":              begin(1).words(0, 0, 0, 0, 0, variableTag, 1<<31-1),
		"9223372036854775807 variables in a header with 0 bytes left at byte 36":     begin(5).words(0, 0, 0, 0, 0, 0, 0, 0, variableTag, 1<<31-1, 1<<32-1),
		`the name "" of a dimension at byte 20`:                                      begin(1).words(0, dimensionTag, 1).name("").words(0, 0, 0, 0),
		`the name "a\x00b" of a dimension at byte 20`:                                begin(1).words(0, dimensionTag, 1).name("a\x00b").words(0),
		`the name "\xff" of a dimension at byte 20`:                                  begin(1).words(0, dimensionTag, 1).name("\xff").words(0),
		"a length of a name of -1 at byte 16":                                        begin(1).words(0, dimensionTag, 1).words(1<<32-1, 0, 0),
		"a name of 2147483647 bytes with 8 bytes left in the file at byte 20":        begin(1).words(0, dimensionTag, 1).words(1<<31-1, 0, 0),
		`the name "n" of a dimension again at byte 32`:                               begin(1).words(0, dimensionTag, 2).name("n").words(2).name("n").words(2),
		`a second record dimension, "m", at byte 36`:                                 begin(1).words(0, dimensionTag, 2).name("n").words(0).name("m").words(0),
		"a length of a dimension of -5 at byte 24":                                   begin(1).words(0, dimensionTag, 1).name("n").words(1<<32 - 5),
		"the type 0 at byte 32":                                                      begin(1).words(0, 0, 0, attributeTag, 1).name("a").words(0, 0, 0),
		"the type 7 at byte 32":                                                      begin(2).words(0, 0, 0, attributeTag, 1).name("a").words(7, 0, 0),
		"the type 12 at byte 48":                                                     begin(5).words(0, 0, 0, 0, 0, attributeTag, 0, 1, 0).name("abcd").words(12, 0, 0, 0),
		"1073741824 values of an attribute in a header with 0 bytes left at byte 36": begin(1).words(0, 0, 0, attributeTag, 1).name("a").words(6, 1<<30),
		"a number of values of -1 at byte 36":                                        begin(1).words(0, 0, 0, attributeTag, 1).name("a").words(6, 1<<32-1),
		`the name "a" of an attribute of the file again at byte 48`:                  begin(1).words(0, 0, 0, attributeTag, 2).name("a").words(2, 1, 0).name("a").words(2, 0),
		"3 dimensions of a variable in a header with 11 bytes left":                  {*bytes.NewBuffer(append(begin(1).words(0, 0, 0, 0, 0, variableTag, 1).name(long).words(3, 0, 0).Bytes(), 1, 2, 3))},
		`dimension 0 of the variable "` + long + `" at byte 80`:                      begin(1).words(0, 0, 0, 0, 0, variableTag, 1).name(long).words(1, 0, 0),
		`the record dimension after another in the variable "v"`:                     begin(1).words(0, dimensionTag, 2).name("n").words(2).name("r").words(0).words(none...).words(variableTag, 1).name("v").words(2, 0, 1, 0, 0, 4, 8, 0),
		`the offset -1 of the variable "v"`:                                          begin(1).words(0, 0, 0, 0, 0, variableTag, 1).name("v").words(0, 0, 0, 4, 4, 1<<32-1),
		`the variable "v" at byte 59, in the header`:                                 begin(1).words(0, 0, 0, 0, 0, variableTag, 1).name("v").words(0, 0, 0, 4, 4, 59, 0, 0),
		`the variable "v" from byte 72 on in a file of 72 bytes`:                     begin(1).words(0, 0, 0, 0, 0, variableTag, 1).name("v").words(0, 0, 0, 4, 4, 72, 0, 0),
		`the variable "v" from byte 9223372036854775807 on in a file of 76 bytes`:    begin(2).words(0, 0, 0, 0, 0, variableTag, 1).name("v").words(0, 0, 0, 4, 4, 1<<31-1, 1<<32-1, 0, 0),
		`the variable "v" from byte 66 on in a file of 68 bytes`:                     begin(1).words(0, 0, 0, 0, 0, variableTag, 1).name("v").words(0, 0, 0, 4, 4, 66, 0),
		`the name "v" of a variable again`:                                           two("v", "v", 116).words(116),
		`the variables "v" and "w" both at byte 120`:                                 two("v", "w", 116).words(120, 0, 0, 0, 0, 0),
		`the variables "w" and "v" both at byte 124`:                                 two("v", "w", 124).words(120, 0, 0, 0, 0, 0),
		`the variable "v", described at byte 44, with more than 84 bytes`:            begin(1).words(0, dimensionTag, 1).name("n").words(1<<30).words(none...).words(variableTag, 1).name("v").words(1, 0, 0, 0, 4, 8, 88, 0),
		"1000 records of 4 bytes, counted at byte 4, in a file of 84 bytes":          begin(1).words(1000, dimensionTag, 1).name("r").words(0).words(none...).words(variableTag, 1).name("v").words(1, 0, 0, 0, 4, 4, 80, 7),
		`the variable "v" from byte 80 on in a file of 84 bytes`:                     begin(1).words(2, dimensionTag, 1).name("r").words(0).words(none...).words(variableTag, 1).name("v").words(1, 0, 0, 0, 4, 4, 80, 7),
	} {
		_, err := Open("f", bytes.NewReader(r.Bytes()))
		var syntax *trace.SyntaxError
		if !errors.As(err, &syntax) || !strings.Contains(err.Error(), want) || syntax.Want == "" {
			t.Errorf("%d bytes: got %v, want %s", r.Len(), err, want)
		} else if strings.Contains(want, "HDF5") && !strings.Contains(syntax.Hint, "nccopy -k classic in.cdf out.cdf") {
			t.Errorf("the advice is %q", syntax.Hint)
		}
	}
}

// TestSharedRecords refuses variables that share bytes of the records, or of one and the values before.
func TestSharedRecords(t *testing.T) {
	good := bytesOf(t, &Dataset{Dimensions: []Dimension{{"r", 2, true}}, Variables: []NewVariable{
		{"a", []string{"r"}, nil, []int32{1, 2}}, {"b", []string{"r"}, nil, []int32{3, 4}}, {"c", nil, nil, []int32{5}},
	}})
	f, err := Open("f", bytes.NewReader(good))
	if err != nil {
		t.Fatal(err)
	}
	first := f.Variable("c").begin
	for want, change := range map[string]func(at map[string]int64){
		fmt.Sprintf(`the variables "a" and "b" both at byte %d`, first+4): func(at map[string]int64) { at["b"] = first + 4 },
		fmt.Sprintf(`the variables "a" and "c" both at byte %d`, first+8): func(at map[string]int64) { at["c"] = first + 8 },
		fmt.Sprintf(`a record from byte %d to %d`, first+4, first+15):     func(at map[string]int64) { at["b"] = first + 11 },
	} {
		at := map[string]int64{"a": first + 4, "b": first + 8, "c": first}
		change(at)
		data := bytes.Clone(good)
		for name, place := range at {
			old := binary.BigEndian.AppendUint32(nil, uint32(f.Variable(name).begin))
			i := bytes.Index(data[f.Variable(name).at:], old)
			binary.BigEndian.PutUint32(data[int(f.Variable(name).at)+i:], uint32(place))
		}
		data = append(data, make([]byte, 20)...)
		if _, err := Open("f", bytes.NewReader(data)); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %s", err, want)
		}
	}
}

// TestCutAnywhere cuts good files at every byte: no beginning is opened, except where nothing but filling is cut off.
func TestCutAnywhere(t *testing.T) {
	for _, name := range []string{"example_1.nc", "types.cdf5.nc", "single_record.nc", "example_2.nc"} {
		data := contents(t, name)
		f := open(t, name)
		end := int64(0)
		for i := range f.Variables {
			end = max(end, f.Variables[i].end())
		}
		for n := range data {
			_, err := Open(name, bytes.NewReader(data[:n]))
			if (err == nil) != (int64(n) >= end) {
				t.Fatalf("%s: the first %d bytes, of which %d are values: %v", name, n, end, err)
			}
		}
	}
}

// TestClaimsCostNothing opens files of a few bytes that claim billions of things.
func TestClaimsCostNothing(t *testing.T) {
	claims := begin(1).words(0, dimensionTag, 1).name("n").words(1<<31-1).words(0, 0).words(variableTag, 1<<31-1).Bytes()
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	for range 100 {
		if _, err := Open("f", bytes.NewReader(claims)); err == nil {
			t.Fatal("was opened")
		}
	}
	runtime.ReadMemStats(&after)
	if spent := (after.TotalAlloc - before.TotalAlloc) / 100; spent > 1<<16 {
		t.Errorf("%d bytes were allocated", spent)
	}
	if _, err := Open("f", io.NewSectionReader(bytes.NewReader(claims), 0, 1<<40)); !errors.Is(err, io.ErrUnexpectedEOF) {
		t.Errorf("a source that lies about its size: %v", err)
	}
}

func TestMarks(t *testing.T) {
	for head, want := range map[string][2]bool{
		"CDF\x01": {true, false}, "CDF\x02....": {true, false}, "CDF\x05": {true, false}, "CDF\x03": {}, "CDF": {}, "": {}, hdf5Magic: {false, true},
		strings.Repeat(" ", 512) + hdf5Magic: {false, true}, strings.Repeat(" ", 2048) + hdf5Magic: {false, true}, strings.Repeat(" ", 1536) + hdf5Magic: {}, hdf5Magic[:7]: {},
	} {
		if got := [2]bool{IsClassic([]byte(head)), IsHDF5([]byte(head))}; got != want {
			t.Errorf("%q: %v, want %v", head, got, want)
		}
	}
}

// TestWarnings changes what a header says twice, and what it does not say at all.
func TestWarnings(t *testing.T) {
	good := bytesOf(t, &Dataset{Dimensions: []Dimension{{"n", 2, false}}, Variables: []NewVariable{{"v", []string{"n"}, nil, []int32{1, 2}}}})
	for at, want := range map[int]string{22: "padding", len(good) - 8 - 5: "variable-size"} {
		data := bytes.Clone(good)
		data[at] ^= 1
		f, err := Open("f", bytes.NewReader(data))
		if err != nil || len(f.Warnings) != 1 || f.Warnings[0].Code != want {
			t.Errorf("got %v, %v, want %s", f, err, want)
		}
	}
}
