package netcdf

import "fmt"

// The tags before the three lists of a header.
const (
	dimensionTag = 10
	variableTag  = 11
	attributeTag = 12
)

// lists reads the number of records and the three lists that follow it.
func (h *header) lists() error {
	f := h.f
	at := h.at
	n, err := h.signed(f.Version == 5, "a number of records")
	if err != nil {
		return err
	}
	switch {
	case n == -1:
		h.streaming = true
	case n < 0:
		return h.fail(at, fmt.Sprintf("a number of %d records", n), "a number that is not negative, or -1")
	default:
		f.Records = n
	}
	if err := h.dimensions(); err != nil {
		return err
	}
	if f.Attributes, err = h.attributes("an attribute of the file"); err != nil {
		return err
	}
	return h.variables()
}

func (h *header) dimensions() error {
	n, err := h.count(dimensionTag, 2*h.word()+4, "dimensions")
	if err != nil {
		return err
	}
	seen, record := map[string]bool{}, false
	for range n {
		var d Dimension
		if d.Name, err = h.name("a dimension", seen); err != nil {
			return err
		}
		at := h.at
		if d.Length, err = h.number("a length of a dimension"); err != nil {
			return err
		}
		if d.Length == 0 {
			if record {
				return h.fail(at, fmt.Sprintf("a second record dimension, %.80q,", d.Name), "at most one")
			}
			d.Record, record = true, true
		}
		h.f.Dimensions = append(h.f.Dimensions, d)
	}
	return nil
}

func (h *header) kind() (Type, error) {
	at := h.at
	n, err := h.uint32("a type")
	if t := Type(n); err != nil || t.valid(h.f.Version) {
		return t, err
	}
	return 0, h.fail(at, fmt.Sprintf("the type %d", n), fmt.Sprintf("a type of version %d of the format", h.f.Version))
}

func (h *header) attributes(what string) ([]Attribute, error) {
	n, err := h.count(attributeTag, 2*h.word()+8, "attributes")
	if err != nil || n == 0 {
		return nil, err
	}
	var list []Attribute
	seen := map[string]bool{}
	for range n {
		var a Attribute
		if a.Name, err = h.name(what, seen); err != nil {
			return nil, err
		}
		if a.Type, err = h.kind(); err != nil {
			return nil, err
		}
		at := h.at
		values, err := h.number("a number of values")
		if err != nil {
			return nil, err
		}
		if err := h.fits(at, values, a.Type.Size(), "values of an attribute"); err != nil {
			return nil, err
		}
		raw, err := h.padded(values*a.Type.Size(), "an attribute")
		if err != nil {
			return nil, err
		}
		a.raw = append([]byte(nil), raw...)
		list = append(list, a)
	}
	return list, nil
}

func (h *header) variables() error {
	n, err := h.count(variableTag, 4*h.word()+16, "variables")
	if err != nil {
		return err
	}
	seen := map[string]bool{}
	for range n {
		v, err := h.variable(seen)
		if err != nil {
			return err
		}
		h.f.byName[v.Name] = len(h.f.Variables)
		h.f.Variables = append(h.f.Variables, v)
	}
	return nil
}

func (h *header) variable(seen map[string]bool) (v Variable, err error) {
	v.at = h.at
	if v.Name, err = h.name("a variable", seen); err != nil {
		return v, err
	}
	at := h.at
	n, err := h.number("a number of dimensions")
	if err != nil {
		return v, err
	}
	if err := h.fits(at, n, h.word(), "dimensions of a variable"); err != nil {
		return v, err
	}
	for i := range n {
		at := h.at
		d, err := h.number("a place of a dimension")
		switch {
		case err != nil:
			return v, err
		case d >= int64(len(h.f.Dimensions)):
			return v, h.fail(at, fmt.Sprintf("dimension %d of the variable %.80q", d, v.Name), fmt.Sprintf("one of the %d of the file, counted from 0", len(h.f.Dimensions)))
		case h.f.Dimensions[d].Record && i > 0:
			return v, h.fail(at, fmt.Sprintf("the record dimension after another in the variable %.80q", v.Name), "the record dimension first")
		case h.f.Dimensions[d].Record:
			v.Record = true
		}
		v.Dimensions = append(v.Dimensions, int(d))
	}
	if v.Attributes, err = h.attributes("an attribute of a variable"); err != nil {
		return v, err
	}
	if v.Type, err = h.kind(); err != nil {
		return v, err
	}
	if h.f.Version == 5 {
		v.stated, err = h.number("a size")
	} else {
		var size uint32 // not signed: sizes that do not fit are 2^32 - 1
		size, err = h.uint32("a size")
		v.stated = int64(size)
	}
	if err != nil {
		return v, err
	}
	at = h.at
	if v.begin, err = h.signed(h.f.Version != 1, "an offset"); err != nil {
		return v, err
	}
	if v.begin < 0 {
		return v, h.fail(at, fmt.Sprintf("the offset %d of the variable %.80q", v.begin, v.Name), "one that is not negative")
	}
	return v, nil
}
