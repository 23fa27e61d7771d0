package peak

import "errors"

// A leastSquares problem is the weighted sum of squares Σ w²(y − f(θ))² over n points, with bounds on θ.
type leastSquares struct {
	y, w []float64 // w is 1/standard deviation; nil is 1 throughout
	// eval writes the model's values to f and, unless jac is nil, its derivatives: jac[j*n+i] is that of f[i] with respect to θ[j].
	eval         func(theta, f, jac []float64)
	lower, upper []float64 // nil is no bound
	// tol ends the search when the next full step would move the values by less than tol times the residuals that remain.
	tol      float64
	maxIters int
}

// A lsFit is the end of a search. Cov is (JᵀW²J)⁻¹ over the parameters that are free; rows of those at a bound are zero.
type lsFit struct {
	theta     []float64
	values    []float64
	cov       [][]float64
	rss       float64 // Σ w²r²
	dof       int
	iters     int
	converged bool
	atBound   []bool
}

var (
	errFitRange = errors.New("the model has no finite values at the start")
	errFitRank  = errors.New("the data do not determine all parameters")
	errFitFew   = errors.New("fewer points than parameters")
)

// solve searches by the method of Levenberg and Marquardt, each step from a Householder QR of the scaled derivatives and the
// damping appended as rows, so that nothing is squared. A parameter at a bound that the step would cross is held there for the
// step. Damping follows H. B. Nielsen, report IMM-REP-1999-05, Technical University of Denmark.
//
// Source: J. J. Moré, Lecture Notes in Mathematics 630 (1978) 105-116 (from memory).
func (ls *leastSquares) solve(start []float64) (*lsFit, error) {
	n, p := len(ls.y), len(start)
	if n <= p {
		return nil, errFitFew
	}
	s := lsSearch{leastSquares: ls, n: n, p: p, f: make([]float64, n), r: make([]float64, n), q: make([]float64, n), try: make([]float64, n),
		jac: make([]float64, n*p), scale: make([]float64, p), held: make([]bool, p), step: make([]float64, p), free: make([]int, 0, p)}
	s.theta = ls.clamped(start)
	s.eval(s.theta, s.f, s.jac)
	s.rss = s.residuals(s.f, s.r)
	if !finiteValue(s.rss) {
		return nil, errFitRange
	}
	fit := &lsFit{dof: n - p}
	lambda, grow := 1e-3, 2.0
	var zero float64 // size of the data: residuals far below it are rounding
	for i, v := range ls.y {
		zero += float64(float64(v*s.weight(i)) * float64(v*s.weight(i)))
	}
	zero = float64(zero * 0x1p-94)
	for fit.iters < ls.maxIters && !fit.converged {
		fit.iters++
		if !s.factor() {
			return nil, errFitRank
		}
		// How far would the undamped step go?
		if s.damped(0); s.ok && s.fullGain() <= max(float64(max(float64(ls.tol*ls.tol), 0x1p-44)*s.rss), zero) {
			fit.converged = true
			s.accept()
			break
		}
		for {
			s.damped(lambda)
			gain := s.predicted()
			if next, ok := s.trial(); s.ok && ok && finiteValue(gain) && next < s.rss {
				ratio := (s.rss - next) / max(gain, float64(s.rss*0x1p-60))
				c := float64(2*ratio) - 1
				lambda = float64(lambda * max(1.0/3, 1-float64(c*c*c)))
				lambda, grow = max(lambda, 1e-12), 2
				s.accept()
				break
			}
			lambda = float64(lambda * grow)
			grow = float64(grow * 2)
			if !(lambda <= 1e18) {
				goto done
			}
		}
	}
done:
	s.eval(s.theta, s.f, s.jac)
	fit.rss = s.residuals(s.f, s.r)
	fit.theta, fit.values = s.theta, s.f
	fit.atBound = make([]bool, p)
	for j := range s.theta {
		fit.atBound[j] = ls.lower != nil && s.theta[j] <= ls.lower[j] || ls.upper != nil && s.theta[j] >= ls.upper[j]
	}
	if !s.factorFree(fit.atBound) {
		return nil, errFitRank
	}
	fit.cov = s.covariance()
	for j := range fit.cov {
		if !finiteValue(fit.cov[j][j]) {
			return nil, errFitRank
		}
	}
	return fit, nil
}

// finiteValue tells whether x is a number and not infinite.
func finiteValue(x float64) bool { return x-x == 0 }

// lsSearch is the state of one search.
type lsSearch struct {
	*leastSquares
	n, p           int
	theta, f, r    []float64
	next, try      []float64
	q              []float64 // Qᵀr
	jac            []float64 // derivatives, and after factor the Householder vectors
	tri            []float64 // R, row by row, of the free columns
	scale          []float64 // largest column lengths so far
	held           []bool
	free           []int
	step           []float64
	gain           float64
	rss            float64
	ok             bool
	gradient, work []float64
}

func (ls *leastSquares) weight(i int) float64 {
	if ls.w == nil {
		return 1
	}
	return ls.w[i]
}

func (ls *leastSquares) clamped(theta []float64) []float64 {
	out := append([]float64(nil), theta...)
	for j := range out {
		if ls.lower != nil {
			out[j] = max(out[j], ls.lower[j])
		}
		if ls.upper != nil {
			out[j] = min(out[j], ls.upper[j])
		}
	}
	return out
}

func (s *lsSearch) residuals(f, r []float64) float64 {
	var sum float64
	for i := range r {
		r[i] = float64((s.y[i] - f[i]) * s.weight(i))
		sum += float64(r[i] * r[i])
	}
	return sum
}

// fullGain is how much the linear model says the undamped step, not clamped, lowers the sum of squares.
func (s *lsSearch) fullGain() float64 { return dot(s.q[:len(s.free)], s.q[:len(s.free)]) }

// predicted is how much the linear model says the (clamped) step lowers the sum of squares.
func (s *lsSearch) predicted() float64 {
	m := len(s.free)
	var gain float64
	for a := range m {
		var v float64
		for b := a; b < m; b++ {
			j := s.free[b]
			v += float64(s.tri[a*m+b] * (s.next[j] - s.theta[j]))
		}
		gain += float64(v * (float64(2*s.q[a]) - v))
	}
	return gain
}

// trial is the sum of squares after the step.
func (s *lsSearch) trial() (float64, bool) {
	s.eval(s.next, s.try, nil)
	var sum float64
	for i, v := range s.try {
		r := float64((s.y[i] - v) * s.weight(i))
		sum += float64(r * r)
	}
	return sum, finiteValue(sum)
}

// accept takes the step, unless it makes the sum larger by more than rounding.
func (s *lsSearch) accept() {
	if next, ok := s.trial(); !ok || next > float64(s.rss*(1+0x1p-40)) {
		return
	}
	copy(s.theta, s.next)
	s.eval(s.theta, s.f, s.jac)
	s.rss = s.residuals(s.f, s.r)
}
