package strictmath

import (
	"bufio"
	"math"
	"math/big"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// univariate reads a data set of the NIST Statistical Reference Datasets for summary statistics: values, certified mean and certified
// standard deviation.
func univariate(t *testing.T, name string) (y []float64, mean, sd float64) {
	t.Helper()
	f, err := os.Open(filepath.Join("..", "..", "testdata", "nist-strd", name+".dat"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	mean, sd = math.NaN(), math.NaN()
	inData := false
	for sc := bufio.NewScanner(f); sc.Scan(); {
		line := strings.TrimSpace(sc.Text())
		value := func() float64 {
			_, text, _ := strings.Cut(line, ":")
			return number(t, strings.Fields(text)[0])
		}
		switch {
		case inData && line != "" && !strings.HasPrefix(line, "--"):
			y = append(y, number(t, line))
		case strings.HasPrefix(line, "Data: Y"):
			inData = true
		case strings.HasPrefix(line, "Sample Mean"):
			mean = value()
		case strings.HasPrefix(line, "Sample Standard Deviation "):
			sd = value()
		}
	}
	if len(y) < 3 || math.IsNaN(mean) || math.IsNaN(sd) {
		t.Fatalf("%s: %d values, mean %g, standard deviation %g", name, len(y), mean, sd)
	}
	return y, mean, sd
}

// TestNISTUnivariate: certified means and standard deviations of the NIST Statistical Reference Datasets (public domain), NumAcc1 and
// NumAcc3 being made to be hard. Beside them is what the numbers as float64 holds them have, exactly, as the certified values are those
// of the decimal numbers.
func TestNISTUnivariate(t *testing.T) {
	for _, tt := range []struct {
		name            string
		mean, deviation float64 // digits that must agree
	}{{"Lew", 14, 14}, {"Mavro", 14, 12.5}, {"Michelso", 14, 13}, {"NumAcc1", 15, 15}, {"NumAcc3", 15, 9}} {
		y, mean, sd := univariate(t, tt.name)
		gotMean, gotSD := digits(Mean(y), mean), digits(SD(y), sd)
		exactMean, exactSD := exactMoments(y)
		t.Logf("%-8s mean %.1f digits, standard deviation %.1f; of the numbers as held %.2f and %.2f ulp", tt.name, gotMean, gotSD, ulps(Mean(y), exactMean), ulps(SD(y), exactSD))
		if gotMean < tt.mean || gotSD < tt.deviation {
			t.Errorf("%s: mean %.1f digits and standard deviation %.1f, want %g and %g", tt.name, gotMean, gotSD, tt.mean, tt.deviation)
		}
		if ulps(Mean(y), exactMean) > 1 || ulps(SD(y), exactSD) > 1 {
			t.Errorf("%s: mean %.17g and standard deviation %.17g, exactly %.20g and %.20g", tt.name, Mean(y), SD(y), exactMean, exactSD)
		}
	}
}

// exactMoments are the mean and the sample standard deviation in extended precision.
func exactMoments(y []float64) (mean, sd *big.Float) {
	n := float64(len(y))
	mean = num()
	for _, v := range y {
		mean.Add(mean, bf(v))
	}
	mean.Quo(mean, bf(n))
	s := num()
	for _, v := range y {
		d := num().Sub(bf(v), mean)
		s.Add(s, d.Mul(d, d))
	}
	return mean, s.Sqrt(s.Quo(s, bf(n-1)))
}
