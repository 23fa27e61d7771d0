package main

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// writeHistory writes the controls of twenty earlier batches, scaled about the nominal values by shift.
func writeHistory(t testing.TB, dir string, shift float64) {
	t.Helper()
	var levels []string
	nominal := map[string]float64{}
	rec := demoAssessment(t).evaluation.Record
	for _, c := range rec.Analytes[0].Controls {
		if _, ok := nominal[c.Level]; !ok && c.NominalNGPerML != nil {
			levels = append(levels, c.Level)
			nominal[c.Level] = *c.NominalNGPerML
		}
	}
	text := "batch,analyte,level,found [ng/mL]\n"
	for i := range 20 {
		for _, l := range levels {
			// Alternating about the mean, so that the history itself has no run and no drift.
			text += fmt.Sprintf("B-%02d,%s,%s,%.1f\n", i+1, rec.Analytes[0].ID, l, nominal[l]*(shift+0.01*float64(1+i%3)*float64(1-2*(i%2))))
		}
	}
	if err := os.WriteFile(filepath.Join(dir, "controls.csv"), []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	edit(t, dir, "case.yaml", "sequence: sequence.csv", "sequence: sequence.csv\ncontrol_history: controls.csv")
}

// TestHistoryInTheBundle: the controls of earlier batches go into record, package and bundle; a batch that lies far from them gives signals
// and an advisory check that does not pass, but never hides or firms the decision.
func TestHistoryInTheBundle(t *testing.T) {
	for _, tt := range []struct {
		name    string
		shift   float64
		signals bool
	}{{"as before", 1, false}, {"far from before", 1.2, true}} {
		t.Run(tt.name, func(t *testing.T) {
			dir := copyCase(t)
			writeHistory(t, dir, tt.shift)
			rec, content := builtRecord(t, dir)
			if rec.History == nil || len(rec.History.Judgement.Results) == 0 || (len(rec.History.Judgement.Signals) > 0) != tt.signals || content["data/inputs/case/controls.csv"] == nil {
				t.Errorf("history %+v", rec.History)
			}
		})
	}
}

// TestHistoryRefused with file, line and what is wrong.
func TestHistoryRefused(t *testing.T) {
	for _, tt := range []struct{ old, new, want string }{
		{"found [ng/mL]", "found", "controls.csv:1"},
		{"B-03,", ",", "controls.csv:6"},
		{"B-05,salbutamol,low,", "B-05,salbutamol,low,x", "controls.csv:10"},
	} {
		dir := copyCase(t)
		writeHistory(t, dir, 1)
		edit(t, dir, "controls.csv", tt.old, tt.new)
		var out, errs bytes.Buffer
		path := filepath.Join(t.TempDir(), "b.zip")
		if status := run([]string{"build", dir, "--output", path}, nil, &out, &errs); status != exitRefused || !strings.Contains(errs.String(), tt.want) {
			t.Errorf("%s: status %d, %s", tt.new, status, &errs)
		}
		if _, err := os.Stat(path); err == nil {
			t.Errorf("%s: a bundle is there", tt.new)
		}
	}
	dir := copyCase(t)
	edit(t, dir, "case.yaml", "sequence: sequence.csv", "sequence: sequence.csv\ncontrol_history: none.csv")
	var out, errs bytes.Buffer
	if status := run([]string{"check", dir}, nil, &out, &errs); status != exitRefused || !strings.Contains(errs.String(), "none.csv") {
		t.Errorf("status %d, %s", status, &errs)
	}
}
