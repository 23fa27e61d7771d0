package strictmath

import (
	"errors"
	"math"
	"math/big"
	"testing"
)

// normalEquations solves a weighted fit in rational arithmetic: coefficients, (XᵀWX)⁻¹ and Σw·r², without rounding.
func normalEquations(rows [][]float64, y, w []float64) (coef []*big.Rat, inverse [][]*big.Rat, rss *big.Rat) {
	rat := func(x float64) *big.Rat { return new(big.Rat).SetFloat64(x) }
	m := len(rows[0])
	a := make([][]*big.Rat, m) // XᵀWX, XᵀWy, and the unit matrix beside it
	for i := range a {
		a[i] = make([]*big.Rat, 2*m+1)
		for j := range a[i] {
			a[i][j] = new(big.Rat)
			if j == m+1+i {
				a[i][j].SetInt64(1)
			}
		}
	}
	for k, row := range rows {
		for i := range m {
			wx := new(big.Rat).Mul(rat(w[k]), rat(row[i]))
			for j := range m {
				a[i][j].Add(a[i][j], new(big.Rat).Mul(wx, rat(row[j])))
			}
			a[i][m].Add(a[i][m], new(big.Rat).Mul(wx, rat(y[k])))
		}
	}
	for p := range m { // Gauss and Jordan; the matrix is positive definite, so no pivot is 0
		pivot := new(big.Rat).Set(a[p][p])
		for j := range a[p] {
			a[p][j].Quo(a[p][j], pivot)
		}
		for i := range m {
			if i == p {
				continue
			}
			f := new(big.Rat).Set(a[i][p])
			for j := range a[i] {
				a[i][j].Sub(a[i][j], new(big.Rat).Mul(f, a[p][j]))
			}
		}
	}
	for i := range m {
		coef = append(coef, a[i][m])
		inverse = append(inverse, a[i][m+1:])
	}
	rss = new(big.Rat)
	for k, row := range rows {
		r := rat(y[k])
		for i := range m {
			r.Sub(r, new(big.Rat).Mul(coef[i], rat(row[i])))
		}
		rss.Add(rss, r.Mul(r, r).Mul(r, rat(w[k])))
	}
	return coef, inverse, rss
}

// TestAgainstNormalEquations compares with rational arithmetic, on columns of very different sizes and weights over six decades.
func TestAgainstNormalEquations(t *testing.T) {
	asFloat := func(r *big.Rat) float64 { v, _ := r.Float64(); return v }
	for trial := range 60 {
		n, m := 5+trial%8, 1+trial%4
		x, y, lw := between(3000+trial, -1, 1), between(4000+trial, -1, 1), between(5000+trial, -3, 3)
		rows, w := make([][]float64, n), make([]float64, n)
		for i := range rows {
			p := Pow(10, float64(trial%7)-3)
			for range m {
				rows[i] = append(rows[i], p)
				p = float64(p * x[i] * 100)
			}
			w[i] = Pow(10, lw[i])
		}
		s, err := WeightedLeastSquares(rows, y[:n], w)
		if err != nil {
			t.Fatal(err)
		}
		coef, inverse, rss := normalEquations(rows, y[:n], w)
		for i := range m {
			// What rounding of the observations themselves would change: a standard deviation of 1 ulp of each.
			scale := math.Abs(asFloat(coef[i])) + math.Sqrt(asFloat(inverse[i][i]))
			if d := math.Abs(s.Coef[i] - asFloat(coef[i])); d > 1e-13*scale {
				t.Errorf("design %d: coefficient %d is %.17g, exactly %.17g", trial, i, s.Coef[i], asFloat(coef[i]))
			}
			for j := range m {
				scale := math.Sqrt(asFloat(inverse[i][i]) * asFloat(inverse[j][j]))
				if d := math.Abs(s.Cov[i][j] - asFloat(inverse[i][j])); d > 1e-11*scale {
					t.Errorf("design %d: covariance %d %d is %.17g, exactly %.17g", trial, i, j, s.Cov[i][j], asFloat(inverse[i][j]))
				}
				if s.Cov[i][j] != s.Cov[j][i] {
					t.Errorf("design %d: the covariance is not symmetric", trial)
				}
			}
		}
		if want := asFloat(rss); math.Abs(s.RSS-want) > 1e-12*want+1e-28 || s.DoF != n-m {
			t.Errorf("design %d: Σw·r² is %.17g, exactly %.17g; %d degrees of freedom", trial, s.RSS, want, s.DoF)
		}
	}
}

// TestDependentColumns: a column that is a combination of the others, but for rounding, is refused whatever its size.
func TestDependentColumns(t *testing.T) {
	for trial := range 100 {
		n := 4 + trial%60
		x, z := between(6000+trial, -1, 1), between(7000+trial, -1, 1)
		rows := make([][]float64, n)
		scale := Pow(10, float64(trial%21)-10)
		for i := range rows {
			rows[i] = []float64{1, x[i], z[i], float64(scale * (2 - float64(3*x[i]) + float64(0.7*z[i])))}
		}
		if s, err := WeightedLeastSquares(rows, between(n, 0, 1), nil); !errors.Is(err, ErrRank) {
			t.Errorf("%d rows, scale %g: %v, %v", n, scale, s, err)
		}
	}
}

// TestDesignsOfAllSizes: a scale of the columns, the responses or the weights changes nothing but itself, up to where squares overflow.
func TestDesignsOfAllSizes(t *testing.T) {
	rows := [][]float64{{1, 1}, {1, 2}, {1, 4}, {1, 7}}
	y := []float64{1.1, 2.3, 3.9, 7.2}
	want, err := WeightedLeastSquares(rows, y, nil)
	if err != nil {
		t.Fatal(err)
	}
	for _, power := range []int{-500, -300, -40, 40, 300, 500} {
		scaled := make([][]float64, len(rows))
		for i, r := range rows {
			scaled[i] = []float64{r[0], math.Ldexp(r[1], power)}
		}
		s, err := WeightedLeastSquares(scaled, y, nil)
		if err != nil {
			t.Errorf("columns times 2^%d: %v", power, err)
			continue
		}
		if s.Coef[0] != want.Coef[0] || s.Coef[1] != math.Ldexp(want.Coef[1], -power) || s.RSS != want.RSS || s.Cov[1][1] != math.Ldexp(want.Cov[1][1], -2*power) {
			t.Errorf("columns times 2^%d: %+v, want %+v scaled", power, s, want)
		}
	}
	for _, power := range []int{-200, 200} {
		w := make([]float64, len(y))
		for i := range w {
			w[i] = math.Ldexp(1, power)
		}
		s, err := WeightedLeastSquares(rows, y, w)
		if err != nil {
			t.Fatal(err)
		}
		if s.Coef[0] != want.Coef[0] || s.Coef[1] != want.Coef[1] || s.RSS != math.Ldexp(want.RSS, power) || s.Cov[0][1] != math.Ldexp(want.Cov[0][1], -power) {
			t.Errorf("weights of 2^%d: %+v, want %+v scaled", power, s, want)
		}
	}
	for name, f := range map[string]func() (*Solution, error){
		"responses of 10^200": func() (*Solution, error) {
			return WeightedLeastSquares(rows, []float64{1e200, -1e200, 1e200, 1e200}, nil)
		},
		"columns of 10^-200": func() (*Solution, error) {
			return WeightedLeastSquares([][]float64{{1e-200}, {2e-200}}, []float64{1, 2}, nil)
		},
		"the largest": func() (*Solution, error) {
			return WeightedLeastSquares([][]float64{{math.MaxFloat64}, {math.MaxFloat64}}, []float64{1, 2}, []float64{4, 4})
		},
	} {
		if s, err := f(); !errors.Is(err, ErrRange) {
			t.Errorf("%s: %+v, %v", name, s, err)
		}
	}
}

// FuzzWeightedLeastSquares: any numbers are refused or give finite ones.
func FuzzWeightedLeastSquares(f *testing.F) {
	f.Add(1.0, 2.0, 3.0, 1.0, 2.0, 3.5, 1.0, 1.0, 1.0)
	f.Add(1e-300, 1e300, 1.0, 1.0, 2.0, 3.5, 1e-300, 1.0, 1e300)
	f.Add(5e-324, 1e-323, 2e-323, 0.0, -0.0, 1.0, 5e-324, 5e-324, 5e-324)
	f.Fuzz(func(t *testing.T, x1, x2, x3, y1, y2, y3, w1, w2, w3 float64) {
		s, err := WeightedLeastSquares([][]float64{{1, x1}, {1, x2}, {1, x3}}, []float64{y1, y2, y3}, []float64{w1, w2, w3})
		if err == nil && (!s.finite() || s.RSS < 0 || s.Cov[0][0] < 0 || s.Cov[1][1] < 0) {
			t.Errorf("%+v", s)
		}
	})
}
