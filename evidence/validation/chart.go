package validation

import (
	"errors"
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// The algorithms of control charts; a published version never changes its results.
const (
	ChartAlgorithm = "shewhart-individuals@1"
	DriftAlgorithm = "ewma@1"
)

// fewBatches is the number of batches below which limits are flagged (common practice, no source).
const fewBatches = 20

// A Chart is the control chart of one analyte at one level: single results in their order, with limits from the history.
type Chart struct {
	Algorithm string   `json:"algorithm"`
	Analyte   string   `json:"analyte,omitempty"`
	Level     string   `json:"level"`
	N         int      `json:"n"`       // results that the limits are from
	Batches   int      `json:"batches"` // and their batches
	Centre    float64  `json:"centre_ng_per_ml"`
	SD        float64  `json:"sd_ng_per_ml"`
	Warning   Interval `json:"warning_limits_ng_per_ml"` // centre ± 2 s
	Action    Interval `json:"action_limits_ng_per_ml"`  // centre ± 3 s
	Drift     Drift    `json:"drift"`
	Points    []Point  `json:"points"` // of the history
	Signals   []Signal `json:"signals,omitempty"`
	Flags     []string `json:"flags,omitempty"`
}

// A Drift is the setting of the exponentially weighted moving average: z = λ·x + (1−λ)·z before, from the centre on, with limits at
// L·s·√(λ/(2−λ)·(1−(1−λ)^2t)).
//
// Source: S. W. Roberts, Technometrics 1 (1959) 239-250; λ = 0.2 with L = 2.962 for one false alarm in about 500 results: J. M. Lucas,
// M. S. Saccucci, Technometrics 32 (1990) 1-12 (both from memory).
type Drift struct {
	Algorithm string  `json:"algorithm"`
	Lambda    float64 `json:"lambda"`
	L         float64 `json:"l"`
}

// UsualDrift is λ = 0.2 with L = 2.962.
func UsualDrift() Drift { return Drift{DriftAlgorithm, 0.2, 2.962} }

// A Point is one result on a chart.
type Point struct {
	Line     int     `json:"line,omitempty"`
	Batch    string  `json:"batch"`
	Found    float64 `json:"found_ng_per_ml"`
	Z        float64 `json:"z"` // (found − centre)/s
	Excluded string  `json:"excluded,omitempty"`
	// Average is the moving average and its limits; absent for an excluded result.
	Average *Average `json:"moving_average,omitempty"`
}

// An Average is a moving average with its limits.
type Average struct {
	Value  float64  `json:"value_ng_per_ml"`
	Limits Interval `json:"limits_ng_per_ml"`
}

// Charts makes a chart for each analyte and level, in the order of their first rows. Limits are the mean of the results that are not
// excluded, and two and three of their standard deviations; they are flagged where they come from fewer than twenty batches. Rules are
// applied to the history itself too. Fewer than three results, or results that do not differ, are an error by name: no limits can be
// had of them.
//
// Source: ISO 7870-2:2013 (from memory), with the standard deviation of the results themselves in place of that from moving ranges:
// the ranges within a batch would leave out what differs between batches.
func Charts(history []Control, drift Drift) ([]Chart, error) {
	if len(history) == 0 {
		return nil, errors.New("a control history without results")
	}
	if !(drift.Lambda > 0 && drift.Lambda <= 1 && drift.L > 0) || math.IsInf(drift.L, 0) {
		return nil, fmt.Errorf("a moving average with λ = %g and L = %g: want λ above 0 to 1 and L above 0", drift.Lambda, drift.L)
	}
	drift.Algorithm = DriftAlgorithm
	type key struct{ analyte, level string }
	var order []key
	rows := map[key][]Control{}
	for _, c := range history {
		k := key{c.Analyte, c.Level}
		if rows[k] == nil {
			order = append(order, k)
		}
		rows[k] = append(rows[k], c)
	}
	var charts []Chart
	for _, k := range order {
		c := Chart{Algorithm: ChartAlgorithm, Analyte: k.analyte, Level: k.level, Drift: drift}
		if err := c.limits(rows[k]); err != nil {
			return nil, err
		}
		c.Points = c.place(nil, rows[k])
		c.Signals = c.signals(c.Points, 0)
		charts = append(charts, c)
	}
	return charts, nil
}

func (c *Chart) limits(rows []Control) error {
	var used []float64
	batches := map[string]bool{}
	for _, r := range rows {
		if math.IsNaN(r.Found) || math.IsInf(r.Found, 0) {
			return fmt.Errorf("line %d: a control of %g, want a finite value", r.Line, r.Found)
		}
		if r.Excluded == "" {
			used = append(used, r.Found)
			batches[r.Batch] = true
		}
	}
	where := fmt.Sprintf("control %q", c.Level)
	if c.Analyte != "" {
		where += " of " + c.Analyte
	}
	if len(used) < 3 {
		return fmt.Errorf("%s: %d results: limits need at least three", where, len(used))
	}
	c.N, c.Batches = len(used), len(batches)
	c.Centre, c.SD = strictmath.Mean(used), strictmath.SD(used)
	if c.SD == 0 {
		return fmt.Errorf("%s: all results are equal: no limits can be had of them", where)
	}
	two, three := float64(2*c.SD), float64(3*c.SD)
	c.Warning, c.Action = Interval{c.Centre - two, c.Centre + two}, Interval{c.Centre - three, c.Centre + three}
	if !finite(c.Centre, c.SD, c.Action.Low, c.Action.High) {
		return fmt.Errorf("%s: the results are too far apart for numbers", where)
	}
	if c.Batches < fewBatches {
		c.Flags = append(c.Flags, fmt.Sprintf("limits from %d batches: fewer than %d (common practice, no source)", c.Batches, fewBatches))
	}
	return nil
}

// place puts results on the chart, after those that are there.
func (c *Chart) place(before []Point, rows []Control) []Point {
	average, left := c.Centre, 1.0 // left is (1−λ)^2t
	stay := 1 - c.Drift.Lambda
	step := func(found float64) *Average {
		average = float64(c.Drift.Lambda*found) + float64(stay*average)
		left = float64(left * float64(stay*stay))
		half := float64(c.Drift.L * c.SD * math.Sqrt(float64(c.Drift.Lambda/(2-c.Drift.Lambda)*(1-left))))
		return &Average{average, Interval{c.Centre - half, c.Centre + half}}
	}
	for _, p := range before {
		if p.Excluded == "" {
			step(p.Found)
		}
	}
	var points []Point
	for _, r := range rows {
		p := Point{Line: r.Line, Batch: r.Batch, Found: r.Found, Z: (r.Found - c.Centre) / c.SD, Excluded: r.Excluded}
		if r.Excluded == "" {
			p.Average = step(r.Found)
		}
		points = append(points, p)
	}
	return points
}
