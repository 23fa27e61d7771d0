// Package netcdf reads files in the classic netCDF format: CDF-1, CDF-2 (64-bit offsets) and CDF-5 (64-bit data); and writes CDF-1.
//
// Opening a file reads its header alone: dimensions, attributes and the places of the variables, all checked against the size of the
// file before anything is allocated. The values of a variable are read when they are asked for, whole or in part, as float64.
// Values are handed out as they are stored: scale_factor, add_offset and fill values are left to the caller. Values that are not
// finite are refused. netCDF-4, which is HDF5 inside, is refused by name.
//
// Errors are a *trace.SyntaxError where the file is at fault; Got names the byte, counted from 0.
//
// Source: Unidata, NetCDF Classic Format Specification, with the CDF-5 extension (from memory).
package netcdf

import (
	"bytes"
	"fmt"

	"assaywrit/evidence/trace"
)

// A Dimension has a length; that of the record dimension grows with the file.
type Dimension struct {
	Name   string
	Length int64 // of the record dimension: the number of records
	Record bool
}

// A Variable is an array of values of one type.
type Variable struct {
	Name       string
	Type       Type
	Dimensions []int // places in File.Dimensions, the slowest first
	Attributes []Attribute
	Record     bool // whether the first dimension is the record dimension

	begin  int64 // offset of the first value in the file
	slab   int64 // values that lie together: all, or those of one record
	length int64 // values in all
	stride int64 // bytes from one record to the next
	stated int64 // size in bytes as the header has it
	at     int64 // offset of the description in the header
}

// Len is the number of values, over all dimensions.
func (v *Variable) Len() int64 { return v.length }

// Offset is the place in the file of value i, counted from 0 as all offsets are.
func (v *Variable) Offset(i int64) int64 {
	return v.begin + i/v.slab*v.stride + i%v.slab*v.Type.Size()
}

// Attribute returns the attribute of that name, or nil.
func (v *Variable) Attribute(name string) *Attribute { return find(v.Attributes, name) }

// Fill is the value that stands where nothing was written: the attribute _FillValue, or the format's own value for the type. Without
// the attribute it is not known (ok is false) for bytes and characters, where every value may be meant, and for 64-bit integers.
func (v *Variable) Fill() (value float64, ok bool) {
	if a := v.Attribute("_FillValue"); a != nil {
		if n, err := a.Floats(); err == nil && len(n) == 1 {
			return n[0], true
		}
		return 0, false
	}
	t := types[v.Type]
	return t.fill, t.has
}

// A File is an opened file. It may be used by several goroutines at once.
type File struct {
	Name       string
	Version    byte // 1, 2 or 5
	Records    int64
	Dimensions []Dimension
	Attributes []Attribute // of the file as a whole
	Variables  []Variable
	Warnings   []trace.Warning

	src    trace.Source
	size   int64
	byName map[string]int
}

// Variable returns the variable of that name, or nil.
func (f *File) Variable(name string) *Variable {
	if i, ok := f.byName[name]; ok {
		return &f.Variables[i]
	}
	return nil
}

// Attribute returns the attribute of that name of the file as a whole, or nil.
func (f *File) Attribute(name string) *Attribute { return find(f.Attributes, name) }

// Shape is the lengths of the dimensions of a variable, the slowest first; empty for a single value.
func (f *File) Shape(v *Variable) []int64 {
	var shape []int64
	for _, d := range v.Dimensions {
		shape = append(shape, f.Dimensions[d].Length)
	}
	return shape
}

// fail makes an error about the file.
func (f *File) fail(got, want, hint string) error {
	return &trace.SyntaxError{File: f.Name, Got: got, Want: want, Hint: hint}
}

const (
	magic     = "CDF"
	hdf5Magic = "\x89HDF\r\n\x1a\n"
	copyHint  = "the file may be cut or damaged; copy it again, or export the run again"
	hdf5Hint  = "convert the file with: nccopy -k classic in.cdf out.cdf"
)

// IsClassic tells whether a file begins as one of the classic formats that are read.
func IsClassic(head []byte) bool {
	return len(head) >= 4 && string(head[:3]) == magic && (head[3] == 1 || head[3] == 2 || head[3] == 5)
}

// IsHDF5 tells whether a file is HDF5 by its first bytes: its signature stands at 0, 512, 1024, 2048, and so on.
func IsHDF5(head []byte) bool {
	for at := 0; at < len(head); at = max(512, 2*at) {
		if bytes.HasPrefix(head[at:], []byte(hdf5Magic)) {
			return true
		}
	}
	return false
}

// Open reads the header of a file. The source is kept for the values.
func Open(name string, src trace.Source) (*File, error) {
	f := &File{Name: name, src: src, size: src.Size(), byName: map[string]int{}}
	h := &header{f: f, padding: -1}
	if err := h.magic(); err != nil {
		return nil, err
	}
	if err := h.lists(); err != nil {
		return nil, err
	}
	if h.padding >= 0 {
		f.warn("padding", fmt.Sprintf("the padding at byte %d of the header is not zero", h.padding))
	}
	if err := f.place(h); err != nil {
		return nil, err
	}
	return f, nil
}

func (f *File) warn(code, detail string) {
	f.Warnings = append(f.Warnings, trace.Warning{Code: code, Detail: detail})
}
