package evidence

import (
	"slices"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/strictmath"
)

// suitabilityAlgorithm names how drift over the batch is taken: the median of the slopes between all pairs of injections (P. K. Sen,
// J. Am. Stat. Assoc. 63 (1968) 1379, from memory), which one odd injection does not bend.
const suitabilityAlgorithm = "theil-sen-drift@1"

// A Suitability tells how one compound behaved on the system over the batch: in its quantifier, or an internal standard in its trace.
// Shares are of 1. What could not be worked out is absent.
type Suitability struct {
	Compound       string   `json:"compound"`
	Injections     int      `json:"injections"`                // with a peak, among those that should have one
	RetentionDrift *float64 `json:"retention_drift,omitempty"` // from the first to the last injection, of the median
	ResponseDrift  *float64 `json:"response_drift,omitempty"`  // of the area of an internal standard, likewise
	RetentionRSD   *float64 `json:"retention_relative_sd,omitempty"`

	Replicates []ReplicateGroup `json:"replicates,omitempty"` // injections of one role and level

	Resolution  *Extreme `json:"lowest_resolution,omitempty"` // to a neighbour found in the same trace
	SymmetryLow *Extreme `json:"lowest_symmetry,omitempty"`
	SymmetryTop *Extreme `json:"highest_symmetry,omitempty"`
	Plates      *Extreme `json:"lowest_plates,omitempty"`
}

// An Extreme is the lowest or highest of a figure, and the injection that shows it.
type Extreme struct {
	Value     float64 `json:"value"`
	Injection string  `json:"injection"`
}

// A ReplicateGroup is two or more injections of the same role and level.
type ReplicateGroup struct {
	Role       casefile.Role `json:"role"`
	Level      string        `json:"level"`
	Injections []string      `json:"injections"`
	ResponseSD float64       `json:"response_relative_sd"` // of the response (area over area of the internal standard; of an internal standard, its area)
}

// suitability works it out for every compound of the method, internal standards first.
func suitability(rec *Record) []Suitability {
	var list []Suitability
	for _, is := range rec.Method.InternalStandards {
		list = append(list, suitabilityOf(rec, is.ID, InternalStandardTrace, ""))
	}
	for _, a := range rec.Method.Analytes {
		list = append(list, suitabilityOf(rec, a.ID, QuantifierTrace, a.InternalStandard))
	}
	return list
}

// suited tells whether an injection should show a compound: everything with internal standard shows that; calibrators, controls of a
// stated amount show the analyte.
func suited(rec *Record, i int, compound, standard string) bool {
	switch rec.Injections[i].Role {
	case casefile.Calibrator, casefile.Control:
		return standard == "" || holds(rec.Sequence[i], compound)
	case casefile.SampleAliquot, casefile.ZeroCalibrator, casefile.NegativeControl:
		return standard == ""
	}
	return false
}

func suitabilityOf(rec *Record, compound, which, standard string) Suitability {
	out := Suitability{Compound: compound}
	var places, retention, area []float64
	groups := map[string]int{}
	var responses [][]float64
	for i := range rec.Injections {
		inj := &rec.Injections[i]
		p := inj.peakOf(compound, which)
		if p == nil || !suited(rec, i, compound, standard) {
			continue
		}
		out.Injections++
		places, retention, area = append(places, float64(i)), append(retention, p.ApexMin), append(area, p.Area)
		out.shape(p, inj.ID)
		response, ok := responseOf(inj, p, standard)
		if !ok || inj.Role == casefile.SampleAliquot {
			continue
		}
		key := string(inj.Role) + "/" + inj.Level
		g, seen := groups[key]
		if !seen {
			g = len(out.Replicates)
			groups[key] = g
			out.Replicates, responses = append(out.Replicates, ReplicateGroup{Role: inj.Role, Level: inj.Level}), append(responses, nil)
		}
		out.Replicates[g].Injections = append(out.Replicates[g].Injections, inj.ID)
		responses[g] = append(responses[g], response)
	}
	out.RetentionDrift = drift(places, retention)
	if standard == "" {
		out.ResponseDrift = drift(places, area)
	}
	out.RetentionRSD = relativeSD(retention)
	out.replicates(responses)
	return out
}

// responseOf is the area over that of the internal standard, or the area itself for an internal standard.
func responseOf(inj *Injection, p *peak.Peak, standard string) (float64, bool) {
	if standard == "" {
		return p.Area, p.Area > 0
	}
	is := inj.peakOf(standard, InternalStandardTrace)
	if is == nil || !(is.Area > 0) {
		return 0, false
	}
	return p.Area / is.Area, true
}

// replicates keeps the groups of two or more.
func (s *Suitability) replicates(responses [][]float64) {
	var kept []ReplicateGroup
	for g, r := range s.Replicates {
		if sd := relativeSD(responses[g]); sd != nil {
			r.ResponseSD = *sd
			kept = append(kept, r)
		}
	}
	s.Replicates = kept
}

// shape takes the extremes of the figures of merit.
func (s *Suitability) shape(p *peak.Peak, injection string) {
	lowest := func(slot **Extreme, v *float64) {
		if v != nil && (*slot == nil || *v < (*slot).Value) {
			*slot = &Extreme{*v, injection}
		}
	}
	lowest(&s.Resolution, p.ResolutionPre)
	lowest(&s.Resolution, p.ResolutionPos)
	lowest(&s.SymmetryLow, p.Symmetry)
	lowest(&s.Plates, p.Plates)
	if v := p.Symmetry; v != nil && (s.SymmetryTop == nil || *v > s.SymmetryTop.Value) {
		s.SymmetryTop = &Extreme{*v, injection}
	}
}

// drift is the change from the first to the last place by the median slope, as a share of the median value; nil for fewer than three.
func drift(places, values []float64) *float64 {
	if len(values) < 3 {
		return nil
	}
	var slopes []float64
	for i := range values {
		for k := range i {
			slopes = append(slopes, (values[i]-values[k])/(places[i]-places[k]))
		}
	}
	middle := median(slices.Clone(values))
	if !(middle > 0) {
		return nil
	}
	return ptr(median(slopes) * (places[len(places)-1] - places[0]) / middle)
}

// median sorts the values; of an even number it is the mean of the two in the middle.
func median(v []float64) float64 {
	slices.Sort(v)
	n := len(v)
	if n%2 == 1 {
		return v[n/2]
	}
	return v[n/2-1] + (v[n/2]-v[n/2-1])/2
}

// relativeSD is the sample standard deviation over the mean; nil for fewer than two values, or a mean that is not above zero.
func relativeSD(v []float64) *float64 {
	if len(v) < 2 {
		return nil
	}
	mean := strictmath.Mean(v)
	if !(mean > 0) {
		return nil
	}
	return ptr(strictmath.SD(v) / mean)
}
