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
	"time"

	"assaywrit/decision"
	"assaywrit/evidence"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/simulate"
	"assaywrit/evidence/trace"
)

// scanned is one injection of the batch of full-scan runs.
type scanned struct {
	id, role, level, aliquot, code string
	nominal                        string // as the sequence has it
	analyte, standard              float64
}

var scannedBatch = []scanned{
	{"B1", "matrix-blank", "", "", "", "", 0, 0},
	{"Z1", "zero", "", "", "", "", 0, 500},
	{"C1", "calibrator", "cal-1", "", "", "50", 50, 500}, {"C2", "calibrator", "cal-2", "", "", "125", 125, 500}, {"C3", "calibrator", "cal-3", "", "", "250", 250, 500},
	{"C4", "calibrator", "cal-4", "", "", "500", 500, 500}, {"C5", "calibrator", "cal-5", "", "", "1000", 1000, 500},
	{"X1", "carryover-blank", "", "", "", "", 0, 0},
	{"N1", "negative-control", "", "", "", "", 0, 500},
	{"Q1", "control", "low", "", "", "150", 150, 500}, {"Q2", "control", "high", "", "", "800", 800, 500},
	{"X2", "carryover-blank", "", "", "", "", 0, 0},
	{"S1", "sample", "", "A1", "5520031", "", 420, 500}, {"S2", "sample", "", "A2", "5520031", "", 420, 500},
	{"Q3", "control", "low", "", "", "150", 150, 500}, {"Q4", "control", "high", "", "", "800", 800, 500},
}

// andiCase writes a case folder whose raw files are full-scan ANDI files and whose reference spectrum is JCAMP-DX. The batch is
// simulated, with a known truth: 420 ng/mL in the sample.
func andiCase(t testing.TB) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "case")
	if err := os.CopyFS(dir, os.DirFS("testdata/andi-case")); err != nil {
		t.Fatal(err)
	}
	b := &simulate.Batch{
		Seed:       20260204,
		Column:     simulate.Column{SigmaMin: 0.025, TauMin: 0.01, DriftMin: 0.0002, JitterMin: 0.001},
		Background: simulate.Background{Low: 300, High: 500, Drift: 0.1, Wave: 0.02, Electronic: 40, Gain: 10},
		Scatter:    simulate.Scatter{Volume: 0.005, Yield: 0.02, Differential: 0.005, Ion: 0.005},
		Substances: []simulate.Substance{{Name: "amphetamine", Group: "a", RetentionMin: 5.3}, {Name: "amphetamine-d11", Group: "a", RetentionMin: 5.27}},
	}
	ions := []struct{ mz, share, standard float64 }{{65, 0.09, 0}, {91, 0.52, 0}, {98, 0, 0.35}, {118, 0.78, 0}, {128, 0, 0.7}, {169, 0.12, 0.12}, {192, 0.06, 0.06}, {240, 1, 0}, {244, 0, 1}, {73, 0, 0}, {207, 0, 0}}
	const response = 40
	for _, x := range ions {
		id := fmt.Sprintf("m/z %g", x.mz)
		b.Channels = append(b.Channels, simulate.Channel{ID: id, Transition: trace.Transition{PrecursorMZ: x.mz}, StartMin: 4.5, EndMin: 6.2, StepMin: 1. / 200})
		for k, share := range []float64{x.share, x.standard} {
			if share > 0 {
				b.Substances[k].Ions = append(b.Substances[k].Ions, simulate.Ion{Channel: id, Response: share * response})
			}
		}
	}
	for _, r := range scannedBatch {
		b.Injections = append(b.Injections, simulate.Injection{ID: r.id, Yield: 1, Amounts: []simulate.Amount{{Substance: "amphetamine", NGPerML: r.analyte, RSD: 0.008}, {Substance: "amphetamine-d11", NGPerML: r.standard, RSD: 0.005}}})
	}
	if err := os.Mkdir(filepath.Join(dir, "raw"), 0o777); err != nil {
		t.Fatal(err)
	}
	sequence := "injection,file,role,level,aliquot,sample_code,acquired,operator,nominal amphetamine [ng/mL]\n"
	at := time.Date(2026, 2, 4, 9, 0, 0, 0, time.FixedZone("", 3600))
	for i, r := range scannedBatch {
		traces, err := b.Acquire(i)
		if err != nil {
			t.Fatal(err)
		}
		start := at.Add(time.Duration(i) * 12 * time.Minute).Format(time.RFC3339)
		var file bytes.Buffer
		run := simulate.Run{ID: r.id, SampleCode: r.code, StartTime: start, Model: "quadrupole, simulated", Serial: "SIM-2", Software: "simulator", Version: "1", Traces: traces}
		if err := simulate.WriteANDI(&file, run); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(dir, "raw", r.id+".cdf"), file.Bytes(), 0o666); err != nil {
			t.Fatal(err)
		}
		sequence += strings.Join([]string{r.id, "raw/" + r.id + ".cdf", r.role, r.level, r.aliquot, r.code, start, "P-2", r.nominal}, ",") + "\n"
	}
	if err := os.WriteFile(filepath.Join(dir, "sequence.csv"), []byte(sequence), 0o666); err != nil {
		t.Fatal(err)
	}
	return dir
}

// TestCaseOfANDIAndJCAMP builds and verifies a whole case from other formats than the demo's, and finds the truth in it.
func TestCaseOfANDIAndJCAMP(t *testing.T) {
	dir := andiCase(t)
	out := filepath.Join(t.TempDir(), "bundle.zip")
	var stdout, stderr bytes.Buffer
	if status := run([]string{"check", dir}, nil, &stdout, &stderr); status != exitDone {
		t.Fatalf("check: status %d\n%s%s", status, &stdout, &stderr)
	}
	if status := run([]string{"build", dir, "--output", out}, nil, &stdout, &stderr); status != exitDone {
		t.Fatalf("build: status %d\n%s%s", status, &stdout, &stderr)
	}
	data, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	if status, so, se := verified(t, data); status != exitDone && status != exitSignatures {
		t.Fatalf("verify: status %d\n%s%s", status, so, se)
	} else if !strings.Contains(so, "every recorded value and decision is the same") {
		t.Errorf("verify: %s", so)
	}
	_, content := unzipped(t, data)
	var f decision.Finding
	var rec evidence.Record
	if err := json.Unmarshal(content["data/decision/finding.json"], &f); err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(content["data/evidence/evidence.json"], &rec); err != nil {
		t.Fatal(err)
	}
	a := rec.Analytes[0]
	if f.Analytes[0].Outcome != decision.AboveLimit || math.Abs(a.Result.NGPerML-420) > 0.05*420 {
		t.Errorf("%s: %+v; not met: %v", f.Analytes[0].Outcome, a.Result, f.Analytes[0].Failed)
	}
	checkSpectra(t, &rec)
}

// checkSpectra compares the spectra that were taken at the sample's peak with what was put in: the shares of the ions.
func checkSpectra(t *testing.T, rec *evidence.Record) {
	t.Helper()
	ref := rec.Analytes[0].ReferenceSpectrum
	if ref == nil || len(ref.Spectrum.MZ) != 6 || ref.File != "reference/amphetamine-hfb.jdx" {
		t.Fatalf("reference spectrum %+v", ref)
	}
	taken := 0
	for _, inj := range rec.Injections {
		for _, m := range inj.Measurements {
			if m.Spectrum == nil {
				continue
			}
			taken++
			if inj.Role != casefile.SampleAliquot {
				continue
			}
			abundance := map[float64]float64{}
			for i, mz := range m.Spectrum.Spectrum.MZ {
				abundance[math.Round(mz)] = m.Spectrum.Spectrum.Intensity[i]
			}
			for i, mz := range ref.Spectrum.MZ {
				if mz == 169 || mz == 192 {
					continue // the internal standard has these too, and elutes beside it
				}
				if got, want := abundance[mz]/abundance[240], ref.Spectrum.Intensity[i]/100; math.Abs(got-want) > 0.05 {
					t.Errorf("injection %s: m/z %g is %.3f of the base, want %.3f", inj.ID, mz, got, want)
				}
			}
			if len(m.Spectrum.Scans) < 5 || len(m.Spectrum.Background) < 20 {
				t.Errorf("injection %s: %d scans, %d of background", inj.ID, len(m.Spectrum.Scans), len(m.Spectrum.Background))
			}
		}
	}
	if taken < 10 {
		t.Errorf("%d spectra were taken", taken)
	}
}
