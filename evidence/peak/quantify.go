package peak

import "fmt"

// QuantityLimits say when a peak may be quantified. They come from the method; 0 leaves a limit out.
type QuantityLimits struct {
	MinSignalToNoise float64 // 2H/h; 10 at the quantitation level (common practice; ICH Q2)
	MinResolution    float64 // to each neighbour, by half widths; 1.5 is baseline separation of equal peaks
	MinPointsHalf    int     // acquired points above half height
	MaxSymmetry      float64 // 1.8 (USP <621>, Ph. Eur. 2.2.46: 0.8 to 1.8, from memory)
	MinSymmetry      float64
}

// Reasons why a peak cannot be quantified.
const (
	CannotSignalToNoise = "signal-to-noise-too-low"
	CannotNoNoise       = "signal-to-noise-unknown"
	CannotResolution    = "resolution-too-low"
	CannotNoResolution  = "resolution-unknown" // a neighbour is there, but a width is hidden
	CannotPoints        = "too-few-points"
	CannotSymmetry      = "symmetry-out-of-range"
	CannotNoSymmetry    = "symmetry-unknown"
	CannotSaturated     = "saturated"
	CannotCut           = "cut-by-the-trace"
	CannotSpike         = "spike"
	CannotNegative      = "area-not-above-zero"
)

// A Hindrance is one reason, with what was found and what is allowed.
type Hindrance struct {
	Reason string `json:"reason"`
	Got    string `json:"got"`
	Want   string `json:"want"`
}

// Hindrances lists why the peak cannot be quantified, in the order signal-to-noise, resolution, points, symmetry, flags; none means that
// it can. pairs are the figures with its neighbours, one or two of them, none where it stands alone. What is limited but not known
// counts as a reason.
func Hindrances(p *Peak, f *Figures, pairs []PairFigures, l QuantityLimits) []Hindrance {
	var list []Hindrance
	add := func(on bool, reason, got, want string) {
		if on {
			list = append(list, Hindrance{reason, got, want})
		}
	}
	judge := func(v *float64, low, high float64, wrong, unknown, want string) {
		switch {
		case low == 0 && high == 0:
		case v == nil:
			add(true, unknown, "none", want)
		default:
			add(low > 0 && !(*v >= low) || high > 0 && !(*v <= high), wrong, fmt.Sprint(*v), want)
		}
	}
	judge(f.SignalToNoise, l.MinSignalToNoise, 0, CannotSignalToNoise, CannotNoNoise, fmt.Sprintf("at least %v", l.MinSignalToNoise))
	for _, pair := range pairs {
		judge(pair.ResolutionHalf, l.MinResolution, 0, CannotResolution, CannotNoResolution, fmt.Sprintf("at least %v", l.MinResolution))
	}
	add(f.PointsAboveHalf < l.MinPointsHalf, CannotPoints, fmt.Sprintf("%d points above half height", f.PointsAboveHalf), fmt.Sprintf("at least %d", l.MinPointsHalf))
	judge(f.Symmetry, l.MinSymmetry, l.MaxSymmetry, CannotSymmetry, CannotNoSymmetry, fmt.Sprintf("%v to %v", l.MinSymmetry, l.MaxSymmetry))
	add(flagged(p.Flags, FlagSaturated), CannotSaturated, "a flat top", "a single highest point")
	add(flagged(p.Flags, FlagCutAtStart) || flagged(p.Flags, FlagCutAtEnd), CannotCut, "a peak cut off", "a trace that holds all of it")
	add(flagged(p.Flags, FlagSpike), CannotSpike, "one point above half height", "a peak of several points")
	add(!(p.Area > 0), CannotNegative, fmt.Sprintf("area %v", p.Area), "an area above 0")
	return list
}
