package decision

import (
	"testing"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
)

// TestSuitabilityLimits: a figure beyond the method's limit, or one that is missing, leaves the analyte not determined; a limit that is not
// stated is not applied; without a neighbour there is no resolution to judge.
func TestSuitabilityLimits(t *testing.T) {
	good := func(rec *evidence.Record) (analyte, standard *evidence.Suitability) {
		a := rec.Method.Analytes[0]
		x := func(v float64) *evidence.Extreme { return &evidence.Extreme{Value: v, Injection: rec.Injections[0].ID} }
		of := func(id string) evidence.Suitability {
			return evidence.Suitability{Compound: id, Injections: 9, RetentionDrift: ptr(-0.002), ResponseDrift: ptr(0.05), SymmetryLow: x(0.95), SymmetryTop: x(1.2), Plates: x(5000), Resolution: x(2),
				Replicates: []evidence.ReplicateGroup{{Role: casefile.Control, Level: "low", Injections: []string{"1", "2"}, ResponseSD: 0.03}}}
		}
		rec.Suitability = []evidence.Suitability{of(a.InternalStandard), of(a.ID)}
		return &rec.Suitability[1], &rec.Suitability[0]
	}
	limits := &casefile.SuitabilityLimits{RetentionDrift: ptr(0.01), ResponseDrift: ptr(0.2), ReplicateSD: ptr(0.05), Resolution: ptr(1.5), SymmetryLow: ptr(0.8), SymmetryHigh: ptr(1.8), Plates: ptr(3000.0)}
	for _, tt := range []struct {
		name   string
		limits *casefile.SuitabilityLimits
		change func(analyte, standard *evidence.Suitability)
		check  string // that fails; "" for none
	}{
		{"all good", limits, func(a, s *evidence.Suitability) {}, ""},
		{"no limits", nil, func(a, s *evidence.Suitability) { a.RetentionDrift = ptr(0.5) }, ""},
		{"retention", limits, func(a, s *evidence.Suitability) { s.RetentionDrift = ptr(-0.02) }, "retention-drift/"},
		{"response", limits, func(a, s *evidence.Suitability) { s.ResponseDrift = ptr(-0.3) }, "response-drift/"},
		{"replicates", limits, func(a, s *evidence.Suitability) { a.Replicates[0].ResponseSD = 0.06 }, "replicates/"},
		{"resolution", limits, func(a, s *evidence.Suitability) { a.Resolution.Value = 1.4 }, "resolution/"},
		{"no neighbour", limits, func(a, s *evidence.Suitability) { a.Resolution = nil }, ""},
		{"no replicates", limits, func(a, s *evidence.Suitability) { a.Replicates = nil }, ""},
		{"symmetry", limits, func(a, s *evidence.Suitability) { a.SymmetryTop.Value = 2 }, "symmetry-high/"},
		{"no plates", limits, func(a, s *evidence.Suitability) { a.Plates = nil }, "plates/"},
		{"no drift", limits, func(a, s *evidence.Suitability) { s.RetentionDrift = nil }, "retention-drift/"},
	} {
		rec := handmade()
		before := decide(t, rec, doping(t)).Analytes[0].Outcome
		a, s := good(rec)
		rec.Method.Suitability = tt.limits
		tt.change(a, s)
		f := decide(t, rec, doping(t))
		if tt.check == "" {
			if f.Analytes[0].Outcome != before {
				t.Errorf("%s: %s, want %s; not met: %v", tt.name, f.Analytes[0].Outcome, before, f.Analytes[0].Failed)
			}
			continue
		}
		of := s.Compound
		if tt.check == "replicates/" || tt.check == "resolution/" || tt.check == "symmetry-high/" || tt.check == "plates/" {
			of = a.Compound
		}
		if c := checkOf(t, f, a.Compound+"/suitability/"+tt.check+of); c.Result != Failed || !c.Required || f.Analytes[0].Outcome != NotDetermined {
			t.Errorf("%s: %+v, %s", tt.name, c, f.Analytes[0].Outcome)
		}
	}
}
