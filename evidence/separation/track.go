package separation

import (
	"fmt"
	"math"
	"slices"
)

// How peaks were followed from run to run.
const (
	TrackByName = "by-name@1" // a person has named them
	TrackByArea = "by-area@1" // by the order of their areas, which do not change with the composition
)

// apart is how far two areas of one run must lie from each other, as a share of the larger, to tell the peaks by them.
const apart = 0.15

// track follows every compound through all runs. Peaks are told by their names where all have one; otherwise by their areas, of which no two
// of a run may be alike: then there is nothing to tell the peaks by, and a person has to name them.
func track(runs []Run) (string, []Compound, error) {
	named, unnamed := 0, 0
	for _, r := range runs {
		for _, p := range r.Peaks {
			if p.Compound == "" {
				unnamed++
			} else {
				named++
			}
		}
	}
	switch {
	case named > 0 && unnamed > 0:
		return "", nil, &Error{"", fmt.Sprintf("%d peaks with a name and %d without", named, unnamed), "names for all peaks, or for none"}
	case named > 0:
		list, err := byName(runs)
		return TrackByName, list, err
	}
	list, err := byArea(runs)
	return TrackByArea, list, err
}

func byName(runs []Run) ([]Compound, error) {
	var list []Compound
	for i, r := range runs {
		seen := map[string]bool{}
		for _, p := range r.Peaks {
			if seen[p.Compound] {
				return nil, &Error{r.Name, fmt.Sprintf("the compound %q twice", p.Compound), "each once"}
			}
			seen[p.Compound] = true
			k := slices.IndexFunc(list, func(c Compound) bool { return c.Name == p.Compound })
			if i == 0 {
				list = append(list, Compound{Name: p.Compound})
				k = len(list) - 1
			}
			if k < 0 {
				return nil, &Error{r.Name, fmt.Sprintf("the compound %q, which run %s does not have", p.Compound, runs[0].Name), "the same compounds in every run"}
			}
			list[k].RetentionMin = append(list[k].RetentionMin, p.RetentionMin)
		}
		for _, c := range list {
			if !seen[c.Name] {
				return nil, &Error{r.Name, fmt.Sprintf("no peak of %q", c.Name), "the same compounds in every run"}
			}
		}
	}
	return list, nil
}

// byArea ranks the peaks of each run by area; those of one rank are one compound, named after its place in the first run.
func byArea(runs []Run) ([]Compound, error) {
	var list []Compound
	var first []float64 // share of the area of each rank in the first run
	for i, r := range runs {
		if len(r.Peaks) != len(runs[0].Peaks) {
			return nil, &Error{r.Name, fmt.Sprintf("%d peaks", len(r.Peaks)), fmt.Sprintf("%d, as in run %s; or names, where peaks fall together", len(runs[0].Peaks), runs[0].Name)}
		}
		order := make([]int, len(r.Peaks))
		for k := range order {
			order[k] = k
		}
		slices.SortStableFunc(order, func(a, b int) int { return int(math.Copysign(1, r.Peaks[b].Area-r.Peaks[a].Area)) })
		for k := 1; k < len(order); k++ {
			if big, small := r.Peaks[order[k-1]].Area, r.Peaks[order[k]].Area; small > float64((1-apart)*big) {
				return nil, &Error{r.Name, fmt.Sprintf("the areas %g and %g at %g and %g min", big, small, r.Peaks[order[k-1]].RetentionMin, r.Peaks[order[k]].RetentionMin),
					"areas that differ by 15 %, or names for the peaks"}
			}
		}
		if i == 0 {
			list = make([]Compound, len(order))
		}
		for rank, k := range order {
			share, before := r.Peaks[k].Area/total(r), 0.0
			if i > 0 {
				before = first[rank]
				if math.Abs(share-before) > float64(apart*before) {
					return nil, &Error{r.Name, fmt.Sprintf("%.3g %% of the area in the peak at %g min", float64(100*share), r.Peaks[k].RetentionMin),
						fmt.Sprintf("%.3g %% to within 15 %%, as of %s in run %s; or names: peaks may fall together", float64(100*before), list[rank].Name, runs[0].Name)}
				}
			} else {
				first = append(first, share)
			}
			if i == 0 {
				list[rank].Name = fmt.Sprintf("peak %d", k+1)
			}
			list[rank].RetentionMin = append(list[rank].RetentionMin, r.Peaks[k].RetentionMin)
		}
	}
	return list, nil
}

func total(r Run) float64 {
	sum := 0.0
	for _, p := range r.Peaks {
		sum += p.Area
	}
	return sum
}
