// Package casefile reads and validates the folder that a laboratory writes for one case.
//
// The folder holds case.yaml, the method and the sequence that it names, the raw files that the sequence names, and documents;
// every file must be named by one of them, except hidden ones. Load reads it and lists everything that is wrong at once, each
// problem with its file, line, column, what was found and what would be accepted. The keys of the two YAML files, and what each
// accepts, are in the tags of Case and Method (package strictyaml) and in the JSON Schemas made from them. Quantities are written
// with their unit (package units) and kept in minutes, ng/mL, mL, uL, mm, mL/min and fractions of 1; times carry their offset
// (RFC 3339).
//
// case.yaml, format assaywrit-case/1:
//
//	format: assaywrit-case/1
//	case: T-1
//	laboratory: {code: LAB-1, name: Laboratory, address: 1 Road}
//	customer: {name: Authority, contact: results desk}
//	sample:
//	  code: 4410
//	  laboratory_code: L-4410
//	  container: A bottle
//	  matrix: urine
//	  collected: 2026-03-14T16:20:00+01:00
//	  received: 2026-03-16T09:05:00+01:00
//	  condition: sealed
//	  volume: 92 mL
//	  ph: 6.1
//	  specific_gravity: 1.012
//	request:
//	  text: Confirm salbutamol.
//	  analytes: [salbutamol]
//	method: method.yaml
//	sequence: sequence.csv
//	criteria: built-in-set
//	people:
//	  - {code: P-1, position: collection officer}
//	  - {code: P-2, position: analyst}
//	  - {code: P-3, position: certifying scientist}
//	signatories:
//	  - {person: P-3, meaning: authorised}
//	custody:
//	  - {at: 2026-03-14T16:20:00+01:00, item: A bottle, event: sealed, to: P-1}
//	  - {at: 2026-03-16T09:05:00+01:00, item: A bottle, event: received, from: P-1, to: P-2}
//	  - {at: 2026-03-18T07:00:00+01:00, item: A bottle, event: stored, from: P-2, location: freezer}
//	  - {at: 2026-03-18T07:10:00+01:00, item: aliquot A1, event: taken, to: P-2}
//	initial_test: {at: 2026-03-17T15:40:00+01:00, method: S-2, aliquot: I1, by: P-2, result: salbutamol suspected}
//	materials:
//	  - {name: salbutamol, lot: 007, expires: 2027-06-30}
//	deviations:
//	  - {text: column changed, approved_by: P-3}
//	manual_integrations:
//	  - {injection: S1, compound: salbutamol, trace: qualifier-1, start: 2.2 min, end: 2.4 min, by: P-2, at: 2026-03-18T12:00:00+01:00, reason: rider, approved_by: P-3}
//	documents:
//	  - {file: documents/form.pdf, title: Custody form}
//
// The method, format assaywrit-method/1. The layouts under tables are for raw files of delimited text:
//
//	format: assaywrit-method/1
//	id: M-1
//	version: 3
//	title: Salbutamol in urine
//	technique: LC-MS/MS
//	matrix: urine
//	summary: Extraction and LC-MS/MS.
//	instrument: {id: MS-1, void_time: 0.5 min}
//	tables:
//	  - files: raw/*.csv
//	    separator: semicolon
//	    decimal_mark: comma
//	    header_lines: 1
//	    time_column: 1
//	    time_unit: min
//	    columns:
//	      - {column: 2, id: a}
//	      - {column: 3, id: b}
//	integration: {smoothing_points: 9, min_signal_to_noise: 3, min_width: 0.02 min, shared_valley: perpendicular-drop, valley_fraction: 0}
//	identification: {reference_roles: [calibrator], coelution: 0.03 min, transition_tolerance: 0.3}
//	batch:
//	  blank_max_of_lowest: 20 %
//	  blank_max_of_internal_standard: 5 %
//	  calibrator_bias: 15 %
//	  lowest_calibrator_bias: 20 %
//	  calibrator_share: 75 %
//	  calibrator_levels: 3
//	  control_bias: 15 %
//	  control_share: 66 %
//	  control_share_each_level: 50 %
//	  internal_standard_low: 50 %
//	  internal_standard_high: 150 %
//	  aliquot_spread: 10 %
//	  aliquots: 1
//	internal_standards:
//	  - id: salbutamol-d3
//	    name: Salbutamol-d3
//	    expected_retention: 2.29 min
//	    retention_window: 0.2 min
//	    transition: {precursor: 243.2, product: 151.1}
//	analytes:
//	  - id: salbutamol
//	    name: Salbutamol
//	    kind: threshold
//	    internal_standard: salbutamol-d3
//	    expected_retention: 2.3 min
//	    retention_window: 0.1 min
//	    quantifier: {precursor: 240.2, product: 148.1}
//	    qualifiers:
//	      - {precursor: 240.2, product: 222.1}
//	      - {precursor: 240.2, product: 166.1}
//	    unit: ng/mL
//	    calibration: {model: line, weighting: 1/x2}
//	    uncertainty:
//	      repeatability: none
//	      components:
//	        - {name: whole method, type: B, relative: 4 %, source: validation}
//
// The sequence is a table, as spreadsheet programs save it: separated by comma, semicolon or tab, in UTF-8 or UTF-16 with its mark.
// Its columns are found by their names, in any order; level, aliquot, sample_code, dilution and note may be left out. Numbers have
// a decimal point, or, in a file that is not separated by commas, a decimal comma throughout:
//
//	injection,file,role,level,aliquot,sample_code,dilution,acquired,operator,note,nominal salbutamol [ng/mL]
//	B1,raw/b1.mzML,matrix-blank,,,,,2026-03-18T08:00:00+01:00,P-2,,
//	C1,raw/c1.mzML,calibrator,low,,,,2026-03-18T08:10:00+01:00,P-2,,62.5
//	C2,raw/c2.mzML,calibrator,middle,,,,2026-03-18T08:20:00+01:00,P-2,,1000
//	C3,raw/c3.mzML,calibrator,high,,,,2026-03-18T08:30:00+01:00,P-2,,2500
//	X1,raw/x1.mzML,excluded,,,,,2026-03-18T08:40:00+01:00,P-2,"no spray, again",
//	Q1,raw/q1.mzML,control,,,,,2026-03-18T08:50:00+01:00,P-2,,1500
//	S1,raw/s1.mzML,sample,,A1,4410,2.5,2026-03-18T09:00:00+01:00,P-2,,
//
// An event of custody with "to" says who has the item from then on. One with "from" says who gave it: that must be the one who had
// it. One with "from" alone leaves it with nobody, in a store say.
package casefile
