package peak

import "assaywrit/evidence/trace"

// Ways to share the area of a fused cluster among its peaks, with their versions. A version never changes its results.
const (
	SeparateDrop     = "perpendicular-drop@1"   // one baseline, divided upright at the lowest points between apexes
	SeparateValley   = "valley-to-valley@1"     // each peak above the line joining its own two limits
	SeparateTangent  = "skim-tangent@1"         // riders above the line from the valley that touches the trace behind them
	SeparateExponent = "skim-exponential@1"     // riders above the tail of the main peak, continued as an exponential
	SeparateFit      = JointFitAlgorithm        // curves with shapes of their own
	SeparateFitAlike = "emg-joint-fit-shared@1" // curves with one shape
)

// A Separation is the areas of the peaks of a cluster by one method, in the order of their apexes. Where Refused is set the method
// does not apply and there are no areas.
type Separation struct {
	Method   string    `json:"method"`
	Areas    []float64 `json:"areas_counts_min,omitempty"`
	AreaStdU []float64 `json:"area_std_u_counts_min,omitempty"` // of the fits only
	Distrust []string  `json:"distrust,omitempty"`
	Refused  string    `json:"refused,omitempty"`
}

// Reasons why a method does not apply.
const (
	RefusedOnePeak     = "one-peak"            // there is nothing to share
	RefusedNoValley    = "no-valley"           // two apexes have no lower point between them
	RefusedNoRider     = "no-rider"            // no peak follows the tallest
	RefusedNoTail      = "tail-too-short"      // less than five points of falling tail lie between the tallest peak and its rider
	RefusedNoFit       = "no-fit"              // the joint fit found nothing
	RefusedNotPositive = "area-not-above-zero" // a peak would get an area that is not above zero
)

// Separate shares the area of a cluster by every method, side by side, so that what another choice would have given is seen. The
// order is that of the constants. The skims take the tallest peak as the main one; what comes before it, and several riders
// among themselves, are divided by perpendiculars. o applies to both fits, but for SharedShape. The error is that of FitCluster
// for a trace, limits or parameters that cannot be used.
func Separate(c trace.Chromatogram, k Cluster, o JointOptions) ([]Separation, error) {
	v, err := view(c, k)
	if err != nil {
		return nil, err
	}
	list := []Separation{v.byDrop(), v.byValley(), v.byTangent(), v.byExponential()}
	for _, shared := range []bool{false, true} {
		s := Separation{Method: SeparateFit}
		if shared {
			s.Method = SeparateFitAlike
		}
		o.SharedShape = shared
		fit, err := FitCluster(c, k, o)
		if _, none := err.(*FitError); none {
			s.Refused = RefusedNoFit
		} else if err != nil {
			return nil, err
		} else {
			for i := range fit.Peaks {
				s.Areas = append(s.Areas, fit.Peaks[i].Area)
				s.AreaStdU = append(s.AreaStdU, fit.Peaks[i].AreaStdU)
			}
			s.Distrust = fit.Distrust
		}
		list = append(list, s)
	}
	return list, nil
}

// shared makes a Separation of areas, refused where one is not above zero.
func separation(method string, areas []float64) Separation {
	for _, a := range areas {
		if !(a > 0) {
			return Separation{Method: method, Refused: RefusedNotPositive}
		}
	}
	return Separation{Method: method, Areas: areas}
}

// inapplicable tells why a method that needs valleys cannot be used.
func (v *clusterView) inapplicable() string {
	switch {
	case len(v.apex) < 2:
		return RefusedOnePeak
	case v.withoutValley() >= 0:
		return RefusedNoValley
	}
	return ""
}

func (v *clusterView) byDrop() Separation {
	if why := v.inapplicable(); why != "" {
		return Separation{Method: SeparateDrop, Refused: why}
	}
	return separation(SeparateDrop, v.drops())
}

func (v *clusterView) drops() []float64 {
	edges := v.edges()
	areas := make([]float64, len(v.apex))
	for i := range areas {
		areas[i] = v.above(edges[i], edges[i+1], nil)
	}
	return areas
}

func (v *clusterView) byValley() Separation {
	if why := v.inapplicable(); why != "" {
		return Separation{Method: SeparateValley, Refused: why}
	}
	edges := v.edges()
	areas := make([]float64, len(v.apex))
	for i := range areas {
		a, b := edges[i], edges[i+1]
		areas[i] = v.above(a, b, line{v.t[a], v.height(a), v.t[b], v.height(b)}.at)
	}
	return separation(SeparateValley, areas)
}

// tallest is the index of the peak with the highest apex, the first of equals.
func (v *clusterView) tallest() int {
	best := 0
	for i, at := range v.apex {
		if v.height(at) > v.height(v.apex[best]) {
			best = i
		}
	}
	return best
}
