package strictmath

import (
	"errors"
	"fmt"
	"math"
)

// A Solution is a weighted linear least-squares fit.
type Solution struct {
	Coef []float64   // one for each column
	Cov  [][]float64 // (XᵀWX)⁻¹: the covariance of the coefficients over the variance of an observation of weight 1
	RSS  float64     // Σ w·r²
	DoF  int         // observations − columns
}

// ErrRank is the error for columns that depend on each other, to about 14 digits.
var ErrRank = errors.New("the columns of the design depend on each other")

// ErrRange is the error for finite numbers whose squares or sums are not.
var ErrRange = errors.New("the numbers are too large or too far apart for a fit in double precision")

// WeightedLeastSquares minimises Σ w[i]·(y[i] − Σ rows[i][j]·c[j])² by Householder's QR of the rows times √w, columns scaled to
// length 1, with one step of iterative refinement. w nil means weights of 1; weights must be above zero and finite. The weights
// are used as they stand: a factor common to all of them changes Cov and RSS, not the coefficients nor RSS·Cov.
//
// The error is ErrRank, ErrRange, or one that says which observation cannot be used, counting from 1. What is returned is finite.
//
// Source: G. H. Golub and C. F. Van Loan, Matrix Computations, 4th ed. (2013), sections 5.2 and 5.3 (from memory).
func WeightedLeastSquares(rows [][]float64, y, w []float64) (*Solution, error) {
	n, m := len(rows), 0
	if n > 0 {
		m = len(rows[0])
	}
	if m == 0 || n < m || len(y) != n || (w != nil && len(w) != n) {
		return nil, fmt.Errorf("%d observations of %d values with %d responses and %d weights: want at least as many as columns, and lengths that agree", n, m, len(y), len(w))
	}
	q := qr{n: n, m: m, a: make([]float64, n*m), scale: make([]float64, m), root: make([]float64, n)}
	rhs := make([]float64, n)
	for i, row := range rows {
		q.root[i] = 1
		if w != nil {
			if !(w[i] > 0) || math.IsInf(w[i], 0) {
				return nil, fmt.Errorf("observation %d has a weight of %g, want a finite one above zero", i+1, w[i])
			}
			q.root[i] = math.Sqrt(w[i])
		}
		if len(row) != m {
			return nil, fmt.Errorf("observation %d has %d values, want %d", i+1, len(row), m)
		}
		for j, v := range row {
			if math.IsNaN(v) || math.IsInf(v, 0) || math.IsNaN(y[i]) || math.IsInf(y[i], 0) {
				return nil, fmt.Errorf("observation %d has values %g and response %g, want finite numbers", i+1, row, y[i])
			}
			q.a[j*n+i] = float64(v * q.root[i])
		}
		rhs[i] = float64(y[i] * q.root[i])
	}
	if err := q.factor(); err != nil {
		return nil, err
	}
	s := &Solution{Coef: q.solve(rhs), DoF: n - m}
	r := residuals(rows, y, s.Coef, q.root)
	for j, d := range q.solve(r) {
		s.Coef[j] += d
	}
	r = residuals(rows, y, s.Coef, q.root)
	s.RSS = Dot(r, r)
	s.Cov = q.covariance()
	if !s.finite() {
		return nil, ErrRange
	}
	return s, nil
}

func (s *Solution) finite() bool {
	all := append([]float64{s.RSS}, s.Coef...)
	for _, row := range s.Cov {
		all = append(all, row...)
	}
	for _, v := range all {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

// residuals are √w·(y − Xc), each as if computed in twice the precision.
func residuals(rows [][]float64, y, c, root []float64) []float64 {
	r := make([]float64, len(y))
	terms := make([]float64, len(c)+1)
	ones := make([]float64, len(c)+1)
	for i, row := range rows {
		terms[0], ones[0] = y[i], 1
		for j := range c {
			terms[j+1], ones[j+1] = row[j], -c[j]
		}
		r[i] = float64(Dot(terms, ones) * root[i])
	}
	return r
}

// qr is the factorisation of a matrix held by columns.
type qr struct {
	n, m  int
	a     []float64 // n×m, column after column: R above the diagonal, the reflectors from it down
	diag  []float64 // the diagonal of R
	scale []float64 // lengths of the columns before scaling
	root  []float64
}

func (q *qr) column(j int) []float64 { return q.a[j*q.n : (j+1)*q.n] }

func (q *qr) factor() error {
	q.diag = make([]float64, q.m)
	for j := range q.m {
		c := q.column(j)
		// By a power of two first, which is exact, so that the squares neither overflow nor underflow.
		power := exponent(c)
		for i := range c {
			c[i] = math.Ldexp(c[i], -power)
		}
		length := math.Sqrt(Dot(c, c))
		switch {
		case length == 0:
			return ErrRank
		case math.IsNaN(length) || math.IsInf(length, 0):
			return ErrRange
		}
		for i := range c {
			c[i] /= length
		}
		q.scale[j] = math.Ldexp(length, power)
	}
	for k := range q.m {
		v := q.column(k)[k:]
		length := math.Sqrt(Dot(v, v))
		if length < 1e-14 { // of columns scaled to 1
			return ErrRank
		}
		if v[0] > 0 {
			length = -length
		}
		q.diag[k] = length
		v[0] -= length
		for j := k + 1; j < q.m; j++ {
			reflect(v, q.column(j)[k:])
		}
	}
	return nil
}

// exponent is the binary one of the largest magnitude.
func exponent(c []float64) int {
	largest := 0.0
	for _, v := range c {
		largest = max(largest, math.Abs(v))
	}
	_, e := math.Frexp(largest)
	return e
}

// reflect applies I − 2vvᵀ/(vᵀv) to c.
func reflect(v, c []float64) {
	f := 2 * Dot(v, c) / Dot(v, v)
	for i := range c {
		c[i] -= float64(f * v[i])
	}
}

// solve returns the coefficients for a right-hand side that is already multiplied by the roots of the weights.
func (q *qr) solve(rhs []float64) []float64 {
	b := append([]float64(nil), rhs...)
	for k := range q.m {
		reflect(q.column(k)[k:], b[k:])
	}
	return q.back(b[:q.m])
}

// back solves R·z = b and undoes the scaling of the columns.
func (q *qr) back(b []float64) []float64 {
	z := make([]float64, q.m)
	for k := q.m - 1; k >= 0; k-- {
		v := b[k]
		for j := k + 1; j < q.m; j++ {
			v -= float64(q.column(j)[k] * z[j])
		}
		z[k] = v / q.diag[k]
	}
	for k := range z {
		z[k] /= q.scale[k]
	}
	return z
}

// covariance is R⁻¹·R⁻ᵀ, in the scale of the columns.
func (q *qr) covariance() [][]float64 {
	inverse := make([][]float64, q.m) // columns of the scaled R⁻¹
	for j := range q.m {
		unit := make([]float64, q.m)
		unit[j] = 1
		inverse[j] = q.back(unit)
	}
	cov := make([][]float64, q.m)
	for i := range cov {
		cov[i] = make([]float64, q.m)
		for j := range cov[i] {
			terms, others := make([]float64, q.m), make([]float64, q.m)
			for k := range q.m {
				terms[k], others[k] = inverse[k][i], inverse[k][j]
			}
			cov[i][j] = Dot(terms, others)
		}
	}
	return cov
}
