package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"assaywrit/evidence"
	"assaywrit/evidence/simulate"
	"assaywrit/evidence/trace"
)

// scoutedMixture follows log10 k = logKw − S φ.
var scoutedMixture = []struct {
	name            string
	logKw, s, share float64
}{{"alpha", 1.90, 3.2, 1}, {"beta", 2.25, 4.0, 0.7}, {"gamma", 2.37, 3.9, 0.45}, {"delta", 2.70, 4.6, 0.3}, {"epsilon", 2.50, 3.8, 0.18}}

// writeStudy writes a study of three isocratic runs, of which the truth is known.
func writeStudy(t testing.TB, dir string, named bool) {
	t.Helper()
	if err := os.MkdirAll(dir, 0o777); err != nil {
		t.Fatal(err)
	}
	text := `format: assaywrit-study/1
title: Composition for the separation of five compounds
solvent: acetonitrile
void_time: 1.2 min
trace: {trace_id: UV 254}
integration: {smoothing_points: 9, min_signal_to_noise: 10, min_width: 0.03 min, shared_valley: perpendicular-drop, valley_fraction: 0}
smallest_peak: 1 %
limits: {time: 16 min, resolution: 1.5}
runs:
`
	for _, phi := range []float64{0.28, 0.34, 0.40} {
		b := &simulate.Batch{
			Seed: 5, Column: simulate.Column{SigmaMin: 0.04, TauMin: 0.015}, Background: simulate.Background{Low: 400, High: 500, Electronic: 40, Gain: 1},
			Channels: []simulate.Channel{{ID: "UV 254", StartMin: 0.5, EndMin: 40, StepMin: 1. / 120}}, Injections: []simulate.Injection{{ID: "mixture", Yield: 1}},
		}
		file := fmt.Sprintf("run-%.0f.mzML", phi*100)
		text += fmt.Sprintf("  - file: %s\n    composition: %.0f %%\n", file, phi*100)
		if named {
			text += "    peaks:\n"
		}
		for _, c := range scoutedMixture {
			rt := 1.2 * (1 + math.Pow(10, c.logKw-c.s*phi))
			b.Substances = append(b.Substances, simulate.Substance{Name: c.name, RetentionMin: rt, Ions: []simulate.Ion{{Channel: "UV 254", Response: c.share * 200}}})
			b.Injections[0].Amounts = append(b.Injections[0].Amounts, simulate.Amount{Substance: c.name, NGPerML: 100})
			if named {
				text += fmt.Sprintf("      - {compound: %s, retention: %.2f min}\n", c.name, rt)
			}
		}
		traces, err := b.Acquire(0)
		if err != nil {
			t.Fatal(err)
		}
		for i := range traces {
			traces[i].Transition = trace.Transition{}
		}
		var out bytes.Buffer
		if err := simulate.WriteMzML(&out, simulate.Run{ID: "run", StartTime: "2026-01-10T09:00:00+01:00", Model: "detector, simulated", Serial: "1", Software: "simulator", Version: "1", Traces: traces}); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(dir, file), out.Bytes(), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	if err := os.WriteFile(filepath.Join(dir, "study.yaml"), []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

// TestScoutFindsTheTruth: the models of the simulated mixture come back from its runs, and what is recommended for it holds by the closed form.
func TestScoutFindsTheTruth(t *testing.T) {
	for _, named := range []bool{true, false} {
		dir := t.TempDir()
		writeStudy(t, dir, named)
		pdf := filepath.Join(t.TempDir(), "study.pdf")
		var out, errs bytes.Buffer
		if status := run([]string{"scout", filepath.Join(dir, "study.yaml"), "--json", "--report", pdf}, nil, &out, &errs); status != exitDone {
			t.Fatalf("status %d: %s", status, &errs)
		}
		var s evidence.SeparationStudy
		if err := json.Unmarshal(out.Bytes(), &s); err != nil {
			t.Fatal(err)
		}
		if len(s.Result.Compounds) != len(scoutedMixture) {
			t.Fatalf("%d compounds", len(s.Result.Compounds))
		}
		for i, c := range s.Result.Compounds { // both ways of following them list them by falling area
			m := scoutedMixture[i]
			if named {
				for _, x := range scoutedMixture {
					if x.name == c.Name {
						m = x
					}
				}
			}
			if math.Abs(c.Model.LogKw-m.logKw) > 0.02 || math.Abs(c.Model.S-m.s) > 0.05 {
				t.Errorf("%s: log kw %g, S %g; simulated %g, %g", c.Name, c.Model.LogKw, c.Model.S, m.logKw, m.s)
			}
		}
		if b := s.Result.Best; b == nil || !b.Holds || b.LastMin > 16 || b.LowTolerated > b.At || b.HighTolerated < b.At {
			t.Errorf("best %+v", b)
		}
		if data, err := os.ReadFile(pdf); err != nil || !bytes.HasPrefix(data, []byte("%PDF-")) {
			t.Errorf("the report: %v", err)
		}
		out.Reset()
		if status := run([]string{"scout", filepath.Join(dir, "study.yaml")}, nil, &out, &errs); status != exitDone || !strings.Contains(out.String(), "recommended: ") {
			t.Errorf("status %d: %s%s", status, &out, &errs)
		}
	}
}

// TestScoutRefuses bad studies with the file and what is wrong.
func TestScoutRefuses(t *testing.T) {
	for _, tt := range []struct{ old, new, want string }{
		{"trace: {trace_id: UV 254}", "trace: {trace_id: UV 210}", `run-28.mzML: got traces of "UV 254", want a trace of id "UV 210"`},
		{"composition: 34 %", "composition: 28 %", "run run-34.mzML: got the composition of run run-28.mzML again"},
		{"void_time: 1.2 min", "void_time: 1.2", "study.yaml:4:12: void_time"},
		{"run-40.mzML", "run-45.mzML", "run-45.mzML: got no such file"},
		{"{compound: alpha, retention: ", "{compound: alpha, retention: 1", "alpha"},
	} {
		dir := t.TempDir()
		writeStudy(t, dir, true)
		path := filepath.Join(dir, "study.yaml")
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, bytes.Replace(data, []byte(tt.old), []byte(tt.new), 1), 0o666); err != nil {
			t.Fatal(err)
		}
		var out, errs bytes.Buffer
		if status := run([]string{"scout", path}, nil, &out, &errs); status != exitRefused || !strings.Contains(errs.String(), tt.want) || out.Len() > 0 {
			t.Errorf("%s: status %d, %s%s", tt.new, status, &out, &errs)
		}
	}
}

// TestStudyInTheBundle: a case that names a study carries it, as files, in the record and in the package, and verifies.
func TestStudyInTheBundle(t *testing.T) {
	dir := copyCase(t)
	writeStudy(t, filepath.Join(dir, "study"), true)
	edit(t, dir, "case.yaml", "sequence: sequence.csv", "sequence: sequence.csv\nseparation_study: study/study.yaml")
	rec, content := builtRecord(t, dir)
	if rec.Separation == nil || rec.Separation.Result.Best == nil || len(rec.Separation.Runs) != 3 || content["data/inputs/case/study/run-34.mzML"] == nil {
		t.Errorf("the study is not in the bundle: %+v", rec.Separation)
	}
	if err := os.Remove(filepath.Join(dir, "study", "run-34.mzML")); err != nil {
		t.Fatal(err)
	}
	var out, errs bytes.Buffer
	if status := run([]string{"check", dir}, nil, &out, &errs); status != exitRefused || !strings.Contains(errs.String(), "study/study.yaml:") {
		t.Errorf("a run that is missing: status %d, %s", status, &errs)
	}
}
