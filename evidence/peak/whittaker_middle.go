package peak

// middle solves for the points from, …, to-1 after all before and behind them have been eliminated; there are at most fifteen.
func (s *whittaker) middle(w, y []float64, from, to int) {
	const most = 15
	var m [most][most + 1]float64
	n := to - from
	for i := from; i < to; i++ {
		c0, c1, c2 := s.diagonals(i)
		r := &m[i-from]
		r[i-from] += w[i] + c0
		r[n] += float64(w[i] * y[i])
		for k, c := range [2]float64{c1, c2} {
			if j := i + 1 + k; j < to {
				r[j-from] += c
				m[j-from][i-from] += c
			}
		}
	}
	// take what the two last points eliminated on each side have in these rows
	take := func(j, step int, d float64) {
		points, factors := [2]int{j + step, j + 2*step}, [2]float64{s.e[j], s.f[j]}
		for a, i := range points {
			if i < from || i >= to {
				continue
			}
			m[i-from][n] -= float64(d * factors[a] * s.z[j])
			for b, k := range points {
				if k >= from && k < to {
					m[i-from][k-from] -= float64(d * factors[a] * factors[b])
				}
			}
		}
	}
	if from > 0 {
		take(from-2, +1, s.chains[0].d2)
		take(from-1, +1, s.chains[0].d1)
		take(to+1, -1, s.chains[1].d2)
		take(to, -1, s.chains[1].d1)
	}
	// the matrix is positive definite: no exchange of rows
	for k := range n {
		for i := k + 1; i < n; i++ {
			f := m[i][k] / m[k][k]
			for j := k; j <= n; j++ {
				m[i][j] -= float64(f * m[k][j])
			}
		}
	}
	for i := n - 1; i >= 0; i-- {
		v := m[i][n]
		for j := i + 1; j < n; j++ {
			v -= float64(m[i][j] * s.z[from+j])
		}
		s.z[from+i] = v / m[i][i]
	}
}
