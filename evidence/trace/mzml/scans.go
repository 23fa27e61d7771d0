package mzml

import (
	"fmt"

	"assaywrit/evidence/trace"
)

// scans are the spectra of one file; see trace.Scans. Their arrays stay in the file until they are read.
type scans struct {
	list   []trace.Scan
	arrays []array // two for each: m/z, intensities
	from   decoder // name and source
}

func (l *scans) add(s trace.Scan, mz, intensity array) {
	l.list, l.arrays = append(l.list, s), append(l.arrays, mz, intensity)
}

func (l *scans) Len() int              { return len(l.list) }
func (l *scans) Scan(i int) trace.Scan { return l.list[i] }

func (l *scans) Open() trace.ScanReader {
	return &scanReader{l: l, d: decoder{name: l.from.name, src: l.from.src, latin1: l.from.latin1}}
}

type scanReader struct {
	l             *scans
	d             decoder
	mz, intensity []float64
}

// MZ refuses values that are not finite, below zero or out of order.
func (r *scanReader) MZ(i int) (_ []float64, err error) {
	a := &r.l.arrays[2*i]
	if r.mz, err = r.numbers(i, a, r.mz); err != nil || len(r.mz) == 0 {
		return nil, err
	}
	before := 0.0
	for k, v := range r.mz {
		if v < before {
			return nil, r.d.fail(a.at, fmt.Sprintf("m/z %g after %g at point %d of the spectrum %q", v, before, k+1, r.l.list[i].ID), "m/z from 0 that do not decrease", "export the file again, with the points in order of m/z")
		}
		before = v
	}
	return r.mz, nil
}

func (r *scanReader) Intensity(i int) (_ []float64, err error) {
	r.intensity, err = r.numbers(i, &r.l.arrays[2*i+1], r.intensity)
	return r.intensity, err
}

func (r *scanReader) numbers(i int, a *array, out []float64) ([]float64, error) {
	if r.l.list[i].Points == 0 {
		return out[:0], nil
	}
	out, err := r.d.read(a, out)
	if err != nil {
		return nil, err
	}
	if k := finite(out); k > 0 {
		return nil, r.d.fail(a.at, fmt.Sprintf("a value of %g at point %d of the spectrum %q", out[k-1], k, r.l.list[i].ID), "finite numbers", cutHint)
	}
	return out, nil
}
