package netcdf

import (
	"bufio"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"math"
	"reflect"
	"strings"
	"unicode"
	"unicode/utf8"
)

// A Dataset is what Write writes. Values are a string, []int8, []int16, []int32, []float32 or []float64, and give the type.
type Dataset struct {
	Dimensions []Dimension // Length of the record dimension is the number of records
	Attributes []NewAttribute
	Variables  []NewVariable
}

// A NewAttribute is an attribute to be written.
type NewAttribute struct {
	Name   string
	Values any
}

// A NewVariable is a variable to be written, with as many values as its dimensions ask for, the fastest dimension last.
type NewVariable struct {
	Name       string
	Dimensions []string
	Attributes []NewAttribute
	Values     any
}

// typeOf returns the type of values and how many there are; 0 for values that cannot be written.
func typeOf(values any) (Type, int) {
	switch v := values.(type) {
	case string:
		return Char, len(v)
	case []int8:
		return Byte, len(v)
	case []int16:
		return Short, len(v)
	case []int32:
		return Int, len(v)
	case []float32:
		return Float, len(v)
	case []float64:
		return Double, len(v)
	}
	return 0, 0
}

// Write writes a data set as CDF-1. Names must be such as Open accepts; values must be finite; nothing may lie beyond 2 GiB.
func Write(w io.Writer, d *Dataset) error {
	e := &encoder{d: d}
	if err := e.plan(); err != nil {
		return fmt.Errorf("netCDF: %w", err)
	}
	out := bufio.NewWriterSize(w, chunk)
	if _, err := out.Write(e.header); err != nil {
		return err
	}
	for _, p := range e.fixed {
		if err := p.write(out, 0, p.slab, true); err != nil {
			return err
		}
	}
	for r := range e.records {
		for _, p := range e.inRecord {
			if err := p.write(out, int(r)*p.slab, p.slab, len(e.inRecord) > 1); err != nil {
				return err
			}
		}
	}
	return out.Flush()
}

// A placed variable has its place in the file.
type placed struct {
	NewVariable
	kind   Type
	dims   []uint32
	slab   int // values that lie together
	record bool
}

func (p *placed) size(filled bool) int64 {
	n := int64(p.slab) * p.kind.Size()
	if filled {
		n = roundUp(n)
	}
	return n
}

// write writes n values from first on.
func (p *placed) write(w io.Writer, first, n int, filled bool) error {
	var err error
	if text, ok := p.Values.(string); ok {
		_, err = io.WriteString(w, text[first:first+n])
	} else {
		err = binary.Write(w, binary.BigEndian, reflect.ValueOf(p.Values).Slice(first, first+n).Interface())
	}
	if err == nil && filled {
		_, err = w.Write(make([]byte, p.size(true)-p.size(false)))
	}
	return err
}

type encoder struct {
	d               *Dataset
	records         int64
	fixed, inRecord []*placed
	header          []byte
}

func (e *encoder) number(n int64) {
	e.header = binary.BigEndian.AppendUint32(e.header, uint32(n))
}

func (e *encoder) name(s string) {
	e.number(int64(len(s)))
	e.header = append(e.header, s...)
	e.fill()
}

func (e *encoder) fill() {
	for len(e.header)%4 != 0 {
		e.header = append(e.header, 0)
	}
}

// list begins a list.
func (e *encoder) list(tag int64, n int) {
	if n == 0 {
		tag = 0
	}
	e.number(tag)
	e.number(int64(n))
}

func (e *encoder) attributes(list []NewAttribute) {
	e.list(attributeTag, len(list))
	for _, a := range list {
		kind, n := typeOf(a.Values)
		e.name(a.Name)
		e.number(int64(kind))
		e.number(int64(n))
		if text, ok := a.Values.(string); ok {
			e.header = append(e.header, text...)
		} else {
			e.header, _ = binary.Append(e.header, binary.BigEndian, a.Values)
		}
		e.fill()
	}
}

// plan checks everything and makes the header.
func (e *encoder) plan() error {
	all, err := e.check()
	if err != nil {
		return err
	}
	begin := e.encode(all, nil)
	offset := begin
	places := map[*placed]int64{}
	for _, p := range e.fixed {
		places[p] = offset
		offset += p.size(true)
	}
	record := int64(0)
	for _, p := range e.inRecord {
		places[p] = offset + record
		record += p.size(len(e.inRecord) > 1)
	}
	if record > 0 && e.records > (math.MaxInt32-offset)/record || offset > math.MaxInt32 {
		return errors.New("more than 2 GiB")
	}
	e.encode(all, places)
	return nil
}

// encode makes the header and returns its length, which does not depend on the places.
func (e *encoder) encode(all []*placed, places map[*placed]int64) int64 {
	e.header = append(e.header[:0], magic+"\x01"...)
	e.number(e.records)
	e.list(dimensionTag, len(e.d.Dimensions))
	for _, d := range e.d.Dimensions {
		e.name(d.Name)
		if d.Record {
			d.Length = 0
		}
		e.number(d.Length)
	}
	e.attributes(e.d.Attributes)
	e.list(variableTag, len(all))
	for _, p := range all {
		e.name(p.Name)
		e.number(int64(len(p.dims)))
		for _, d := range p.dims {
			e.number(int64(d))
		}
		e.attributes(p.Attributes)
		e.number(int64(p.kind))
		e.number(p.size(true))
		e.number(places[p])
	}
	return int64(len(e.header))
}

// check refuses what would not be read again.
func (e *encoder) check() ([]*placed, error) {
	dims, recordDim := map[string]int{}, -1
	seen := map[string]bool{}
	for i, d := range e.d.Dimensions {
		if err := checkName(d.Name, seen); err != nil {
			return nil, err
		}
		switch {
		case d.Length < 0 || d.Length > math.MaxInt32 || d.Length == 0 && !d.Record:
			return nil, fmt.Errorf("the dimension %q has the length %d", d.Name, d.Length)
		case d.Record && recordDim >= 0:
			return nil, fmt.Errorf("%q is a second record dimension", d.Name)
		case d.Record:
			recordDim, e.records = i, d.Length
		}
		dims[d.Name] = i
	}
	if err := checkAttributes(e.d.Attributes); err != nil {
		return nil, err
	}
	var all []*placed
	seen = map[string]bool{}
	for _, v := range e.d.Variables {
		if err := checkName(v.Name, seen); err != nil {
			return nil, err
		}
		if err := checkAttributes(v.Attributes); err != nil {
			return nil, fmt.Errorf("%q: %w", v.Name, err)
		}
		p := &placed{NewVariable: v, slab: 1}
		for i, name := range v.Dimensions {
			d, ok := dims[name]
			if !ok {
				return nil, fmt.Errorf("%q: no dimension %q", v.Name, name)
			}
			p.dims = append(p.dims, uint32(d))
			length := int(e.d.Dimensions[d].Length)
			switch {
			case d != recordDim && p.slab > math.MaxInt32/length:
				return nil, fmt.Errorf("%q: more than 2 GiB", v.Name)
			case d != recordDim:
				p.slab *= length
			case i > 0:
				return nil, fmt.Errorf("%q: the record dimension is not the first", v.Name)
			default:
				p.record = true
			}
		}
		n, want := 0, int64(p.slab)
		if p.kind, n = typeOf(v.Values); p.kind == 0 || !finite(v.Values) {
			return nil, fmt.Errorf("%q: values %T that cannot be written", v.Name, v.Values)
		}
		if p.record {
			want *= e.records
		}
		if int64(n) != want {
			return nil, fmt.Errorf("%q: %d values, its dimensions ask for %d", v.Name, n, want)
		}
		all = append(all, p)
		if p.record {
			e.inRecord = append(e.inRecord, p)
		} else {
			e.fixed = append(e.fixed, p)
		}
	}
	return all, nil
}

func checkName(name string, seen map[string]bool) error {
	if !validName(name) || seen[name] {
		return fmt.Errorf("the name %q is not valid, or there twice", name)
	}
	seen[name] = true
	return nil
}

// validName tells whether a name can be that of a dimension, a variable or an attribute.
func validName(name string) bool {
	return name != "" && utf8.ValidString(name) && !strings.ContainsFunc(name, func(c rune) bool { return unicode.IsControl(c) || c == '/' })
}

func checkAttributes(list []NewAttribute) error {
	seen := map[string]bool{}
	for _, a := range list {
		if err := checkName(a.Name, seen); err != nil {
			return err
		}
		if kind, _ := typeOf(a.Values); kind == 0 || !finite(a.Values) {
			return fmt.Errorf("attribute %q: values %T that cannot be written", a.Name, a.Values)
		}
	}
	return nil
}

func finite(values any) bool {
	switch v := values.(type) {
	case []float32:
		for _, y := range v {
			if math.IsNaN(float64(y)) || math.IsInf(float64(y), 0) {
				return false
			}
		}
	case []float64:
		for _, y := range v {
			if math.IsNaN(y) || math.IsInf(y, 0) {
				return false
			}
		}
	}
	return true
}
