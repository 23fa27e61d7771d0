package separation

import (
	"fmt"
	"math"
	"slices"
)

// Analyse says what scouting runs of one mixture show: two or more, all isocratic at different φ, or all gradients of different slope
// over the same range. The error is an *Error.
func Analyse(runs []Run, limits Limits) (*Result, error) {
	if err := checkRuns(runs); err != nil {
		return nil, err
	}
	if err := limits.check(); err != nil {
		return nil, err
	}
	how, compounds, err := track(runs)
	if err != nil {
		return nil, err
	}
	r := &Result{Algorithm: "isocratic", Tracking: how, Compounds: compounds, Gradients: runs[0].Gradient != nil, VoidMin: runs[0].VoidMin, runs: runs}
	if r.Gradients {
		r.Algorithm = "gradient"
		if limits.MinK > 0 || limits.MaxK > 0 {
			r.Remarks = append(r.Remarks, "limits of the retention factor are left aside: they are for isocratic runs")
		}
	}
	r.LowStudied, r.HighStudied = math.Inf(1), math.Inf(-1)
	for _, x := range runs {
		r.LowStudied, r.HighStudied = min(r.LowStudied, x.at()), max(r.HighStudied, x.at())
	}
	for i := range r.Compounds {
		if err := r.describe(&r.Compounds[i]); err != nil {
			return nil, err
		}
	}
	r.scan(limits)
	return r, nil
}

func (l Limits) check() error {
	for _, v := range []float64{l.TimeMin, l.Resolution, l.MinK, l.MaxK} {
		if !(v >= 0) || math.IsInf(v, 0) {
			return &Error{"", fmt.Sprintf("a limit of %g", v), "limits of 0 (none) or more"}
		}
	}
	if l.MaxK > 0 && l.MaxK <= l.MinK {
		return &Error{"", fmt.Sprintf("retention factors from %g to %g", l.MinK, l.MaxK), "a largest above the smallest"}
	}
	return nil
}

// at is what is varied: φ, or the time of the gradient.
func (r Run) at() float64 {
	if r.Gradient != nil {
		return r.Gradient.TimeMin
	}
	return r.Phi
}

func checkRuns(runs []Run) error {
	if len(runs) < 2 {
		return &Error{"", fmt.Sprintf("%d runs", len(runs)), "at least two, at different compositions"}
	}
	for i, r := range runs {
		if err := r.check(); err != nil {
			return err
		}
		for _, o := range runs[:i] {
			switch {
			case (o.Gradient == nil) != (r.Gradient == nil):
				return &Error{r.Name, "an isocratic run beside a gradient", "runs of one kind"}
			case o.at() == r.at():
				return &Error{r.Name, fmt.Sprintf("the composition of run %s again (%g)", o.Name, r.at()), "another composition in each run"}
			case r.Gradient != nil && (o.Gradient.StartPhi != r.Gradient.StartPhi || o.Gradient.EndPhi != r.Gradient.EndPhi):
				return &Error{r.Name, fmt.Sprintf("a gradient from %g to %g", r.Gradient.StartPhi, r.Gradient.EndPhi), fmt.Sprintf("one from %g to %g, as in run %s", o.Gradient.StartPhi, o.Gradient.EndPhi, o.Name)}
			case math.Abs(o.VoidMin-r.VoidMin) > 1e-9:
				return &Error{r.Name, fmt.Sprintf("a void time of %g min", r.VoidMin), fmt.Sprintf("%g min, as in run %s: one column and one flow", o.VoidMin, o.Name)}
			}
		}
	}
	return nil
}

func (r Run) check() error {
	bad := func(got, want string) error { return &Error{r.Name, got, want} }
	switch {
	case !(r.VoidMin > 0) || math.IsInf(r.VoidMin, 0):
		return bad(fmt.Sprintf("a void time of %g min", r.VoidMin), "a time above 0 min")
	case r.Gradient == nil && !(r.Phi >= 0 && r.Phi <= 1):
		return bad(fmt.Sprintf("φ of %g", r.Phi), "a fraction from 0 to 1")
	case len(r.Peaks) < 2:
		return bad(fmt.Sprintf("%d peaks", len(r.Peaks)), "at least two")
	}
	if g := r.Gradient; g != nil && !(g.StartPhi >= 0 && g.StartPhi < g.EndPhi && g.EndPhi <= 1 && g.TimeMin > 0 && g.DwellMin >= 0 && !math.IsInf(g.TimeMin+g.DwellMin, 0)) {
		return bad(fmt.Sprintf("a gradient %+v", *g), "a rise of φ within 0 to 1 in a time above 0 min")
	}
	for i, p := range r.Peaks {
		switch {
		case !(p.RetentionMin > r.VoidMin) || math.IsInf(p.RetentionMin, 0):
			return bad(fmt.Sprintf("a peak at %g min", p.RetentionMin), fmt.Sprintf("one after the void time, %g min: what is not retained says nothing of the phase", r.VoidMin))
		case !(p.WidthHalfMin > 0) || !(p.Area > 0) || math.IsInf(p.WidthHalfMin+p.Area, 0):
			return bad(fmt.Sprintf("a peak at %g min with the width %g min and the area %g", p.RetentionMin, p.WidthHalfMin, p.Area), "both above 0")
		case i > 0 && !(p.RetentionMin > r.Peaks[i-1].RetentionMin):
			return bad(fmt.Sprintf("a peak at %g min after one at %g min", p.RetentionMin, r.Peaks[i-1].RetentionMin), "peaks in order of retention")
		}
	}
	return nil
}

// describe fits the model of a compound, and takes its plate number and area.
func (r *Result) describe(c *Compound) error {
	var phi, plates, areas []float64
	for i, x := range r.runs {
		t := c.RetentionMin[i]
		k := slices.IndexFunc(x.Peaks, func(p Peak) bool { return p.RetentionMin == t })
		q := t / x.Peaks[k].WidthHalfMin
		plates, areas = append(plates, float64(5.54*q*q)), append(areas, x.Peaks[k].Area)
		if !r.Gradients {
			phi, c.K = append(phi, x.Phi), append(c.K, (t-x.VoidMin)/x.VoidMin)
		}
	}
	c.Plates, c.Area = median(plates), median(areas)
	var err error
	if r.Gradients {
		c.Model, err = fitGradient(r.runs, c.RetentionMin)
	} else if c.Model, err = fitIsocratic(phi, c.K); err != nil {
		err = &Error{"", "compositions that no line can be fitted to: " + err.Error(), "compositions farther apart"}
	}
	if err == nil && !r.Gradients && !(c.Model.S > 0) && c.Model.C == 0 {
		r.Remarks = append(r.Remarks, fmt.Sprintf("%s is retained longer the more of the stronger solvent there is (S = %.3g): look at how its peaks were followed", c.Name, c.Model.S))
	}
	return err
}

func median(v []float64) float64 {
	v = slices.Clone(v)
	slices.Sort(v)
	if n := len(v); n%2 == 0 {
		return v[n/2-1] + (v[n/2]-v[n/2-1])/2
	}
	return v[len(v)/2]
}
