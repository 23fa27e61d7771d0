package validation

import (
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"
)

// strd is a data set of NIST StRD, analysis of variance.
type strd struct {
	groups   []string   // of each value
	values   []string   // as written
	between  [3]float64 // sum of squares, mean square, F
	within   [2]float64
	rSquared float64
	sd       float64
}

func readStRD(t *testing.T, name string) strd {
	t.Helper()
	data, err := os.ReadFile(filepath.Join("..", "..", "testdata", "nist-strd", name))
	if err != nil {
		t.Fatal(err)
	}
	var d strd
	number := func(s string) float64 {
		v, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	lines := strings.Split(strings.ReplaceAll(string(data), "\r", ""), "\n")
	inData := false
	pair := regexp.MustCompile(`^\s*(\d+)\s+(\S+)\s*$`)
	for _, line := range lines {
		f := strings.Fields(line)
		switch {
		case strings.HasPrefix(line, "Between "):
			d.between = [3]float64{number(f[3]), number(f[4]), number(f[5])}
		case strings.HasPrefix(line, "Within "):
			d.within = [2]float64{number(f[3]), number(f[4])}
		case strings.Contains(line, "Certified R-Squared"):
			d.rSquared = number(f[2])
		case strings.Contains(line, "Standard Deviation "):
			d.sd = number(f[2])
		case strings.HasPrefix(line, "Data:") && len(f) == 3 && !strings.Contains(line, "Factor"):
			inData = true
		case inData && pair.MatchString(line):
			m := pair.FindStringSubmatch(line)
			d.groups, d.values = append(d.groups, m[1]), append(d.values, m[2])
		}
	}
	return d
}

func (d strd) split(values []float64) [][]float64 {
	var groups [][]float64
	index := map[string]int{}
	for i, g := range d.groups {
		k, ok := index[g]
		if !ok {
			k = len(groups)
			index[g] = k
			groups = append(groups, nil)
		}
		groups[k] = append(groups[k], values[i])
	}
	return groups
}

// digits is the number of correct digits, at most 15.
func digits(got, want float64) float64 {
	e := math.Abs(got - want)
	if want != 0 {
		e /= math.Abs(want)
	}
	if e == 0 {
		return 15
	}
	return math.Min(15, -math.Log10(e))
}

// TestStRD holds the analysis of variance against the certified values of NIST StRD, and prints the digits reached. The sets of higher
// difficulty differ from SmLs01 by constant leading digits (7 and 13 of them; from memory) and have the same certified values: they are
// made from it here. A double holds 1000000000000.4 to no more than four digits of what varies, so that Centre is needed.
func TestStRD(t *testing.T) {
	for _, tt := range []struct {
		name, file string
		n, groups  int
		constant   string // leading digits in place of the 1 of SmLs01
		centre     bool
		least      float64
	}{
		{"SiRstv", "SiRstv.dat", 25, 5, "", false, 12},
		{"SmLs01", "SmLs01.dat", 189, 9, "", false, 13},
		{"SmLs04 (as made here)", "SmLs01.dat", 189, 9, "1000000", false, 8.9},
		{"SmLs07 (as made here)", "SmLs01.dat", 189, 9, "1000000000000", false, 2},
		{"SiRstv, centred", "SiRstv.dat", 25, 5, "", true, 12},
		{"SmLs04, centred", "SmLs01.dat", 189, 9, "1000000", true, 13},
		{"SmLs07, centred", "SmLs01.dat", 189, 9, "1000000000000", true, 13},
	} {
		d := readStRD(t, tt.file)
		if len(d.values) != tt.n {
			t.Fatalf("%s: %d values, want %d", tt.name, len(d.values), tt.n)
		}
		values := make([]float64, tt.n)
		for i, text := range d.values {
			if tt.constant != "" {
				d.values[i] = tt.constant + strings.TrimPrefix(text, "1")
			}
			var err error
			if values[i], err = strconv.ParseFloat(d.values[i], 64); err != nil {
				t.Fatal(err)
			}
		}
		if tt.centre {
			var err error
			if values, err = Centre(d.values); err != nil {
				t.Fatal(err)
			}
		}
		a, err := OneWay(d.split(values))
		if err != nil {
			t.Fatal(err)
		}
		if a.Groups != tt.groups || !a.Balanced {
			t.Errorf("%s: %d groups", tt.name, a.Groups)
		}
		least := 15.0
		for _, pair := range [][2]float64{{a.SSBetween, d.between[0]}, {a.MSBetween, d.between[1]}, {*a.F, d.between[2]}, {a.SSWithin, d.within[0]}, {a.MSWithin, d.within[1]}, {a.RSquared, d.rSquared}, {math.Sqrt(a.MSWithin), d.sd}} {
			least = min(least, digits(pair[0], pair[1]))
		}
		t.Logf("%-24s %4.1f digits", tt.name, least)
		if least < tt.least {
			t.Errorf("%s: %.1f digits, want %g: %+v", tt.name, least, tt.least, a)
		}
	}
}

// TestOneWayAgainstGonum: random unbalanced designs, computed a second time with the textbook's sums.
func TestOneWayAgainstGonum(t *testing.T) {
	rnd := rand.New(rand.NewPCG(1, 2))
	for range 300 {
		k := 2 + rnd.IntN(7)
		groups := make([][]float64, k)
		var all []float64
		squares := 0.0
		for i := range groups {
			shift := rnd.NormFloat64()
			for range 2 + rnd.IntN(6) {
				groups[i] = append(groups[i], 100+shift+rnd.NormFloat64())
			}
			all = append(all, groups[i]...)
			squares += float64(len(groups[i]) * len(groups[i]))
		}
		n := float64(len(all))
		var ssb, ssw float64
		for _, g := range groups {
			m := stat.Mean(g, nil)
			ssb += float64(len(g)) * (m - stat.Mean(all, nil)) * (m - stat.Mean(all, nil))
			ssw += stat.Variance(g, nil) * float64(len(g)-1)
		}
		a, err := OneWay(groups)
		if err != nil {
			t.Fatal(err)
		}
		f := ssb / float64(k-1) / (ssw / (n - float64(k)))
		p := distuv.F{D1: float64(k - 1), D2: n - float64(k)}.Survival(f)
		for _, pair := range [][2]float64{{a.SSBetween, ssb}, {a.SSWithin, ssw}, {*a.F, f}, {a.N0, (n - squares/n) / float64(k-1)}} {
			if math.Abs(pair[0]/pair[1]-1) > 1e-10 {
				t.Errorf("%.15g, want %.15g (%d groups)", pair[0], pair[1], k)
			}
		}
		if math.Abs(*a.P-p) > 1e-12*p+1e-15 { // gonum takes it from 1
			t.Errorf("P = %.15g, gonum %.15g", *a.P, p)
		}
	}
}

func TestOneWayRefuses(t *testing.T) {
	for want, groups := range map[string][][]float64{
		"at least two":      {{1, 2}},
		"has no values":     {{1, 2}, {}},
		"one value in each": {{1}, {2}, {3}},
		"finite":            {{1, 2}, {3, math.NaN()}},
		"too far apart":     {{1e200, -1e200}, {1e200, -1e200}},
	} {
		if a, err := OneWay(groups); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("want %q, got %+v, %v", want, a, err)
		}
	}
	a, err := OneWay([][]float64{{1, 1}, {2, 2}})
	if err != nil || a.F != nil || a.RSquared != 1 {
		t.Errorf("no scatter within: %+v, %v", a, err)
	}
	for _, texts := range [][]string{{"1,5"}, {"1e999"}, {"1", ""}, {"1e-400"}, {strings.Repeat("1", 65)}} {
		if v, err := Centre(texts); err == nil {
			t.Errorf("%q gave %v", texts, v)
		}
	}
	if v, err := Centre([]string{"1000000000000.4", "1000000000000.3", "0"}); err != nil || v[0] != 0 || v[1] != -0.1 {
		t.Errorf("%v, %v", v, err)
	}
}

// TestDistributions against closed forms and gonum.
func TestDistributions(t *testing.T) {
	for _, f := range []float64{0.01, 0.5, 1, 2.5, 10, 300} {
		for _, m := range []float64{1, 2.5, 7, 30, 1000} {
			if got, want := fUpper(f, 2, m), math.Pow(1+2*f/m, -m/2); math.Abs(got/want-1) > 1e-11 {
				t.Errorf("P(F(2, %g) > %g) = %.15g, want %.15g", m, f, got, want)
			}
			for _, n := range []float64{1, 3, 8.5, 100} {
				if got, want := fUpper(f, n, m), (distuv.F{D1: n, D2: m}).Survival(f); math.Abs(got-want) > 1e-11*max(want, 1e-3) {
					t.Errorf("P(F(%g, %g) > %g) = %.15g, gonum %.15g", n, m, f, got, want)
				}
			}
		}
	}
	for _, p := range []float64{0.001, 0.025, 0.5, 0.975, 0.999} {
		if got, want := chiSquareQuantile(p, 2), -2*math.Log1p(-p); math.Abs(got/want-1) > 1e-12 {
			t.Errorf("χ²(%g; 2) = %.15g, want %.15g", p, got, want)
		}
		for _, nu := range []float64{1, 1.5, 3, 10, 47.3, 500, 1e5} {
			if got, want := chiSquareQuantile(p, nu), (distuv.ChiSquared{K: nu}).Quantile(p); math.Abs(got/want-1) > 1e-9 {
				t.Errorf("χ²(%g; %g) = %.15g, gonum %.15g", p, nu, got, want)
			}
		}
	}
	// Tables: χ²(0.975; 10) = 20.483, χ²(0.025; 10) = 3.247.
	if got := fmt.Sprintf("%.3f %.3f", chiSquareQuantile(0.975, 10), chiSquareQuantile(0.025, 10)); got != "20.483 3.247" {
		t.Error(got)
	}
}
