package mzml

import "fmt"

// A term is a cvParam: a word of a vocabulary, by its accession.
type term struct{ accession, name, value, unit string }

// maxGroupTerms bounds what one reference can bring along.
const maxGroupTerms = 256

// said is what a term states: its value where it has one ("instrument model: such and such"), its name otherwise. The general
// terms state nothing by their name.
func (t term) said() string {
	switch {
	case t.value != "":
		return t.value
	case t.accession == accModel || t.accession == accTool:
		return ""
	}
	return t.name
}

func (r *reader) beginGroup(at int) error {
	id := r.s.attr("id")
	if _, twice := r.groups[id]; id == "" || twice {
		return r.s.fail(at, fmt.Sprintf("the parameter group id %q", id), "an id that no other group has", "")
	}
	r.group, r.groups[id] = id, nil
	return nil
}

// useGroup applies the terms of a group where it is referred to.
func (r *reader) useGroup(at int) error {
	ref := r.s.attr("ref")
	terms, known := r.groups[ref]
	if !known || ref == r.group {
		return r.s.fail(at, fmt.Sprintf("a reference to the parameter group %q", ref), "the id of a referenceableParamGroup before it", "")
	}
	for _, t := range terms {
		if err := r.param(t, at); err != nil {
			return err
		}
	}
	return nil
}

// param applies a term to the element in which it, or the reference to its group, stands.
func (r *reader) param(t term, at int) error {
	holder, outer := r.above(1), r.above(2)
	switch {
	case r.group != "":
		if len(r.groups[r.group]) == maxGroupTerms {
			return r.s.fail(at, fmt.Sprintf("a parameter group with more than %d terms", maxGroupTerms), "fewer", "")
		}
		r.groups[r.group] = append(r.groups[r.group], t)
	case holder == "binaryDataArray" && r.binary != nil:
		return r.binary.term(r.s, t, at)
	case holder == "chromatogram":
		return r.chrom.term(r.s, t, at)
	case r.spec != nil:
		if holder == "selectedIon" {
			outer = r.above(3)
		}
		return r.spec.term(r.s, t, holder, outer, at)
	case r.chrom != nil && (holder == "isolationWindow" || holder == "selectedIon"):
		if holder == "selectedIon" {
			outer = r.above(3)
		}
		return r.chrom.ion(r.s, t, outer, at)
	case holder == "software" || holder == "instrumentConfiguration":
		r.header.term(t, holder)
	}
	return nil
}
