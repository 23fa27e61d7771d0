// Package peak finds and integrates chromatographic peaks.
//
// Its functions take values in memory and give the same result for the same values on every processor. Times are in
// minutes, intensities in detector counts, areas in counts·min. Whether a peak is the analyte is not asked here.
package peak

// Parameters steer detection and integration; they come from the method and are recorded with every peak.
type Parameters struct {
	SmoothingPoints int     `json:"smoothing_points"`        // odd number of points of the Savitzky–Golay window, used for detection only
	MinSN           float64 `json:"min_signal_to_noise"`     // a peak must be at least this high, in units of noise
	MinWidthMin     float64 `json:"min_width_min"`           // narrowest width at half height that is a peak, minutes
	Shared          Shared  `json:"shared_valley"`           // how two peaks that share a valley are divided
	ValleyFraction  float64 `json:"valley_fraction"`         // see Shared
	EdgeFraction    float64 `json:"edge_fraction,omitempty"` // see Detect
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

	Noise         float64 `json:"noise_counts"` // robust standard deviation of the signal-free stretches
	SignalToNoise float64 `json:"signal_to_noise"`

	Symmetry      *float64 `json:"symmetry_5pct,omitempty"`  // (a+b)/2a at 5 % height (USP <621>, Ph. Eur. 2.2.46)
	WidthHalfMin  *float64 `json:"width_half_min,omitempty"` // width at half height
	Plates        *float64 `json:"plates_half,omitempty"`    // 5.54 (tR/wh)²
	ResolutionPre *float64 `json:"resolution_half_previous,omitempty"`
	ResolutionPos *float64 `json:"resolution_half_next,omitempty"` // 1.18 (tR2-tR1)/(wh1+wh2)

	StartKind EdgeKind `json:"start_kind"`
	EndKind   EdgeKind `json:"end_kind"`
	Algorithm string   `json:"algorithm"`       // such as "trapezoid@1"
	Flags     []string `json:"flags,omitempty"` // such as "saturated", "cut-at-end"
}

// EdgeKind tells how a peak ends on one side.
type EdgeKind string

const (
	AtBaseline EdgeKind = "baseline"
	AtValley   EdgeKind = "valley"
	AtTraceEnd EdgeKind = "trace-end"
	ByHand     EdgeKind = "manual"
)
