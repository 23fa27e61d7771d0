package simulate_test

import (
	"bytes"
	"fmt"

	"assaywrit/evidence/simulate"
	"assaywrit/evidence/trace"
)

// Two vials, a strong one and an empty one: what came along is known exactly.
func ExampleBatch() {
	b := &simulate.Batch{
		Seed:       1,
		Column:     simulate.Column{SigmaMin: 0.026, TauMin: 0.012},
		Background: simulate.Background{Low: 1000, High: 1000, Electronic: 100, Gain: 30},
		Carryover:  0.0005,
		Channels: []simulate.Channel{{ID: "quantifier", Transition: trace.Transition{PrecursorMZ: 240.2, ProductMZ: 148.1, Polarity: trace.Positive},
			StartMin: 1.7, EndMin: 2.9, StepMin: 1. / 150}},
		Substances: []simulate.Substance{{Name: "salbutamol", Group: "salbutamol", RetentionMin: 2.3, Ions: []simulate.Ion{{Channel: "quantifier", Response: 80}}}},
		Injections: []simulate.Injection{
			{ID: "1", Yield: 0.86, Amounts: []simulate.Amount{{Substance: "salbutamol", NGPerML: 2000}}},
			{ID: "2", Yield: 1},
		},
	}
	for i := range b.Injections {
		for _, p := range b.Truth(i) {
			fmt.Printf("injection %s: %g ng/mL, area %.0f counts·min, apex at %.2f min\n", p.Injection, p.NGPerML, p.Peak.Area, p.Peak.Apex())
		}
	}
	traces, err := b.Acquire(0)
	if err != nil {
		fmt.Println(err)
		return
	}
	var file bytes.Buffer
	err = simulate.WriteMzML(&file, simulate.Run{ID: "run-1", StartTime: "2026-03-18T08:30:00+01:00", Traces: traces})
	fmt.Println(len(traces), "trace of", len(traces[0].TimeMin), "points, error:", err)
	// Output:
	// injection 1: 2000 ng/mL, area 137600 counts·min, apex at 2.30 min
	// injection 2: 1 ng/mL, area 80 counts·min, apex at 2.30 min
	// 1 trace of 181 points, error: <nil>
}
