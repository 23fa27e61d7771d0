package evidence

import (
	"fmt"

	"assaywrit/evidence/calibration"
	"assaywrit/evidence/casefile"
	"assaywrit/evidence/strictmath"
	"assaywrit/evidence/uncertainty"
)

// quantify fits the calibration and reads the controls and the sample's aliquots from it.
func quantify(rec *Record, a casefile.Analyte, out *Analyte) {
	cal, err := calibrate(rec, a)
	if err != nil {
		out.NoFit = err.Error()
		out.NoResult = "there is no calibration"
		return
	}
	out.Calibration = cal
	for i := range rec.Injections {
		switch rec.Injections[i].Role {
		case casefile.Control:
			out.Controls = append(out.Controls, concentration(rec, a, cal, i))
		case casefile.SampleAliquot:
			out.Aliquots = append(out.Aliquots, concentration(rec, a, cal, i))
		}
	}
	out.Result, err = result(a, cal, out.Aliquots)
	if err != nil {
		out.Result, out.NoResult = nil, err.Error()
	}
}

// calibrate fits the line through every calibrator that has a stated amount and both peaks. A calibrator without a peak is
// an error and not left out: the fit must never look better than the batch was.
func calibrate(rec *Record, a casefile.Analyte) (*Calibration, error) {
	var points []calibration.Point
	cal := &Calibration{}
	for i := range rec.Injections {
		inj := &rec.Injections[i]
		x := nominal(rec.Sequence[i], a.ID)
		if inj.Role != casefile.Calibrator || x == nil {
			continue
		}
		y, missing := response(inj, a)
		if missing != "" {
			return nil, fmt.Errorf("calibrator %s: %s", inj.ID, missing)
		}
		points = append(points, calibration.Point{X: *x, Y: *y})
		cal.Injections = append(cal.Injections, inj.ID)
		cal.Levels = append(cal.Levels, inj.Level)
	}
	fit, err := calibration.FitLine(points, a.Calibration.Weighting)
	if err != nil {
		return nil, err
	}
	cal.Fit = *fit
	cal.LowNGPerML, cal.HighNGPerML = points[0].X, points[0].X
	for _, p := range points {
		cal.LowNGPerML = min(cal.LowNGPerML, p.X)
		cal.HighNGPerML = max(cal.HighNGPerML, p.X)
	}
	return cal, nil
}

// response is the area of the quantifier over that of the internal standard, or the reason why there is none.
func response(inj *Injection, a casefile.Analyte) (*float64, string) {
	quant := inj.peakOf(a.ID, QuantifierTrace)
	is := inj.peakOf(a.InternalStandard, InternalStandardTrace)
	switch {
	case quant == nil:
		return nil, "no peak of the quantifier"
	case is == nil:
		return nil, "no peak of the internal standard"
	case is.Area <= 0:
		return nil, "the area of the internal standard is not above zero"
	}
	return ptr(quant.Area / is.Area), ""
}

func concentration(rec *Record, a casefile.Analyte, cal *Calibration, index int) Concentration {
	inj := &rec.Injections[index]
	c := Concentration{Injection: inj.ID, InjectionIndex: index, Level: inj.Level, Aliquot: inj.Aliquot, Dilution: inj.Dilution}
	c.NominalNGPerML = nominal(rec.Sequence[index], a.ID)
	c.Response, c.Missing = response(inj, a)
	if c.Response == nil {
		return c
	}
	p, err := cal.Fit.PredictSample(*c.Response, 1)
	if err != nil {
		c.Missing = err.Error()
		return c
	}
	c.ReadNGPerML, c.StdU = ptr(p.X), ptr(p.StdU)
	c.NGPerML = ptr(float64(p.X * inj.Dilution))
	c.InRange = ptr(p.X >= cal.LowNGPerML && p.X <= cal.HighNGPerML)
	if c.NominalNGPerML != nil && *c.NominalNGPerML > 0 {
		c.Bias = ptr(*c.NGPerML / *c.NominalNGPerML - 1)
	}
	return c
}

// result is the mean of the aliquots with its budget. Every aliquot must have a concentration: none is left out.
func result(a casefile.Analyte, cal *Calibration, aliquots []Concentration) (*Result, error) {
	if len(aliquots) == 0 {
		return nil, fmt.Errorf("the batch holds no aliquot of the sample")
	}
	var values, responses []float64
	for _, c := range aliquots {
		switch {
		case c.NGPerML == nil:
			return nil, fmt.Errorf("aliquot %s (injection %s): %s", c.Aliquot, c.Injection, c.Missing)
		case c.Dilution != aliquots[0].Dilution:
			return nil, fmt.Errorf("the aliquots were diluted differently (%g and %g): no mean is taken", aliquots[0].Dilution, c.Dilution)
		}
		values = append(values, *c.NGPerML)
		responses = append(responses, *c.Response)
	}
	p, err := cal.Fit.PredictSample(strictmath.Mean(responses), len(responses))
	if err != nil {
		return nil, err
	}
	s := statistic(values)
	r := &Result{NGPerML: s.Mean, N: s.N, SD: s.SD, Prediction: p}
	if s.SD != nil && s.Mean > 0 {
		r.RSD = ptr(*s.SD / s.Mean)
	}
	parts, err := components(a, r, aliquots[0].Dilution)
	if err != nil {
		return nil, err
	}
	if r.Budget, err = uncertainty.Combine(r.NGPerML, parts); err != nil {
		return nil, err
	}
	if r.Confirmation, err = confirm(a, &cal.Fit, r, aliquots[0].Dilution); err != nil {
		r.NoConfirmation = err.Error()
	}
	return r, nil
}
