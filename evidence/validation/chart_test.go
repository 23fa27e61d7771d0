package validation

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

// series makes controls, one a batch.
func series(values ...float64) []Control {
	var c []Control
	for i, v := range values {
		c = append(c, Control{Line: i + 2, Batch: fmt.Sprint("B", i+1), Level: "low", Found: v})
	}
	return c
}

// unit is a chart with centre 0 and s = 1 that nothing has been placed on.
func unit() Chart {
	return Chart{Level: "low", Centre: 0, SD: 1, Drift: Drift{DriftAlgorithm, 0.2, 2.962}}
}

// TestMovingAverage: the example of the NIST/SEMATECH e-Handbook of Statistical Methods, 6.3.2.4 (from memory): λ = 0.3, target 50,
// s = 2.0539, moving averages as printed with two decimals, limits 52.5884 and 47.4115.
func TestMovingAverage(t *testing.T) {
	c := Chart{Level: "x", Centre: 50, SD: 2.0539, Drift: Drift{DriftAlgorithm, 0.3, 3}}
	points := c.place(nil, series(52.0, 47.0, 53.0, 49.3, 50.1, 47.0, 51.0, 50.1, 51.2, 50.5, 49.6, 47.6, 49.9, 51.3, 47.8, 51.2, 52.6, 52.4, 53.6, 52.1))
	want := []float64{50.60, 49.52, 50.56, 50.18, 50.16, 49.21, 49.75, 49.85, 50.26, 50.33, 50.11, 49.36, 49.52, 50.05, 49.38, 49.92, 50.73, 51.23, 51.94, 51.99}
	for i, p := range points {
		if math.Abs(p.Average.Value-want[i]) > 0.0051 {
			t.Errorf("average %d: %.4f, want %.2f", i+1, p.Average.Value, want[i])
		}
	}
	last := points[len(points)-1].Average.Limits
	if math.Abs(last.High-52.5884) > 0.002 || math.Abs(last.Low-47.4115) > 0.002 {
		t.Errorf("limits %.4f and %.4f, want 52.5884 and 47.4115", last.High, last.Low)
	}
	if s := c.signals(points, 0); slices.ContainsFunc(s, func(s Signal) bool { return s.Rule == RuleEWMA }) {
		t.Errorf("the example has no signal: %+v", s)
	}
}

// TestSlowDrift: a textbook's series of 20 results from N(10, 1) and 10 from N(11, 1), λ = 0.1, L = 2.7 (from memory), with its moving
// averages; the last two are beyond 10 + 2.7·√(0.1/1.9) = 10.62.
func TestSlowDrift(t *testing.T) {
	c := Chart{Level: "x", Centre: 10, SD: 1, Drift: Drift{DriftAlgorithm, 0.1, 2.7}}
	points := c.place(nil, series(9.45, 7.99, 9.29, 11.66, 12.16, 10.18, 8.04, 11.46, 9.20, 10.34, 9.03, 11.47, 10.51, 9.40, 10.08, 9.37, 10.62, 10.31, 8.52, 10.84,
		10.90, 9.33, 12.29, 11.50, 10.60, 11.08, 10.38, 11.62, 11.31, 10.52))
	for i, want := range []float64{9.945, 9.7495, 9.70355, 9.8992, 10.1253, 10.1307, 9.92167, 10.0755, 9.98796, 10.0232, 9.92384, 10.0785, 10.1216, 10.0495, 10.0525,
		9.98426, 10.0478, 10.074, 9.91864, 10.0108, 10.0997, 10.0227, 10.2495, 10.3745, 10.3971, 10.4654, 10.4568, 10.5731, 10.6468, 10.6341} {
		near(t, "average", points[i].Average.Value, want, 6e-6)
	}
	var at []string
	for _, s := range c.signals(points, 0) {
		if s.Rule == RuleEWMA {
			at = append(at, s.Batch)
		}
	}
	if got := strings.Join(at, " "); got != "B29 B30" {
		t.Errorf("signals at %s, want the last two", got)
	}
}

// TestRules: each rule by a series that breaks it, and one that does not quite.
func TestRules(t *testing.T) {
	for _, tt := range []struct {
		z    []float64
		want string // rules of the last result
	}{
		{[]float64{0, 2.01}, "1-2s"}, {[]float64{0, -2}, ""}, {[]float64{0, -3.01}, "1-3s"}, {[]float64{0, 3}, "1-2s"},
		{[]float64{2.1, 2.2}, "1-2s 2-2s"}, {[]float64{2.1, -2.2}, "1-2s"}, {[]float64{2.1, 0, 2.1}, "1-2s"},
		{[]float64{1.1, 1.2, 1.1, 1.3}, "4-1s"}, {[]float64{1.1, 1.2, 1.0, 1.3}, ""}, {[]float64{-1.1, -1.2, -1.1, -1.3}, "4-1s"},
		{[]float64{0.1, 0.1, 0.1, 0.1, 0.1, 0.1, 0.1, 0.1, 0.1, 0.1}, "10-x"}, {[]float64{0.1, 0.1, 0.1, 0.1, 0, 0.1, 0.1, 0.1, 0.1, 0.1}, ""},
		{[]float64{0.9, 0.9, 0.9, 0.9, 0.9, 0.9, 0.9, 0.9, 0.9}, ""},
	} {
		c := unit()
		c.Drift.L = 100 // the moving average has tests of its own
		points := c.place(nil, series(tt.z...))
		var got []string
		for _, s := range c.signals(points, len(points)-1) {
			got = append(got, string(s.Rule))
			if s.Source == "" || s.Text == "" || s.Warning != (s.Rule == Rule12s) || s.Lines[len(s.Lines)-1] != len(tt.z)+1 {
				t.Errorf("%+v", s)
			}
		}
		if strings.Join(got, " ") != tt.want {
			t.Errorf("%v: %v, want %s", tt.z, got, tt.want)
		}
	}
	// Two results of one batch on both sides; one that is excluded counts for nothing.
	c := unit()
	both := series(2.5, -2.5)
	both[1].Batch = both[0].Batch
	if s := c.signals(c.place(nil, both), 1); len(s) != 2 || s[1].Rule != RuleR4s {
		t.Errorf("%+v", s)
	}
	both[0].Excluded = "air in the syringe"
	points := c.place(nil, both)
	if s := c.signals(points, 1); len(s) != 1 || points[0].Average != nil {
		t.Errorf("%+v", s)
	}
}

// TestChartsOfAssay: 60 batches of an (open, simulated) assay against recomputed means and standard deviations; the history is
// in the order of its times.
func TestChartsOfAssay(t *testing.T) {
	history, problems := ReadHistory("controls_lcms.csv", testFile(t, "controls_lcms.csv"))
	if problems != nil {
		t.Fatal(problems)
	}
	charts, err := Charts(history, UsualDrift())
	if err != nil {
		t.Fatal(err)
	}
	want := expected(t).Controls
	if len(charts) != 6 || len(want) != 6 {
		t.Fatalf("%d charts", len(charts))
	}
	for _, c := range charts {
		w := want[c.Analyte+" "+c.Level]
		if c.N != w.N || c.Batches != 60 || len(c.Points) != 60 || len(c.Flags) != 0 {
			t.Errorf("%s %s: %d", c.Analyte, c.Level, c.N)
		}
		near(t, "centre", c.Centre, w.Mean, 1e-15)
		near(t, "s", c.SD, w.SD, 1e-13)
		near(t, "action limit", c.Action.High, w.Mean+3*w.SD, 1e-14)
		near(t, "warning limit", c.Warning.Low, w.Mean-2*w.SD, 1e-14)
	}
	at := func(level string, z float64) Control {
		w := want["morphine "+level]
		return Control{Batch: "new", Analyte: "morphine", Level: level, Found: w.Mean + z*w.SD}
	}
	j, err := Judge(charts, []Control{at("qc1", 2.5), at("qc2", 2.2), at("qc3", -2.4), {Batch: "new", Analyte: "morphine", Level: "qc9", Found: 1}})
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, s := range j.Signals {
		got = append(got, string(s.Rule)+" "+strings.Join(s.Levels, "+"))
	}
	for _, rule := range []string{"1-2s qc1", "1-2s qc2", "1-2s qc3", "2-2s qc1+qc2", "R-4s qc1+qc3", "R-4s qc2+qc3"} {
		if !slices.Contains(got, rule) {
			t.Errorf("%s is missing in %v", rule, got)
		}
	}
	if len(j.Results) != 3 || len(j.NotCharted) != 1 || math.Abs(j.Results[0].Z-2.5) > 1e-9 {
		t.Errorf("%+v", j)
	}
}

func TestChartsRefuse(t *testing.T) {
	for want, history := range map[string][]Control{
		"without results": nil, "at least three": series(1, 2), "are equal": series(1, 1, 1), "finite": series(1, 2, math.Inf(1)), "too far apart": series(1e308, -1e308, 1e308),
	} {
		if c, err := Charts(history, UsualDrift()); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("want %q, got %+v, %v", want, c, err)
		}
	}
	if _, err := Charts(series(1, 2, 3), Drift{Lambda: 1.5, L: 3}); err == nil {
		t.Error("λ = 1.5")
	}
	charts, err := Charts(series(1, 2, 3), UsualDrift())
	if err != nil || len(charts[0].Flags) != 1 {
		t.Fatalf("%+v, %v", charts, err)
	}
	for want, batch := range map[string][]Control{
		"without controls":   nil,
		"want those of one":  {{Batch: "x", Level: "low"}, {Batch: "y", Level: "low"}},
		"in the history":     {{Batch: "B1", Level: "low"}},
		"want a finite":      {{Batch: "x", Level: "low", Found: math.NaN()}},
		"too far from the c": {{Batch: "x", Level: "low", Found: math.MaxFloat64}},
	} {
		if want == "too far from the c" {
			charts[0].SD = 0.5
		}
		if j, err := Judge(charts, batch); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("want %q, got %+v, %v", want, j, err)
		}
	}
}

func ExampleJudge() {
	history := series(9.8, 10.1, 10.0, 9.9, 10.3, 10.2, 9.7, 10.0, 10.1, 9.9)
	charts, err := Charts(history, UsualDrift())
	if err != nil {
		panic(err)
	}
	j, err := Judge(charts, []Control{{Batch: "new", Level: "low", Found: 10.8}})
	if err != nil {
		panic(err)
	}
	for _, s := range j.Signals {
		fmt.Printf("%s: %s\n", s.Rule, s.Text)
	}
	// Output: 1-3s: 4.38 s from the centre
}
