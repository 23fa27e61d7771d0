package evidence_test

import (
	"bytes"
	"encoding/json"
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"assaywrit/evidence"
	"assaywrit/evidence/canonical"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/simulate/demo"
)

func exampleFolder(t testing.TB) fstest.MapFS {
	t.Helper()
	files, err := demo.Files()
	if err != nil {
		t.Fatal(err)
	}
	m := fstest.MapFS{}
	for _, f := range files {
		m[f.Path] = &fstest.MapFile{Data: f.Data}
	}
	return m
}

func evaluate(t testing.TB, m fstest.MapFS) (*evidence.Evaluation, error) {
	t.Helper()
	folder, err := casefile.Load(m)
	if err != nil {
		t.Fatal(err)
	}
	return evidence.Evaluate(m, folder, evidence.Engine{Name: "assaywrit", Version: "test"})
}

// TestFindsTheTruth compares the example's result with what was simulated: within its expanded uncertainty, and each of the
// quantities that were prepared for the calibrators within 10 %. Simulated data shows that the parts fit together, not that they
// are right: that is tested against published values in each package.
func TestFindsTheTruth(t *testing.T) {
	ev, err := evaluate(t, exampleFolder(t))
	if err != nil {
		t.Fatal(err)
	}
	for _, a := range ev.Record.Analytes {
		if a.Result == nil {
			continue
		}
		truth := demo.Truth()[a.ID]
		if math.Abs(a.Result.NGPerML-truth) > 2*a.Result.Budget.StdU {
			t.Errorf("%s: %g ± %g ng/mL (k = 2), simulated %g", a.ID, a.Result.NGPerML, 2*a.Result.Budget.StdU, truth)
		}
	}
}

// TestPureFunction: two evaluations give the same bytes, and the traces behind each measurement are at hand.
func TestPureFunction(t *testing.T) {
	var first []byte
	for range 2 {
		ev, err := evaluate(t, exampleFolder(t))
		if err != nil {
			t.Fatal(err)
		}
		data, err := canonical.Marshal(ev.Record)
		if err != nil {
			t.Fatal(err)
		}
		if first != nil && !bytes.Equal(first, data) {
			t.Error("two evaluations differ")
		}
		first = data
		for _, inj := range ev.Record.Injections {
			for _, m := range inj.Measurements {
				if c, ok := ev.Chromatogram(inj.File, m.TraceID); !ok || len(c.TimeMin) != m.Points {
					t.Fatalf("%s %s: the trace is not at hand", inj.ID, m.TraceID)
				}
			}
		}
	}
}

// TestManualIntegration: the automatic result stays beside the manual one, and the change of area is recorded.
func TestManualIntegration(t *testing.T) {
	m := exampleFolder(t)
	text := strings.Replace(string(m["case.yaml"].Data), "deviations: []", `deviations: []
manual_integrations:
  - {injection: "016", compound: salbutamol, trace: quantifier, start: 2.22 min, end: 2.38 min, by: P-03, at: "2026-03-19T10:00:00+01:00", reason: test, approved_by: P-04}`, 1)
	m["case.yaml"] = &fstest.MapFile{Data: []byte(text)}
	ev, err := evaluate(t, m)
	if err != nil {
		t.Fatal(err)
	}
	found := 0
	for _, inj := range ev.Record.Injections {
		for _, x := range inj.Measurements {
			if x.Manual == nil {
				continue
			}
			found++
			if x.Automatic == nil || x.Peak.StartMin < 2.22 || x.Peak.EndMin > 2.38 || x.Manual.AreaChange == nil || x.Manual.ApprovedBy != "P-04" {
				t.Errorf("%+v", x)
			}
			if got, want := *x.Manual.AreaChange, x.Peak.Area/x.Automatic.Area-1; got != want {
				t.Errorf("change of area %g, want %g", got, want)
			}
		}
	}
	if found != 1 {
		t.Errorf("%d manual integrations", found)
	}
}

// TestTablesHoldTheRecordsNumbers: every number of the CSV tables stands in the record, in the same form.
func TestTablesHoldTheRecordsNumbers(t *testing.T) {
	ev, err := evaluate(t, exampleFolder(t))
	if err != nil {
		t.Fatal(err)
	}
	data, err := canonical.Marshal(ev.Record)
	if err != nil {
		t.Fatal(err)
	}
	var check func(v any, into map[float64]bool)
	check = func(v any, into map[float64]bool) {
		switch x := v.(type) {
		case map[string]any:
			for _, e := range x {
				check(e, into)
			}
		case []any:
			for _, e := range x {
				check(e, into)
			}
		case float64:
			into[x] = true
		}
	}
	var plain any
	if err := json.Unmarshal(data, &plain); err != nil {
		t.Fatal(err)
	}
	known := map[float64]bool{1: true}
	check(plain, known)
	n := 0
	for _, table := range evidence.Tables(ev.Record) {
		if len(table.Rows) < 2 {
			t.Errorf("table %s is empty", table.Name)
		}
		for _, row := range table.Rows {
			if len(row) != len(table.Rows[0]) {
				t.Fatalf("table %s: a row of %d fields, the header has %d", table.Name, len(row), len(table.Rows[0]))
			}
			for i, cell := range row {
				var v float64
				if i == 0 || json.Unmarshal([]byte(cell), &v) != nil {
					continue
				}
				n++
				if !known[v] && !strings.HasPrefix(cell, "0") {
					t.Fatalf("table %s: %s is not in the record", table.Name, cell)
				}
			}
		}
	}
	if n < 1000 {
		t.Errorf("only %d numbers", n)
	}
}

// TestUnusableRawFiles: each file that cannot be used gives its own error.
func TestUnusableRawFiles(t *testing.T) {
	m := exampleFolder(t)
	for _, name := range []string{"raw/004.mzML", "raw/016.mzML"} {
		data := m[name].Data
		m[name] = &fstest.MapFile{Data: data[:len(data)/2]}
	}
	_, err := evaluate(t, m)
	if err == nil || !strings.Contains(err.Error(), "raw/004.mzML") || !strings.Contains(err.Error(), "raw/016.mzML") {
		t.Errorf("%v", err)
	}
}

func BenchmarkEvaluate(b *testing.B) {
	m := exampleFolder(b)
	folder, err := casefile.Load(m)
	if err != nil {
		b.Fatal(err)
	}
	b.Run("injections=21/traces=252", func(b *testing.B) {
		for b.Loop() {
			if _, err := evidence.Evaluate(m, folder, evidence.Engine{Name: "assaywrit", Version: "test"}); err != nil {
				b.Fatal(err)
			}
		}
	})
}
