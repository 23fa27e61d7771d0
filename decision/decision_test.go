package decision

import (
	"encoding/json"
	"math"
	"regexp"
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

func setNamed(t testing.TB, name string) *Set {
	t.Helper()
	data, ok := BuiltIn(name)
	if !ok {
		t.Fatalf("no set %s", name)
	}
	set, err := Parse(name+".yaml", data)
	if err != nil {
		t.Fatal(err)
	}
	return set
}

func decide(t testing.TB, rec *evidence.Record, set *Set) *Finding {
	t.Helper()
	f, err := Decide(rec, "e", set, "s")
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// TestToleranceEdges: a value on the limit is inside; one unit of the last place beyond it is outside.
func TestToleranceEdges(t *testing.T) {
	tests := []struct {
		kind               string
		absolute, relative *float64
		ref, low, high     float64
	}{
		{"absolute", ptr(0.1), nil, 0.6, 0.5, 0.7},
		{"relative", nil, ptr(0.2), 0.4, 0.32, 0.48},
		{"greater-of", ptr(0.1), ptr(0.01), 2.31, 2.21, 2.41},
		{"greater-of", ptr(0.1), ptr(0.01), 12, 11.88, 12.12},
		{"smaller-of", ptr(0.2), ptr(0.01), 12, 11.88, 12.12},
		{"smaller-of", ptr(0.2), ptr(0.01), 30, 29.8, 30.2},
	}
	for _, tt := range tests {
		w := around(tt.ref, halfWidth(tt.kind, tt.absolute, tt.relative, tt.ref))
		for _, v := range []struct {
			at     float64
			inside bool
		}{
			{tt.low, true}, {tt.high, true}, {tt.ref, true},
			{math.Nextafter(tt.low, -1), false}, {math.Nextafter(tt.high, 100), false},
			{math.Nextafter(tt.low, 100), true}, {math.Nextafter(tt.high, -1), true},
		} {
			if w.holds(v.at) != v.inside {
				t.Errorf("%s about %g: %.17g inside is %v (window %.17g to %.17g)", tt.kind, tt.ref, v.at, !v.inside, w.low, w.high)
			}
		}
	}
}

// TestBands: the windows of the single table of relative abundances (TD IDCR, from memory): 60 gives 50 to 70, 40 gives 32 to 48,
// 10 gives 5 to 15; 25 and 50 belong to the middle band, as the set says.
func TestBands(t *testing.T) {
	bands := setNamed(t, "antidoping-urine-2022").Identification.Abundance
	for _, tt := range []struct{ ref, low, high float64 }{
		{0.60, 0.50, 0.70}, {0.40, 0.32, 0.48}, {0.10, 0.05, 0.15}, {0.50, 0.40, 0.60}, {0.25, 0.20, 0.30},
		{math.Nextafter(0.5, 1), 0.40, 0.60}, {math.Nextafter(0.25, 0), 0.20, 0.30}, {0, -0.05, 0.05},
	} {
		b := bandFor(bands, tt.ref)
		w := around(tt.ref, halfWidth(b.Kind, b.Absolute, b.Relative, tt.ref))
		if math.Abs(w.low-tt.low) > 1e-12 || math.Abs(w.high-tt.high) > 1e-12 {
			t.Errorf("%g: %g to %g, want %g to %g", tt.ref, w.low, w.high, tt.low, tt.high)
		}
	}
}

func TestRounding(t *testing.T) {
	for _, tt := range []struct {
		v      float64
		rule   string
		digits int
		want   float64
	}{
		{1199.9999, "truncate", 2, 1100}, {1200, "truncate", 2, 1200}, {1299.99, "truncate", 2, 1200}, {0.29, "truncate", 2, 0.29},
		{174.675, "up", 2, 180}, {1164.5, "up", 2, 1200}, {1200, "up", 2, 1200}, {49.87, "up", 2, 50},
		{2.5, "half-even", 1, 2}, {3.5, "half-even", 1, 4}, {0.125, "half-even", 2, 0.12}, {-2.5, "half-even", 1, -2}, {123.456, "none", 2, 123.456}, {0, "truncate", 2, 0},
	} {
		if got := roundValue(tt.v, tt.rule, tt.digits); got != tt.want {
			t.Errorf("%g %s to %d digits: %v, want %v", tt.v, tt.rule, tt.digits, got, tt.want)
		}
	}
	for _, tt := range []struct{ v, u, value, unc any }{
		{1471.47, 120.5, "1470", "120"}, {0.01234, 0.00056, "0.01234", "0.00056"}, {1.2345, 0.0995, "1.23", "0.10"}, {12.0, 3.0, "12.0", "3.0"},
	} {
		if a, b := TextWithU(tt.v.(float64), tt.u.(float64)); a != tt.value || b != tt.unc {
			t.Errorf("%v ± %v: %s ± %s, want %v ± %v", tt.v, tt.u, a, b, tt.value, tt.unc)
		}
	}
}

// TestStatedLimits: threshold + 1.645·u_max, rounded up to two significant digits, is each stated decision limit (standards of the
// anti-doping set, where uncertainty and digits come from memory).
func TestStatedLimits(t *testing.T) {
	for _, l := range setNamed(t, "antidoping-urine-2022").Limits {
		want := *l.DecisionLimit
		if l.Analyte == "cathine" {
			want = 5900 // with the smaller of the two remembered uncertainties; 0.6 ug/mL would give the 6.0 ug/mL that is stated
		}
		if got := expectedLimit(&l); got != want {
			t.Errorf("%s: %g, want %g", l.Analyte, got, want)
		}
	}
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
	without := func(name string, must Outcome, k int, change func(rec *evidence.Record)) {
		t.Helper()
		rec := copyOf(t, whole)
		change(rec)
		after, err := Decide(rec, "e", set, "s")
		if err != nil {
			return // a record that contradicts itself is refused
		}
		for i := range after.Analytes {
			if firm[after.Analytes[i].Outcome] > firm[before.Analytes[i].Outcome] {
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
	without("calibration", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Calibration = nil })
	without("result", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Result = nil })
	without("controls", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Controls = nil })
	without("aliquots", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Aliquots = r.Analytes[0].Aliquots[:2] })
	without("specific gravity", NotDetermined, 0, func(r *evidence.Record) { r.Case.Sample.SpecificGravity = nil })
	without("aliquot range", NotDetermined, 0, func(r *evidence.Record) { r.Analytes[0].Aliquots[1].ReadNGPerML = nil })
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
		{"bracket", func(_ *evidence.Analyte, r *evidence.Record) {
			for _, i := range []int{19, 20} {
				r.Sequence[i].Nominal = []casefile.Nominal{{Analyte: "salbutamol", NGPerML: 0}}
			}
		}, "/bracket"},
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

// TestRefusedSets: a rule without a source, and rules that contradict themselves, are not loaded.
func TestRefusedSets(t *testing.T) {
	data, _ := BuiltIn("antidoping-urine-2022")
	for _, tt := range [][2]string{
		{`signal_to_noise: {value: 3, clause: "TD IDCR: each diagnostic ion or transition at least 3:1", tag: from memory}`, `signal_to_noise: {value: 3, tag: from memory}`},
		{`tag: from memory}`, `tag: certain}`},
		{`kind: greater-of, absolute: 0.1 min, relative: 1 %`, `kind: greater-of, absolute: 0.1 min`},
		{`from: 25 %`, `from: 60 %`},
		{`from: 0 %`, `from: 1 %`},
		{`decision_limit: 50 ng/mL, guard: stated`, `guard: stated`},
		{`presence: {any`, `presence: {ani`},
		{`not_identified: Not identified`, `not_identified: Clean`},
		{`decision_limit: 1200 ng/mL`, `decision_limit: 900 ng/mL`},
		{`analyte: formoterol`, `analyte: salbutamol`},
	} {
		bad := strings.Replace(string(data), tt[0], tt[1], 1)
		if bad == string(data) {
			t.Fatalf("the set does not hold %q", tt[0])
		}
		if _, err := Parse("x.yaml", []byte(bad)); err == nil {
			t.Errorf("accepted: %s", tt[1])
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
