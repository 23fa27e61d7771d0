package validation

import (
	"errors"
	"fmt"

	"assaywrit/evidence/uncertainty"
)

// Figures are what a validation table says of one analyte. What the table has no rows for is absent.
type Figures struct {
	Analyte    string                       `json:"analyte,omitempty"`
	Precision  []Precision                  `json:"precision,omitempty"`
	Pooled     *Pooled                      `json:"pooled,omitempty"`
	Bias       *uncertainty.BiasUncertainty `json:"bias,omitempty"`
	Recovery   []LevelMean                  `json:"recovery,omitempty"`
	Extraction []Extraction                 `json:"extraction,omitempty"`
	Carryover  *Carryover                   `json:"carry_over,omitempty"`
	Stability  []Stability                  `json:"stability,omitempty"`
	Blanks     *BlankLimits                 `json:"blanks,omitempty"`
	Components []Component                  `json:"components,omitempty"`
	Flags      []string                     `json:"flags,omitempty"`
}

// A LevelMean is a mean at one level.
type LevelMean struct {
	Level string `json:"level"`
	Mean
}

// A Carryover is what blanks after a high injection hold.
type Carryover struct {
	N             int     `json:"n"`
	LargestShare  float64 `json:"largest_share"` // found over the amount of the injection before
	LargestLine   int     `json:"line"`          // of the table
	LargestAmount float64 `json:"largest_found_ng_per_ml"`
	Share         *Mean   `json:"share,omitempty"` // mean; absent for one row
	// LargestOverLowest is the largest amount found over the nominal value of the lowest precision level; absent where there is none.
	LargestOverLowest *float64 `json:"largest_over_lowest_level,omitempty"`
}

// A Stability is what is found after storage over what is found fresh, at one level.
type Stability struct {
	Level     string `json:"level"`
	Condition string `json:"condition"`
	Algorithm string `json:"algorithm"`
	Ratio     Mean   `json:"ratio"`
}

// Options say what the table cannot.
type Options struct {
	// Source is what the components name as theirs, such as the file of the table and its hash.
	Source string
	// Varied are the effects that varied between the runs, beside those of the runs themselves: operators and volumetric ware, say. The
	// intermediate precision then covers them too.
	Varied []uncertainty.Effect
}

// Appraise computes the figures of every analyte, in the order in which they appear. The rows are as Read gives them; the error is for
// rows that are none, and for numbers too far apart. What the rows of a kind are too few for is flagged, not refused.
func Appraise(rows []Row, options Options) ([]Figures, error) {
	if len(rows) == 0 {
		return nil, errors.New("a validation table without rows")
	}
	for _, r := range rows {
		if r.Found == nil && r.Response == nil {
			return nil, fmt.Errorf("line %d: a row without a result", r.Line)
		}
	}
	var all []Figures
	for _, g := range grouped(rows, func(r Row) string { return r.Analyte }) {
		f := Figures{Analyte: g.key}
		if err := f.appraise(g.rows); err != nil {
			if g.key != "" {
				err = fmt.Errorf("%s: %w", g.key, err)
			}
			return nil, err
		}
		f.components(options)
		all = append(all, f)
	}
	return all, nil
}

// A group is the rows that have a key in common.
type group struct {
	key  string
	rows []Row
}

// grouped sorts rows into groups, in the order of their first rows.
func grouped(rows []Row, key func(Row) string) []group {
	var groups []group
	index := map[string]int{}
	for _, r := range rows {
		k := key(r)
		i, ok := index[k]
		if !ok {
			i = len(groups)
			index[k] = i
			groups = append(groups, group{key: k})
		}
		groups[i].rows = append(groups[i].rows, r)
	}
	return groups
}

func byLevel(r Row) string  { return r.Level }
func byRun(r Row) string    { return r.Run }
func bySource(r Row) string { return r.Source }

func of(rows []Row, kind Kind) []Row {
	var some []Row
	for _, r := range rows {
		if r.Kind == kind {
			some = append(some, r)
		}
	}
	return some
}

// results are the amounts or responses of rows.
func results(rows []Row) []float64 {
	v := make([]float64, 0, len(rows))
	for _, r := range rows {
		if r.Found != nil {
			v = append(v, *r.Found)
		} else if r.Response != nil {
			v = append(v, *r.Response)
		}
	}
	return v
}

func (f *Figures) flag(format string, args ...any) {
	f.Flags = append(f.Flags, fmt.Sprintf(format, args...))
}

func (f *Figures) appraise(rows []Row) error {
	for _, level := range grouped(of(rows, KindPrecision), byLevel) {
		var runs [][]float64
		for _, run := range grouped(level.rows, byRun) {
			runs = append(runs, results(run.rows))
		}
		p, err := precision(level.key, level.rows[0].Nominal, runs)
		if err != nil {
			return err
		}
		f.Precision = append(f.Precision, p)
	}
	f.Pooled = pool(f.Precision)
	if err := f.bias(of(rows, KindReference)); err != nil {
		return err
	}
	if err := f.recovery(of(rows, KindRecovery)); err != nil {
		return err
	}
	f.extraction(rows)
	if err := f.carryover(of(rows, KindCarryover)); err != nil {
		return err
	}
	f.stability(rows)
	if blanks := of(rows, KindBlank); len(blanks) == 1 {
		f.flag("a single blank: no limits from blanks")
	} else if len(blanks) > 1 {
		b, err := LimitsFromBlanks(results(blanks))
		if err != nil {
			return err
		}
		f.Blanks = &b
	}
	return nil
}

func (f *Figures) recovery(rows []Row) error {
	for _, level := range grouped(rows, byLevel) {
		shares := shares(level.rows)
		if len(shares) < 2 {
			f.flag("recovery at level %q: a single result says nothing of its scatter", level.key)
			continue
		}
		m := meanOf(shares)
		if !finite(m.Value, m.Interval.Low, m.Interval.High) {
			return fmt.Errorf("recovery at level %q: the results are too far apart for numbers", level.key)
		}
		f.Recovery = append(f.Recovery, LevelMean{level.key, m})
	}
	return nil
}

// shares are found over nominal; rows without a nominal value are left out.
func shares(rows []Row) []float64 {
	var v []float64
	for _, r := range rows {
		if r.Found != nil && r.Nominal != nil && *r.Nominal > 0 {
			v = append(v, *r.Found/(*r.Nominal))
		}
	}
	return v
}

func (f *Figures) extraction(rows []Row) {
	var some []Row
	for _, r := range rows {
		if r.Kind == KindNeat || r.Kind == KindBefore || r.Kind == KindAfter {
			some = append(some, r)
		}
	}
	for _, level := range grouped(some, byLevel) {
		var after [][]float64
		for _, source := range grouped(of(level.rows, KindAfter), bySource) {
			after = append(after, results(source.rows))
		}
		f.Extraction = append(f.Extraction, extraction(level.key, results(of(level.rows, KindNeat)), results(of(level.rows, KindBefore)), after))
	}
}

func (f *Figures) carryover(rows []Row) error {
	if len(rows) == 0 {
		return nil
	}
	c := Carryover{N: len(rows)}
	s := shares(rows)
	for i, r := range rows {
		if i >= len(s) || !finite(s[i]) {
			return fmt.Errorf("line %d: a carry-over without the amount of the injection before, or beyond all numbers", r.Line)
		}
		if i == 0 || s[i] > c.LargestShare {
			c.LargestShare, c.LargestLine = s[i], r.Line
		}
		if i == 0 || *r.Found > c.LargestAmount {
			c.LargestAmount = *r.Found
		}
	}
	if len(s) > 1 {
		if m := meanOf(s); finite(m.Interval.Low, m.Interval.High) {
			c.Share = &m
		}
	}
	var lowest *float64
	for _, p := range f.Precision {
		if p.Nominal != nil && (lowest == nil || *p.Nominal < *lowest) {
			lowest = p.Nominal
		}
	}
	if lowest != nil {
		if v := c.LargestAmount / *lowest; finite(v) {
			c.LargestOverLowest = &v
		}
	}
	f.Carryover = &c
	return nil
}

func (f *Figures) stability(rows []Row) {
	fresh := grouped(of(rows, KindStabilityReference), byLevel)
	for _, level := range grouped(of(rows, KindStability), byLevel) {
		var reference []float64
		for _, g := range fresh {
			if g.key == level.key {
				reference = results(g.rows)
			}
		}
		for _, kept := range grouped(level.rows, func(r Row) string { return r.Condition }) {
			ratio, err := RatioOfMeans(results(kept.rows), reference)
			if err != nil {
				f.flag("stability at level %q, %q: %v", level.key, kept.key, err)
				continue
			}
			f.Stability = append(f.Stability, Stability{level.key, kept.key, RatioAlgorithm, ratio})
		}
	}
}
