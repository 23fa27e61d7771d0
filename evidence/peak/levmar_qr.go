package peak

import "math"

// factor weighs the derivatives and makes their QR, without the parameters that the gradient pushes against a bound.
func (s *lsSearch) factor() bool {
	s.gradient = resize(s.gradient, s.p)
	for j := range s.p {
		col := s.jac[j*s.n : (j+1)*s.n]
		if s.w != nil {
			for i := range col {
				col[i] = float64(col[i] * s.w[i])
			}
		}
		s.gradient[j] = dot(col, s.r)
		s.scale[j] = max(s.scale[j], math.Sqrt(dot(col, col)))
		s.held[j] = s.lower != nil && s.theta[j] <= s.lower[j] && s.gradient[j] <= 0 ||
			s.upper != nil && s.theta[j] >= s.upper[j] && s.gradient[j] >= 0
	}
	return s.triangle(s.held)
}

// factorFree is factor at the end of the search, for the covariance.
func (s *lsSearch) factorFree(held []bool) bool {
	if s.w != nil {
		for j := range s.p {
			col := s.jac[j*s.n : (j+1)*s.n]
			for i := range col {
				col[i] = float64(col[i] * s.w[i])
			}
		}
	}
	before := make([]float64, s.p)
	for j := range before {
		col := s.jac[j*s.n : (j+1)*s.n]
		before[j] = math.Sqrt(dot(col, col))
	}
	if !s.triangle(held) {
		return false
	}
	for a, j := range s.free { // what of a column the others do not explain
		if !(math.Abs(s.tri[a*len(s.free)+a]) > float64(rankDigits*before[j])) {
			return false
		}
	}
	return true
}

// rankDigits is how much of a column must be its own, for its parameter to count as determined.
const rankDigits = 1e-12

// triangle reduces the columns that are not held to R, and the residuals to Qᵀr.
func (s *lsSearch) triangle(held []bool) bool {
	s.free = s.free[:0]
	for j := range s.p {
		if !held[j] {
			s.free = append(s.free, j)
		}
	}
	m := len(s.free)
	s.tri = resize(s.tri, m*m)
	copy(s.q, s.r)
	for a, ja := range s.free {
		col := s.jac[ja*s.n+a : (ja+1)*s.n]
		norm := math.Sqrt(dot(col, col))
		if !(norm > 0) || !finiteValue(norm) {
			return false
		}
		if col[0] > 0 {
			norm = -norm
		}
		head := col[0] - norm
		col[0] = head
		beta := -1 / float64(norm*head) // 2/vᵀv
		for b := a + 1; b < m; b++ {
			other := s.jac[s.free[b]*s.n+a : (s.free[b]+1)*s.n]
			axpy(-float64(beta*dot(col, other)), col, other)
			s.tri[a*m+b] = other[0]
		}
		axpy(-float64(beta*dot(col, s.q[a:])), col, s.q[a:])
		s.tri[a*m+a] = norm
	}
	return true
}

// damped solves for the step with R and √λ·scale below it.
func (s *lsSearch) damped(lambda float64) {
	m := len(s.free)
	s.work = resize(s.work, 2*m*(m+1))
	w := s.work // rows of m+1: the matrix and the right side
	for i := range w {
		w[i] = 0
	}
	width := m + 1
	for a := range m {
		copy(w[a*width+a:a*width+m], s.tri[a*m+a:(a+1)*m])
		w[a*width+m] = s.q[a]
	}
	rows := m
	if lambda > 0 {
		root := math.Sqrt(lambda)
		for a, j := range s.free {
			w[(m+a)*width+a] = float64(root * s.scale[j])
		}
		rows = 2 * m
	}
	// Givens rotations: row m+k is empty before column k, and fills to the right only.
	for k := range m {
		for i := m; i < min(m+k+1, rows); i++ {
			rotate(w[k*width:(k+1)*width], w[i*width:(i+1)*width], k)
		}
	}
	s.ok = true
	for j := range s.step {
		s.step[j] = 0
	}
	for a := m - 1; a >= 0; a-- {
		v := w[a*width+m]
		for b := a + 1; b < m; b++ {
			v -= float64(w[a*width+b] * s.step[s.free[b]])
		}
		v /= w[a*width+a]
		s.ok = s.ok && finiteValue(v)
		s.step[s.free[a]] = v
	}
	s.next = s.next[:0]
	for j := range s.theta {
		s.next = append(s.next, s.theta[j]+s.step[j])
	}
	s.next = s.clamped(s.next)
}

// rotate turns the rows a and b so that b[k] becomes zero.
func rotate(a, b []float64, k int) {
	if b[k] == 0 {
		return
	}
	r := math.Sqrt(float64(a[k]*a[k]) + float64(b[k]*b[k]))
	c, s := a[k]/r, b[k]/r
	for i := k; i < len(a); i++ {
		a[i], b[i] = float64(c*a[i])+float64(s*b[i]), float64(c*b[i])-float64(s*a[i])
	}
	b[k] = 0
}

// covariance is R⁻¹R⁻ᵀ, spread over all parameters.
func (s *lsSearch) covariance() [][]float64 {
	m := len(s.free)
	inv := make([]float64, m*m)
	for c := range m {
		for a := c; a >= 0; a-- {
			v := 0.0
			if a == c {
				v = 1
			}
			for b := a + 1; b <= c; b++ {
				v -= float64(s.tri[a*m+b] * inv[b*m+c])
			}
			inv[a*m+c] = v / s.tri[a*m+a]
		}
	}
	cov := make([][]float64, s.p)
	for j := range cov {
		cov[j] = make([]float64, s.p)
	}
	for a, ja := range s.free {
		for b, jb := range s.free {
			cov[ja][jb] = dot(inv[a*m:(a+1)*m], inv[b*m:(b+1)*m])
		}
	}
	return cov
}

// dot adds products in four interleaved sums, in an order that the length alone decides.
func dot(x, y []float64) float64 {
	var a, b, c, d float64
	y = y[:len(x)]
	i := 0
	for ; i+4 <= len(x); i += 4 {
		a += float64(x[i] * y[i])
		b += float64(x[i+1] * y[i+1])
		c += float64(x[i+2] * y[i+2])
		d += float64(x[i+3] * y[i+3])
	}
	for ; i < len(x); i++ {
		a += float64(x[i] * y[i])
	}
	return (a + b) + (c + d)
}

// axpy adds f times x to y.
func axpy(f float64, x, y []float64) {
	y = y[:len(x)]
	for i, v := range x {
		y[i] += float64(f * v)
	}
}
