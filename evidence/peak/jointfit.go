package peak

import (
	"fmt"
	"math"

	"assaywrit/evidence/trace"
)

// JointFitAlgorithm is the version of FitCluster. A version never changes its results.
const JointFitAlgorithm = "emg-joint-fit@1"

// JointOptions steer FitCluster.
type JointOptions struct {
	SharedShape   bool    // one σ and τ for all peaks: for neighbours of like retention
	FixedBaseline bool    // the cluster's own line, instead of a straight line fitted along
	FromMin       float64 // window of the points that are fitted; both 0: the limits of the cluster
	ToMin         float64
}

// A FittedPeak is one curve of a joint fit.
type FittedPeak struct {
	EMG
	AreaStdU float64 `json:"area_std_u_counts_min"` // from the covariance of the fit, see FitCluster
	ApexMin  float64 `json:"apex_min"`
	Height   float64 `json:"height_counts"`
}

// A JointFit is what FitCluster found.
type JointFit struct {
	Algorithm        string       `json:"algorithm"` // JointFitAlgorithm
	SharedShape      bool         `json:"shared_shape"`
	Peaks            []FittedPeak `json:"peaks"`
	Baseline         Line         `json:"baseline"`
	Points           int          `json:"points"`
	Freedom          int          `json:"degrees_of_freedom"`
	Iterations       int          `json:"iterations"`
	ReducedChiSquare float64      `json:"reduced_chi_square"` // 0 where no noise was stated
	RunsZ            float64      `json:"residual_runs_z"`    // of the signs of the residuals: far below 0 where they hang together
	Distrust         []string     `json:"distrust,omitempty"` // of the reasons below, in their order

	residuals []float64 // in standard deviations; plain where no noise was stated
}

// Reasons to distrust a joint fit.
const (
	DistrustNotConverged = "fit-not-converged"   // the search ended before it came to rest
	DistrustChiSquare    = "fit-chi-square"      // the residuals are larger than the noise explains
	DistrustRuns         = "fit-residual-runs"   // neighbouring residuals hang together: the shape is another
	DistrustBound        = "fit-at-bound"        // a width or tailing went to the end of its range
	DistrustCorrelated   = "fit-areas-exchanged" // two areas are correlated by more than 0.95, and one is known to worse than 5 %: only their sum is
	DistrustWeak         = "fit-weak-peak"       // an area is less than three of its standard uncertainties
	DistrustFewPoints    = "fit-few-points"      // fewer than four points for each parameter of a peak
	DistrustSaturated    = "fit-saturated"       // three or more points in a row share the highest value
	DistrustNoNoise      = "fit-noise-unknown"   // no noise was stated: the size of the residuals is not judged
)

const (
	fitTolerance  = 1e-5
	fitIterations = 100
	judgedZ       = 4.0  // standard deviations beyond which residuals count as wrong
	chiSquareSlop = 1.25 // the stated noise may itself be wrong by a tenth
	maxAreaCorr   = 0.95
	unsureArea    = 0.05
)

// FitCluster fits one exponentially modified Gaussian to each peak of the cluster, all at once and with a straight baseline under
// them, by weighted least squares (1/variance of the stated noise; with counting noise the variances come from a first fit). It
// begins at the apexes given, with one common shape, and then frees the shapes unless SharedShape asks for one. Areas are those of
// the whole curves, their standard uncertainties come from the covariance of all parameters, times the root of the reduced
// chi-square where that is above 1 or no noise was stated.
//
// Fits run in mean, standard deviation s and γ = (τ/s)³. Bounds: area at least 0, mean inside the window, s from half a step to
// half of the window, γ from -0.98 to 0.98.
//
// The error is a *TraceError, an *IntervalError, a *ParameterError, or a *FitError where nothing can be fitted. What looks fitted but
// should not be relied on carries its reasons in Distrust.
func FitCluster(c trace.Chromatogram, k Cluster, o JointOptions) (*JointFit, error) {
	v, err := view(c, k)
	if err != nil {
		return nil, err
	}
	from, to := v.left, v.right
	if o.FromMin != 0 || o.ToMin != 0 {
		if from, to, err = interval(c, o.FromMin, o.ToMin); err != nil {
			return nil, err
		}
		if from > v.apex[0] || to < v.apex[len(v.apex)-1] {
			return nil, &ParameterError{"window", fmt.Sprintf("%v to %v min", o.FromMin, o.ToMin), "a window around all apexes"}
		}
	}
	f := newJoint(v, from, to, o.FixedBaseline)
	start, fit, err := f.run(f.starts(), true)
	if err == nil && !o.SharedShape && len(v.apex) > 1 {
		start, fit, err = f.run(start, false)
	}
	if err == nil && k.Noise.CountingGain > 0 {
		f.weigh(fit.values)
		start, fit, err = f.run(start, o.SharedShape || len(v.apex) == 1)
	}
	if err != nil {
		return nil, &FitError{c.ID, f.t[0], f.t[len(f.t)-1], err}
	}
	return f.result(start, fit, o.SharedShape), nil
}

// A FitError says why a cluster could not be fitted.
type FitError struct {
	ID             string // of the trace
	FromMin, ToMin float64
	Err            error
}

func (e *FitError) Error() string {
	return fmt.Sprintf("trace %q, %v to %v min: no joint fit: %v", e.ID, e.FromMin, e.ToMin, e.Err)
}
func (e *FitError) Unwrap() error { return e.Err }

// A joint fit in work. Parameters: for each peak area, mean, s, γ (s and γ once, behind all, where the shape is shared), then height
// and slope of what is to be added to the baseline.
type joint struct {
	v       *clusterView
	t, y    []float64 // y above the cluster's baseline
	w       []float64 // nil where no noise is stated
	centre  float64
	fixed   bool
	shared  bool
	step    float64
	shapes  []emgMoments
	signals []float64 // as acquired
}

func newJoint(v *clusterView, from, to int, fixed bool) *joint {
	f := &joint{v: v, t: v.t[from : to+1], signals: v.y[from : to+1], fixed: fixed, shapes: make([]emgMoments, len(v.apex))}
	f.y = make([]float64, len(f.t))
	for i, t := range f.t {
		f.y[i] = f.signals[i] - v.base.at(t)
	}
	f.centre = float64((f.t[0] + f.t[len(f.t)-1]) / 2)
	f.step = (f.t[len(f.t)-1] - f.t[0]) / float64(len(f.t)-1)
	if v.noise.WhiteSD > 0 {
		f.w = make([]float64, len(f.t))
		for i := range f.w {
			f.w[i] = 1 / v.noise.WhiteSD
		}
	}
	return f
}

// weigh takes the variances from the values of a fit.
func (f *joint) weigh(values []float64) {
	f.w = make([]float64, len(f.t))
	least := math.Inf(1)
	for i, t := range f.t {
		v := f.v.noise.Variance(values[i] + f.v.base.at(t))
		if v > 0 {
			least = min(least, v)
		}
		f.w[i] = v
	}
	for i, v := range f.w { // where there is neither signal nor white noise, that of the smallest signal
		f.w[i] = 1 / math.Sqrt(max(v, least))
	}
}

// A peakStart is a peak as a fit begins.
type peakStart struct{ area, mean, s, gamma float64 }

// starts estimates the peaks from their heights and half widths on the side away from a taller neighbour.
func (f *joint) starts() []peakStart {
	v := f.v
	list := make([]peakStart, len(v.apex))
	edges := v.edges()
	width := 0.0
	for i, at := range v.apex {
		half := v.height(at) / 2
		best := math.Inf(1)
		for _, side := range [2]struct{ step, stop int }{{-1, edges[i]}, {+1, edges[i+1]}} {
			for k := at; k != side.stop; k += side.step {
				if v.height(k+side.step) <= half {
					best = min(best, math.Abs(v.t[k+side.step]-v.t[at]))
					break
				}
			}
		}
		list[i] = peakStart{0, v.t[at], best / 1.1774, 0.05}
		if best < math.Inf(1) && (width == 0 || list[i].s < width) {
			width = list[i].s
		}
	}
	if width == 0 {
		width = (v.t[v.right] - v.t[v.left]) / float64(4*len(list))
	}
	for i, at := range v.apex {
		if math.IsInf(list[i].s, 1) {
			list[i].s = width
		}
		list[i].s = max(list[i].s, f.step)
		list[i].mean += float64(0.2 * list[i].s)
		list[i].area = float64(max(v.height(at), 0) * list[i].s * sqrt2Pi)
	}
	return list
}

func (f *joint) shapeAt(i int) int {
	if f.shared {
		return 2 * len(f.shapes)
	}
	return 4*i + 2
}

func (f *joint) areaAt(i int) int {
	if f.shared {
		return 2 * i
	}
	return 4 * i
}

// run searches from the starts and returns where it came to.
func (f *joint) run(start []peakStart, shared bool) ([]peakStart, *lsFit, error) {
	f.shared = shared
	n := len(start)
	p := 4 * n
	if shared {
		p = 2*n + 2
	}
	lines := p
	if !f.fixed {
		p += 2
	}
	theta, lower, upper := make([]float64, p), make([]float64, p), make([]float64, p)
	window := f.t[len(f.t)-1] - f.t[0]
	var s, gamma, area float64
	for _, k := range start {
		s += float64(k.s * k.area)
		gamma += float64(k.gamma * k.area)
		area += k.area
	}
	for i, k := range start {
		a, b := f.areaAt(i), f.shapeAt(i)
		theta[a], lower[a], upper[a] = k.area, 0, math.Inf(1)
		theta[a+1], lower[a+1], upper[a+1] = k.mean, f.t[0], f.t[len(f.t)-1]
		theta[b], lower[b], upper[b] = k.s, f.step/2, window/2
		theta[b+1], lower[b+1], upper[b+1] = k.gamma, -maxGamma, maxGamma
		if shared && area > 0 {
			theta[b], theta[b+1] = s/area, gamma/area
		}
	}
	for j := lines; j < p; j++ {
		lower[j], upper[j] = math.Inf(-1), math.Inf(1)
	}
	ls := leastSquares{y: f.y, w: f.w, eval: f.eval, lower: lower, upper: upper, tol: fitTolerance, maxIters: fitIterations}
	fit, err := ls.solve(theta)
	if err != nil {
		return nil, nil, err
	}
	out := make([]peakStart, n)
	for i := range out {
		a, b := f.areaAt(i), f.shapeAt(i)
		out[i] = peakStart{fit.theta[a], fit.theta[a+1], fit.theta[b], fit.theta[b+1]}
	}
	return out, fit, nil
}

// eval is the model.
func (f *joint) eval(theta, out, jac []float64) {
	n, peaks, p := len(f.t), len(f.shapes), len(theta)
	for i := range f.shapes {
		b := f.shapeAt(i)
		f.shapes[i] = newMoments(theta[f.areaAt(i)+1], theta[b], theta[b+1])
	}
	for i := range out {
		out[i] = 0
	}
	if jac != nil && f.shared {
		b := f.shapeAt(0)
		for i := range 2 * n {
			jac[b*n+i] = 0
		}
	}
	for k := range peaks {
		e := &f.shapes[k]
		a, b := f.areaAt(k), f.shapeAt(k)
		area := theta[a]
		if jac == nil {
			for i, t := range f.t {
				out[i] += float64(area * e.value(t))
			}
			continue
		}
		jArea, jMean, jS, jGamma := jac[a*n:(a+1)*n], jac[(a+1)*n:(a+2)*n], jac[b*n:(b+1)*n], jac[(b+1)*n:(b+2)*n]
		for i, t := range f.t {
			g, dm, ds, dg := e.gradient(t)
			out[i] += float64(area * g)
			jArea[i], jMean[i] = g, float64(area*dm)
			if f.shared {
				jS[i] += float64(area * ds)
				jGamma[i] += float64(area * dg)
			} else {
				jS[i], jGamma[i] = float64(area*ds), float64(area*dg)
			}
		}
	}
	if f.fixed {
		return
	}
	for i, t := range f.t {
		u := (t - f.centre) / f.step
		out[i] += theta[p-2] + float64(theta[p-1]*u)
		if jac != nil {
			jac[(p-2)*n+i], jac[(p-1)*n+i] = 1, u
		}
	}
}
