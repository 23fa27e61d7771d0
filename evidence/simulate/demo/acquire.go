package demo

import (
	"fmt"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/simulate"
	"assaywrit/evidence/trace"
)

// seed of every random number in the example.
const seed = 20260417

const (
	halfSpan = 0.6      // min recorded on either side of the expected retention
	cycle    = 1. / 150 // min between points
)

// acquire simulates one injection of the batch.
func acquire(b *simulate.Batch, i int) (simulate.Run, error) {
	r := batch[i]
	traces, err := b.Acquire(i)
	return simulate.Run{
		ID: "run-" + r.id(i), SampleCode: r.sampleName(), StartTime: acquiredAt(i),
		Model: "triple quadrupole, simulated", Serial: "SIM-0007", Software: "trace simulator of the example", Version: "1",
		Traces: traces,
	}, err
}

// simulated is the batch as the simulator takes it.
func simulated() *simulate.Batch {
	b := &simulate.Batch{
		Seed:       seed,
		Column:     simulate.Column{SigmaMin: 0.026, TauMin: 0.012, DriftMin: 0.00025, JitterMin: 0.0012},
		Background: simulate.Background{Low: 900, High: 1500, Drift: 0.3, Wave: 0.04, Electronic: 110, Gain: 30},
		Scatter:    simulate.Scatter{Volume: 0.005, Yield: 0.03, Differential: 0.006, Ion: 0.006},
		Carryover:  0.0005,
	}
	for _, c := range compounds {
		for _, product := range c.products {
			b.Channels = append(b.Channels, channel(c.precursor, product, c.retention))
		}
		b.Channels = append(b.Channels, channel(c.standardIons[0], c.standardIons[1], c.standardRT))
		b.Substances = append(b.Substances, c.substances()...)
	}
	for i := range batch {
		b.Injections = append(b.Injections, vial(i))
	}
	return b
}

func channel(precursor, product, expected float64) simulate.Channel {
	return simulate.Channel{
		ID:         traceID(precursor, product),
		Transition: trace.Transition{PrecursorMZ: precursor, ProductMZ: product, Polarity: trace.Positive},
		StartMin:   expected - halfSpan, EndMin: expected + halfSpan, StepMin: cycle,
	}
}

func traceID(precursor, product float64) string {
	return fmt.Sprintf("SRM %.1f > %.1f", precursor, product)
}

// substances are a compound, its internal standard, and the neighbour that its transitions pick up.
func (c compound) substances() []simulate.Substance {
	analyte := simulate.Substance{Name: c.id, Group: c.id, RetentionMin: c.retention}
	other := simulate.Substance{Name: c.neighbour.name, Group: c.id, RetentionMin: c.retention + c.neighbour.after}
	for k, product := range c.products {
		id := traceID(c.precursor, product)
		analyte.Ions = append(analyte.Ions, simulate.Ion{Channel: id, Response: float64(c.response * c.ratios[k])})
		if c.neighbour.name != "" && c.neighbour.ratios[k] > 0 {
			other.Ions = append(other.Ions, simulate.Ion{Channel: id, Response: float64(c.response * c.neighbour.ratios[k])})
		}
	}
	list := []simulate.Substance{analyte, {
		Name: c.standard, Group: c.id, RetentionMin: c.standardRT,
		Ions: []simulate.Ion{{Channel: traceID(c.standardIons[0], c.standardIons[1]), Response: c.response}},
	}}
	if c.neighbour.name != "" {
		list = append(list, other)
	}
	return list
}

// Ionisation by matrix: urine suppresses it, and this sample's urine more than that of the calibrators.
const (
	solventYield = 1
	urineYield   = 0.86
	sampleYield  = 0.74
)

// vial is what was put into the i-th vial.
func vial(i int) simulate.Injection {
	r := batch[i]
	in := simulate.Injection{ID: r.id(i), Yield: solventYield}
	if r.urine {
		in.Yield = urineYield
	}
	sample := r.role == casefile.SampleAliquot
	if sample {
		in.Yield = sampleYield
	}
	for _, c := range compounds {
		amount, scatter, along := float64(r.scale*c.top), 0.009, c.neighbour.inUrine
		if sample {
			amount, scatter, along = c.inSample/r.dilution, 0.012, c.neighbour.inSample
		}
		in.Amounts = append(in.Amounts, simulate.Amount{Substance: c.id, NGPerML: amount, RSD: scatter})
		if r.standard {
			in.Amounts = append(in.Amounts, simulate.Amount{Substance: c.standard, NGPerML: c.standardConc, RSD: 0.006})
		}
		if r.urine && along > 0 {
			in.Amounts = append(in.Amounts, simulate.Amount{Substance: c.neighbour.name, NGPerML: along, RSD: 0.03})
		}
	}
	return in
}
