package demo

import (
	"fmt"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/simulate"
	"assaywrit/evidence/trace"
)

const (
	sigma     = 0.026    // min, of every peak
	tau       = 0.012    // min
	halfSpan  = 0.6      // min recorded on either side of the expected retention
	cycle     = 1. / 150 // min between points
	carryover = 0.0004   // share of the injection before that comes along
)

// acquire simulates one injection of the batch.
func acquire(i int) simulate.Run {
	r := batch[i]
	run := simulate.Run{
		ID: "run-" + r.id(i), SampleCode: r.sampleName(), StartTime: acquiredAt(i),
		Model: "triple quadrupole, simulated", Serial: "SIM-0007", Software: "trace simulator of the example", Version: "1",
	}
	for _, c := range compounds {
		run.Traces = append(run.Traces, c.record(i)...)
	}
	return run
}

// amount is the concentration in what was injected, ng/mL, carry-over included.
func (c compound) amount(i int) float64 {
	return c.prepared(i) + float64(carryover*c.before(i))
}

func (c compound) before(i int) float64 {
	if i == 0 {
		return 0
	}
	return c.prepared(i - 1)
}

// prepared is the concentration as prepared, with the scatter of preparation.
func (c compound) prepared(i int) float64 {
	r := batch[i]
	x := float64(r.scale * c.top)
	scatter := 0.009
	if r.role == casefile.SampleAliquot {
		x, scatter = c.inSample/r.dilution, 0.012
	}
	return float64(x * simulate.NewStream(seed, "preparation", c.id, r.id(i)).Scatter(scatter))
}

// ionisation is the yield in this injection: matrix suppresses it, for analyte and internal standard alike but for a small part.
func (c compound) ionisation(i int) (both, analyteOnly float64) {
	r := batch[i]
	s := simulate.NewStream(seed, "ionisation", c.id, r.id(i))
	both = 1
	if r.urine {
		both = 0.86
	}
	if r.role == casefile.SampleAliquot {
		both = 0.74 // this sample's matrix is heavier
	}
	return float64(both * s.Scatter(0.03)), s.Scatter(0.006)
}

// record makes the traces of a compound and its internal standard.
func (c compound) record(i int) []trace.Chromatogram {
	r := batch[i]
	both, only := c.ionisation(i)
	shift := float64(0.00025*float64(i)) + float64(0.0012*simulate.NewStream(seed, "retention", r.id(i)).Normal())
	var list []trace.Chromatogram
	for k, product := range c.products {
		area := float64(c.amount(i) * c.response * c.ratios[k] * both * only)
		peaks := append([]simulate.Peak{peak(area, c.retention+shift)}, c.neighbours(i, k, both, shift)...)
		list = append(list, c.trace(i, c.precursor, product, c.retention, peaks))
	}
	standard := 0.0
	if r.standard {
		standard = c.standardConc
	}
	if i > 0 && batch[i-1].standard {
		standard += float64(carryover * c.standardConc)
	}
	pipetting := simulate.NewStream(seed, "standard", c.id, r.id(i)).Scatter(0.006)
	area := float64(standard * c.response * both * pipetting)
	return append(list, c.trace(i, c.standardIons[0], c.standardIons[1], c.standardRT, []simulate.Peak{peak(area, c.standardRT+shift)}))
}

func peak(area, retention float64) simulate.Peak {
	return simulate.Peak{Area: area, Mu: retention - 0.006, Sigma: sigma, Tau: tau}
}

// neighbours are the other substances that a transition picks up: in urine one that is only partly resolved from salbutamol's
// quantifier, and in the sample one that looks like clenbuterol but comes later, with other ions.
func (c compound) neighbours(i, ion int, both, shift float64) []simulate.Peak {
	r := batch[i]
	switch {
	case c.id == "salbutamol" && ion == 0 && r.urine:
		amount := 40.0
		if r.role == casefile.SampleAliquot {
			amount = 70
		}
		return []simulate.Peak{peak(float64(amount*c.response*both), c.retention+shift+0.128)}
	case c.id == "clenbuterol" && r.role == casefile.SampleAliquot:
		share := []float64{1, 0.11, 0.63}[ion]
		return []simulate.Peak{peak(float64(0.55*c.response*both*share), c.retention+shift+0.135)}
	}
	return nil
}

// trace records one transition. Ions of higher mass have a quieter baseline.
func (c compound) trace(i int, precursor, product, expected float64, peaks []simulate.Peak) trace.Chromatogram {
	id := fmt.Sprintf("SRM %.1f > %.1f", precursor, product)
	s := simulate.NewStream(seed, "noise", batch[i].id(i), id)
	level := 900 + float64(600*s.Uniform())
	d := simulate.Detector{Baseline: level, Drift: float64(float64(0.3*level) * s.Normal()), Wave: float64(0.04 * level), Electronic: 110, Gain: 30}
	t, y := d.Record(peaks, expected-halfSpan, expected+halfSpan, cycle, s)
	return trace.Chromatogram{
		ID: id, Kind: trace.SRM, Transition: trace.Transition{PrecursorMZ: precursor, ProductMZ: product, Polarity: trace.Positive},
		TimeMin: t, Intensity: y,
	}
}
