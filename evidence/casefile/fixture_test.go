package casefile

import (
	"errors"
	"fmt"
	"io/fs"
	"strings"
	"testing"
	"testing/fstest"
	"unicode/utf8"
)

// The small case that tests alter: everything in it is invented, and its raw files are not opened.
const smallCase = `format: assaywrit-case/1
case: T-1
laboratory: {code: LAB-1, name: Laboratory, address: 1 Road}
customer: {name: Authority, contact: results desk}
sample:
  code: 4410
  laboratory_code: L-4410
  container: A bottle
  matrix: urine
  collected: 2026-03-14T16:20:00+01:00
  received: 2026-03-16T09:05:00+01:00
  condition: sealed
  volume: 92 mL
  ph: 6.1
  specific_gravity: 1.012
request:
  text: Confirm salbutamol.
  analytes: [salbutamol]
method: method.yaml
sequence: sequence.csv
criteria: built-in-set
people:
  - {code: P-1, position: collection officer}
  - {code: P-2, position: analyst}
  - {code: P-3, position: certifying scientist}
signatories:
  - {person: P-3, meaning: authorised}
custody:
  - {at: 2026-03-14T16:20:00+01:00, item: A bottle, event: sealed, to: P-1}
  - {at: 2026-03-16T09:05:00+01:00, item: A bottle, event: received, from: P-1, to: P-2}
  - {at: 2026-03-18T07:00:00+01:00, item: A bottle, event: stored, from: P-2, location: freezer}
  - {at: 2026-03-18T07:10:00+01:00, item: aliquot A1, event: taken, to: P-2}
initial_test: {at: 2026-03-17T15:40:00+01:00, method: S-2, aliquot: I1, by: P-2, result: salbutamol suspected}
materials:
  - {name: salbutamol, lot: 007, expires: 2027-06-30}
deviations:
  - {text: column changed, approved_by: P-3}
manual_integrations:
  - {injection: S1, compound: salbutamol, trace: qualifier-1, start: 2.2 min, end: 2.4 min, by: P-2, at: 2026-03-18T12:00:00+01:00, reason: rider, approved_by: P-3}
documents:
  - {file: documents/form.pdf, title: Custody form}
`

const smallMethod = `format: assaywrit-method/1
id: M-1
version: 3
title: Salbutamol in urine
technique: LC-MS/MS
matrix: urine
summary: Extraction and LC-MS/MS.
instrument: {id: MS-1, void_time: 0.5 min}
tables:
  - files: raw/*.csv
    separator: semicolon
    decimal_mark: comma
    header_lines: 1
    time_column: 1
    time_unit: min
    columns:
      - {column: 2, id: a}
      - {column: 3, id: b}
integration: {smoothing_points: 9, min_signal_to_noise: 3, min_width: 0.02 min, shared_valley: perpendicular-drop, valley_fraction: 0}
identification: {reference_roles: [calibrator], coelution: 0.03 min, transition_tolerance: 0.3}
batch:
  blank_max_of_lowest: 20 %
  blank_max_of_internal_standard: 5 %
  calibrator_bias: 15 %
  lowest_calibrator_bias: 20 %
  calibrator_share: 75 %
  calibrator_levels: 3
  control_bias: 15 %
  control_share: 66 %
  control_share_each_level: 50 %
  internal_standard_low: 50 %
  internal_standard_high: 150 %
  aliquot_spread: 10 %
  aliquots: 1
internal_standards:
  - id: salbutamol-d3
    name: Salbutamol-d3
    expected_retention: 2.29 min
    retention_window: 0.2 min
    transition: {precursor: 243.2, product: 151.1}
analytes:
  - id: salbutamol
    name: Salbutamol
    kind: threshold
    internal_standard: salbutamol-d3
    expected_retention: 2.3 min
    retention_window: 0.1 min
    quantifier: {precursor: 240.2, product: 148.1}
    qualifiers:
      - {precursor: 240.2, product: 222.1}
      - {precursor: 240.2, product: 166.1}
    unit: ng/mL
    calibration: {model: line, weighting: 1/x2}
    uncertainty:
      repeatability: none
      components:
        - {name: whole method, type: B, relative: 4 %, source: validation}
`

const smallSequence = `injection,file,role,level,aliquot,sample_code,dilution,acquired,operator,note,nominal salbutamol [ng/mL]
B1,raw/b1.mzML,matrix-blank,,,,,2026-03-18T08:00:00+01:00,P-2,,
C1,raw/c1.mzML,calibrator,low,,,,2026-03-18T08:10:00+01:00,P-2,,62.5
C2,raw/c2.mzML,calibrator,middle,,,,2026-03-18T08:20:00+01:00,P-2,,1000
C3,raw/c3.mzML,calibrator,high,,,,2026-03-18T08:30:00+01:00,P-2,,2500
X1,raw/x1.mzML,excluded,,,,,2026-03-18T08:40:00+01:00,P-2,"no spray, again",
Q1,raw/q1.mzML,control,,,,,2026-03-18T08:50:00+01:00,P-2,,1500
S1,raw/s1.mzML,sample,,A1,4410,2.5,2026-03-18T09:00:00+01:00,P-2,,
`

// small is the small case as a folder.
func small() fstest.MapFS {
	m := fstest.MapFS{}
	put(m, CaseFile, smallCase)
	put(m, "method.yaml", smallMethod)
	put(m, "sequence.csv", smallSequence)
	for _, name := range []string{"b1", "c1", "c2", "c3", "x1", "q1", "s1"} {
		put(m, "raw/"+name+".mzML", "not opened")
	}
	put(m, "documents/form.pdf", "a form")
	return m
}

func put(m fstest.MapFS, name, text string) { m[name] = &fstest.MapFile{Data: []byte(text)} }

// A change replaces a text that a file has once. A file without an old text is added, or taken away where the new one is empty too.
type change struct{ file, old, replacement string }

func changed(t testing.TB, changes ...change) fstest.MapFS {
	t.Helper()
	m := small()
	for _, c := range changes {
		switch {
		case c.old == "" && c.replacement == "":
			if m[c.file] == nil {
				t.Fatalf("there is no %s to take away", c.file)
			}
			delete(m, c.file)
		case c.old == "":
			put(m, c.file, c.replacement)
		default:
			text := string(m[c.file].Data)
			if n := strings.Count(text, c.old); n != 1 {
				t.Fatalf("%s holds %d times %q, want once", c.file, n, c.old)
			}
			put(m, c.file, strings.Replace(text, c.old, c.replacement, 1))
		}
	}
	return m
}

// place finds where a text that a file has once stands: "line:column" in characters.
func place(t testing.TB, fsys fs.FS, file, text string) string {
	t.Helper()
	data, err := fs.ReadFile(fsys, file)
	if err != nil {
		t.Fatal(err)
	}
	before, _, ok := strings.Cut(string(data), text)
	if !ok || strings.Count(string(data), text) != 1 {
		t.Fatalf("%s holds %d times %q, want once", file, strings.Count(string(data), text), text)
	}
	line := before[strings.LastIndex(before, "\n")+1:]
	return fmt.Sprintf("%d:%d", strings.Count(before, "\n")+1, utf8.RuneCountInString(line)+1)
}

// problemsOf loads a folder that is expected to be refused.
func problemsOf(t testing.TB, fsys fs.FS) Problems {
	t.Helper()
	folder, err := Load(fsys)
	var problems Problems
	if err == nil || folder != nil || !errors.As(err, &problems) {
		t.Fatalf("folder %v, error %v", folder, err)
	}
	return problems
}
