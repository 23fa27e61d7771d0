package validation

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// PrecisionAlgorithm names the figures of precision and bias; a published version never changes its results.
const PrecisionAlgorithm = "precision-anova@1"

// A Precision is what runs × replicates at one level say.
type Precision struct {
	Algorithm string   `json:"algorithm"`
	Level     string   `json:"level"`
	Nominal   *float64 `json:"nominal_ng_per_ml,omitempty"`
	Runs      int      `json:"runs"`
	N         int      `json:"n"`
	Mean      float64  `json:"mean_ng_per_ml"`
	ANOVA     *ANOVA   `json:"anova,omitempty"` // absent where there is one run, or one value in each
	// Repeatability is the scatter within runs; absent where each run has one value.
	Repeatability *Spread `json:"repeatability,omitempty"`
	// BetweenRunSD is √((MSB − MSW)/n0), 0 where that is below zero.
	BetweenRunSD *float64 `json:"between_run_sd_ng_per_ml,omitempty"`
	// Intermediate is √(s_r² + s_run²); absent where there is one run.
	Intermediate *Spread `json:"intermediate_precision,omitempty"`
	// Bias is the mean less the nominal value; its uncertainty is that of the mean over runs, without that of the nominal value.
	Bias         *Mean    `json:"bias_ng_per_ml,omitempty"`
	RelativeBias *Mean    `json:"relative_bias,omitempty"`
	Flags        []string `json:"flags,omitempty"`
}

// precision computes the figures of one level. runs are the values of each run, in ng/mL.
//
// The degrees of freedom of the intermediate precision are Satterthwaite's for MSB/n0 + (1 − 1/n0)·MSW; where MSB is below MSW the
// variance between runs is taken as zero and those of the repeatability are kept. The variance of the mean is MSB/N (MSW/N where that
// is larger) with the degrees of freedom of the runs: exact for equal runs, and an approximation for unequal ones.
//
// Source: ISO 5725-2:2019 and 5725-3:1994; F. E. Satterthwaite, Biometrics 2 (1946) 110-114 (from memory).
func precision(level string, nominal *float64, runs [][]float64) (Precision, error) {
	p := Precision{Algorithm: PrecisionAlgorithm, Level: level, Nominal: nominal, Runs: len(runs)}
	var all []float64
	least, most := math.MaxInt, 0
	for _, r := range runs {
		all = append(all, r...)
		least, most = min(least, len(r)), max(most, len(r))
	}
	p.N, p.Mean = len(all), strictmath.Mean(all)
	if least != most {
		p.Flags = append(p.Flags, fmt.Sprintf("unequal runs: %d to %d replicates", least, most))
	}
	var u, nu float64
	switch {
	case p.N < 2:
		p.Flags = append(p.Flags, "a single value: nothing can be said of its scatter")
	case len(runs) == 1:
		p.Flags = append(p.Flags, "one run: no intermediate precision, and the bias is that of this run")
		s, n := strictmath.SD(all), float64(p.N)
		r := spread(s, n-1, p.Mean)
		p.Repeatability = &r
		u, nu = s/math.Sqrt(n), n-1
	case most == 1:
		p.Flags = append(p.Flags, "one value in each run: repeatability cannot be told from the scatter between runs")
		s, n := strictmath.SD(all), float64(p.N)
		i := spread(s, n-1, p.Mean)
		p.Intermediate = &i
		u, nu = s/math.Sqrt(n), n-1
	default:
		a, err := OneWay(runs)
		if err != nil {
			return p, err
		}
		p.components(a)
		u, nu = math.Sqrt(max(a.MSBetween, a.MSWithin)/float64(a.N)), float64(a.DFBetween)
	}
	if !finite(p.Mean, u) {
		return p, fmt.Errorf("level %q: the values are too far apart for numbers", level)
	}
	p.bias(u, nu)
	return p, nil
}

// components takes the analysis of variance apart.
func (p *Precision) components(a ANOVA) {
	p.ANOVA = &a
	sr2 := a.MSWithin
	r := spread(math.Sqrt(sr2), float64(a.DFWithin), p.Mean)
	p.Repeatability = &r
	between := (a.MSBetween - a.MSWithin) / a.N0
	nu := float64(a.DFWithin)
	if between > 0 {
		first, second := a.MSBetween/a.N0, float64((1-1/a.N0)*a.MSWithin)
		share1, share2 := first/(first+second), second/(first+second)
		nu = 1 / (float64(share1*share1)/float64(a.DFBetween) + float64(share2*share2)/float64(a.DFWithin))
	} else {
		between = 0
		p.Flags = append(p.Flags, "runs differ by less than their replicates: the scatter between runs is taken as zero")
	}
	sd := math.Sqrt(between)
	i := spread(math.Sqrt(sr2+between), nu, p.Mean)
	p.BetweenRunSD, p.Intermediate = &sd, &i
}

// bias compares the mean with the nominal value.
func (p *Precision) bias(u, nu float64) {
	if p.Nominal == nil || p.N < 2 {
		return
	}
	b := about(p.Mean-*p.Nominal, u, nu, p.N)
	r := about((p.Mean-*p.Nominal)/(*p.Nominal), u/(*p.Nominal), nu, p.N)
	if finite(b.Value, b.Interval.Low, b.Interval.High, r.Value, r.Interval.Low, r.Interval.High) {
		p.Bias, p.RelativeBias = &b, &r
	}
}
