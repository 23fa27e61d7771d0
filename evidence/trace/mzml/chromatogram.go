package mzml

import (
	"fmt"
	"strconv"

	"assaywrit/evidence/trace"
)

// A chromatogram gathers one chromatogram element.
type chromatogram struct {
	c               trace.Chromatogram
	start           int    // of its tag
	length          int    // defaultArrayLength
	kind            string // accession
	selected        float64
	time, intensity *values
	auxiliary       string // what it records of the pump or the oven
}

// values is a decoded array.
type values struct {
	v  []float64
	at int
}

func (r *reader) startChromatogram(at int) error {
	s := r.s
	n, ok := count(s.attr("defaultArrayLength"))
	if !ok {
		return s.fail(at, fmt.Sprintf("defaultArrayLength %q", s.attr("defaultArrayLength")), "a number of points", "")
	}
	id := s.attr("id")
	if id == "" || r.ids[id] {
		return s.fail(at, fmt.Sprintf("the chromatogram id %q", id), "an id that no other chromatogram has", "")
	}
	r.ids[id], r.order = true, append(r.order, id)
	r.index.begins(at, false, id)
	r.chrom = &chromatogram{c: trace.Chromatogram{ID: id, Kind: trace.Other}, start: at, length: n}
	return nil
}

// count reads a number of points.
func count(text string) (int, bool) {
	n, err := strconv.ParseUint(text, 10, 31)
	return int(n), err == nil
}

// term applies a term of the chromatogram itself.
func (c *chromatogram) term(s *scanner, t term, at int) error {
	polarity := map[string]trace.Polarity{accNegative: trace.Negative, accPositive: trace.Positive}[t.accession]
	kind, isKind := kindsByAccession[t.accession]
	switch {
	case polarity != "":
		if old := c.c.Transition.Polarity; old != "" && old != polarity {
			return s.fail(at, fmt.Sprintf("the polarities %s and %s in the chromatogram %q", old, polarity, c.c.ID), "one", "")
		}
		c.c.Transition.Polarity = polarity
	case isKind:
		if c.kind != "" && c.kind != t.accession {
			return s.fail(at, fmt.Sprintf("the chromatogram types %s and %s in the chromatogram %q", c.kind, t.accession, c.c.ID), "one", "")
		}
		c.kind, c.c.Kind = t.accession, kind
	}
	return nil
}

// ion applies a term of a precursor or product. The target of the isolation counts; the selected ion stands in where it is missing.
func (c *chromatogram) ion(s *scanner, t term, of string, at int) error {
	if t.accession != accTarget && t.accession != accSelected {
		return nil
	}
	slot := &c.selected
	switch {
	case t.accession == accSelected:
	case of == "product":
		slot = &c.c.Transition.ProductMZ
	default:
		slot = &c.c.Transition.PrecursorMZ
	}
	return setMZ(s, slot, t.value, of, func() string { return fmt.Sprintf("the chromatogram %q", c.c.ID) }, at)
}

// setMZ takes an m/z that is stated of a precursor or product, once; 0 means that it is not stated.
func setMZ(s *scanner, slot *float64, text, of string, where func() string, at int) error {
	mz, ok := trace.Decimal(text)
	if !ok || mz < 0 || mz > 1e6 {
		return s.fail(at, fmt.Sprintf("m/z %q in %s", text, where()), "a decimal number from 0 (not stated) to 1000000", "")
	}
	if *slot != 0 && *slot != mz {
		return s.fail(at, fmt.Sprintf("the m/z %g and %g for one %s of %s", *slot, mz, of, where()), "one", "")
	}
	*slot = mz
	return nil
}

// take decodes an array of the open chromatogram; those that are neither times nor intensities are left alone.
func (r *reader) take(b *described) error {
	c := r.chrom
	slot := &c.intensity
	switch contents[b.content] {
	case intensityContent:
		c.c.Unit = b.unitOf()
	case timeContent:
		slot = &c.time
	default:
		if name, known := auxiliaryArrays[b.content]; known {
			c.auxiliary = name
		}
		return nil
	}
	if *slot != nil {
		return r.s.fail(b.at, fmt.Sprintf("a second array of one kind in the chromatogram %q", c.c.ID), "one time and one intensity array", "")
	}
	a, err := b.array(r.s, c.length)
	if err != nil {
		return err
	}
	if r.left -= 8 * int64(a.n); r.left < 0 {
		return r.s.fail(b.at, "chromatograms that take far more memory than the file", fmt.Sprintf("at most %d bytes of numbers", trace.Budget(r.s.src)), "export the file again without compression of its arrays")
	}
	v, err := r.decode.decode(&a, b.held, nil)
	if err != nil {
		return err
	}
	*slot = &values{v, b.at}
	return nil
}

func (r *reader) endChromatogram(c *chromatogram) error {
	s := r.s
	switch {
	case c.intensity == nil && c.auxiliary != "":
		r.file.Warnings = append(r.file.Warnings, trace.Warning{Code: "chromatogram-passed-over", Detail: fmt.Sprintf("%q records a %s, not a detector: it is not read", c.c.ID, c.auxiliary)})
		return nil
	case c.time != nil && c.intensity != nil:
		c.c.TimeMin, c.c.Intensity = c.time.v, c.intensity.v
	case c.length > 0 || c.time != nil || c.intensity != nil:
		return s.fail(c.start, fmt.Sprintf("the chromatogram %q without its time or intensity array", c.c.ID), "both", cutHint)
	}
	if b := c.c.Check(); b != nil {
		at := c.time.at
		if b.InIntensity {
			at = c.intensity.at
		}
		return s.fail(at, fmt.Sprintf("%s at point %d of the chromatogram %q", b.Got, b.Point, c.c.ID), b.Want, exportHint)
	}
	if c.c.Transition.PrecursorMZ == 0 {
		c.c.Transition.PrecursorMZ = c.selected
	}
	r.file.Chromatograms = append(r.file.Chromatograms, c.c)
	return nil
}
