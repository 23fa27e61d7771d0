package evidence_test

import (
	"bytes"
	"compress/gzip"
	"fmt"
	"slices"
	"strings"
	"testing"
	"testing/fstest"

	"assaywrit/evidence"
)

// rawOf returns the path of the raw file of the nth row (from 0) with a role.
func rawOf(t *testing.T, m fstest.MapFS, role string, n int) string {
	t.Helper()
	for _, line := range strings.Split(string(m["sequence.csv"].Data), "\n") {
		fields := strings.Split(line, ",")
		if len(fields) > 2 && fields[2] == role {
			if n == 0 {
				return fields[1]
			}
			n--
		}
	}
	t.Fatalf("no %s", role)
	return ""
}

// TestCrossChecks changes raw files of the example, and asks for the one cross-check that each change must raise.
func TestCrossChecks(t *testing.T) {
	change := func(m fstest.MapFS, path string, pairs ...string) {
		text := string(m[path].Data)
		for i := 0; i < len(pairs); i += 2 {
			if !strings.Contains(text, pairs[i]) {
				t.Fatalf("%s does not hold %q", path, pairs[i])
			}
			text = strings.ReplaceAll(text, pairs[i], pairs[i+1])
		}
		m[path] = &fstest.MapFile{Data: []byte(text)}
	}
	for _, tt := range []struct {
		name string
		edit func(m fstest.MapFS)
		want []string
	}{
		{"nothing", func(fstest.MapFS) {}, nil},
		{"same file", func(m fstest.MapFS) {
			m[rawOf(t, m, "calibrator", 1)] = &fstest.MapFile{Data: m[rawOf(t, m, "calibrator", 0)].Data}
		}, []string{evidence.SameFile, evidence.OtherStart, evidence.StartOrder}}, // the copy states the start of its original
		{"same numbers", func(m fstest.MapFS) {
			var b bytes.Buffer
			z := gzip.NewWriter(&b)
			z.Write(m[rawOf(t, m, "calibrator", 0)].Data)
			z.Close()
			m[rawOf(t, m, "calibrator", 1)] = &fstest.MapFile{Data: b.Bytes()}
		}, []string{evidence.SameTraces, evidence.OtherStart, evidence.StartOrder}},
		{"other instrument", func(m fstest.MapFS) { change(m, rawOf(t, m, "control", 0), "SIM-0007", "SIM-0008") }, []string{evidence.OtherInstrument}},
		{"other software", func(m fstest.MapFS) { change(m, rawOf(t, m, "control", 0), `version="1"`, `version="2"`) }, []string{evidence.OtherSoftware}},
		{"other day", func(m fstest.MapFS) {
			change(m, rawOf(t, m, "control", 0), "startTimeStamp=\"2026-03-18", "startTimeStamp=\"2026-03-19")
		}, []string{evidence.OtherStart, evidence.StartOrder}},
		{"other sample", func(m fstest.MapFS) { change(m, rawOf(t, m, "sample", 1), `name="4410927"`, `name="4410972"`) }, []string{evidence.OtherCode}},
	} {
		m := exampleFolder(t)
		tt.edit(m)
		ev, err := evaluate(t, m)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		var got []string
		for _, x := range ev.Record.CrossChecks {
			if !slices.Contains(got, x.Code) {
				got = append(got, x.Code)
			}
			if len(x.Injections) == 0 || x.Detail == "" {
				t.Errorf("%s: %+v says nothing", tt.name, x)
			}
		}
		slices.Sort(got)
		slices.Sort(tt.want)
		if !slices.Equal(got, tt.want) {
			t.Errorf("%s: got %v, want %v", tt.name, ev.Record.CrossChecks, tt.want)
		}
	}
}

// tableCase is the example with one raw file as a table, whose rows are changed.
func tableCase(t *testing.T, rows func(time, counts []float64) (t, y []float64)) (*evidence.Evaluation, string) {
	t.Helper()
	m := exampleFolder(t)
	plain, err := evaluate(t, m)
	if err != nil {
		t.Fatal(err)
	}
	path := rawOf(t, m, "control", 0)
	var of *evidence.Injection
	for i := range plain.Record.Injections {
		if plain.Record.Injections[i].File == path {
			of = &plain.Record.Injections[i]
		}
	}
	// All traces of one compound share their times; the table holds them beside each other.
	var columns []string
	var text strings.Builder
	var times []float64
	var ys [][]float64
	for i, mt := range of.Measurements {
		c, _ := plain.Chromatogram(path, mt.TraceID)
		tt, y := c.TimeMin, c.Intensity
		if mt.Compound == "salbutamol" && mt.Trace == evidence.QuantifierTrace {
			tt, y = rows(tt, y)
		}
		if times == nil || mt.Compound == "salbutamol" && mt.Trace == evidence.QuantifierTrace {
			times = tt
		}
		ys = append(ys, y)
		columns = append(columns, fmt.Sprintf("      - {column: %d, id: c%d, precursor: %g, product: %g, polarity: positive}\n", i+2, i, mt.Transition.PrecursorMZ, mt.Transition.ProductMZ))
	}
	for k := range times {
		fmt.Fprintf(&text, "%.6f", times[k])
		for _, y := range ys {
			fmt.Fprintf(&text, ",%g", y[min(k, len(y)-1)])
		}
		text.WriteByte('\n')
	}
	m[path] = &fstest.MapFile{Data: []byte(text.String())}
	layout := "tables:\n  - files: " + path + "\n    separator: comma\n    decimal_mark: point\n    header_lines: 0\n    time_column: 1\n    time_unit: min\n    columns:\n" + strings.Join(columns, "")
	m["method.yaml"] = &fstest.MapFile{Data: []byte(strings.Replace(string(m["method.yaml"].Data), "\nintegration:", "\n"+layout+"\nintegration:", 1))}
	ev, err := evaluate(t, m)
	if err != nil {
		t.Fatal(err)
	}
	return ev, path
}

// TestTraceWarnings: gaps and counts below zero are seen, and told apart by where they lie.
func TestTraceWarnings(t *testing.T) {
	without := func(from, to float64) func(t, y []float64) ([]float64, []float64) {
		return func(t, y []float64) (a, b []float64) {
			for i := range t {
				if t[i] < from || t[i] > to {
					a, b = append(a, t[i]), append(b, y[i])
				}
			}
			return a, b
		}
	}
	for _, tt := range []struct {
		name string
		rows func(t, y []float64) ([]float64, []float64)
		want []string
	}{
		{"nothing", func(t, y []float64) ([]float64, []float64) { return t, y }, nil},
		{"gap beside the peak", without(1.9, 1.93), []string{evidence.GapInTrace}},
		{"gap in the peak", without(2.29, 2.31), []string{evidence.GapInPeak}},
		{"below zero", func(t, y []float64) ([]float64, []float64) {
			y = slices.Clone(y)
			y[3] = -5
			return t, y
		}, []string{evidence.NegativeIons}},
	} {
		ev, path := tableCase(t, tt.rows)
		for _, inj := range ev.Record.Injections {
			if inj.File != path {
				continue
			}
			for _, m := range inj.Measurements {
				if m.Compound != "salbutamol" || m.Trace != evidence.QuantifierTrace {
					continue
				}
				var got []string
				for _, w := range m.Warnings {
					got = append(got, w.Code)
				}
				if !slices.Equal(got, tt.want) {
					t.Errorf("%s: got %v, want %v", tt.name, m.Warnings, tt.want)
				}
			}
		}
	}
}
