package calibration

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
)

// LineAlgorithm names the fit and InverseAlgorithm the prediction; a published version never changes its results.
const (
	LineAlgorithm    = "wls-line-qr@1"
	InverseAlgorithm = "line-inverse@1"
)

// A PointError says which calibrator cannot be used, counting from 0, and why.
type PointError struct {
	Index     int
	Got, Want string
}

func (e *PointError) Error() string {
	return fmt.Sprintf("calibrator %d: got %s, want %s", e.Index+1, e.Got, e.Want)
}

// A SlopeError says that the response does not rise with the amount.
type SlopeError struct{ B float64 }

func (e *SlopeError) Error() string {
	return fmt.Sprintf("the slope of the calibration is %.6g, want one above zero", e.B)
}

// FitLine fits y = A + B·x by weighted least squares. Relative weights are 1/x or 1/x² as they stand, not scaled, so that S is
// the standard deviation of a response of weight 1. At least three points at three different amounts are needed.
//
// A point that is not finite, or whose amount is not above zero where weights are relative, gives a *PointError; a slope that is
// not above zero a *SlopeError. Numbers whose squares a float64 does not hold are refused too: what comes back is finite.
//
// Source: D. L. Massart et al., Handbook of Chemometrics and Qualimetrics, part A (1997), chapter 8.
func FitLine(points []Point, w Weighting) (*Fit, error) {
	weights := make([]float64, len(points))
	for i, p := range points {
		switch w {
		case Unweighted:
			weights[i] = 1
		case InverseX, InverseX2:
			if weights[i] = weightAt(p.X, w); !(p.X > 0) || !(weights[i] > 0) || math.IsInf(weights[i], 0) {
				return nil, &PointError{i, fmt.Sprintf("an amount of %g", p.X), fmt.Sprintf("one above zero, as the weights are %s", w)}
			}
		default:
			return nil, fmt.Errorf("weights of kind %q: want none, 1/x or 1/x2", w)
		}
	}
	return fit(points, weights, w)
}

// FitLineWeights is FitLine with weights given one by one, such as 1/s² from replicates. They must be above zero.
func FitLineWeights(points []Point, weights []float64) (*Fit, error) {
	if len(weights) != len(points) {
		return nil, fmt.Errorf("%d weights for %d points", len(weights), len(points))
	}
	for i, w := range weights {
		if !(w > 0) || math.IsInf(w, 0) {
			return nil, &PointError{i, fmt.Sprintf("a weight of %g", w), "one above zero"}
		}
	}
	return fit(points, weights, Given)
}

// Given is the weighting of a fit whose weights were handed over one by one.
const Given Weighting = "given"

func weightAt(x float64, w Weighting) float64 {
	switch w {
	case InverseX:
		return 1 / x
	case InverseX2:
		return 1 / float64(x*x)
	}
	return 1
}

func fit(points []Point, weights []float64, w Weighting) (*Fit, error) {
	if err := usable(points); err != nil {
		return nil, err
	}
	n := len(points)
	x, y := make([]float64, n), make([]float64, n)
	for i, p := range points {
		x[i], y[i] = p.X, p.Y
	}
	f := &Fit{Algorithm: LineAlgorithm, Weighting: w, DoF: n - 2, SumW: strictmath.Sum(weights)}
	f.XBar = strictmath.Dot(weights, x) / f.SumW
	f.YBar = strictmath.Dot(weights, y) / f.SumW

	// Centred: the columns are then orthogonal under the weights.
	rows := make([][]float64, n)
	wd, d := make([]float64, n), make([]float64, n)
	for i := range rows {
		d[i] = x[i] - f.XBar
		rows[i] = []float64{1, d[i]}
		wd[i] = float64(weights[i] * d[i])
	}
	f.Sxx = strictmath.Dot(wd, d)
	s, err := strictmath.WeightedLeastSquares(rows, y, weights)
	if err != nil {
		return nil, fmt.Errorf("no line through the calibrators: %w", err)
	}
	f.B = s.Coef[1]
	f.A = s.Coef[0] - float64(f.B*f.XBar)
	if !(f.B > 0) {
		return nil, &SlopeError{f.B}
	}
	f.statistics(s, x, y, weights)
	if !f.finite() {
		return nil, fmt.Errorf("no line through the calibrators: %w", strictmath.ErrRange)
	}
	return f, nil
}

func (f *Fit) finite() bool {
	values := []float64{f.A, f.B, f.SA, f.SB, f.Cov, f.S, f.R, f.R2, f.SumW, f.XBar, f.YBar, f.Sxx, 1 / f.Sxx}
	for _, p := range f.Points {
		values = append(values, p.Weight, p.Fitted, p.Residual, p.BackX)
		if p.RelativeBias != nil {
			values = append(values, *p.RelativeBias)
		}
	}
	return finite(values...)
}

func finite(values ...float64) bool {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

// statistics fills what follows from the solution in centred form, where a' = A + B·x̄.
func (f *Fit) statistics(s *strictmath.Solution, x, y, weights []float64) {
	s2 := s.RSS / float64(f.DoF)
	f.S = math.Sqrt(s2)
	va, vb, cab := float64(s2*s.Cov[0][0]), float64(s2*s.Cov[1][1]), float64(s2*s.Cov[0][1])
	f.SB = math.Sqrt(vb)
	f.SA = math.Sqrt(va + float64(f.XBar*f.XBar*vb) - float64(2*f.XBar*cab))
	f.Cov = cab - float64(f.XBar*vb)
	wd, e := make([]float64, len(y)), make([]float64, len(y))
	for i := range y {
		e[i] = y[i] - f.YBar
		wd[i] = float64(weights[i] * e[i])
	}
	if syy := strictmath.Dot(wd, e); syy > 0 {
		f.R2 = max(0, 1-s.RSS/syy)
		f.R = math.Sqrt(f.R2) // the slope is above zero
	}
	for i := range x {
		fitted := f.A + float64(f.B*x[i])
		p := FittedPoint{X: x[i], Y: y[i], Weight: weights[i], Fitted: fitted, Residual: y[i] - fitted, BackX: (y[i] - f.A) / f.B}
		if x[i] > 0 {
			bias := p.BackX/x[i] - 1
			p.RelativeBias = &bias
		}
		f.Points = append(f.Points, p)
	}
}

func usable(points []Point) error {
	levels := map[float64]bool{}
	for i, p := range points {
		if math.IsNaN(p.X) || math.IsInf(p.X, 0) || math.IsNaN(p.Y) || math.IsInf(p.Y, 0) {
			return &PointError{i, fmt.Sprintf("amount %g and response %g", p.X, p.Y), "finite numbers"}
		}
		levels[p.X] = true
	}
	if len(levels) < 3 {
		return fmt.Errorf("%d calibrators at %d different amounts: want at least three different amounts", len(points), len(levels))
	}
	return nil
}

// WeightAt is the weight that the fit's rule gives to a response at amount x; with 1/x or 1/x² an x not above zero is an
// error, and so is a fit whose weights were given one by one.
func (f *Fit) WeightAt(x float64) (float64, error) {
	switch f.Weighting {
	case Unweighted:
		return 1, nil
	case InverseX, InverseX2:
		w := weightAt(x, f.Weighting)
		if !(x > 0) || !(w > 0) || math.IsInf(w, 0) {
			return 0, fmt.Errorf("the amount read from the line is %.6g: it has no weight of kind %s", x, f.Weighting)
		}
		return w, nil
	}
	return 0, fmt.Errorf("weights of kind %q have no rule for other amounts", f.Weighting)
}

// Predict reads the amount for y, the mean of m responses of the given weight each, with its standard uncertainty
//
//	u = (s/b)·√(1/(w·m) + 1/Σw + (y − ȳw)²/(b²·Σw(x − x̄w)²))
//
// and, as StdULine, the same without the first term: what the line alone contributes. The weight is on the scale of the fit's: s is
// the standard deviation of a response of weight 1. It needs m of one or more, a weight above zero and a finite y.
//
// Source: Massart et al. (1997), eq. 8.28; unweighted it is ISO 8466-1's form.
func (f *Fit) Predict(y float64, m int, weight float64) (Prediction, error) {
	if m < 1 || !(weight > 0) || math.IsInf(weight, 0) || math.IsNaN(y) || math.IsInf(y, 0) {
		return Prediction{}, fmt.Errorf("a response of %g from %d replicates with weight %g: want a finite one, at least one replicate, and a weight above zero", y, m, weight)
	}
	d := (y - f.YBar) / f.B
	line := 1/f.SumW + float64(d*d)/f.Sxx
	p := Prediction{
		X:        (y - f.A) / f.B,
		StdU:     float64(f.S / f.B * math.Sqrt(1/float64(weight*float64(m))+line)),
		StdULine: float64(f.S / f.B * math.Sqrt(line)),
		DoF:      f.DoF, Weight: weight, M: m,
	}
	if !finite(p.X, p.StdU, p.StdULine) {
		return Prediction{}, fmt.Errorf("a response of %g is too far from the calibrators' %g to be read from the line", y, f.YBar)
	}
	return p, nil
}

// PredictSample is Predict with the weight that the fit's own rule gives at the amount read.
func (f *Fit) PredictSample(y float64, m int) (Prediction, error) {
	w, err := f.WeightAt((y - f.A) / f.B)
	if err != nil {
		return Prediction{}, err
	}
	return f.Predict(y, m, w)
}
