package evidence

import (
	"errors"
	"strings"

	"assaywrit/evidence/casefile"
	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

// A Division is the joint fit by which a peak was divided from its neighbours. Straight is the area that the straight lines of the
// method would have given.
type Division struct {
	Way      casefile.Fused `json:"way"`
	Fit      *peak.JointFit `json:"fit,omitempty"`
	Index    int            `json:"index"` // of the peak in use among those of the fit
	Straight float64        `json:"straight_area_counts_min"`
	Refused  string         `json:"refused,omitempty"` // why nothing could be fitted; then the straight area stays, and the peak is flagged
}

// What a division can say of itself. The names are kept in records.
const (
	NotDivided    = "not-divided"    // the method's fit could not be made: the area is that of straight lines
	FitDistrusted = "fit-distrusted" // the fit has reasons not to be relied on
)

// divide replaces the area of the peak in use by that of a joint fit, where the method asks for it and the peak shares a baseline
// with others. Limits, height and noise stay those of the detection.
func divide(mt *Measurement, c trace.Chromatogram, found *peak.Result, way casefile.Fused) error {
	if way == "" || mt.Peak == nil {
		return nil
	}
	for _, k := range peak.Clusters(found) {
		at := -1
		for i, apex := range k.ApexesMin {
			if apex == mt.Peak.ApexMin {
				at = i
			}
		}
		if at < 0 || len(k.ApexesMin) < 2 {
			continue
		}
		d := &Division{Way: way, Index: at, Straight: mt.Peak.Area}
		mt.Division = d
		p := *mt.Peak
		mt.Peak = &p
		fit, err := peak.FitCluster(c, k, peak.JointOptions{SharedShape: way == casefile.JointFitOneShape})
		var none *peak.FitError
		var parameter *peak.ParameterError
		switch {
		case errors.As(err, &none) || errors.As(err, &parameter):
			d.Refused = err.Error()
			return nil
		case err != nil:
			return err
		}
		d.Fit = fit
		p.Area, p.AreaStdU = fit.Peaks[at].Area, fit.Peaks[at].AreaStdU
		p.Algorithm = fit.Algorithm
		return nil
	}
	return nil
}

// warnings says what is to be known of a division.
func (d *Division) warnings() []trace.Warning {
	switch {
	case d == nil:
		return nil
	case d.Refused != "":
		return []trace.Warning{{Code: NotDivided, Detail: "the peaks could not be divided by fitting: " + d.Refused}}
	case len(d.Fit.Distrust) > 0:
		return []trace.Warning{{Code: FitDistrusted, Detail: "the fitted curves are not to be relied on without a look: " + strings.Join(d.Fit.Distrust, ", ")}}
	}
	return nil
}
