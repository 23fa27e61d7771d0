package decision

import (
	"fmt"
	"math"

	"assaywrit/evidence"
)

// suitability holds the system's figures against the limits that the method states, for the analyte and its internal standard.
func (b *batchJudge) suitability() {
	limits := b.rec.Method.Suitability
	if limits == nil {
		return
	}
	for _, compound := range []string{methodOf(b.rec, b.a.ID).InternalStandard, b.a.ID} {
		k := -1
		for i := range b.rec.Suitability {
			if b.rec.Suitability[i].Compound == compound {
				k = i
			}
		}
		s, at := &evidence.Suitability{Compound: compound}, "/suitability"
		if k >= 0 {
			s, at = &b.rec.Suitability[k], fmt.Sprintf("/suitability/%d", k)
		}
		b.drifts(s, at, compound == b.a.ID)
		b.shapes(s, at)
	}
}

func (b *batchJudge) startSuitability(compound, name, title, at string, present bool, key string) Check {
	return b.start("suitability/"+name+"/"+compound, title, true, field(at, key, present)).byMethod(b.rec, "suitability")
}

func (b *batchJudge) drifts(s *evidence.Suitability, at string, analyte bool) {
	l := b.rec.Method.Suitability
	if l.RetentionDrift != nil {
		b.add(b.startSuitability(s.Compound, "retention-drift", "Drift of retention", at, s.RetentionDrift != nil, "retention_drift").
			atMost(magnitude(s.RetentionDrift), *l.RetentionDrift, percent, "The drift of retention of "+s.Compound+" over the batch"))
	}
	if l.ResponseDrift != nil && !analyte {
		b.add(b.startSuitability(s.Compound, "response-drift", "Drift of the response", at, s.ResponseDrift != nil, "response_drift").
			atMost(magnitude(s.ResponseDrift), *l.ResponseDrift, percent, "The drift of the area of "+s.Compound+" over the batch"))
	}
	if l.ReplicateSD == nil || !analyte {
		return
	}
	c := b.startSuitability(s.Compound, "replicates", "Agreement of replicate injections", at, len(s.Replicates) > 0, "replicates")
	if len(s.Replicates) == 0 {
		b.add(c.notApplicable("No level of calibrators or controls was injected twice."))
		return
	}
	worst := s.Replicates[0]
	for _, r := range s.Replicates {
		if r.ResponseSD > worst.ResponseSD {
			worst = r
		}
	}
	b.add(c.atMost(&worst.ResponseSD, *l.ReplicateSD, percent, fmt.Sprintf("Of %s the largest relative standard deviation, that of %s %s,", plural(len(s.Replicates), "group"), worst.Role, worst.Level)))
}

func magnitude(v *float64) *float64 {
	if v == nil {
		return nil
	}
	m := math.Abs(*v)
	return &m
}

// shapes: a resolution needs a neighbour; without one there is nothing to be separated from.
func (b *batchJudge) shapes(s *evidence.Suitability, at string) {
	l := b.rec.Method.Suitability
	least := func(name, title, key, what string, e *evidence.Extreme, limit *float64, alone bool) {
		if limit == nil {
			return
		}
		c := b.startSuitability(s.Compound, name, title, at, e != nil, key)
		if e == nil && alone && s.Injections > 0 {
			b.add(c.notApplicable("No neighbour of " + s.Compound + " was found in its trace."))
			return
		}
		b.add(c.atLeast(valueOf(e), *limit, ratio, what+" of "+s.Compound+in(e)))
	}
	least("resolution", "Resolution from neighbours", "lowest_resolution", "The lowest resolution", s.Resolution, l.Resolution, true)
	least("symmetry-low", "Symmetry of the peaks", "lowest_symmetry", "The lowest symmetry factor", s.SymmetryLow, l.SymmetryLow, false)
	if l.SymmetryHigh != nil {
		b.add(b.startSuitability(s.Compound, "symmetry-high", "Symmetry of the peaks", at, s.SymmetryTop != nil, "highest_symmetry").
			atMost(valueOf(s.SymmetryTop), *l.SymmetryHigh, ratio, "The highest symmetry factor of "+s.Compound+in(s.SymmetryTop)))
	}
	least("plates", "Plate number", "lowest_plates", "The lowest plate number", s.Plates, l.Plates, false)
}

func valueOf(e *evidence.Extreme) *float64 {
	if e == nil {
		return nil
	}
	return &e.Value
}

func in(e *evidence.Extreme) string {
	if e == nil {
		return ""
	}
	return ", in injection " + e.Injection + ","
}
