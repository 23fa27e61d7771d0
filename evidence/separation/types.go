package separation

import "fmt"

// A Run is one scouting run of the mixture: at one composition, or with a gradient.
type Run struct {
	Name     string    `json:"run"`
	Phi      float64   `json:"phi"` // fraction of the stronger solvent, isocratic
	Gradient *Gradient `json:"gradient,omitempty"`
	VoidMin  float64   `json:"void_min"`
	Peaks    []Peak    `json:"peaks"` // in order of retention
}

// A Gradient is a straight rise of φ.
type Gradient struct {
	StartPhi float64 `json:"start_phi"`
	EndPhi   float64 `json:"end_phi"`
	TimeMin  float64 `json:"gradient_min"`
	DwellMin float64 `json:"dwell_min"` // until the gradient reaches the column
}

// A Peak is one integrated peak of a run.
type Peak struct {
	Compound     string  `json:"compound,omitempty"` // where a person has said which it is
	RetentionMin float64 `json:"retention_min"`
	WidthHalfMin float64 `json:"width_half_min"`
	Area         float64 `json:"area_counts_min"`
}

// Limits are what a separation is asked for.
type Limits struct {
	TimeMin    float64 // longest run; 0: none
	Resolution float64 // that must be kept when φ drifts; 0: 1.5
	MinK, MaxK float64 // retention factors between which all compounds should lie; 0: none
}

// An Error says what is wrong with a run.
type Error struct{ Run, Got, Want string }

func (e *Error) Error() string {
	if e.Run == "" {
		return fmt.Sprintf("separation: got %s, want %s", e.Got, e.Want)
	}
	return fmt.Sprintf("separation: run %s: got %s, want %s", e.Run, e.Got, e.Want)
}

// Result is what the scouting runs say.
type Result struct {
	Algorithm   string     `json:"algorithm"`
	Gradients   bool       `json:"gradients,omitempty"` // compositions are gradient times instead of φ
	Tracking    string     `json:"tracking"`            // "by-name@1" or "by-area@1"
	Compounds   []Compound `json:"compounds"`
	LowStudied  float64    `json:"lowest_studied"` // φ, or gradient time in minutes
	HighStudied float64    `json:"highest_studied"`
	Map         []Point    `json:"map"`
	Best        *Best      `json:"best,omitempty"` // absent where no composition keeps the limits
	Remarks     []string   `json:"remarks,omitempty"`
	VoidMin     float64    `json:"void_min"`
	runs        []Run
}

// A Compound is one peak tracked through all runs, with its model.
type Compound struct {
	Name         string    `json:"compound"`
	RetentionMin []float64 `json:"retention_min"` // in the order of the runs
	K            []float64 `json:"retention_factor,omitempty"`
	Model        Model     `json:"model"`
	Plates       float64   `json:"plates"` // median of the runs, by the width at half height
	Area         float64   `json:"area_counts_min"`
}

// A Point is one composition of the map.
type Point struct {
	At         float64 `json:"at"` // φ, or gradient time in minutes
	Resolution float64 `json:"critical_resolution"`
	First      string  `json:"first"` // the critical pair
	Second     string  `json:"second"`
	LastMin    float64 `json:"last_min"` // end of the last peak
	Outside    bool    `json:"outside_study,omitempty"`
}

// Best is the recommended composition.
type Best struct {
	Point
	LowTolerated  float64     `json:"lowest_tolerated"` // how far the composition may drift before the resolution falls under its limit, or the time or a retention factor leaves theirs, within the study
	HighTolerated float64     `json:"highest_tolerated"`
	Holds         bool        `json:"resolution_reached"` // whether the limit is reached at all
	Predicted     []Predicted `json:"predicted"`
}

// A Predicted peak of a composition.
type Predicted struct {
	Compound     string   `json:"compound"`
	RetentionMin float64  `json:"retention_min"`
	WidthHalfMin float64  `json:"width_half_min"`
	Resolution   *float64 `json:"resolution_to_next,omitempty"`
}
