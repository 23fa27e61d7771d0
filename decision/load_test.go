package decision

import (
	"bytes"
	"errors"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"assaywrit/evidence/strictyaml"
)

func TestBuiltInSetsParse(t *testing.T) {
	names := BuiltInNames()
	if len(names) < 2 {
		t.Fatalf("built-in sets: %v", names)
	}
	for _, n := range names {
		if set := setNamed(t, n); set.ID != n {
			t.Errorf("%s calls itself %s", n, set.ID)
		}
	}
	if _, ok := BuiltIn("../load"); ok {
		t.Error("a set outside the folder")
	}
}

func TestSchemaIsOne(t *testing.T) {
	data, err := SchemaJSON()
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("mem:///criteria", doc); err != nil {
		t.Fatal(err)
	}
	if _, err := c.Compile("mem:///criteria"); err != nil {
		t.Fatal(err)
	}
}

// TestStatedLimits: threshold + 1.645·u_max, rounded up to two significant digits, is each stated decision limit (WADA TD DL; salbutamol's
// threshold and limit read, most others from memory).
func TestStatedLimits(t *testing.T) {
	want := map[string][4]float64{ // threshold, largest u, decision limit, and what the rule gives, in ng/mL
		"salbutamol": {1000, 100, 1200, 1200}, "carboxy-thc": {150, 15, 180, 180}, "formoterol": {40, 6, 50, 50}, "morphine": {1000, 150, 1300, 1300},
		"ephedrine": {10000, 500, 11000, 11000}, "methylephedrine": {10000, 500, 11000, 11000},
		"cathine":         {5000, 500, 6000, 5900}, // the larger of the two remembered uncertainties, 600, gives the stated limit
		"pseudoephedrine": {150000, 7500, 170000, 170000}, "19-norandrosterone": {2, 0.3, 2.5, 2.5},
	}
	limits := doping(t).Limits
	if len(limits) != len(want) {
		t.Errorf("%d limits, want %d", len(limits), len(want))
	}
	for _, l := range limits {
		if got := [4]float64{l.Threshold, *l.MaxStdU, *l.DecisionLimit, expectedLimit(&l)}; got != want[l.Analyte] {
			t.Errorf("%s: %v, want %v", l.Analyte, got, want[l.Analyte])
		}
		if l.Compare != "greater" || l.Rounding != "truncate" || l.Digits != 2 || *l.GuardK != 1.645 || !l.Gravity {
			t.Errorf("%s: %+v", l.Analyte, l)
		}
	}
	if s := limits[0]; s.ThresholdSource.Tag != "read" || s.DecisionLimitSource.Tag != "read" || s.MaxStdUSource.or(s.Cite).Tag != "from memory" {
		t.Errorf("salbutamol: %+v", s)
	}
}

// TestCutOffs: 49 CFR 40.85, confirmatory cut-offs in urine, read.
func TestCutOffs(t *testing.T) {
	want := map[string]float64{"carboxy-thc": 15, "benzoylecgonine": 100, "codeine": 2000, "morphine": 2000, "hydrocodone": 100, "hydromorphone": 100, "oxycodone": 100,
		"oxymorphone": 100, "6-acetylmorphine": 10, "phencyclidine": 25, "amphetamine": 250, "methamphetamine": 250, "mdma": 250, "mda": 250}
	limits := setNamed(t, "workplace-urine-2023").Limits
	if len(limits) != len(want) {
		t.Errorf("%d cut-offs, want %d", len(limits), len(want))
	}
	for _, l := range limits {
		if l.Threshold != want[l.Analyte] || l.Compare != "at-or-above" || l.Guard != "none" || l.Tag != "read" {
			t.Errorf("%s: %+v", l.Analyte, l)
		}
	}
}

// TestRefusedSets: a rule without a source, and rules that contradict themselves, are not loaded. Each fault gives one problem at its key.
func TestRefusedSets(t *testing.T) {
	data, _ := BuiltIn("antidoping-urine-2022")
	for _, tt := range []struct{ from, to, key string }{
		{`signal_to_noise: {value: 3, clause: "TD IDCR: each diagnostic ion or transition at least 3:1", tag: from memory}`, `signal_to_noise: {value: 3, tag: from memory}`, "identification.signal_to_noise.clause"},
		{`transition at least 3:1", tag: from memory}`, `transition at least 3:1"}`, "identification.signal_to_noise.tag"},
		{`at least 3:1", tag: from memory}`, `at least 3:1", tag: certain}`, "identification.signal_to_noise.tag"},
		{`"TD IDCR: relative retention within 1 %"`, `""`, "identification.relative_retention.clause"},
		{`kind: greater-of, absolute: 0.1 min, relative: 1 %`, `kind: greater-of, absolute: 0.1 min`, "identification.retention"},
		{`kind: greater-of, absolute: 0.1 min`, `kind: absolute, absolute: 0.1 min`, "identification.retention"},
		{`absolute: 0.1 min`, `absolute: 0.1`, "identification.retention.absolute"},
		{`from: 25 %`, `from: 60 %`, "identification.abundance[1].from"},
		{`from: 0 %`, `from: 1 %`, "identification.abundance[2].from"},
		{`decision_limit: 50 ng/mL, guard: stated`, `guard: stated`, "limits[2]"},
		{`decision_limit: 50 ng/mL, guard: stated`, `decision_limit: 50 ng/mL, guard: k-times-u`, "limits[2].guard"},
		{`guard: stated, guard_k: 1.645, compare: greater, rounding: truncate, significant_digits: 2, specific_gravity: true, clause: "TD2022DL, table 1 and the rule of the decision limit"`, `guard: stated, compare: greater, rounding: truncate, specific_gravity: true, clause: "x"`, "limits[2]"},
		{`decision_limit: 50 ng/mL`, `decision_limit: 39 ng/mL`, "limits[2].decision_limit"},
		{`analyte: formoterol`, `analyte: salbutamol`, "limits[2].analyte"},
		{`threshold: 40 ng/mL`, `threshold: 40 nmol/L`, "limits[2].threshold"},
		{`effective_from: 2022-01-01`, "effective_from: 2022-01-01\neffective_to: 2021-12-31", "effective_to"},
		{`effective_from: 2022-01-01`, "effective_from: 1 January 2022", "effective_from"},
		{`  specific_gravity: {apply_above: 1.018, add: 0.002, reference: 1.020, clause: "TD DL: limits adjusted upwards for specific gravity", tag: from memory}` + "\n", ``, "limits[0].specific_gravity"},
		{`not_identified: Not identified`, `not_identified: Clean sample`, "labels.not_identified"},
		{`above_limit: Above the decision limit`, `above_limit: The athlete cheated`, "labels.above_limit"},
		{`presence: {any: true`, `presence: {every: true`, "presence.every"},
	} {
		bad := strings.Replace(string(data), tt.from, tt.to, 1)
		if bad == string(data) {
			t.Fatalf("the set does not hold %q", tt.from)
		}
		_, err := Parse("x.yaml", []byte(bad))
		var problems strictyaml.Problems
		if !errors.As(err, &problems) {
			t.Errorf("accepted: %s", tt.to)
			continue
		}
		found := false
		for _, p := range problems {
			found = found || p.Key == tt.key
			if p.File != "x.yaml" || p.Line == 0 || p.Got == "" || p.Want == "" {
				t.Errorf("%s: problem %+v", tt.to, p)
			}
		}
		if !found {
			t.Errorf("%s: no problem at %s: %v", tt.to, tt.key, err)
		}
	}
}

// TestAllProblemsAtOnce: what contradicts itself in several places is reported in all of them.
func TestAllProblemsAtOnce(t *testing.T) {
	data, _ := BuiltIn("antidoping-urine-2022")
	bad := strings.NewReplacer("analyte: formoterol", "analyte: ephedrine", "from: 0 %", "from: 2 %", "identified: Presence identified", "identified: Guilty").Replace(string(data))
	_, err := Parse("x.yaml", []byte(bad))
	var problems strictyaml.Problems
	if !errors.As(err, &problems) || len(problems) < 3 {
		t.Errorf("%v", err)
	}
}

func FuzzParse(f *testing.F) {
	for _, n := range BuiltInNames() {
		data, _ := BuiltIn(n)
		f.Add(data)
	}
	f.Add([]byte("format: assaywrit-criteria/1\n"))
	f.Fuzz(func(t *testing.T, data []byte) {
		set, err := Parse("f.yaml", data)
		if (set == nil) == (err == nil) {
			t.Fatalf("set %v, error %v", set != nil, err)
		}
		if err != nil {
			return
		}
		// What is loaded decides without a fault of ours.
		if _, err := Decide(handmade(), "e", set, "s"); err != nil {
			t.Fatal(err)
		}
	})
}
