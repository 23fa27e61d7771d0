package strictmath

import (
	"bufio"
	"math"
	"math/big"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// digits is the number of correct digits of got.
func digits(got, certified float64) float64 {
	if got == certified {
		return 15
	}
	if certified == 0 {
		return -math.Log10(math.Abs(got))
	}
	return min(15, -math.Log10(math.Abs(got-certified)/math.Abs(certified)))
}

var certifiedLine = regexp.MustCompile(`^\s*B(\d+)\s+(-?[\d.E+-]+)\s+([\d.E+-]+)`)

// strd reads a data set of the NIST Statistical Reference Datasets for linear regression: data as columns y, x…, the certified
// estimates and their standard deviations, and the certified residual standard deviation.
func strd(t *testing.T, name string) (y []float64, x [][]float64, b, sb []float64, s float64) {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "..", "testdata", "nist-strd", name+".dat"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	num := func(text string) float64 {
		v, err := strconv.ParseFloat(text, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	inData, residual := false, false
	for sc := bufio.NewScanner(f); sc.Scan(); {
		line := sc.Text()
		switch fields := strings.Fields(line); {
		case inData && len(fields) > 1:
			y = append(y, num(fields[0]))
			var row []float64
			for _, v := range fields[1:] {
				row = append(row, num(v))
			}
			x = append(x, row)
		case strings.HasPrefix(line, "Data:") && len(fields) > 1 && strings.EqualFold(fields[1], "y"):
			inData = true
		case certifiedLine.MatchString(line):
			m := certifiedLine.FindStringSubmatch(line)
			b, sb = append(b, num(m[2])), append(sb, num(m[3]))
		case strings.HasPrefix(strings.TrimSpace(line), "Residual"):
			residual = true
		case residual && len(fields) > 1 && fields[0] == "Standard" && fields[1] == "Deviation":
			s, residual = num(fields[2]), false
		}
	}
	if len(y) == 0 || len(b) == 0 {
		t.Fatalf("%s: %d points, %d estimates", name, len(y), len(b))
	}
	return y, x, b, sb, s
}

// TestNIST solves the NIST StRD linear regression problems (https://www.itl.nist.gov/div898/strd/, public domain) and prints how many
// digits of the certified values it reaches.
func TestNIST(t *testing.T) {
	tests := []struct {
		name   string
		degree int // of a polynomial in x, with a constant; 0: the columns as they are, with a constant; -1: without
		least  float64
	}{
		{"Norris", 1, 12}, {"Pontius", 2, 11}, {"NoInt1", -1, 13}, {"Longley", 0, 11}, {"Wampler1", 5, 9}, {"Wampler3", 5, 9}, {"Wampler5", 5, 6}, // its residuals are 10^5 times larger than those of Wampler1
	}
	for _, tt := range tests {
		y, x, b, sb, s := strd(t, tt.name)
		rows := make([][]float64, len(y))
		for i := range rows {
			switch {
			case tt.degree < 0:
				rows[i] = x[i]
			case tt.degree == 0:
				rows[i] = append([]float64{1}, x[i]...)
			default:
				p := 1.0
				for range tt.degree + 1 {
					rows[i] = append(rows[i], p)
					p *= x[i][0]
				}
			}
		}
		fit, err := WeightedLeastSquares(rows, y, nil)
		if err != nil {
			t.Errorf("%s: %v", tt.name, err)
			continue
		}
		least, leastSD := 15.0, 15.0
		sigma := math.Sqrt(fit.RSS / float64(fit.DoF))
		for i := range b {
			least = min(least, digits(fit.Coef[i], b[i]))
			if sb[i] > 0 {
				leastSD = min(leastSD, digits(sigma*math.Sqrt(fit.Cov[i][i]), sb[i]))
			}
		}
		t.Logf("%-9s coefficients %.1f digits, their standard deviations %.1f, residual standard deviation %.1f", tt.name, least, leastSD, digits(sigma, s))
		if least < tt.least || s > 0 && leastSD < tt.least-1 {
			t.Errorf("%s: %.1f and %.1f digits, want %.1f", tt.name, least, leastSD, tt.least)
		}
	}
}

// TestWeightsAgainstGonum: the normal equations with gonum, on random well-conditioned designs.
func TestWeightsAgainstGonum(t *testing.T) {
	for trial := range 200 {
		n := 6 + trial%10
		x, y, w := between(n, 0, 1+float64(trial)), between(n+1, -1, 1), between(n+2, 0.1, 5)
		rows := make([][]float64, n)
		a := mat.NewDense(n, 2, nil)
		rhs := mat.NewVecDense(n, nil)
		for i := range rows {
			rows[i] = []float64{1, x[i]}
			r := math.Sqrt(w[i])
			a.SetRow(i, []float64{r, r * x[i]})
			rhs.SetVec(i, r*y[i])
		}
		s, err := WeightedLeastSquares(rows, y[:n], w[:n])
		if err != nil {
			t.Fatal(err)
		}
		var want mat.VecDense
		if err := want.SolveVec(a, rhs); err != nil {
			t.Fatal(err)
		}
		var inverse, ata mat.Dense
		ata.Mul(a.T(), a)
		if err := inverse.Inverse(&ata); err != nil {
			t.Fatal(err)
		}
		for j := range 2 {
			if math.Abs(s.Coef[j]-want.AtVec(j)) > 1e-10*(1+math.Abs(want.AtVec(j))) {
				t.Errorf("coefficient %d: %g, gonum says %g", j, s.Coef[j], want.AtVec(j))
			}
			for k := range 2 {
				if math.Abs(s.Cov[j][k]-inverse.At(j, k)) > 1e-8*(1+math.Abs(inverse.At(j, k))) {
					t.Errorf("covariance %d %d: %g, gonum says %g", j, k, s.Cov[j][k], inverse.At(j, k))
				}
			}
		}
	}
}

func TestRefusedDesigns(t *testing.T) {
	one := [][]float64{{1, 2}, {1, 2}, {1, 2}}
	if _, err := WeightedLeastSquares(one, []float64{1, 2, 3}, nil); err != ErrRank {
		t.Errorf("dependent columns: %v", err)
	}
	good := [][]float64{{1, 1}, {1, 2}, {1, 3}}
	for name, f := range map[string]func() error{
		"too few":     func() error { _, err := WeightedLeastSquares(good[:1], []float64{1}, nil); return err },
		"lengths":     func() error { _, err := WeightedLeastSquares(good, []float64{1, 2}, nil); return err },
		"zero weight": func() error { _, err := WeightedLeastSquares(good, []float64{1, 2, 3}, []float64{1, 0, 1}); return err },
		"not finite":  func() error { _, err := WeightedLeastSquares(good, []float64{1, math.NaN(), 3}, nil); return err },
		"ragged": func() error {
			_, err := WeightedLeastSquares([][]float64{{1, 1}, {1}, {1, 3}}, []float64{1, 2, 3}, nil)
			return err
		},
		"a zero column": func() error {
			_, err := WeightedLeastSquares([][]float64{{0, 1}, {0, 2}}, []float64{1, 2}, nil)
			return err
		},
	} {
		if f() == nil {
			t.Errorf("%s: accepted", name)
		}
	}
	if _, err := WeightedLeastSquares(good, []float64{1, 2, 3}, nil); err != nil {
		t.Error(err)
	}
}

// TestSumIsNearlyExact compares with big floats on badly cancelling sums.
func TestSumIsNearlyExact(t *testing.T) {
	for trial := range 50 {
		x := between(1000+trial, -1e10, 1e10)
		exact := num()
		for i := range x {
			if i%2 == 1 {
				x[i] = -x[i-1] + x[i]*1e-18
			}
			exact.Add(exact, bf(x[i]))
		}
		want, _ := exact.Float64()
		if got := Sum(x); math.Abs(got-want) > math.Abs(want)*1e-12 {
			t.Errorf("Sum = %g, exactly %g", got, want)
		}
		dot := new(big.Float).SetPrec(prec)
		y := between(2000+trial, -1, 1)[:len(x)]
		for i := range x {
			dot.Add(dot, num().Mul(bf(x[i]), bf(y[i])))
		}
		want, _ = dot.Float64()
		if got := Dot(x, y); math.Abs(got-want) > math.Abs(want)*1e-12 {
			t.Errorf("Dot = %g, exactly %g", got, want)
		}
	}
}
