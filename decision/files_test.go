package decision

import (
	"testing"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

// TestRawFilesContradict: what disqualifies raw files makes every outcome not-determined and names its check; what only deserves a look
// does not.
func TestRawFilesContradict(t *testing.T) {
	for _, tt := range []struct {
		code, check string
		required    bool
	}{
		{evidence.SameFile, "case/raw-files-apart", true},
		{evidence.SameTraces, "case/raw-files-apart", true},
		{evidence.OtherCode, "case/sample-code-sequence", true},
		{evidence.OtherInstrument, "case/one-instrument", true},
		{evidence.OtherMethod, "case/one-instrument", true},
		{evidence.OtherStart, "case/start-times", false},
		{evidence.OtherSoftware, "case/one-software", false},
	} {
		rec := handmade()
		before := decide(t, rec, doping(t))
		rec.CrossChecks = []evidence.CrossCheck{{Code: tt.code, Injections: []string{rec.Injections[0].ID}, Detail: "detail"}}
		f := decide(t, rec, doping(t))
		if c := checkOf(t, f, tt.check); c.Result != Failed || c.Required != tt.required || len(c.Evidence) != 1 || c.Evidence[0] != "/cross_checks/0" {
			t.Errorf("%s: %+v", tt.code, c)
		}
		for k, a := range f.Analytes {
			if determined := a.Outcome != NotDetermined; determined == tt.required && before.Analytes[k].Outcome != NotDetermined {
				t.Errorf("%s: %s is %s", tt.code, a.Analyte, a.Outcome)
			}
		}
	}
}

// TestPeaksNotRecordedAsAWhole: a saturated or cut peak, or one with a gap, in a calibrator, a control or the sample, of the analyte or
// its internal standard, leaves the analyte not determined; in a blank it does not matter. Few points are only raised.
func TestPeaksNotRecordedAsAWhole(t *testing.T) {
	for _, role := range []casefile.Role{casefile.Calibrator, casefile.Control, casefile.SampleAliquot, casefile.MatrixBlank} {
		for _, fault := range []string{peak.FlagSaturated, peak.FlagCutAtEnd, evidence.GapInPeak, peak.FlagFewPoints, evidence.GapInTrace} {
			rec := handmade()
			m := firstMeasured(t, rec, role)
			if fault == evidence.GapInPeak || fault == evidence.GapInTrace {
				m.Warnings = append(m.Warnings, trace.Warning{Code: fault, Detail: "detail"})
			} else {
				m.Peak.Flags = append(m.Peak.Flags, fault)
			}
			analyte := m.Compound
			f := decide(t, rec, doping(t))
			fails := role != casefile.MatrixBlank && fault != peak.FlagFewPoints && fault != evidence.GapInTrace
			if c := checkOf(t, f, analyte+"/peaks-recorded"); (c.Result == Failed) != fails || !c.Required {
				t.Errorf("%s in a %s: %+v", fault, role, c)
			}
			raised := role != casefile.MatrixBlank && !fails
			if c := checkOf(t, f, analyte+"/trace-quality"); (c.Result == Failed) != raised || c.Required {
				t.Errorf("%s in a %s: %+v", fault, role, c)
			}
		}
	}
}

// firstMeasured is the first measurement of an analyte in an injection of a role, with a peak.
func firstMeasured(t *testing.T, rec *evidence.Record, role casefile.Role) *evidence.Measurement {
	t.Helper()
	for i := range rec.Injections {
		if rec.Injections[i].Role != role {
			continue
		}
		for k := range rec.Injections[i].Measurements {
			m := &rec.Injections[i].Measurements[k]
			if m.Trace != evidence.QuantifierTrace {
				continue
			}
			if m.Peak == nil {
				m.Peak = &peak.Peak{}
			}
			return m
		}
	}
	t.Fatalf("nothing was measured in a %s", role)
	return nil
}
