package evidence

import (
	"math"

	"assaywrit/evidence/trace"
)

// storedMatch finds, in the peak table that the file brings along, the peak at the place of the one in use: its apex lies within
// the limits; of several, the nearest. It is compared and never used.
func storedMatch(stored []trace.StoredPeak, m *Measurement) *StoredMatch {
	p := m.Peak
	if p == nil {
		return nil
	}
	best := -1
	for i, s := range stored {
		if s.TraceID != m.TraceID || s.RetentionMin < p.StartMin || s.RetentionMin > p.EndMin {
			continue
		}
		if best < 0 || math.Abs(s.RetentionMin-p.ApexMin) < math.Abs(stored[best].RetentionMin-p.ApexMin) {
			best = i
		}
	}
	if best < 0 {
		return nil
	}
	s := stored[best]
	out := &StoredMatch{Index: best, ApexDifference: p.ApexMin - s.RetentionMin}
	if s.Area != nil && *s.Area != 0 {
		d := p.Area / *s.Area - 1
		out.AreaDifference = &d
	}
	if s.StartMin != nil {
		d := p.StartMin - *s.StartMin
		out.StartDifference = &d
	}
	if s.EndMin != nil {
		d := p.EndMin - *s.EndMin
		out.EndDifference = &d
	}
	return out
}
