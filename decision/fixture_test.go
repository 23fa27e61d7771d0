package decision

import (
	"fmt"
	"slices"
	"testing"

	"assaywrit/evidence"
	"assaywrit/evidence/calibration"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/uncertainty"
)

// handmade is a record written by hand: a batch of 18 injections with a threshold analyte (salbutamol, 1400 ng/mL, u 60 ng/mL) and
// one that is reported by presence (terbutaline). Everything in it holds by the set antidoping-urine-2022.
func handmade() *evidence.Record {
	rec := &evidence.Record{Format: evidence.RecordFormat, Engine: evidence.Engine{Name: "assaywrit", Version: "test"}}
	rec.Case = casefile.Case{
		Number: "T-1", MethodFile: "method.yaml", Deviations: []casefile.Deviation{},
		Sample:    casefile.Sample{Code: "770012", LaboratoryCode: "L-12", Container: "A bottle", Matrix: "urine", CollectedAt: "2026-03-14T23:30:00+01:00", ReceivedAt: "2026-03-16T09:05:00+01:00", SpecificGravity: new(1.012)},
		Request:   casefile.Request{Text: "both", Analytes: []string{"salbutamol", "terbutaline"}},
		Custody:   []casefile.CustodyEvent{{At: "2026-03-16T08:05:00Z", Item: "A bottle", Event: "received"}},
		Materials: []casefile.Material{{Name: "salbutamol", Lot: "007", Expires: "2026-12-31"}},
	}
	rec.Method = casefile.Method{
		ID: "SOP-T", Version: "1", Matrix: "urine", EffectiveFrom: "2025-01-01",
		Identification: casefile.Identification{ReferenceRoles: []casefile.Role{casefile.Calibrator}, CoelutionMin: 0.03},
		Batch: casefile.BatchLimits{BlankMaxOfLowest: 0.2, BlankMaxOfInternalStandard: 0.05, CalibratorBias: 0.15, LowestCalibratorBias: 0.2, CalibratorShare: 0.75, CalibratorLevels: 4,
			ControlBias: 0.15, ControlShare: 0.66, ControlShareEachLevel: 0.5, InternalStandardLow: 0.5, InternalStandardHigh: 1.5, AliquotSpread: 0.1, Aliquots: 3},
		Analytes: []casefile.Analyte{
			{ID: "salbutamol", Name: "Salbutamol", Kind: casefile.Threshold, InternalStandard: "is", Unit: "ng/mL", Qualifiers: make([]casefile.Transition, 2),
				Calibration: &casefile.Calibration{Model: "line", Weighting: "1/x"}, Uncertainty: &casefile.Uncertainty{Repeatability: "aliquots"}},
			{ID: "terbutaline", Name: "Terbutaline", Kind: casefile.Presence, InternalStandard: "is", Unit: "ng/mL", Qualifiers: make([]casefile.Transition, 2)},
		},
	}
	for i, row := range batchRows {
		sequence(rec, i, row)
	}
	rec.Analytes = []evidence.Analyte{assay(rec, 0, 2.31), assay(rec, 1, 1.85)}
	amounts(rec)
	return rec
}

type batchRow struct {
	id      string
	role    casefile.Role
	level   string
	aliquot string
	amount  float64
}

var batchRows = []batchRow{
	{"01", casefile.SolventBlank, "", "", 0}, {"02", casefile.MatrixBlank, "", "", 0}, {"03", casefile.ZeroCalibrator, "", "", 0},
	{"04", casefile.Calibrator, "C1", "", 100}, {"05", casefile.Calibrator, "C2", "", 400}, {"06", casefile.Calibrator, "C3", "", 800}, {"07", casefile.Calibrator, "C4", "", 1200}, {"08", casefile.Calibrator, "C5", "", 2000},
	{"09", casefile.CarryoverBlank, "", "", 0}, {"10", casefile.Control, "low", "", 300}, {"11", casefile.Control, "high", "", 1500}, {"12", casefile.NegativeControl, "", "", 0},
	{"13", casefile.SampleAliquot, "", "A1", 0}, {"14", casefile.SampleAliquot, "", "A2", 0}, {"15", casefile.SampleAliquot, "", "A3", 0},
	{"16", casefile.CarryoverBlank, "", "", 0}, {"17", casefile.Control, "low", "", 300}, {"18", casefile.Control, "high", "", 1500},
}

func (r batchRow) spiked() bool  { return r.role == casefile.Calibrator || r.role == casefile.Control }
func (r batchRow) analyte() bool { return r.spiked() || r.role == casefile.SampleAliquot }
func (r batchRow) standard() bool {
	return r.analyte() || r.role == casefile.ZeroCalibrator || r.role == casefile.NegativeControl
}

func sequence(rec *evidence.Record, i int, r batchRow) {
	row := casefile.Injection{ID: r.id, File: "raw/" + r.id + ".mzML", Role: r.role, Level: r.level, Aliquot: r.aliquot, Dilution: 1, Operator: "P-1", AcquiredAt: fmt.Sprintf("2026-03-18T08:%02d:00+01:00", 2*i)}
	inj := evidence.Injection{ID: r.id, File: row.File, Role: r.role, Level: r.level, Aliquot: r.aliquot, Dilution: 1, StartTime: row.AcquiredAt}
	if r.spiked() {
		row.Nominal = []casefile.Nominal{{Analyte: "salbutamol", NGPerML: r.amount}, {Analyte: "terbutaline", NGPerML: r.amount / 100}}
	}
	if r.role == casefile.SampleAliquot {
		row.SampleCode, inj.SampleCode = "770012", "770012"
	}
	for _, name := range []string{"salbutamol", "terbutaline"} {
		for _, trace := range []string{"quantifier", "qualifier-1", "qualifier-2"} {
			m := evidence.Measurement{Compound: name, Trace: trace, FirstMin: 0, LastMin: 5, WindowStartMin: 1, WindowEndMin: 3}
			if r.analyte() {
				m.Peak = &peak.Peak{Area: 1000, Noise: 1, SignalToNoise: 100}
			}
			inj.Measurements = append(inj.Measurements, m)
		}
	}
	rec.Sequence, rec.Injections = append(rec.Sequence, row), append(rec.Injections, inj)
}

// abundances of the three ions; the quantifier is the base.
var abundances = []float64{1, 0.6, 0.4}

func assay(rec *evidence.Record, k int, retention float64) evidence.Analyte {
	m := rec.Method.Analytes[k]
	a := evidence.Analyte{ID: m.ID, Name: m.Name, Kind: m.Kind}
	stat := func(mean float64) evidence.Statistic {
		return evidence.Statistic{Mean: mean, Min: mean, Max: mean, N: 5}
	}
	a.Reference = evidence.Reference{Injections: []string{"04", "05", "06", "07", "08"}, RetentionMin: new(stat(retention)), RelativeRetention: new(stat(1.01))}
	for i, v := range abundances {
		a.Reference.Ratios = append(a.Reference.Ratios, evidence.ReferenceRatio{Trace: traceName(i), Base: i == 0, Ratio: stat(v)})
	}
	for i, r := range batchRows {
		if r.role == casefile.SolventBlank || r.role == casefile.MatrixBlank || r.role == casefile.CarryoverBlank {
			a.Blanks = append(a.Blanks, evidence.Blank{Injection: r.id, InjectionIndex: i, Role: r.role, OfLowest: new(0.0), OfInternalStandard: new(0.0)})
			a.InternalStandard = append(a.InternalStandard, evidence.InternalResponse{Injection: r.id, InjectionIndex: i, Role: r.role})
			continue
		}
		a.InternalStandard = append(a.InternalStandard, evidence.InternalResponse{Injection: r.id, InjectionIndex: i, Role: r.role, Area: new(5000.0), Relative: new(1.0)})
		if r.role == casefile.ZeroCalibrator || r.role == casefile.NegativeControl {
			a.Blanks = append(a.Blanks, evidence.Blank{Injection: r.id, InjectionIndex: i, Role: r.role, OfLowest: new(0.0), InternalStandardArea: 5000, OfInternalStandard: new(1.0), ExpectInternalStandard: true})
		}
		a.Identifications = append(a.Identifications, identification(k, i, r, retention))
	}
	return a
}

func traceName(i int) string { return []string{"quantifier", "qualifier-1", "qualifier-2"}[i] }

func identification(k, i int, r batchRow, retention float64) evidence.Identification {
	id := evidence.Identification{Injection: r.id, InjectionIndex: i, Aliquot: r.aliquot}
	if r.analyte() {
		id.RetentionMin, id.RelativeRetention = new(retention), new(1.01)
	}
	for n, v := range abundances {
		ion := evidence.IonMatch{Trace: traceName(n), MeasurementIndex: 3*k + n, Base: n == 0, ReferenceAbundance: new(v)}
		if r.analyte() {
			ion.SignalToNoise, ion.Abundance, ion.ApexOffsetMin = new(100.0), new(v), new(0.0)
			if n > 0 {
				ion.AbundanceStdU = new(0.01)
			}
		}
		id.Ions = append(id.Ions, ion)
	}
	return id
}

// amounts fills the line, the controls, the aliquots and the result of the threshold analyte.
func amounts(rec *evidence.Record) {
	a := &rec.Analytes[0]
	cal := &evidence.Calibration{Fit: calibration.Fit{Weighting: "1/x", A: 0, B: 0.001}, LowNGPerML: 100, HighNGPerML: 2000}
	for i, r := range batchRows {
		c := evidence.Concentration{Injection: r.id, InjectionIndex: i, Level: r.level, Aliquot: r.aliquot, Dilution: 1}
		switch r.role {
		case casefile.Calibrator:
			cal.Injections, cal.Levels = append(cal.Injections, r.id), append(cal.Levels, r.level)
			cal.Fit.Points = append(cal.Fit.Points, calibration.FittedPoint{X: r.amount, RelativeBias: new(0.01)})
		case casefile.Control:
			c.ReadNGPerML, c.NGPerML, c.NominalNGPerML, c.Bias = new(r.amount), new(r.amount), new(r.amount), new(0.02)
			a.Controls = append(a.Controls, c)
		case casefile.SampleAliquot:
			c.ReadNGPerML, c.NGPerML = new(1400.0), new(1400.0)
			a.Aliquots = append(a.Aliquots, c)
		}
	}
	a.Calibration = cal
	a.Result = &evidence.Result{NGPerML: 1400, N: 3, SD: new(14.0), RSD: new(0.01), Budget: uncertainty.Budget{Value: 1400, StdU: 60}}
}

// setTo gives the record another result and uncertainty, with aliquots to match.
func setTo(rec *evidence.Record, value, u float64) {
	a := &rec.Analytes[0]
	a.Result.NGPerML, a.Result.Budget.Value, a.Result.Budget.StdU = value, value, u
}

// ofRole lists the indices of identifications of one role.
func ofRole(rec *evidence.Record, k int, role casefile.Role) []int {
	var list []int
	for i, id := range rec.Analytes[k].Identifications {
		if rec.Injections[id.InjectionIndex].Role == role {
			list = append(list, i)
		}
	}
	return list
}

// noPeak takes the peaks of an analyte out of an injection, as if nothing had eluted.
func noPeak(rec *evidence.Record, k, identification int, traces ...string) {
	id := &rec.Analytes[k].Identifications[identification]
	for i := range id.Ions {
		ion := &id.Ions[i]
		if len(traces) > 0 && !slices.Contains(traces, ion.Trace) {
			continue
		}
		rec.Injections[id.InjectionIndex].Measurements[ion.MeasurementIndex].Peak = nil
		ion.SignalToNoise, ion.Abundance, ion.AbundanceStdU, ion.ApexOffsetMin = nil, nil, nil, nil
		if ion.Trace == "quantifier" {
			id.RetentionMin, id.RelativeRetention = nil, nil
		}
		if ion.Base {
			for j := range id.Ions {
				id.Ions[j].Abundance, id.Ions[j].AbundanceStdU = nil, nil
			}
		}
	}
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

func doping(t testing.TB) *Set { return setNamed(t, "antidoping-urine-2022") }

func decide(t testing.TB, rec *evidence.Record, set *Set) *Finding {
	t.Helper()
	f, err := Decide(rec, "e", set, "s")
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// checkOf finds a check of a finding.
func checkOf(t testing.TB, f *Finding, id string) Check {
	t.Helper()
	for _, c := range allChecks(f) {
		if c.ID == id {
			return c
		}
	}
	t.Fatalf("no check %s", id)
	return Check{}
}

func allChecks(f *Finding) []Check {
	list := slices.Clone(f.Batch)
	for _, a := range f.Analytes {
		list = append(list, a.Checks...)
	}
	return list
}
