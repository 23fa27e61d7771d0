package decision

import (
	"fmt"
	"math"
	"slices"

	"assaywrit/evidence"
)

// calibrators: the fit, each back-calculated amount, and what share and how many levels pass.
func (b *batchJudge) calibrators() {
	c := b.start("fit", "Calibration fitted", true, b.at).byMethod(b.rec, "calibration").passIf(b.a.Calibration != nil)
	if b.a.Calibration == nil {
		c.Sentence = "The calibration could not be fitted: " + b.a.NoFit + "."
		b.add(c)
		return
	}
	cal := b.a.Calibration
	c.Sentence = fmt.Sprintf("A line with weights %s was fitted through %d calibrators from %s to %s ng/mL.", cal.Fit.Weighting, len(cal.Fit.Points), Text(cal.LowNGPerML, 4), Text(cal.HighNGPerML, 4))
	c.Evidence = []string{b.at + "/calibration/fit"}
	b.add(c)
	passed, levels := 0.0, []string{}
	for i, p := range cal.Fit.Points {
		limit := b.limits.CalibratorBias
		if p.X == cal.LowNGPerML {
			limit = b.limits.LowestCalibratorBias
		}
		at := fmt.Sprintf("%s/calibration/fit/points/%d/relative_bias", b.at, i)
		r := b.add(b.start("calibrator/"+cal.Injections[i], "Back-calculated calibrator", false, at).byMethod(b.rec, "calibrators").
			within(p.RelativeBias, around(0, limit), percent, fmt.Sprintf("Calibrator %s (%s ng/mL), back-calculated less nominal,", cal.Injections[i], Text(p.X, 4))))
		if r.Result == Passed {
			passed++
			if key := Text(p.X, 12); !slices.Contains(levels, key) {
				levels = append(levels, key)
			}
		}
	}
	share := passed / float64(len(cal.Fit.Points))
	at := b.at + "/calibration/fit/points"
	b.add(b.start("calibrators-share", "Share of calibrators that pass", true, at).byMethod(b.rec, "calibrators").atLeast(&share, b.limits.CalibratorShare, percent, "The share of calibrators that pass"))
	n := float64(len(levels))
	b.add(b.start("calibrator-levels", "Levels that pass", true, at).byMethod(b.rec, "calibrators").atLeast(&n, float64(b.limits.CalibratorLevels), count, "The number of calibrator levels that pass"))
}

// controls: each against its nominal amount, the share of all, and the share at each level.
func (b *batchJudge) controls() {
	total, passed := map[string]float64{}, map[string]float64{}
	var levels []string
	all, good := 0.0, 0.0
	for i, x := range b.a.Controls {
		if x.NominalNGPerML == nil || *x.NominalNGPerML <= 0 {
			continue
		}
		level := x.Level
		if level == "" {
			level = Text(*x.NominalNGPerML, 6)
		}
		if !slices.Contains(levels, level) {
			levels = append(levels, level)
		}
		r := b.add(b.start("control/"+x.Injection, "Control", false, fmt.Sprintf("%s/controls/%d", b.at, i)).byMethod(b.rec, "controls").
			within(x.Bias, around(0, b.limits.ControlBias), percent, fmt.Sprintf("Control %s (%s, %s ng/mL), found less nominal,", x.Injection, level, Text(*x.NominalNGPerML, 4))))
		all++
		total[level]++
		if r.Result == Passed {
			good++
			passed[level]++
		}
	}
	b.add(b.start("controls-present", "Controls in the batch", true, b.at).custom("a batch holds controls of known amount").atLeast(&all, 1, count, "The number of controls of "+b.a.Name))
	if all == 0 {
		return
	}
	share := good / all
	b.add(b.start("controls-share", "Share of controls that pass", true, b.at+"/controls").byMethod(b.rec, "controls").atLeast(&share, b.limits.ControlShare, percent, "The share of controls that pass"))
	for _, level := range levels {
		s := passed[level] / total[level]
		b.add(b.start("controls-share/"+level, "Share of controls that pass at one level", true, b.at+"/controls").byMethod(b.rec, "controls").
			atLeast(&s, b.limits.ControlShareEachLevel, percent, "The share of controls that pass at the level "+level))
	}
}

// quantityChecks: what a quantitative result needs beyond an accepted batch. They apply where identity is shown.
func (j *judge) quantityChecks(k int, limit *LimitRule) {
	a := &j.rec.Analytes[k]
	b := batchJudge{j, a, k, j.rec.Method.Batch, fmt.Sprintf("/analytes/%d", k)}
	start := func(name, title string, evidence ...string) Check {
		c := b.start(name, title, true, evidence...)
		c.Group = "quantity"
		return c
	}
	for i, x := range a.Aliquots {
		at := fmt.Sprintf("%s/aliquots/%d", b.at, i)
		c := start("range/"+name(x), "Within the calibrated range", at).custom("a value is read between the lowest and the highest calibrator")
		if a.Calibration == nil {
			continue
		}
		w := window{a.Calibration.LowNGPerML, a.Calibration.HighNGPerML}
		j.add(c.within(x.ReadNGPerML, w, nanograms, fmt.Sprintf("Aliquot %s, read from the line before dilution,", name(x))))
	}
	n := float64(len(a.Aliquots))
	if need := j.set.Quantity.Aliquots; need.Value >= float64(b.limits.Aliquots) {
		j.add(start("aliquots", "Number of aliquots", b.at).cited(need.Cite).atLeast(&n, need.Value, count, "The number of aliquots"))
	} else {
		j.add(start("aliquots", "Number of aliquots", b.at).byMethod(j.rec, "aliquots").atLeast(&n, float64(b.limits.Aliquots), count, "The number of aliquots"))
	}
	c := start("result", "Result", b.at).custom("a value needs every aliquot and a stated uncertainty").passIf(a.Result != nil)
	if a.Result == nil {
		c.Sentence = "There is no quantitative result: " + a.NoResult + "."
		j.add(c)
		return
	}
	c.Evidence = []string{b.at + "/result/ng_per_ml", b.at + "/result/budget/combined_std_u"}
	v, u := TextWithU(a.Result.NGPerML, a.Result.Budget.StdU)
	c.Sentence = fmt.Sprintf("The mean of %d aliquots is %s ng/mL, with a combined standard uncertainty of %s ng/mL.", a.Result.N, v, u)
	j.add(c)
	if a.Result.N > 1 {
		j.add(start("spread", "Agreement of the aliquots", b.at+"/result").byMethod(j.rec, "aliquots").atMost(a.Result.RSD, b.limits.AliquotSpread, percent, "The relative standard deviation of the aliquots"))
	}
	j.maxUncertainty(a, limit, start("max-uncertainty", "Uncertainty at the threshold", b.at+"/result/budget/combined_std_u"))
}

// maxUncertainty scales the relative uncertainty of the result to the threshold, where the edition states its largest value.
func (j *judge) maxUncertainty(a *evidence.Analyte, limit *LimitRule, c Check) {
	c = c.cited(limit.Cite)
	if limit.MaxStdU == nil {
		c.Result, c.Sentence = NotApplicable, "The criteria set states no largest uncertainty."
		j.add(c)
		return
	}
	u := atThreshold(a.Result, limit.Threshold)
	j.add(c.atMost(u, *limit.MaxStdU, nanograms, "The combined standard uncertainty, scaled to the threshold,"))
}

// atThreshold is the relative uncertainty of the result times the threshold, or nil for a result that is not above zero.
func atThreshold(r *evidence.Result, threshold float64) *float64 {
	if !(r.NGPerML > 0) {
		return nil
	}
	u := float64(r.Budget.StdU / r.NGPerML * threshold)
	if math.IsInf(u, 0) {
		return nil
	}
	return &u
}

func nanograms(v float64) *Figure { return figure(v, "ng/mL", 4) }

func name(c evidence.Concentration) string {
	if c.Aliquot != "" {
		return c.Aliquot
	}
	return c.Injection
}
