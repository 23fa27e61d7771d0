package mzml

import (
	"fmt"
	"strconv"

	"assaywrit/evidence/trace"
)

// A chromatogram gathers one chromatogram element.
type chromatogram struct {
	c          trace.Chromatogram
	start      int // of its tag
	length     int // defaultArrayLength
	time, ints *values
}

// values is a decoded array.
type values struct {
	v  []float64
	at int
}

func (r *reader) startChromatogram(at int) error {
	s := r.s
	n, err := strconv.Atoi(s.attr("defaultArrayLength"))
	if err != nil || n < 0 {
		return s.fail(at, fmt.Sprintf("defaultArrayLength %q", s.attr("defaultArrayLength")), "a number of points", "")
	}
	id := s.attr("id")
	if id == "" || r.ids[id] {
		return s.fail(at, fmt.Sprintf("the chromatogram id %q", id), "an id that no other chromatogram has", "")
	}
	if r.ids == nil {
		r.ids = map[string]bool{}
	}
	r.ids[id] = true
	r.chrom = &chromatogram{c: trace.Chromatogram{ID: id, Kind: trace.Other}, start: at, length: n}
	return nil
}

// term applies a vocabulary term of the chromatogram, its precursor or its product.
func (c *chromatogram) term(r *reader, t term, at int) error {
	switch t.accession {
	case accNegative:
		c.c.Transition.Polarity = trace.Negative
	case accPositive:
		c.c.Transition.Polarity = trace.Positive
	case accTarget, accSelected:
		mz, err := strconv.ParseFloat(t.value, 64)
		if err != nil || !(mz >= 0) || mz > 1e6 {
			return r.s.fail(at, fmt.Sprintf("m/z %q", t.value), "a number of at least 0 (0: not stated)", "")
		}
		switch {
		case r.within("product"):
			c.c.Transition.ProductMZ = mz
		case r.within("precursor") && (t.accession == accTarget || c.c.Transition.PrecursorMZ == 0):
			c.c.Transition.PrecursorMZ = mz
		}
	default:
		if kind, ok := kindsByAccession[t.accession]; ok {
			c.c.Kind = kind
		}
	}
	return nil
}

// take decodes an array of this chromatogram; arrays other than time and intensity are left alone.
func (c *chromatogram) take(s *scanner, b *binaryArray) error {
	var slot **values
	switch b.content {
	case accTime:
		slot = &c.time
	case accIntensity:
		slot = &c.ints
	default:
		return nil
	}
	if *slot != nil {
		return s.fail(b.at, "a second array of one kind", "one time and one intensity array", "")
	}
	v, err := b.decode(s, c.length)
	if err != nil {
		return err
	}
	*slot = &values{v, b.at}
	return nil
}

func (r *reader) endChromatogram(c *chromatogram) error {
	s := r.s
	if c.time == nil || c.ints == nil {
		if c.length == 0 {
			r.file.Chromatograms = append(r.file.Chromatograms, c.c)
			return nil
		}
		return s.fail(c.start, fmt.Sprintf("the chromatogram %q without a time or an intensity array", c.c.ID), "both", "")
	}
	c.c.TimeMin, c.c.Intensity = c.time.v, c.ints.v
	if i, got, want := c.c.Check(); want != "" {
		return s.fail(c.time.at, fmt.Sprintf("%s at point %d of the chromatogram %q", got, i+1, c.c.ID), want, "points must be in acquisition order and whole: export the run again")
	}
	if c.c.Kind == trace.SIM && c.c.Transition.ProductMZ > 0 {
		c.c.Kind = trace.SRM
	}
	r.file.Chromatograms = append(r.file.Chromatograms, c.c)
	return nil
}
