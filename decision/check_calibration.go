package decision

import (
	"fmt"
	"slices"
)

// calibrators: the fit, each back-calculated amount, and what share and how many levels pass.
func (b *batchJudge) calibrators() {
	c := b.start("fit", "Calibration fitted", true, b.at).byMethod(b.rec, "calibration")
	cal := b.a.Calibration
	if cal == nil {
		b.add(c.missing("The calibration could not be fitted: " + b.a.NoFit + "."))
		return
	}
	low, high := b.span()
	c = c.passIf(low != nil)
	c.Evidence = []string{b.at + "/calibration/fit"}
	if low != nil {
		c.Sentence = fmt.Sprintf("A line with weights %s was fitted through %d calibrators from %s to %s.", cal.Fit.Weighting, len(cal.Fit.Points), b.amount(*low, 0).Text, b.amount(*high, 0).Text)
	} else {
		c.Sentence = "The line has no calibrator with an amount above zero."
	}
	b.add(c)
	slope := b.start("slope", "Slope of the calibration line", true, b.at+"/calibration/fit/slope").custom("the response grows with the amount").passIf(cal.Fit.B > 0)
	b.add(slope.says("The response grows with the amount.", "The response does not grow with the amount."))
	b.backCalculated(low)
}

// span is the lowest and the highest amount above zero on the line, whether or not these calibrators pass.
func (b *batchJudge) span() (low, high *float64) {
	for i := range b.a.Calibration.Fit.Points {
		if x := &b.a.Calibration.Fit.Points[i].X; *x > 0 {
			if low == nil || *x < *low {
				low = x
			}
			if high == nil || *x > *high {
				high = x
			}
		}
	}
	return low, high
}

// backCalculated: what the line says of its own calibrators. Those that pass set the calibrated range.
func (b *batchJudge) backCalculated(lowest *float64) {
	cal := b.a.Calibration
	all, passed, levels := 0.0, 0.0, []float64{}
	for i, p := range cal.Fit.Points {
		at := fmt.Sprintf("%s/calibration/fit/points/%d", b.at, i)
		c := b.start("calibrator/"+cal.Injections[i], "Back-calculated calibrator", false, field(at, "relative_bias", p.RelativeBias != nil)).byMethod(b.rec, "calibrators")
		if !(p.X > 0) {
			b.add(c.notApplicable(fmt.Sprintf("Calibrator %s holds none of the analyte: nothing is relative to it.", cal.Injections[i])))
			continue
		}
		limit := b.limits.CalibratorBias
		if p.X == *lowest {
			limit = b.limits.LowestCalibratorBias
		}
		all++
		r := b.add(c.within(p.RelativeBias, around(0, limit), percent, fmt.Sprintf("Calibrator %s (%s), back-calculated less nominal,", cal.Injections[i], b.amount(p.X, 0).Text)))
		if r.Result != Passed {
			continue
		}
		passed++
		if !slices.Contains(levels, p.X) {
			levels = append(levels, p.X)
		}
	}
	at := b.at + "/calibration/fit/points"
	share := b.start("calibrators-share", "Share of calibrators that pass", true, at).byMethod(b.rec, "calibrators")
	if all == 0 {
		b.add(share.missing("There is no calibrator with an amount above zero."))
		return
	}
	s := passed / all
	b.add(share.atLeast(&s, b.limits.CalibratorShare, percent, "The share of calibrators that pass"))
	n := float64(len(levels))
	b.add(b.start("calibrator-levels", "Levels that pass", true, at).byMethod(b.rec, "calibrators").atLeast(&n, float64(b.limits.CalibratorLevels), count, "The number of calibrator levels that pass"))
	if len(levels) > 0 {
		b.low, b.high = new(slices.Min(levels)), new(slices.Max(levels))
	}
}

// controls: each against its nominal amount, the share of all, and the share at each level. A control of unknown amount counts as one
// that does not pass.
func (b *batchJudge) controls() {
	total, passed := map[string]float64{}, map[string]float64{}
	var levels []string
	all, good := 0.0, 0.0
	for i, x := range b.a.Controls {
		if x.NominalNGPerML != nil && *x.NominalNGPerML == 0 {
			continue
		}
		level, stated := x.Level, "amount not stated"
		if x.NominalNGPerML != nil {
			stated = b.amount(*x.NominalNGPerML, 0).Text
		}
		if level == "" {
			level = stated
		}
		if !slices.Contains(levels, level) {
			levels = append(levels, level)
		}
		at := fmt.Sprintf("%s/controls/%d", b.at, i)
		r := b.add(b.start("control/"+x.Injection, "Control", false, field(at, "relative_bias", x.Bias != nil)).byMethod(b.rec, "controls").
			within(x.Bias, around(0, b.limits.ControlBias), percent, fmt.Sprintf("Control %s (%s, %s), found less nominal,", x.Injection, level, stated)))
		all++
		total[level]++
		if r.Result == Passed {
			good++
			passed[level]++
		}
	}
	at := field(b.at, "controls", len(b.a.Controls) > 0)
	b.add(b.start("controls-present", "Controls in the batch", true, at).custom("a batch holds controls of known amount").atLeast(&all, 1, count, "The number of controls of "+b.a.Name))
	if all == 0 {
		return
	}
	share := good / all
	b.add(b.start("controls-share", "Share of controls that pass", true, at).byMethod(b.rec, "controls").atLeast(&share, b.limits.ControlShare, percent, "The share of controls that pass"))
	for _, level := range levels {
		s := passed[level] / total[level]
		b.add(b.start("controls-share/"+level, "Share of controls that pass at one level", true, at).byMethod(b.rec, "controls").
			atLeast(&s, b.limits.ControlShareEachLevel, percent, "The share of controls that pass at the level "+level))
	}
}

// amount shows a concentration in the unit of the method.
func (b *batchJudge) amount(v float64, more int) *Figure {
	return inUnit(methodOf(b.rec, b.a.ID).Unit)(v, more)
}
