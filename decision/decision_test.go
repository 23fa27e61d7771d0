package decision

import (
	"encoding/json"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"testing/fstest"

	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/simulate/demo"
)

func ptr[T any](v T) *T { return &v }

// exampleRecord is the record of the demonstration case, made anew so that a test may change it.
func exampleRecord(t testing.TB) *evidence.Record {
	t.Helper()
	files, err := demo.Files()
	if err != nil {
		t.Fatal(err)
	}
	m := fstest.MapFS{}
	for _, f := range files {
		m[f.Path] = &fstest.MapFile{Data: f.Data}
	}
	folder, err := casefile.Load(m)
	if err != nil {
		t.Fatal(err)
	}
	ev, err := evidence.Evaluate(m, folder, evidence.Engine{Name: "assaywrit", Version: "test"})
	if err != nil {
		t.Fatal(err)
	}
	return ev.Record
}

// copyOf is a deep copy through JSON, which is all that a finding may depend on.
func copyOf(t testing.TB, rec *evidence.Record) *evidence.Record {
	t.Helper()
	data, err := json.Marshal(rec)
	if err != nil {
		t.Fatal(err)
	}
	var c evidence.Record
	if err := json.Unmarshal(data, &c); err != nil {
		t.Fatal(err)
	}
	return &c
}

// TestGravity: SG 1.024 raises a limit by 1.30 and 1.030 by 1.60 ((SG + 0.002 − 1)/0.020); none is lowered.
func TestGravity(t *testing.T) {
	g := setNamed(t, "antidoping-urine-2022").Quantity.Gravity
	for _, tt := range []struct{ sg, want float64 }{{1.024, 1.30}, {1.030, 1.60}, {1.018, 1}, {1.005, 1}, {1.019, 1.05}} {
		if got := gravityFactor(tt.sg, g); got != tt.want {
			t.Errorf("SG %g: %v, want %v", tt.sg, got, tt.want)
		}
	}
}

// TestOutcomeEdges: at the threshold, at the limit, and just beyond, for a strict rule and one of "at or above".
func TestOutcomeEdges(t *testing.T) {
	strict := &LimitRule{Threshold: 1000, DecisionLimit: ptr(1200.0), Compare: "greater", Rounding: "none"}
	reach := &LimitRule{Threshold: 15, Compare: "at-or-above", Rounding: "none"}
	for _, tt := range []struct {
		rule  *LimitRule
		value float64
		limit float64
		want  Outcome
	}{
		{strict, 1000, 1200, BelowThreshold}, {strict, math.Nextafter(1000, 2000), 1200, WithinGuardBand}, {strict, 1200, 1200, WithinGuardBand},
		{strict, math.Nextafter(1200, 2000), 1200, AboveLimit}, {strict, 0, 1200, BelowThreshold},
		{reach, 15, 15, AboveLimit}, {reach, math.Nextafter(15, 0), 15, BelowThreshold}, {reach, 16, 15, AboveLimit},
	} {
		l := &Limit{Value: tt.value, Compared: tt.value, Threshold: tt.rule.Threshold, DecisionLimit: tt.limit}
		if got := outcomeOf(l, tt.rule); got != tt.want {
			t.Errorf("%s of %g: %.17g is %s, want %s", tt.rule.Compare, tt.limit, tt.value, got, tt.want)
		}
	}
}

// resolve follows a JSON pointer (RFC 6901).
func resolve(v any, pointer string) bool {
	for _, part := range strings.Split(strings.TrimPrefix(pointer, "/"), "/") {
		switch x := v.(type) {
		case map[string]any:
			next, ok := x[part]
			if !ok {
				return false
			}
			v = next
		case []any:
			i, err := strconv.Atoi(part)
			if err != nil || i < 0 || i >= len(x) {
				return false
			}
			v = x[i]
		default:
			return false
		}
	}
	return true
}

// TestChecksAreSound looks at every check of the example: its id is unique, its pointers lead somewhere, it has a clause, a source
// and a sentence, and no word stands in it that may not.
func TestChecksAreSound(t *testing.T) {
	rec := exampleRecord(t)
	f := decide(t, rec, setNamed(t, "antidoping-urine-2022"))
	data, err := json.Marshal(rec)
	if err != nil {
		t.Fatal(err)
	}
	var plain any
	if err := json.Unmarshal(data, &plain); err != nil {
		t.Fatal(err)
	}
	never := regexp.MustCompile(`(?i)\b(guilty|cheat(er|ed|ing)?|offender|innocent|clean)\b`)
	seen := map[string]bool{}
	lists := [][]Check{f.Batch}
	for _, a := range f.Analytes {
		lists = append(lists, a.Checks)
		if never.MatchString(a.Sentence + a.Label) {
			t.Errorf("%s: %q", a.Analyte, a.Sentence)
		}
	}
	n := 0
	for _, list := range lists {
		for _, c := range list {
			n++
			if seen[c.ID] {
				t.Errorf("%s: a second check of that id", c.ID)
			}
			seen[c.ID] = true
			if c.Clause == "" || c.Source == "" || c.Sentence == "" || c.Title == "" || c.Result == "" || never.MatchString(c.Sentence) {
				t.Errorf("%+v", c)
			}
			for _, p := range c.Evidence {
				// A value that is missing has no pointer of its own: the check must then have failed.
				if !resolve(plain, p) && c.Result != Failed {
					t.Errorf("%s: %s leads nowhere", c.ID, p)
				}
			}
		}
	}
	if n < 100 {
		t.Errorf("only %d checks", n)
	}
	want := map[string]Outcome{"salbutamol": AboveLimit, "terbutaline": Identified, "clenbuterol": NotIdentified}
	for _, a := range f.Analytes {
		if a.Outcome != want[a.Analyte] {
			t.Errorf("%s: %s, want %s (%v)", a.Analyte, a.Outcome, want[a.Analyte], a.Failed)
		}
	}
}

// firm orders outcomes by how much they claim: nothing that is taken away may raise it.
var firm = map[Outcome]int{NotDetermined: 0, NotIdentified: 1, BelowThreshold: 1, WithinGuardBand: 2, Identified: 3, AboveLimit: 3}

// TestLessInformationIsNeverFirmer takes one piece of information after the other out of a record that holds, and looks at both
// the claim that something is there and the claim that it is not.
func TestLessInformationIsNeverFirmer(t *testing.T) {
	whole := exampleRecord(t)
	set := setNamed(t, "antidoping-urine-2022")
	before := decide(t, whole, set)
	decided := 0
	without := func(name string, must Outcome, k int, change func(rec *evidence.Record)) {
		t.Helper()
		rec := copyOf(t, whole)
		change(rec)
		after, err := Decide(rec, "e", set, "s")
		if err != nil {
			return // a record that contradicts itself is refused: nothing is said at all
		}
		decided++
		for i := range after.Analytes {
			if firm[after.Analytes[i].Outcome] > firm[before.Analytes[i].Outcome] {
				t.Errorf("without %s: %s became %s", name, after.Analytes[i].Analyte, after.Analytes[i].Outcome)
			}
			// That an analyte is not there is a claim as well: what is missing refutes nothing.
			if after.Analytes[i].Outcome == NotIdentified && before.Analytes[i].Outcome != NotIdentified {
				t.Errorf("without %s: %s became %s", name, after.Analytes[i].Analyte, after.Analytes[i].Outcome)
			}
		}
		if must != "" && after.Analytes[k].Outcome != must {
			t.Errorf("without %s: %s is %s, want %s", name, after.Analytes[k].Analyte, after.Analytes[k].Outcome, must)
		}
	}
	for k, a := range whole.Analytes {
		without(a.ID+" reference", NotDetermined, k, func(r *evidence.Record) { r.Analytes[k].Reference = evidence.Reference{} })
		without(a.ID+" reference abundances", "", k, func(r *evidence.Record) {
			for i := range r.Analytes[k].Identifications {
				for j := range r.Analytes[k].Identifications[i].Ions {
					r.Analytes[k].Identifications[i].Ions[j].ReferenceAbundance = nil
				}
			}
		})
		without(a.ID+" identifications", NotDetermined, k, func(r *evidence.Record) { r.Analytes[k].Identifications = nil })
		without(a.ID+" blanks", NotDetermined, k, func(r *evidence.Record) { r.Analytes[k].Blanks = nil })
		without(a.ID+" internal standard", "", k, func(r *evidence.Record) {
			for i := range r.Analytes[k].InternalStandard {
				r.Analytes[k].InternalStandard[i].Relative = nil
			}
		})
		for i := range a.Identifications {
			without(a.ID+" identification "+a.Identifications[i].Injection, "", k, func(r *evidence.Record) {
				x := &r.Analytes[k].Identifications[i]
				x.RetentionMin = nil
			})
			without(a.ID+" S/N "+a.Identifications[i].Injection, "", k, func(r *evidence.Record) {
				x := &r.Analytes[k].Identifications[i]
				x.Ions[1].SignalToNoise = nil
			})
		}
	}
	for k := range whole.Analytes[:2] {
		without("signal-to-noise of a qualifier in every injection", NotDetermined, k, func(r *evidence.Record) {
			for i := range r.Analytes[k].Identifications {
				r.Analytes[k].Identifications[i].Ions[1].SignalToNoise = nil
			}
		})
		without("signal-to-noise of a qualifier in the sample", NotDetermined, k, func(r *evidence.Record) {
			for i := range r.Analytes[k].Identifications {
				if x := &r.Analytes[k].Identifications[i]; x.Aliquot != "" {
					x.Ions[1].SignalToNoise = nil
				}
			}
		})
	}
	without("calibration", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Calibration = nil })
	without("result", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Result = nil })
	without("controls", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Controls = nil })
	without("aliquots", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Aliquots = r.Analytes[0].Aliquots[:2] })
	without("specific gravity", NotDetermined, 0, func(r *evidence.Record) { r.Case.Sample.SpecificGravity = nil })
	without("aliquot range", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Aliquots[1].ReadNGPerML = nil })
	if decided < 80 {
		t.Errorf("only %d records with something missing were decided on", decided)
	}
}

// leaveOut excludes injections from a record, everywhere that it tells of them.
func leaveOut(r *evidence.Record, indices ...int) {
	out := func(i int) bool { return slices.Contains(indices, i) }
	for _, i := range indices {
		r.Sequence[i].Role, r.Injections[i].Role, r.Injections[i].Measurements = casefile.Excluded, casefile.Excluded, nil
	}
	for k := range r.Analytes {
		a := &r.Analytes[k]
		a.Identifications = slices.DeleteFunc(a.Identifications, func(x evidence.Identification) bool { return out(x.InjectionIndex) })
		a.InternalStandard = slices.DeleteFunc(a.InternalStandard, func(x evidence.InternalResponse) bool { return out(x.InjectionIndex) })
		a.Blanks = slices.DeleteFunc(a.Blanks, func(x evidence.Blank) bool { return out(x.InjectionIndex) })
		a.Controls = slices.DeleteFunc(a.Controls, func(x evidence.Concentration) bool { return out(x.InjectionIndex) })
		a.Reference.Injections = slices.DeleteFunc(a.Reference.Injections, func(id string) bool {
			return out(slices.IndexFunc(r.Injections, func(x evidence.Injection) bool { return x.ID == id }))
		})
	}
}

// TestFailedBatchChecks: each batch rule, broken once, makes the outcome not determined and is named.
func TestFailedBatchChecks(t *testing.T) {
	whole := exampleRecord(t)
	set := setNamed(t, "antidoping-urine-2022")
	for _, tt := range []struct {
		name   string
		change func(a *evidence.Analyte, r *evidence.Record)
		id     string
	}{
		{"blank", func(a *evidence.Analyte, _ *evidence.Record) { a.Blanks[1].Area, a.Blanks[1].OfLowest = 1, ptr(0.21) }, "/blank/"},
		{"carry-over", func(a *evidence.Analyte, _ *evidence.Record) {
			for i := range a.Blanks {
				a.Blanks[i].Area, a.Blanks[i].OfLowest = 1, ptr(0.5)
			}
		}, "/carry-over/"},
		{"internal standard in a blank", func(a *evidence.Analyte, _ *evidence.Record) {
			a.Blanks[0].InternalStandardArea, a.Blanks[0].OfInternalStandard = 1, ptr(0.06)
		}, "/blank-internal-standard/"},
		{"calibrators", func(a *evidence.Analyte, _ *evidence.Record) {
			for i := range a.Calibration.Fit.Points {
				if i < 3 {
					a.Calibration.Fit.Points[i].RelativeBias = ptr(0.3)
				}
			}
		}, "/calibrators-share"},
		{"controls", func(a *evidence.Analyte, _ *evidence.Record) {
			a.Controls[0].Bias, a.Controls[1].Bias = ptr(0.2), ptr(-0.2)
		}, "/controls-share"},
		{"one level", func(a *evidence.Analyte, _ *evidence.Record) {
			a.Controls[0].Bias, a.Controls[2].Bias = ptr(0.16), ptr(0.16)
		}, "/controls-share/"},
		{"internal standard in the sample", func(a *evidence.Analyte, _ *evidence.Record) {
			for i := range a.InternalStandard {
				if a.InternalStandard[i].Role == casefile.SampleAliquot {
					a.InternalStandard[i].Relative = ptr(0.49)
				}
			}
		}, "/internal-standard/"},
		{"range", func(a *evidence.Analyte, _ *evidence.Record) { a.Aliquots[0].ReadNGPerML = ptr(2000.1) }, "/range/"},
		{"spread", func(a *evidence.Analyte, _ *evidence.Record) { a.Result.RSD = ptr(0.11) }, "/spread"},
		{"uncertainty", func(a *evidence.Analyte, _ *evidence.Record) { a.Result.Budget.StdU = a.Result.NGPerML * 0.11 }, "/max-uncertainty"},
		{"sample code", func(_ *evidence.Analyte, r *evidence.Record) { r.Injections[16].SampleCode = "4410928" }, ""},
		{"bracket", func(_ *evidence.Analyte, r *evidence.Record) { leaveOut(r, 19, 20) }, "/bracket"},
		{"criteria not in force", func(_ *evidence.Analyte, r *evidence.Record) { r.Case.Sample.CollectedAt = "2021-12-31T10:00:00Z" }, ""},
	} {
		rec := copyOf(t, whole)
		tt.change(&rec.Analytes[0], rec)
		f := decide(t, rec, set)
		a := f.Analytes[0]
		if a.Outcome != NotDetermined || a.Label != set.Labels.NotDetermined {
			t.Errorf("%s: %s", tt.name, a.Outcome)
		}
		if !strings.Contains(strings.Join(a.Failed, " "), tt.id) {
			t.Errorf("%s: failed checks %v", tt.name, a.Failed)
		}
	}
}

// TestNeighbouringOutcomes moves the result of the example about threshold and limit.
func TestNeighbouringOutcomes(t *testing.T) {
	whole := exampleRecord(t)
	set := setNamed(t, "antidoping-urine-2022")
	for _, tt := range []struct {
		value float64
		sg    float64
		want  Outcome
	}{
		{999, 1.012, BelowThreshold}, {1000, 1.012, BelowThreshold}, {1100, 1.012, WithinGuardBand},
		{1299, 1.012, WithinGuardBand}, // truncated to 1200, which is not greater than 1200
		{1300, 1.012, AboveLimit}, {1500, 1.024, WithinGuardBand} /* limit 1560 */, {1600, 1.024, AboveLimit},
	} {
		rec := copyOf(t, whole)
		r := rec.Analytes[0].Result
		r.Budget.StdU *= tt.value / r.NGPerML
		r.NGPerML = tt.value
		rec.Case.Sample.SpecificGravity = ptr(tt.sg)
		if a := decide(t, rec, set).Analytes[0]; a.Outcome != tt.want {
			t.Errorf("%g ng/mL at SG %g: %s, want %s", tt.value, tt.sg, a.Outcome, tt.want)
		}
	}
}

func BenchmarkDecide(b *testing.B) {
	rec := exampleRecord(b)
	set := setNamed(b, "antidoping-urine-2022")
	b.Run("injections=21/analytes=3", func(b *testing.B) {
		for b.Loop() {
			if _, err := Decide(rec, "e", set, "s"); err != nil {
				b.Fatal(err)
			}
		}
	})
}
