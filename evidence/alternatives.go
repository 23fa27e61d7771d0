package evidence

import (
	"errors"
	"math"

	"assaywrit/evidence/peak"
	"assaywrit/evidence/trace"
)

// An Alternative is the area of a peak that shares a cluster, by another defensible way to divide it: what another choice would have
// given. Where Refused is set the way does not apply there.
type Alternative struct {
	Method     string   `json:"method"`
	Area       *float64 `json:"area_counts_min,omitempty"`
	Difference *float64 `json:"relative_difference,omitempty"` // from the area in use
	StdU       *float64 `json:"area_std_u_counts_min,omitempty"`
	Distrust   []string `json:"distrust,omitempty"` // reasons not to rely on a fit
	Refused    string   `json:"refused,omitempty"`
}

// alternatives takes the area of a peak that was found beside others on a common baseline by every way; nil for a peak that stands
// alone. found is what the automatic detection gave, of which p is one.
func alternatives(c trace.Chromatogram, found *peak.Result, p *peak.Peak, noise peak.NoiseModel) ([]Alternative, error) {
	for _, k := range peak.Clusters(found) {
		at := -1
		for i, apex := range k.ApexesMin {
			if apex == p.ApexMin {
				at = i
			}
		}
		if at < 0 || len(k.ApexesMin) < 2 {
			continue
		}
		k.Noise = noise
		ways, err := peak.Separate(c, k, peak.JointOptions{})
		var parameter *peak.ParameterError
		if errors.As(err, &parameter) {
			return nil, nil // more peaks than can be divided
		}
		if err != nil {
			return nil, err
		}
		var list []Alternative
		for _, w := range ways {
			a := Alternative{Method: w.Method, Distrust: w.Distrust, Refused: w.Refused}
			if at < len(w.Areas) {
				a.Area = ptr(w.Areas[at])
				if d := w.Areas[at]/p.Area - 1; p.Area != 0 && !math.IsInf(d, 0) && !math.IsNaN(d) {
					a.Difference = &d
				}
			}
			if at < len(w.AreaStdU) {
				a.StdU = ptr(w.AreaStdU[at])
			}
			list = append(list, a)
		}
		return list, nil
	}
	return nil, nil
}
