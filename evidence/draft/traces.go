package draft

import (
	"math"
	"slices"

	"assaywrit/evidence/trace"
)

// sameMZ is how far apart two m/z may lie that are taken for the same ion here, and for nothing else: the tolerance of the method is
// for a person to state.
const sameMZ = 0.3

// A reaction is a transition that every file recorded.
type reaction struct {
	trace.Transition
	height float64 // the highest points of its traces, summed over the files
	top    float64 // the highest of them
	topMin float64 // where it lies
	topIn  string  // in which file
}

// A compound is what was recorded of one precursor: the most abundant reaction first.
type compound struct{ reactions []reaction }

// reactionsOf lists the reactions of a file, each once.
func reactionsOf(f *trace.File) []trace.Transition {
	var list []trace.Transition
	for _, c := range f.Chromatograms {
		if t := c.Transition; t.PrecursorMZ > 0 && t.ProductMZ > 0 && !slices.Contains(list, t) {
			list = append(list, t)
		}
	}
	return list
}

func alike(a, b trace.Transition) bool {
	return a.Polarity == b.Polarity && math.Abs(a.PrecursorMZ-b.PrecursorMZ) <= sameMZ && math.Abs(a.ProductMZ-b.ProductMZ) <= sameMZ
}

// compoundsOf gathers the reactions that all files recorded, by precursor and polarity, in the order of the first file. rest are those
// that some files recorded and others did not.
func compoundsOf(raws []Raw) (list []compound, rest []trace.Transition) {
	own := make([][]trace.Transition, len(raws))
	for i, r := range raws {
		own[i] = reactionsOf(r.File)
	}
	var seen []trace.Transition
	for i := range raws {
		for _, t := range own[i] {
			known := func(o trace.Transition) bool { return alike(o, t) }
			if i > 0 && slices.ContainsFunc(seen, known) {
				continue
			}
			seen = append(seen, t)
			if slices.ContainsFunc(own, func(o []trace.Transition) bool { return !slices.ContainsFunc(o, known) }) {
				rest = append(rest, t)
			} else {
				list = into(list, measured(raws, t))
			}
		}
	}
	for _, c := range list {
		slices.SortStableFunc(c.reactions, func(a, b reaction) int {
			switch {
			case a.height > b.height:
				return -1
			case a.height < b.height:
				return 1
			}
			return 0
		})
	}
	return list, rest
}

// into puts a reaction to those of the same precursor.
func into(list []compound, r reaction) []compound {
	for i := range list {
		first := list[i].reactions[0]
		if first.Polarity == r.Polarity && math.Abs(first.PrecursorMZ-r.PrecursorMZ) <= sameMZ {
			list[i].reactions = append(list[i].reactions, r)
			return list
		}
	}
	return append(list, compound{[]reaction{r}})
}

// measured tells how high the traces of a reaction are.
func measured(raws []Raw, t trace.Transition) reaction {
	r := reaction{Transition: t}
	for _, raw := range raws {
		best := 0.0
		for _, c := range raw.File.Chromatograms {
			if c.Transition.ProductMZ == 0 || !alike(c.Transition, t) {
				continue
			}
			for i, y := range c.Intensity {
				best = max(best, y)
				if y > r.top {
					r.top, r.topMin, r.topIn = y, c.TimeMin[i], raw.Path
				}
			}
		}
		r.height += best
	}
	return r
}

// namesOf lists the traces without ions that all files have under the same name, of the kinds that are asked for.
func namesOf(raws []Raw, kinds ...trace.Kind) []string {
	has := func(f *trace.File, id string) bool {
		return slices.ContainsFunc(f.Chromatograms, func(c trace.Chromatogram) bool { return c.ID == id })
	}
	var list []string
	for _, c := range raws[0].File.Chromatograms {
		t := c.Transition
		if !slices.Contains(kinds, c.Kind) || t.PrecursorMZ > 0 && t.ProductMZ > 0 || !usable(c.ID) {
			continue
		}
		if !slices.ContainsFunc(raws, func(r Raw) bool { return !has(r.File, c.ID) }) {
			list = append(list, c.ID)
		}
	}
	return list
}

// scanned tells whether every file holds spectra.
func scanned(raws []Raw) bool {
	return !slices.ContainsFunc(raws, func(r Raw) bool { return r.File.Scans == nil || r.File.Scans.Len() == 0 })
}

// readable are the raw files that could be read.
func readable(raws []Raw) []Raw {
	var list []Raw
	for _, r := range raws {
		if r.File != nil {
			list = append(list, r)
		}
	}
	return list
}
