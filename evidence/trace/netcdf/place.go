package netcdf

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// place works out where the values of each variable lie, and refuses places outside the file, in the header, or shared.
func (f *File) place(h *header) error {
	records := 0 // variables with records
	for i := range f.Variables {
		v := &f.Variables[i]
		if err := f.measure(v); err != nil {
			return err
		}
		if v.begin < h.at {
			return f.fail(fmt.Sprintf("the variable %.80q at byte %d, in the header", v.Name, v.begin), fmt.Sprintf("a place from byte %d on", h.at), copyHint)
		}
		if v.Record {
			records++
		}
	}
	recordSize, err := f.recordSize(records)
	if err != nil {
		return err
	}
	f.sizesStated(records)
	if h.streaming {
		f.stream(recordSize)
	}
	for i := range f.Dimensions {
		if f.Dimensions[i].Record {
			f.Dimensions[i].Length = f.Records
		}
	}
	for i := range f.Variables {
		v := &f.Variables[i]
		v.length = v.slab
		if v.Record {
			v.stride = recordSize
			if f.Records > 0 && (f.Records-1 > f.size/recordSize || v.begin > f.size) {
				return f.fail(fmt.Sprintf("%d records of %d bytes, counted at byte 4, in a file of %d bytes", f.Records, recordSize, f.size), "as many as the file holds", copyHint)
			}
			v.length = v.slab * f.Records
		}
		if v.length > 0 && (v.begin > f.size || v.end() > f.size) {
			return f.fail(fmt.Sprintf("the variable %.80q from byte %d on in a file of %d bytes", v.Name, v.begin, f.size), "values within the file", copyHint)
		}
	}
	return f.apart(recordSize)
}

// end is the offset after the last value.
func (v *Variable) end() int64 { return v.Offset(v.length-1) + v.Type.Size() }

// bytes is the size of what lies together.
func (v *Variable) bytes() int64 { return v.slab * v.Type.Size() }

// measure counts the values that lie together.
func (f *File) measure(v *Variable) error {
	v.slab = 1
	// Without records nothing of a record variable need be in the file: its size is then bounded by what can be counted.
	most := f.size
	if v.Record {
		most = math.MaxInt64 / 64
	}
	for _, d := range v.Dimensions {
		if f.Dimensions[d].Record {
			continue
		}
		n := f.Dimensions[d].Length
		if v.slab > most/v.Type.Size()/n {
			return f.fail(fmt.Sprintf("the variable %.80q, described at byte %d, with more than %d bytes", v.Name, v.at, most), fmt.Sprintf("values within the file of %d bytes", f.size), copyHint)
		}
		v.slab *= n
	}
	return nil
}

// recordSize is the number of bytes of one record: what each variable has in it, filled up to a multiple of four. A variable that is
// alone in the records is not filled up.
func (f *File) recordSize(records int) (int64, error) {
	size := int64(0)
	for i := range f.Variables {
		v := &f.Variables[i]
		if !v.Record {
			continue
		}
		n := v.bytes()
		if records > 1 {
			n = roundUp(n)
		}
		if n > math.MaxInt64/32-size {
			return 0, f.fail(fmt.Sprintf("records of more than %d bytes up to the variable %.80q, described at byte %d", int64(math.MaxInt64/32), v.Name, v.at), "records that a file can hold", copyHint)
		}
		size += n
	}
	return size, nil
}

// sizesStated compares the sizes in the header, which say nothing new.
func (f *File) sizesStated(records int) {
	for i := range f.Variables {
		v := &f.Variables[i]
		want := roundUp(v.bytes())
		tooLarge := f.Version != 5 && want > math.MaxUint32-3 && v.stated == math.MaxUint32
		unfilled := v.Record && records == 1 && v.stated == v.bytes()
		if v.stated != want && !tooLarge && !unfilled {
			f.warn("variable-size", fmt.Sprintf("the header gives the variable %.80q %d bytes, by its dimensions it has %d", v.Name, v.stated, want))
			return
		}
	}
}

// stream counts the records by the size of the file.
func (f *File) stream(recordSize int64) {
	first := f.firstRecord()
	if recordSize == 0 || first >= f.size {
		return
	}
	f.Records = (f.size - first) / recordSize
	if rest := (f.size - first) % recordSize; rest > 0 {
		f.warn("partial-record", fmt.Sprintf("%d bytes after the last whole record are left out", rest))
	}
}

// firstRecord is the offset of the first record.
func (f *File) firstRecord() int64 {
	first := int64(math.MaxInt64)
	for i := range f.Variables {
		if v := &f.Variables[i]; v.Record {
			first = min(first, v.begin)
		}
	}
	return first
}

// apart refuses values that two variables share.
func (f *File) apart(recordSize int64) error {
	type piece struct {
		from, to int64
		name     string
	}
	var fixed, inRecord []piece
	for i := range f.Variables {
		v := &f.Variables[i]
		switch p := (piece{v.begin, v.begin + v.bytes(), v.Name}); {
		case !v.Record:
			fixed = append(fixed, p)
		case f.Records > 0:
			inRecord = append(inRecord, p)
		}
	}
	overlap := func(list []piece) error {
		slices.SortStableFunc(list, func(a, b piece) int { return cmp.Compare(a.from, b.from) })
		for i := 1; i < len(list); i++ {
			if p := list[i-1]; list[i].from < p.to {
				return f.fail(fmt.Sprintf("the variables %.80q and %.80q both at byte %d", p.name, list[i].name, list[i].from), "values apart from each other", copyHint)
			}
		}
		return nil
	}
	if len(inRecord) > 0 {
		if err := overlap(inRecord); err != nil {
			return err
		}
		first, last := inRecord[0], inRecord[len(inRecord)-1]
		if last.to-first.from > recordSize {
			return f.fail(fmt.Sprintf("a record from byte %d to %d", first.from, last.to), fmt.Sprintf("one of %d bytes", recordSize), copyHint)
		}
		fixed = append(fixed, piece{first.from, last.to + (f.Records-1)*recordSize, first.name})
	}
	return overlap(fixed)
}
