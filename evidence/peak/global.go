package peak

import (
	"fmt"
	"math"

	"assaywrit/evidence/strictmath"
	"assaywrit/evidence/trace"
)

// The published versions of the global baselines. A version never changes its results.
const (
	ALSAlgorithm   = "als@1"   // asymmetric least squares
	ArPLSAlgorithm = "arpls@1" // asymmetrically reweighted penalised least squares
)

// A GlobalBaseline is a smooth curve under a whole trace.
type GlobalBaseline struct {
	Algorithm  string
	Counts     []float64 // at each acquired point
	Iterations int
	Converged  bool // the weights came to rest; otherwise the number of iterations allowed was used up
}

// ALS is the baseline by asymmetric least squares: the z that minimises Σ w(y−z)² + λ·Σ(second difference of z)², where w is p for
// points above z and 1−p for those below, until no point changes sides or after at most iterations (10 in the publication).
// Uneven sampling: see whittaker; λ belongs to the mean step. lambda is from 1 to 1e10, p from above 0 to 0.5, iterations from 1 to
// 1000.
//
// The error is a *ParameterError or a *TraceError; a trace of one constant value is refused.
//
// Source: P. H. C. Eilers, H. F. M. Boelens, Baseline Correction with Asymmetric Least Squares Smoothing, Leiden University Medical
// Centre report, 2005 (from memory).
func ALS(c trace.Chromatogram, lambda, p float64, iterations int) (*GlobalBaseline, error) {
	if !(p > 0 && p <= 0.5) {
		return nil, &ParameterError{"p", fmt.Sprint(p), "a number above 0, at most 0.5"}
	}
	g, s, y, err := newGlobal(c, lambda, iterations)
	if err != nil {
		return nil, err
	}
	g.Algorithm = ALSAlgorithm
	w := make([]float64, len(y))
	for i := range w {
		w[i] = 1
	}
	for g.Iterations < iterations && !g.Converged {
		g.Iterations++
		s.solve(w, y)
		g.Converged = asymmetric(w, y, s.z, p)
	}
	return g.finish(c, s)
}

// asymmetric sets the weights and tells whether none has changed.
func asymmetric(w, y, z []float64, p float64) bool {
	changed := 0
	for i, v := range y {
		next := 1 - p
		if v > z[i] {
			next = p
		}
		if next != w[i] {
			w[i] = next
			changed++
		}
	}
	return changed == 0
}

// ArPLS is the baseline by asymmetrically reweighted penalised least squares: as ALS, but a point's weight is a logistic function of
// its distance d from z, 1/(1 + exp(2(d − (2s − m))/s)), where m and s are mean and standard deviation of the negative distances:
// noise above the baseline keeps its weight, peaks lose theirs. It ends when the weights change by less than ratio of their
// Euclidean length (1e-6 in the publication), or after at most iterations.
//
// Ranges and errors are those of ALS; ratio is from 1e-12 to 0.5.
//
// Source: S.-J. Baek, A. Park, Y.-J. Ahn, J. Choo, Analyst 140 (2015) 250-257 (from memory).
func ArPLS(c trace.Chromatogram, lambda, ratio float64, iterations int) (*GlobalBaseline, error) {
	if !(ratio >= 1e-12 && ratio <= 0.5) {
		return nil, &ParameterError{"ratio", fmt.Sprint(ratio), "a number from 1e-12 to 0.5"}
	}
	g, s, y, err := newGlobal(c, lambda, iterations)
	if err != nil {
		return nil, err
	}
	g.Algorithm = ArPLSAlgorithm
	w := make([]float64, len(y))
	for i := range w {
		w[i] = 1
	}
	for g.Iterations < iterations && !g.Converged {
		g.Iterations++
		s.solve(w, y)
		g.Converged = logistic(w, y, s.z, ratio)
	}
	return g.finish(c, s)
}

// logistic sets the weights and tells whether they have come to rest.
func logistic(w, y, z []float64, ratio float64) bool {
	var below uint64
	var sum, ss float64
	for i, v := range y { // without branches, which noise would make a lottery
		d := min(v-z[i], 0)
		below += math.Float64bits(d) >> 63
		sum += d
		ss += float64(d * d)
	}
	n := float64(below)
	if n < 2 {
		return true
	}
	m := sum / n
	sd := math.Sqrt(max(ss-float64(sum*m), 0) / (n - 1))
	if sd == 0 {
		return true
	}
	middle, scale := float64(2*sd)-m, 2/sd
	var change, length float64
	for i, v := range y {
		x := float64(scale * (v - z[i] - middle))
		var next float64
		switch {
		case x < -37: // 1 to the last bit
			next = 1
		case x < 700:
			next = 1 / (1 + strictmath.Exp(x))
		}
		d := next - w[i]
		change += float64(d * d)
		length += float64(w[i] * w[i])
		w[i] = next
	}
	return change < float64(ratio*ratio*length)
}

// newGlobal checks what both share and returns the trace less the straight line through its ends, which changes nothing but
// keeps the numbers small.
func newGlobal(c trace.Chromatogram, lambda float64, iterations int) (*GlobalBaseline, *whittaker, []float64, error) {
	if err := check(c); err != nil {
		return nil, nil, nil, err
	}
	if iterations < 1 || iterations > 1000 {
		return nil, nil, nil, &ParameterError{"iterations", fmt.Sprint(iterations), "1 to 1000"}
	}
	if constant(c.Intensity) {
		return nil, nil, nil, &TraceError{c.ID, -1, fmt.Sprintf("one constant value, %v", c.Intensity[0]), "a trace that has a baseline to find"}
	}
	s, err := newWhittaker(c.ID, c.TimeMin, lambda)
	if err != nil {
		return nil, nil, nil, err
	}
	l := ends(c)
	y := make([]float64, len(c.Intensity))
	for i, v := range c.Intensity {
		y[i] = v - l.at(c.TimeMin[i])
	}
	return &GlobalBaseline{}, s, y, nil
}

// ends is the line through the first and the last point, as a ramp.
func ends(c trace.Chromatogram) ramp {
	n := len(c.TimeMin) - 1
	return line{c.TimeMin[0], c.Intensity[0], c.TimeMin[n], c.Intensity[n]}.ramp()
}

func constant(y []float64) bool {
	for _, v := range y {
		if v != y[0] {
			return false
		}
	}
	return true
}

func (g *GlobalBaseline) finish(c trace.Chromatogram, s *whittaker) (*GlobalBaseline, error) {
	l := ends(c)
	g.Counts = s.z
	for i, t := range c.TimeMin {
		g.Counts[i] += l.at(t)
		if !finiteValue(g.Counts[i]) {
			return nil, &TraceError{c.ID, i, "no finite baseline", "numbers nearer to each other"}
		}
	}
	return g, nil
}
