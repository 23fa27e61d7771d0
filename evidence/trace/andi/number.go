package andi

import (
	"fmt"
	"math"

	"assaywrit/evidence/trace/netcdf"
)

// unknown stands in files of both standards where a number is not known.
const unknown = -9999

func isText(v *netcdf.Variable) bool { return v.Type == netcdf.Char }

// A scale turns stored numbers into those that are meant: scale_factor and add_offset of a variable.
type scale struct{ factor, offset float64 }

// apply changes values in place. What is no longer finite is the place in v, or -1.
func (s scale) apply(v []float64) int {
	if s == (scale{1, 0}) {
		return -1
	}
	for i := range v {
		v[i] = float64(v[i]*s.factor) + s.offset
		if math.IsInf(v[i], 0) || math.IsNaN(v[i]) {
			return i
		}
	}
	return -1
}

// scaleOf reads the scale of a variable. Without the attributes numbers are meant as they are stored.
func (r *reader) scaleOf(v *netcdf.Variable) (scale, error) {
	s := scale{1, 0}
	for _, part := range []struct {
		name string
		to   *float64
	}{{"scale_factor", &s.factor}, {"add_offset", &s.offset}} {
		a := v.Attribute(part.name)
		if a == nil {
			continue
		}
		n, err := a.Floats()
		if err != nil || len(n) != 1 || part.to == &s.factor && n[0] == 0 {
			return s, r.fail(fmt.Sprintf("the attribute %s of %s with %d values of type %s", part.name, v.Name, a.Len(), a.Type), "one number, and no factor of 0", "")
		}
		*part.to = n[0]
	}
	return s, nil
}

// numbers are the values of a variable, scaled, and which of them are unknown: -9999, or what stands where nothing was written. nil
// without an error where there is no such variable.
func (r *reader) numbers(name string) (values []float64, missing func(i int) bool, err error) {
	v := r.nc.Variable(name)
	if v == nil {
		return nil, nil, nil
	}
	if values, err = r.nc.Floats(name); err != nil {
		return nil, nil, err
	}
	s, err := r.scaleOf(v)
	if err != nil {
		return nil, nil, err
	}
	fill, filled := v.Fill()
	var absent []bool
	for i, y := range values {
		if y == unknown || filled && y == fill {
			if absent == nil {
				absent = make([]bool, len(values))
			}
			absent[i] = true
		}
	}
	if i := s.apply(values); i >= 0 {
		return nil, nil, r.overflow(v, i)
	}
	return values, func(i int) bool { return absent != nil && absent[i] }, nil
}

func (r *reader) overflow(v *netcdf.Variable, i int) error {
	return r.fail(fmt.Sprintf("value %d of %s at byte %d that its scale_factor and add_offset make infinite", i+1, v.Name, v.Offset(int64(i))), "a finite number", "")
}

// known are the values of a variable that must be there with each value known. n is how many there must be; -1 for any number.
func (r *reader) known(name string, n int) ([]float64, error) {
	values, missing, err := r.numbers(name)
	switch {
	case err != nil:
		return nil, err
	case missing == nil:
		return nil, r.fail("no variable "+name, "the mandatory variables of the standard", "export the run again, with its raw data")
	case n >= 0 && len(values) != n:
		return nil, r.fail(fmt.Sprintf("%d values of %s", len(values), name), fmt.Sprint(n), "")
	}
	for i := range values {
		if missing(i) {
			v := r.nc.Variable(name)
			return nil, r.fail(fmt.Sprintf("value %d of %s at byte %d that was never written or is not known", i+1, name, v.Offset(int64(i))), "a measured value", "")
		}
	}
	return values, nil
}

// single is the only value of a variable that must be there.
func (r *reader) single(name string) (float64, error) {
	v, err := r.known(name, 1)
	if err != nil {
		return 0, err
	}
	return v[0], nil
}
