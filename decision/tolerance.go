package decision

import "math"

// A window is an accepted range, both ends included. What is shown of it may begin at a floor, below which no value can lie.
type window struct {
	low, high float64
	floor     *float64
}

// halfWidth is the tolerance either side of a reference: "greater-of" and "smaller-of" take the larger and the smaller of the
// absolute and the relative part.
func halfWidth(kind string, absolute, relative *float64, reference float64) float64 {
	a, r := math.Inf(1), math.Inf(1)
	if absolute != nil {
		a = *absolute
	}
	if relative != nil {
		r, _ = mul(*relative, math.Abs(reference))
	}
	switch kind {
	case "absolute":
		return a
	case "relative":
		return r
	case "greater-of":
		return max(a, r)
	case "smaller-of":
		return min(a, r)
	}
	panic("decision: internal error: tolerance of kind " + kind)
}

// around is the window about a reference. The ends are written in decimal, so that 0.60 ± 0.10 ends at exactly 0.7 and a value
// there is inside.
func around(reference, half float64) window {
	low, _ := sub(reference, half)
	high, _ := add(reference, half)
	return window{low: low, high: high}
}

func (w window) holds(v float64) bool { return v >= w.low && v <= w.high }

func (w window) shownLow() float64 {
	if w.floor != nil {
		return max(w.low, *w.floor)
	}
	return w.low
}

// distance is how far inside the window v lies, as a share of the half width: 1 at the centre, 0 at an end, negative outside.
func (w window) distance(v float64) float64 {
	half := (w.high - w.low) / 2
	if !(half > 0) {
		return 0
	}
	return 1 - math.Abs(v-(w.low+w.high)/2)/half
}

// bandFor returns the band of a reference abundance: the first, from the top, whose lower edge it lies above (or on, where the
// edge belongs to the band). The lowest band takes what is left.
func bandFor(bands []Band, reference float64) Band {
	for _, b := range bands {
		if reference > b.From || b.FromInclusive && reference == b.From {
			return b
		}
	}
	return bands[len(bands)-1]
}
