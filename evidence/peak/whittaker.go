package peak

import (
	"fmt"
	"math"
)

// A whittaker solves (W + λ·DᵀD)·z = W·y for the smooth z, where D takes second differences: a symmetric system with five
// diagonals, reduced in linear time from both ends to the middle, so that the two chains of divisions run side by side.
//
// Where sampling is uneven, a row of D is the second divided difference at the times, times the square of the mean step: for even
// times (1, −2, 1) as published, and zero for every straight line whatever the times.
//
// Source: P. H. C. Eilers, Anal. Chem. 75 (2003) 3631 (from memory).
type whittaker struct {
	lambda float64
	even   bool
	a, b   []float64 // of row i, at points i, i+1, i+2: a, -(a+b), b; not kept for even times
	chains [2]chain
	e, f   []float64 // factors of the two points further inwards
	z      []float64
}

const (
	maxUnevenness = 1e4 // longest step over the shortest
	maxLambda     = 1e10
	maxDiagonal   = 1e11 // of λ·DᵀD: beyond it rounding hides weights of a thousandth
)

// newWhittaker prepares for the times. The error is a *ParameterError for λ and a *TraceError for times too uneven.
func newWhittaker(id string, t []float64, lambda float64) (*whittaker, error) {
	n := len(t)
	if !(lambda >= 1 && lambda <= maxLambda) {
		return nil, &ParameterError{"lambda", fmt.Sprint(lambda), "a number from 1 to 1e10"}
	}
	s := &whittaker{lambda: lambda, even: even(t), e: make([]float64, n), f: make([]float64, n), z: make([]float64, n)}
	if s.even {
		return s, nil
	}
	s.a, s.b = make([]float64, n), make([]float64, n)
	step := (t[n-1] - t[0]) / float64(n-1)
	least, most, at := math.Inf(1), 0.0, 1
	for i := 1; i < n; i++ {
		h := t[i] - t[i-1]
		if h > most {
			most, at = h, i
		}
		least = min(least, h)
	}
	if most > float64(maxUnevenness*least) {
		return nil, &TraceError{id, at, fmt.Sprintf("a step of %v min", most), fmt.Sprintf("no step longer than 10000 times the shortest, %v min: a global baseline needs times not so uneven", least)}
	}
	for i := 0; i+2 < n; i++ {
		before, after := (t[i+1]-t[i])/step, (t[i+2]-t[i+1])/step
		s.a[i] = 2 / float64(before*(before+after))
		s.b[i] = 2 / float64(after*(before+after))
		if m := s.a[i] + s.b[i]; float64(lambda*m*m) > maxDiagonal {
			return nil, &TraceError{id, i + 1, fmt.Sprintf("steps of %v and %v min", t[i+1]-t[i], t[i+2]-t[i+1]), "times less uneven, or a smaller lambda: rounding would hide the trace"}
		}
	}
	return s, nil
}

// diagonals returns λ·DᵀD at (i, i), (i, i+1) and (i, i+2).
func (s *whittaker) diagonals(i int) (c0, c1, c2 float64) {
	n := len(s.z)
	row := func(j int) (a, m, b float64) {
		if j < 0 || j+2 >= n {
			return 0, 0, 0
		}
		if s.even {
			return 1, -2, 1
		}
		return s.a[j], -(s.a[j] + s.b[j]), s.b[j]
	}
	a0, m0, b0 := row(i)
	_, m1, b1 := row(i - 1)
	_, _, b2 := row(i - 2)
	c0 = float64(a0*a0) + float64(m1*m1) + float64(b2*b2)
	c1 = float64(a0*m0) + float64(m1*b1)
	c2 = float64(a0 * b0)
	return float64(s.lambda * c0), float64(s.lambda * c1), float64(s.lambda * c2)
}

// solve writes to z the solution for the weights and right side given for each point.
//
// From each end a row, divided by its pivot, says z[i] = z[i] − e·z[next] − f·z[next but one]; the two ends meet in the four points
// at the middle, which are solved by themselves.
func (s *whittaker) solve(w, y []float64) {
	n := len(s.z)
	if n < 16 {
		s.middle(w, y, 0, n)
		return
	}
	half := n / 2
	left, right := half-2, n-half-2 // points eliminated from the left and from the right
	l, r := &s.chains[0], &s.chains[1]
	*l, *r = chain{}, chain{}
	both := left
	k := 0
	for ; k < 2; k++ {
		s.eliminate(l, w, y, k, +1)
		s.eliminate(r, w, y, n-1-k, -1)
	}
	if s.even {
		s.eliminateEven(w, y, both)
		k = both
	}
	for ; k < both; k++ {
		s.eliminate(l, w, y, k, +1)
		s.eliminate(r, w, y, n-1-k, -1)
	}
	if right > left { // one more on the right where n is odd
		s.eliminate(r, w, y, n-right, -1)
	}
	s.middle(w, y, left, n-right)
	e, f, z := s.e, s.f, s.z
	if right > left {
		z[n-right] -= float64(e[n-right]*z[n-right-1]) + float64(f[n-right]*z[n-right-2])
	}
	z1, z2 := z[both], z[both+1]
	Z1, Z2 := z[n-1-both], z[n-2-both]
	for k := both - 1; k >= 0; k-- {
		i := n - 1 - k
		v := z[k] - float64(f[k]*z2) - float64(e[k]*z1)
		V := z[i] - float64(f[i]*Z2) - float64(e[i]*Z1)
		z[k], z[i] = v, V
		z2, z1, Z2, Z1 = z1, v, Z1, V
	}
}

// A chain is what an elimination knows of the last two points: g is what the next row takes of the last point before it is divided
// by the pivot d.
type chain struct{ g, e1, f1, f2, d1, d2, z1, z2 float64 }

// eliminate takes point i away, the next one further along a chain.
func (s *whittaker) eliminate(h *chain, w, y []float64, i, step int) {
	c0, c1, c2 := s.diagonals(i)
	if step < 0 {
		_, c1, _ = s.diagonals(i - 1)
		_, _, c2 = s.diagonals(i - 2)
	}
	p := w[i] + c0 - float64(h.d2*h.f2*h.f2) - float64(h.g*h.e1)
	q := 1 / p
	v := float64((float64(w[i]*y[i]) - float64(h.d2*h.f2*h.z2) - float64(h.g*h.z1)) * q)
	g := c1 - float64(h.g*h.f1)
	e, f := float64(g*q), float64(c2*q)
	s.e[i], s.f[i], s.z[i] = e, f, v
	*h = chain{g: g, e1: e, f1: f, f2: h.f1, d1: p, d2: h.d1, z1: v, z2: h.z1}
}

// eliminateEven is eliminate for both chains from their third point to before point both, where the diagonals do not change.
func (s *whittaker) eliminateEven(w, y []float64, both int) {
	n := len(s.z)
	c0, c1, c2 := float64(6*s.lambda), -float64(4*s.lambda), s.lambda
	h, H := s.chains[0], s.chains[1]
	e, f, z := s.e[:n], s.f[:n], s.z[:n]
	w, y = w[:n], y[:n]
	for k := 2; k < both; k++ {
		i := n - 1 - k
		p := w[k] + c0 - float64(c2*h.f2) - float64(h.g*h.e1)
		P := w[i] + c0 - float64(c2*H.f2) - float64(H.g*H.e1)
		q, Q := 1/p, 1/P
		v := float64((float64(w[k]*y[k]) - float64(c2*h.z2) - float64(h.g*h.z1)) * q)
		V := float64((float64(w[i]*y[i]) - float64(c2*H.z2) - float64(H.g*H.z1)) * Q)
		h.g, H.g = c1-float64(h.g*h.f1), c1-float64(H.g*H.f1)
		h.e1, H.e1 = float64(h.g*q), float64(H.g*Q)
		h.f2, H.f2 = h.f1, H.f1
		h.f1, H.f1 = float64(c2*q), float64(c2*Q)
		h.d2, h.d1, H.d2, H.d1 = h.d1, p, H.d1, P
		h.z2, h.z1, H.z2, H.z1 = h.z1, v, H.z1, V
		e[k], f[k], z[k] = h.e1, h.f1, v
		e[i], f[i], z[i] = H.e1, H.f1, V
	}
	s.chains[0], s.chains[1] = h, H
}
