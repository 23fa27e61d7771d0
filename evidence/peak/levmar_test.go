package peak

import (
	"bufio"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// nist reads one file of NIST's nonlinear reference data: starts, certified values and standard deviations, and the data.
func nist(t *testing.T, name string) (starts [2][]float64, want, sd []float64, rss float64, y, x []float64) {
	t.Helper()
	f, err := os.Open(filepath.Join("../../testdata/nist-strd", name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	number := func(s string) float64 {
		v, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	lines := bufio.NewScanner(f)
	for n := 1; lines.Scan(); n++ {
		w := strings.Fields(lines.Text())
		switch {
		case n >= 41 && n <= 48:
			starts[0] = append(starts[0], number(w[2]))
			starts[1] = append(starts[1], number(w[3]))
			want, sd = append(want, number(w[4])), append(sd, number(w[5]))
		case strings.HasPrefix(lines.Text(), "Residual Sum of Squares"):
			rss = number(w[4])
		case n >= 61 && len(w) == 2:
			y, x = append(y, number(w[0])), append(x, number(w[1]))
		}
	}
	if len(want) != 8 || len(y) != 250 {
		t.Fatalf("%s: %d parameters, %d points", name, len(want), len(y))
	}
	return
}

// Two Gaussians on an exponential baseline, from both starting points.
//
// Source: NIST/ITL StRD, Gauss1 and Gauss3, certified to 11 digits.
func TestCertifiedFits(t *testing.T) {
	for _, name := range []string{"Gauss1.dat", "Gauss3.dat"} {
		starts, want, sd, rss, y, x := nist(t, name)
		n := len(y)
		ls := leastSquares{y: y, tol: 1e-10, maxIters: 200, eval: func(b, f, jac []float64) {
			for i := range x {
				e := math.Exp(-b[1] * x[i])
				u, v := (x[i]-b[3])/b[4], (x[i]-b[6])/b[7]
				g, h := math.Exp(-u*u), math.Exp(-v*v)
				f[i] = b[0]*e + b[2]*g + b[5]*h
				if jac != nil {
					for j, d := range []float64{e, -x[i] * b[0] * e, g, b[2] * g * 2 * u / b[4], b[2] * g * 2 * u * u / b[4], h, b[5] * h * 2 * v / b[7], b[5] * h * 2 * v * v / b[7]} {
						jac[j*n+i] = d
					}
				}
			}
		}}
		for k, start := range starts {
			fit, err := ls.solve(start)
			if err != nil || !fit.converged {
				t.Fatalf("%s, start %d: %v, %+v", name, k+1, err, fit)
			}
			worst := 20.0
			within := func(what string, got, want, digits float64) {
				lre := 11.0
				if got != want {
					lre = min(-math.Log10(math.Abs(got/want-1)), 11)
				}
				worst = min(worst, lre)
				if lre < digits {
					t.Errorf("%s, start %d: %s %.11e, certified %.11e: %.1f digits, want %v", name, k+1, what, got, want, lre, digits)
				}
			}
			for j := range want {
				within("b"+strconv.Itoa(j+1), fit.theta[j], want[j], 9.5)
				within("standard deviation of b"+strconv.Itoa(j+1), math.Sqrt(fit.cov[j][j]*fit.rss/float64(fit.dof)), sd[j], 8)
			}
			within("residual sum of squares", fit.rss, rss, 10)
			t.Logf("%s, start %d: %d iterations, all parameters, standard deviations and the sum to at least %.1f digits", name, k+1, fit.iters, worst)
		}
	}
}

// A parameter that the data push out of its range stops at the bound, and the others are those of the fit without it.
func TestBounds(t *testing.T) {
	x := []float64{0, 1, 2, 3, 4, 5}
	y := []float64{1, 2.9, 5.1, 7, 9.1, 10.9}
	ls := leastSquares{y: y, tol: 1e-12, maxIters: 50, lower: []float64{-100, 3}, upper: []float64{100, 9}, eval: func(b, f, jac []float64) {
		for i := range x {
			f[i] = b[0] + b[1]*x[i]
			if jac != nil {
				jac[i], jac[len(x)+i] = 1, x[i]
			}
		}
	}}
	fit, err := ls.solve([]float64{0, 5})
	if err != nil || !fit.converged || fit.theta[1] != 3 || !fit.atBound[1] || fit.atBound[0] {
		t.Fatalf("%v, %+v", err, fit)
	}
	// closed form: the mean of y - 3x, with a variance of 1/n
	if want := 36.0/6 - 3*2.5; math.Abs(fit.theta[0]-want) > 1e-12 || math.Abs(fit.cov[0][0]-1./6) > 1e-14 || fit.cov[1][1] != 0 {
		t.Errorf("intercept %v with variance %v, want %v and 1/6", fit.theta[0], fit.cov[0][0], want)
	}
	// what cannot be determined is refused
	ls.lower, ls.upper = nil, nil
	ls.eval = func(b, f, jac []float64) {
		for i := range x {
			f[i] = b[0]
			if jac != nil {
				jac[i], jac[len(x)+i] = 1, 0
			}
		}
	}
	if _, err := ls.solve([]float64{0, 5}); err != errFitRank {
		t.Errorf("a parameter without effect: %v, want %v", err, errFitRank)
	}
}
