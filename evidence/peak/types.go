// Package peak finds and integrates chromatographic peaks.
//
// Its functions take values in memory and give the same result for the same values on every processor. Times are in
// minutes, intensities in detector counts, areas in counts·min. Whether a peak is the analyte is not asked here.
package peak

// Parameters steer detection and integration; they come from the method and are recorded with every peak.
type Parameters struct {
	SmoothingPoints int     `json:"smoothing_points" key:"smoothing_points" min:"5" max:"101" doc:"Odd number of points of the smoothing window, for detection only."` // odd number of points of the Savitzky–Golay window, used for detection only
	MinSN           float64 `json:"min_signal_to_noise" key:"min_signal_to_noise" above:"0"`                                                                           // a peak must be at least this high, in units of noise
	MinWidthMin     float64 `json:"min_width_min" key:"min_width" unit:"min" min:"0" doc:"Narrowest width at half height that is a peak."`                             // narrowest width at half height that is a peak, minutes; 0 is no limit
	Shared          Shared  `json:"shared_valley" key:"shared_valley" enum:"perpendicular-drop|valley-to-valley"`                                                      // how two peaks that share a valley are divided

	// ValleyFraction is the depth at which a shared valley stops being one: when it lies lower above the common baseline than
	// this fraction of the smaller peak's height, the two are separate peaks with baselines of their own. 0 keeps all in common.
	ValleyFraction float64 `json:"valley_fraction" key:"valley_fraction" unit:"fraction" min:"0" max:"0.999" doc:"Depth at which a shared valley separates; 0: never."`

	// EdgeFraction is the fraction of its height to which a flank is followed; see Detect. 0 stands for 2^-13 (0.012 %).
	EdgeFraction float64 `json:"edge_fraction,omitempty" key:"edge_fraction,optional" unit:"fraction" min:"0" max:"0.1" doc:"Height to which a flank is followed; 0: 0.012 %."`
}

// Shared is the treatment of two peaks that share a valley.
type Shared string

const (
	// Drop divides at the valley by a perpendicular to one common baseline.
	Drop Shared = "perpendicular-drop"
	// Valley gives each peak a baseline of its own that touches the valley.
	Valley Shared = "valley-to-valley"
)

// A Peak is one integrated peak.
type Peak struct {
	StartMin float64 `json:"start_min"`
	ApexMin  float64 `json:"apex_min"` // parabola through the highest acquired point and its neighbours
	EndMin   float64 `json:"end_min"`
	Points   int     `json:"points"` // acquired points from start to end, both included

	Area   float64 `json:"area_counts_min"` // above the baseline, by the acquired points
	Height float64 `json:"height_counts"`   // highest acquired point above the baseline

	// The straight baseline, given by its two ends. For a perpendicular drop the ends of the line lie at the limits of
	// the cluster, not of the peak; the line is the same for all its members.
	BaselineStartMin    float64 `json:"baseline_start_min"`
	BaselineStartCounts float64 `json:"baseline_start_counts"`
	BaselineEndMin      float64 `json:"baseline_end_min"`
	BaselineEndCounts   float64 `json:"baseline_end_counts"`

	// Acquired points whose mean each end of the line passes through: 1 where it joins the signal itself.
	BaselineStartPoints int `json:"baseline_start_points"`
	BaselineEndPoints   int `json:"baseline_end_points"`

	// AreaStdU is the standard uncertainty of Area that follows from the noise on the points summed and on those that fix
	// the baseline, taken as white. Counting noise of the signal itself is not in it.
	AreaStdU float64 `json:"area_std_u_counts_min"`

	Noise         float64 `json:"noise_counts"`    // robust standard deviation of the signal-free stretches; see Detect
	SignalToNoise float64 `json:"signal_to_noise"` // Height/Noise, not the pharmacopoeias' 2H/h

	Symmetry      *float64 `json:"symmetry_5pct,omitempty"`  // (a+b)/2a at 5 % height (USP <621>, Ph. Eur. 2.2.46)
	WidthHalfMin  *float64 `json:"width_half_min,omitempty"` // width at half height
	Plates        *float64 `json:"plates_half,omitempty"`    // 5.54 (tR/wh)²
	ResolutionPre *float64 `json:"resolution_half_previous,omitempty"`
	ResolutionPos *float64 `json:"resolution_half_next,omitempty"` // 1.18 (tR2-tR1)/(wh1+wh2)

	StartKind EdgeKind `json:"start_kind"`
	EndKind   EdgeKind `json:"end_kind"`
	Algorithm string   `json:"algorithm"`       // AreaAlgorithm
	Flags     []string `json:"flags,omitempty"` // of the flags below, in their order
}

// The published versions of the algorithms. A version never changes its results.
const (
	NoiseAlgorithm     = "noise-quiet-differences@1" // see Detect
	DetectionAlgorithm = "sg-walk@1"                 // see Detect
	AreaAlgorithm      = "trapezoid@1"               // see Integrate
)

// What else can stand in Result.NoiseMethod.
const (
	NoiseWholeTrace = "noise-whole-trace@1" // too few points lie outside peaks: estimated over the whole trace
	NoiseFloor      = "noise-floor@1"       // the trace shows no noise: 2^-30 of its range
)

// Flags of a peak.
const (
	FlagSaturated        = "saturated"         // three or more points in a row share the highest value
	FlagCutAtStart       = "cut-at-start"      // the trace begins before the peak does
	FlagCutAtEnd         = "cut-at-end"        // the trace ends before the peak does
	FlagSpike            = "spike"             // one single point stands above half height
	FlagFewPoints        = "few-points"        // fewer than five points stand above half height
	FlagShoulder         = "shoulder"          // a flank flattens and steepens again: perhaps two peaks in one; from Detect only
	FlagNegativeBaseline = "negative-baseline" // the baseline lies more than three noises below zero counts
	FlagNegativeArea     = "negative-area"     // the area is not above zero
	FlagApexAtLimit      = "apex-at-limit"     // the highest point is next to a limit: no apex inside
	FlagNoiseFloor       = "noise-floor"       // no noise was measurable: signal-to-noise rests on a floor
)

// A Result is what Detect found in one trace.
type Result struct {
	Peaks       []Peak  // in order of time; limits do not overlap
	Noise       float64 // counts; 0 only for a trace of one constant value
	NoisePoints int     // acquired points that the noise was estimated from
	NoiseMethod string  // NoiseAlgorithm, NoiseWholeTrace or NoiseFloor
}

// EdgeKind tells how a peak ends on one side.
type EdgeKind string

const (
	AtBaseline EdgeKind = "baseline"
	AtValley   EdgeKind = "valley"
	AtTraceEnd EdgeKind = "trace-end"
	ByHand     EdgeKind = "manual"
)
