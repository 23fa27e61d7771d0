// Package calibration fits a response to an amount, and turns a response back into an amount with its uncertainty.
//
// It knows neither files nor units: x is whatever amount the method calibrates (here ng/mL), y is the response (here
// the ratio of areas). All arithmetic is bit-reproducible (package strictmath).
package calibration

// Weighting of the calibration points.
type Weighting string

const (
	Unweighted Weighting = "none"
	InverseX   Weighting = "1/x"
	InverseX2  Weighting = "1/x2"
)

// A Point is one calibrator injection.
type Point struct {
	X float64 `json:"x"`
	Y float64 `json:"y"`
}

// A Fit is a straight line y = A + B·x with its statistics, by weighted least squares.
type Fit struct {
	Algorithm string    `json:"algorithm"` // "wls-line-qr@1"
	Weighting Weighting `json:"weighting"`

	A    float64 `json:"intercept"`
	B    float64 `json:"slope"`
	SA   float64 `json:"intercept_std_error"`
	SB   float64 `json:"slope_std_error"`
	Cov  float64 `json:"covariance_intercept_slope"`
	S    float64 `json:"residual_std_dev"` // s = √(Σw·r²/(n−2)); with weights, that of a point of weight 1
	DoF  int     `json:"degrees_of_freedom"`
	R    float64 `json:"correlation"`
	R2   float64 `json:"r_squared"`
	SumW float64 `json:"sum_weights"`
	XBar float64 `json:"weighted_mean_x"`
	YBar float64 `json:"weighted_mean_y"`
	Sxx  float64 `json:"weighted_sxx"` // Σw(x−x̄w)²

	Points []FittedPoint `json:"points"`
}

// A FittedPoint is a calibrator with what the line says about it.
type FittedPoint struct {
	X            float64  `json:"x"`
	Y            float64  `json:"y"`
	Weight       float64  `json:"weight"` // as used in the fit, not scaled
	Fitted       float64  `json:"fitted"`
	Residual     float64  `json:"residual"`        // y − fitted
	BackX        float64  `json:"back_calculated"` // (y − A)/B
	RelativeBias *float64 `json:"relative_bias,omitempty"`
}

// A Prediction is an amount read from the line, with its standard uncertainties in the unit of x.
type Prediction struct {
	X        float64 `json:"x"`
	StdU     float64 `json:"std_u"`      // whole inverse-prediction standard uncertainty, scatter of the response included
	StdULine float64 `json:"std_u_line"` // the part that comes from the line alone
	DoF      int     `json:"degrees_of_freedom"`
	Weight   float64 `json:"weight"` // weight given to the response
	M        int     `json:"replicates"`
}
